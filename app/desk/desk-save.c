/* Saving: the report as PDF, the figure, the reading, tables of all films, recipes. */
#include <glib/gi18n.h>
#include <math.h>

#include "desk-window-private.h"

typedef gboolean (*SaveFunc) (DeskWindow *self, const char *path, GError **error);

typedef struct { DeskWindow *window; SaveFunc save; } Saving;

/* What GLib says of a file is a reason, not yet a sentence that helps. */
static void
say_why (DeskWindow *self, const char *path, const GError *error)
{
  g_autofree char *sentence = NULL;
  if (!g_str_has_suffix (error->message, "."))
    sentence = g_strdup_printf (_("%s cannot be written (%s): choose another folder or name."), path, error->message);
  desk_window_say (self, GTK_MESSAGE_ERROR, sentence ? sentence : error->message);
}

static void
on_save_response (GtkNativeDialog *dialog, int response, gpointer data)
{
  g_autofree Saving *saving = data;
  if (response == GTK_RESPONSE_ACCEPT)
    {
      g_autoptr (GError) error = NULL;
      g_autofree char *path = gtk_file_chooser_get_filename (GTK_FILE_CHOOSER (dialog));
      desk_window_keep_folder (saving->window, GTK_FILE_CHOOSER (dialog));
      if (!saving->save (saving->window, path, &error))
        say_why (saving->window, path, error);
    }
  g_object_unref (dialog);
}

/* Asks for a place; @ending (".pdf") completes the film's name as a proposal. */
static void
ask (DeskWindow *self, const char *title, const char *ending, SaveFunc save)
{
  GtkFileChooserNative *dialog
      = gtk_file_chooser_native_new (title, GTK_WINDOW (self), GTK_FILE_CHOOSER_ACTION_SAVE, _("_Save"), _("_Cancel"));
  g_autofree char *film = self->film ? desk_film_dup_title (self->film) : g_strdup ("bandtally");
  g_autofree char *name = g_strconcat (g_strdelimit (film, "/", '-'), ending, NULL);
  Saving *saving = g_new (Saving, 1);
  *saving = (Saving){ self, save };
  desk_window_begin_in_folder (self, GTK_FILE_CHOOSER (dialog));
  gtk_file_chooser_set_do_overwrite_confirmation (GTK_FILE_CHOOSER (dialog), TRUE);
  gtk_file_chooser_set_current_name (GTK_FILE_CHOOSER (dialog), name);
  g_signal_connect (dialog, "response", G_CALLBACK (on_save_response), saving);
  gtk_native_dialog_show (GTK_NATIVE_DIALOG (dialog));
}

static BtPaper
preferred_paper (void)
{
  return g_str_equal (gtk_paper_size_get_default (), GTK_PAPER_NAME_LETTER) ? BT_PAPER_LETTER : BT_PAPER_A4;
}

static gboolean
save_report (DeskWindow *self, const char *path, GError **error)
{
  BtTally *tally = self->film ? desk_film_get_tally (self->film) : NULL;
  if (!tally)
    {
      g_set_error_literal (error, G_FILE_ERROR, G_FILE_ERROR_FAILED, _("There is no tally to report yet."));
      return FALSE;
    }
  g_autoptr (BtReport) report = bt_report_new (preferred_paper ());
  bt_report_add (report, desk_film_get_film (self->film), tally);
  return bt_report_write_pdf (report, path, error);
}

static gboolean
save_figure (DeskWindow *self, const char *path, GError **error)
{
  g_autoptr (BtFigure) figure = desk_bench_dup_figure (DESK_BENCH (self->bench));
  BtFigureView view = *desk_bench_get_view (DESK_BENCH (self->bench));
  view.theme = BT_THEME_PRINT;
  view.selected_band = -1;
  view.cursor_ev = NAN;
  /* 17 cm by 15 cm: the width of a page's text. */
  return bt_figure_save (figure, path, 482, 425, &view, error);
}

static gboolean
save_tables (DeskWindow *self, const char *path, char *(*write) (GPtrArray *, GPtrArray *), GError **error)
{
  g_autoptr (GPtrArray) films = g_ptr_array_new ();
  g_autoptr (GPtrArray) tallies = g_ptr_array_new ();
  guint n = g_list_model_get_n_items (G_LIST_MODEL (self->films));
  for (guint i = 0; i < n; i++)
    {
      g_autoptr (DeskFilm) film = g_list_model_get_item (G_LIST_MODEL (self->films), i);
      if (!desk_film_get_tally (film))
        continue;
      g_ptr_array_add (films, desk_film_get_film (film));
      g_ptr_array_add (tallies, desk_film_get_tally (film));
    }
  g_autofree char *text = write (films, tallies);
  return g_file_set_contents (path, text, -1, error);
}

static gboolean
save_json (DeskWindow *self, const char *path, GError **error)
{
  return save_tables (self, path, bt_tallies_to_json, error);
}

static gboolean
save_csv (DeskWindow *self, const char *path, GError **error)
{
  return save_tables (self, path, bt_tallies_to_csv, error);
}

static gboolean
save_reading (DeskWindow *self, const char *path, GError **error)
{
  if (!self->film)
    return TRUE;
  g_autofree char *text = bt_spectrum_to_jcamp (bt_film_get_spectrum (desk_film_get_film (self->film)), BT_JCAMP_DIFDUP);
  return g_file_set_contents (path, text, -1, error);
}

static gboolean
save_recipe (DeskWindow *self, const char *path, GError **error)
{
  if (!self->film)
    return TRUE;
  g_autofree char *text = bt_recipe_to_json (desk_edition_get_recipe (desk_film_get_edition (self->film)));
  return g_file_set_contents (path, text, -1, error);
}

static void
act_save_report (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  ask (window, _("Save report"), ".pdf", save_report);
}

static void
act_save_figure (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  ask (window, _("Save figure as SVG, PDF or PNG"), ".svg", save_figure);
}

static void
act_save_reading (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  ask (window, _("Save reading as JCAMP-DX"), ".jdx", save_reading);
}

static void
act_save_json (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  ask (window, _("Save the tallies of all films"), ".json", save_json);
}

static void
act_save_csv (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  ask (window, _("Save the tallies of all films"), ".csv", save_csv);
}

static void
act_save_recipe (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  ask (window, _("Save recipe"), ".recipe.json", save_recipe);
}

static void
on_load_response (GtkNativeDialog *dialog, int response, DeskWindow *self)
{
  if (response == GTK_RESPONSE_ACCEPT && self->film)
    {
      g_autoptr (GError) error = NULL;
      g_autofree char *path = gtk_file_chooser_get_filename (GTK_FILE_CHOOSER (dialog));
      g_autoptr (BtRecipe) recipe = bt_recipe_new_from_file (path, &error);
      if (recipe)
        desk_history_edit (self->history, self->film, _("Load recipe"), NULL, recipe, FALSE);
      else
        desk_window_say (self, GTK_MESSAGE_ERROR, error->message);
    }
  g_object_unref (dialog);
}

static void
act_load_recipe (GSimpleAction *action, GVariant *parameter, gpointer window)
{
  GtkFileChooserNative *dialog
      = gtk_file_chooser_native_new (_("Load recipe"), window, GTK_FILE_CHOOSER_ACTION_OPEN, _("_Open"), _("_Cancel"));
  desk_window_begin_in_folder (window, GTK_FILE_CHOOSER (dialog));
  g_signal_connect (dialog, "response", G_CALLBACK (on_load_response), window);
  gtk_native_dialog_show (GTK_NATIVE_DIALOG (dialog));
}

void
desk_window_add_save_actions (DeskWindow *self)
{
  static const GActionEntry entries[] = {
    { .name = "save-report", .activate = act_save_report },     { .name = "save-figure", .activate = act_save_figure },
    { .name = "save-tables-json", .activate = act_save_json },  { .name = "save-tables-csv", .activate = act_save_csv },
    { .name = "save-reading", .activate = act_save_reading },
    { .name = "save-recipe", .activate = act_save_recipe },     { .name = "load-recipe", .activate = act_load_recipe },
  };
  g_action_map_add_action_entries (G_ACTION_MAP (self), entries, G_N_ELEMENTS (entries), self);
}
