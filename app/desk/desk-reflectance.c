/* The film's measured reflectance: choosing its file, and leaving it out again. */
#include <glib/gi18n.h>

#include "desk-window-private.h"

static void
read_reflectance (GTask *task, gpointer window, gpointer path, GCancellable *cancellable)
{
  GError *error = NULL;
  BtSpectrum *reflectance = bt_reflectance_new_from_file (path, &error);
  if (reflectance)
    g_task_return_pointer (task, reflectance, g_object_unref);
  else
    g_task_return_error (task, error);
}

/* With a measured reflectance the light path becomes the one that uses it. */
static void
on_read (GObject *window, GAsyncResult *result, gpointer data)
{
  DeskWindow *self = DESK_WINDOW (window);
  g_autoptr (DeskFilm) film = data;
  g_autoptr (GError) error = NULL;
  g_autoptr (BtSpectrum) reflectance = g_task_propagate_pointer (G_TASK (result), &error);
  if (!self->history)
    return;
  if (!reflectance)
    {
      desk_window_say (self, GTK_MESSAGE_WARNING, error->message);
      return;
    }
  g_autoptr (BtFilm) edited = bt_film_copy (desk_film_get_film (film));
  g_autoptr (BtRecipe) recipe = bt_recipe_copy (desk_edition_get_recipe (desk_film_get_edition (film)));
  bt_film_set_reflectance (edited, reflectance);
  recipe->light_path.kind = BT_LIGHT_PATH_REFLECTION;
  desk_history_edit (self->history, film, _("Set measured reflectance"), edited, recipe, FALSE);
}

static void
on_response (GtkNativeDialog *dialog, int response, DeskWindow *self)
{
  if (response == GTK_RESPONSE_ACCEPT && self->film)
    {
      g_autoptr (GTask) task = g_task_new (self, NULL, on_read, g_object_ref (self->film));
      desk_window_keep_folder (self, GTK_FILE_CHOOSER (dialog));
      g_task_set_task_data (task, gtk_file_chooser_get_filename (GTK_FILE_CHOOSER (dialog)), g_free);
      g_task_run_in_thread (task, read_reflectance);
    }
  g_object_unref (dialog);
}

static void
act_set_reflectance (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  GtkFileChooserNative *dialog = gtk_file_chooser_native_new (_("Open the reflectance of film and substrate"), window, GTK_FILE_CHOOSER_ACTION_OPEN,
                                                              _("_Open"), _("_Cancel"));
  desk_window_begin_in_folder (window, GTK_FILE_CHOOSER (dialog));
  g_signal_connect (dialog, "response", G_CALLBACK (on_response), window);
  gtk_native_dialog_show (GTK_NATIVE_DIALOG (dialog));
}

static void
act_remove_reflectance (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  DeskWindow *self = window;
  if (!self->film)
    return;
  g_autoptr (BtFilm) film = bt_film_copy (desk_film_get_film (self->film));
  bt_film_set_reflectance (film, NULL);
  desk_history_edit (self->history, self->film, _("Remove measured reflectance"), film, NULL, FALSE);
}

void
desk_window_add_reflectance_actions (DeskWindow *self)
{
  static const GActionEntry entries[] = {
    { .name = "set-reflectance", .activate = act_set_reflectance },
    { .name = "remove-reflectance", .activate = act_remove_reflectance },
  };
  g_action_map_add_action_entries (G_ACTION_MAP (self), entries, G_N_ELEMENTS (entries), self);
}
