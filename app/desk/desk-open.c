/* Opening: files by dialog, drop and command line; blanks; the demo lots; reading a file in other units. Files are read in a
 * thread; one that cannot be read is named in the notice and does not stop the others. */
#include <glib/gi18n.h>

#include "../locale.h"
#include "desk-as-read.h"
#include "desk-window-private.h"

typedef struct {
  GPtrArray *files;     /* GFile */
  BtReadOptions options;
  GPtrArray *spectra;   /* BtSpectrum */
  GPtrArray *sentences; /* why some could not be read */
  DeskFilm *film;       /* on the bench when it began; nullable */
} Reading;

static void
reading_free (gpointer data)
{
  Reading *reading = data;
  g_ptr_array_unref (reading->files);
  g_ptr_array_unref (reading->spectra);
  g_ptr_array_unref (reading->sentences);
  g_clear_object (&reading->film);
  g_free (reading);
}

static void
read_one (Reading *reading, GFile *file)
{
  g_autoptr (GError) error = NULL;
  g_autofree char *path = g_file_get_path (file);
  if (!path)
    {
      g_autofree char *uri = g_file_get_uri (file);
      g_ptr_array_add (reading->sentences,
                       g_strdup_printf (_("%s is not a file on this computer: save it here first, then open it."), uri));
      return;
    }
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_file (path, &reading->options, &error);
  if (!spectra)
    g_ptr_array_add (reading->sentences, g_strdup (error->message));
  for (guint i = 0; spectra && i < spectra->len; i++)
    g_ptr_array_add (reading->spectra, g_object_ref (spectra->pdata[i]));
}

static void
read_all (GTask *task, gpointer window, gpointer data, GCancellable *cancellable)
{
  Reading *reading = data;
  for (guint i = 0; i < reading->files->len; i++)
    read_one (reading, reading->files->pdata[i]);
  g_task_return_boolean (task, TRUE);
}

static void
start_reading (DeskWindow *self, GPtrArray *files, const BtReadOptions *options, GAsyncReadyCallback done)
{
  static const BtReadOptions as_stated = BT_READ_OPTIONS_INIT;
  Reading *reading = g_new0 (Reading, 1);
  GTask *task = g_task_new (self, NULL, done, NULL);
  reading->files = g_ptr_array_ref (files);
  reading->options = options ? *options : as_stated;
  reading->spectra = g_ptr_array_new_with_free_func (g_object_unref);
  reading->sentences = g_ptr_array_new_with_free_func (g_free);
  g_set_object (&reading->film, self->film);
  g_task_set_task_data (task, reading, reading_free);
  g_task_run_in_thread (task, read_all);
  g_object_unref (task);
}

static Reading *
end_reading (DeskWindow *self, GAsyncResult *result)
{
  Reading *reading = g_task_get_task_data (G_TASK (result));
  /* So that nobody counts, or misses those that have to be scrolled to. */
  if (reading->sentences->len > 1)
    {
      g_autofree char *sum
          = g_strdup_printf (_("%u of %u files could not be read:"), reading->sentences->len, reading->files->len);
      desk_window_say (self, GTK_MESSAGE_ERROR, sum);
    }
  for (guint i = 0; i < reading->sentences->len; i++)
    desk_window_say (self, GTK_MESSAGE_ERROR, reading->sentences->pdata[i]);
  return reading;
}

static void
on_opened (GObject *window, GAsyncResult *result, gpointer data)
{
  DeskWindow *self = DESK_WINDOW (window);
  Reading *reading = end_reading (self, result);
  if (!self->fitter || reading->spectra->len == 0)
    return;
  g_autoptr (GPtrArray) films = g_ptr_array_new_with_free_func (g_object_unref);
  g_autoptr (BtRecipe) recipe = bt_recipe_new ();
  for (guint i = 0; i < reading->spectra->len; i++)
    {
      g_autoptr (BtFilm) film = bt_film_new (reading->spectra->pdata[i]);
      g_autoptr (DeskEdition) edition = desk_edition_new (film, recipe);
      g_ptr_array_add (films, desk_film_new (edition, self->fitter));
    }
  gboolean first = g_list_model_get_n_items (G_LIST_MODEL (self->films)) == 0;
  desk_history_run (self->history, desk_command_open_new (self->films, films));
  if (!first)
    desk_rack_select (DESK_RACK (self->rack), films->pdata[0]);
}

void
desk_window_open_files (DeskWindow *self, GPtrArray *files)
{
  if (files->len)
    start_reading (self, files, NULL, on_opened);
}

static int
compare_files (gconstpointer a, gconstpointer b)
{
  g_autofree char *path_a = g_file_get_path (*(GFile *const *) a);
  g_autofree char *path_b = g_file_get_path (*(GFile *const *) b);
  return g_strcmp0 (path_a, path_b);
}

void
desk_window_open_demo (DeskWindow *self)
{
  g_autoptr (GError) error = NULL;
  g_autofree char *path = g_build_filename (app_data_dir (), "demo", NULL);
  g_autoptr (GDir) folder = g_dir_open (path, 0, &error);
  g_autoptr (GPtrArray) files = g_ptr_array_new_with_free_func (g_object_unref);
  const char *name;
  while (folder && (name = g_dir_read_name (folder)))
    if (g_str_has_suffix (name, ".csv"))
      {
        g_autofree char *file = g_build_filename (path, name, NULL);
        g_ptr_array_add (files, g_file_new_for_path (file));
      }
  if (files->len == 0)
    {
      g_autofree char *sentence = g_strdup_printf (_("The demo lots are not in %s: install Bandtally again."), path);
      desk_window_say (self, GTK_MESSAGE_ERROR, sentence);
      return;
    }
  g_ptr_array_sort (files, compare_files);
  desk_window_open_files (self, files);
}

static void
on_open_response (GtkNativeDialog *dialog, int response, DeskWindow *self)
{
  if (response == GTK_RESPONSE_ACCEPT)
    {
      desk_window_keep_folder (self, GTK_FILE_CHOOSER (dialog));
      g_autoptr (GSList) chosen = gtk_file_chooser_get_files (GTK_FILE_CHOOSER (dialog));
      g_autoptr (GPtrArray) files = g_ptr_array_new_with_free_func (g_object_unref);
      for (GSList *l = chosen; l; l = l->next)
        g_ptr_array_add (files, l->data);
      desk_window_open_files (self, files);
    }
  g_object_unref (dialog);
}

static GtkNativeDialog *
open_dialog (DeskWindow *self, const char *title)
{
  static const struct { const char *name; const char *patterns[10]; } filters[] = {
    { N_ ("Spectra"), { "*.csv", "*.txt", "*.tsv", "*.dat", "*.asc", "*.prn", "*.jdx", "*.dx", NULL } },
    { N_ ("All files"), { "*", NULL } },
  };
  GtkFileChooserNative *dialog
      = gtk_file_chooser_native_new (title, GTK_WINDOW (self), GTK_FILE_CHOOSER_ACTION_OPEN, _("_Open"), _("_Cancel"));
  for (guint i = 0; i < G_N_ELEMENTS (filters); i++)
    {
      GtkFileFilter *filter = gtk_file_filter_new ();
      gtk_file_filter_set_name (filter, _(filters[i].name));
      for (const char *const *pattern = filters[i].patterns; *pattern; pattern++)
        gtk_file_filter_add_pattern (filter, *pattern);
      gtk_file_chooser_add_filter (GTK_FILE_CHOOSER (dialog), filter);
    }
  desk_window_begin_in_folder (self, GTK_FILE_CHOOSER (dialog));
  return GTK_NATIVE_DIALOG (dialog);
}

static void
act_open (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  GtkNativeDialog *dialog = open_dialog (window, _("Open spectra"));
  gtk_file_chooser_set_select_multiple (GTK_FILE_CHOOSER (dialog), TRUE);
  g_signal_connect (dialog, "response", G_CALLBACK (on_open_response), window);
  gtk_native_dialog_show (dialog);
}

static void
act_open_demo (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_window_open_demo (window);
}

static void
on_blank_read (GObject *window, GAsyncResult *result, gpointer data)
{
  DeskWindow *self = DESK_WINDOW (window);
  Reading *reading = end_reading (self, result);
  if (!self->history || !reading->film || reading->spectra->len == 0)
    return;
  g_autoptr (BtFilm) film = bt_film_copy (desk_film_get_film (reading->film));
  bt_film_set_blank (film, reading->spectra->pdata[0]);
  desk_history_edit (self->history, reading->film, _("Set blank"), film, NULL, FALSE);
}

static void
on_blank_response (GtkNativeDialog *dialog, int response, DeskWindow *self)
{
  if (response == GTK_RESPONSE_ACCEPT)
    {
      g_autoptr (GPtrArray) files = g_ptr_array_new_with_free_func (g_object_unref);
      g_ptr_array_add (files, gtk_file_chooser_get_file (GTK_FILE_CHOOSER (dialog)));
      start_reading (self, files, NULL, on_blank_read);
    }
  g_object_unref (dialog);
}

static void
act_set_blank (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  GtkNativeDialog *dialog = open_dialog (window, _("Open the blank: the same substrate without a film"));
  g_signal_connect (dialog, "response", G_CALLBACK (on_blank_response), window);
  gtk_native_dialog_show (dialog);
}

/* The film keeps what the user said of it; only its spectrum is read anew. */
static void
on_read_again (GObject *window, GAsyncResult *result, gpointer data)
{
  DeskWindow *self = DESK_WINDOW (window);
  Reading *reading = end_reading (self, result);
  if (!self->history || !reading->film || reading->spectra->len == 0)
    return;
  BtFilm *old = desk_film_get_film (reading->film);
  const char *title = bt_spectrum_get_title (bt_film_get_spectrum (old));
  BtSpectrum *spectrum = reading->spectra->pdata[0];
  for (guint i = 1; i < reading->spectra->len; i++)
    if (g_strcmp0 (bt_spectrum_get_title (reading->spectra->pdata[i]), title) == 0)
      spectrum = reading->spectra->pdata[i];
  g_autoptr (BtFilm) film = bt_film_copy_with_spectrum (old, spectrum);
  desk_history_edit (self->history, reading->film, _("Read in other units"), film, NULL, FALSE);
}

/* "x:nm", "y:absorbance"; the other axis stays as it was read. */
static void
act_read_as (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  const char *axis = g_variant_get_string (parameter, NULL);
  BtSpectrum *spectrum = bt_film_get_spectrum (desk_film_get_film (self->film));
  const char *path = bt_spectrum_get_file (spectrum);
  BtReadOptions options = { (int) bt_spectrum_get_x_unit (spectrum), (int) bt_spectrum_get_y_unit (spectrum) };
  if (!path)
    return;
  for (int unit = BT_X_NM; unit <= BT_X_EV; unit++)
    if (g_str_has_prefix (axis, "x:") && g_str_equal (axis + 2, bt_x_unit_name ((BtXUnit) unit)))
      options.x_unit = unit;
  for (int unit = BT_Y_ABSORBANCE; unit <= BT_Y_ALPHA_PER_CM; unit++)
    if (g_str_has_prefix (axis, "y:") && g_str_equal (axis + 2, bt_y_unit_name ((BtYUnit) unit)))
      options.y_unit = unit;
  g_autoptr (GPtrArray) files = g_ptr_array_new_with_free_func (g_object_unref);
  g_ptr_array_add (files, g_file_new_for_path (path));
  start_reading (self, files, &options, on_read_again);
}

static void
act_as_read (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  desk_as_read_show (GTK_WINDOW (window), desk_film_get_film (DESK_WINDOW (window)->film));
}

static void
on_drop (GtkWidget *window, GdkDragContext *context, int x, int y, GtkSelectionData *data, guint info, guint time)
{
  g_auto (GStrv) uris = gtk_selection_data_get_uris (data);
  g_autoptr (GPtrArray) files = g_ptr_array_new_with_free_func (g_object_unref);
  for (char **uri = uris; uri && *uri; uri++)
    g_ptr_array_add (files, g_file_new_for_uri (*uri));
  desk_window_open_files (DESK_WINDOW (window), files);
  gtk_drag_finish (context, files->len > 0, FALSE, time);
}

void
desk_window_accept_drops (DeskWindow *self)
{
  gtk_drag_dest_set (GTK_WIDGET (self), GTK_DEST_DEFAULT_ALL, NULL, 0, GDK_ACTION_COPY);
  gtk_drag_dest_add_uri_targets (GTK_WIDGET (self));
  g_signal_connect (self, "drag-data-received", G_CALLBACK (on_drop), NULL);
}

void
desk_window_add_open_actions (DeskWindow *self)
{
  static const GActionEntry entries[] = {
    { .name = "open", .activate = act_open },
    { .name = "open-demo", .activate = act_open_demo },
    { .name = "set-blank", .activate = act_set_blank },
    { .name = "as-read", .activate = act_as_read },
    { .name = "read-as", .parameter_type = "s", .activate = act_read_as },
  };
  g_action_map_add_action_entries (G_ACTION_MAP (self), entries, G_N_ELEMENTS (entries), self);
}
