#include "desk-window.h"

#include <glib/gi18n.h>
#include <math.h>

#include "desk-window-private.h"

G_DEFINE_TYPE (DeskWindow, desk_window, GTK_TYPE_APPLICATION_WINDOW)

void
desk_window_say (DeskWindow *self, GtkMessageType type, const char *sentence)
{
  desk_notice_say (DESK_NOTICE (self->notice), type, sentence);
}

void
desk_window_set_enabled (DeskWindow *self, const char *action, gboolean enabled)
{
  g_simple_action_set_enabled (G_SIMPLE_ACTION (g_action_map_lookup_action (G_ACTION_MAP (self), action)), enabled);
}

static void
update_title (DeskWindow *self)
{
  BtTally *tally = self->film ? desk_film_get_tally (self->film) : NULL;
  g_autofree char *title = self->film ? desk_film_dup_title (self->film) : g_strdup ("Bandtally");
  g_autofree char *answer = tally ? bt_tally_answer (tally) : NULL;
  const char *error = self->film ? desk_film_get_error (self->film) : NULL;
  gtk_header_bar_set_title (GTK_HEADER_BAR (self->header), title);
  gtk_header_bar_set_subtitle (GTK_HEADER_BAR (self->header), answer      ? answer
                                                              : error     ? error
                                                              : self->film ? _("Fitting…")
                                                                           : NULL);
}

static void
name_button (GtkWidget *button, const char *format, const char *fallback, const char *name)
{
  g_autofree char *text = name ? g_strdup_printf (format, name) : g_strdup (fallback);
  gtk_widget_set_tooltip_text (button, text);
  atk_object_set_name (gtk_widget_get_accessible (button), text);
}

static void
on_history_changed (DeskWindow *self)
{
  const char *undo = desk_history_get_undo_name (self->history);
  const char *redo = desk_history_get_redo_name (self->history);
  name_button (self->undo_button, _("Undo: %s"), _("Undo"), undo);
  name_button (self->redo_button, _("Redo: %s"), _("Redo"), redo);
  desk_window_set_enabled (self, "undo", undo != NULL);
  desk_window_set_enabled (self, "redo", redo != NULL);
}

static void
on_went_to (DeskWindow *self, DeskFilm *film)
{
  if (film)
    desk_rack_select (DESK_RACK (self->rack), film);
}

void
desk_window_update_actions (DeskWindow *self)
{
  static const char *const of_film[] = { "print",       "print-preview", "save-report", "save-figure", "save-reading", "save-recipe", "load-recipe",
                                         "close-film",  "refit",         "read-as",     "as-read",       "set-blank",   "set-reflectance", "zoom-in",     "zoom-out",
                                         "zoom-all",          "set-thickness", "set-limit", "recipe-to-all", "next-film",
                                         "previous-film" };
  BtTally *tally = self->film ? desk_film_get_tally (self->film) : NULL;
  for (guint i = 0; i < G_N_ELEMENTS (of_film); i++)
    desk_window_set_enabled (self, of_film[i], self->film != NULL);
  gboolean settled = self->film && desk_film_is_settled (self->film);
  desk_window_set_enabled (self, "print", settled);
  desk_window_set_enabled (self, "print-preview", settled);
  desk_window_set_enabled (self, "save-report", settled);
  desk_window_set_enabled (self, "save-tables-json", tally != NULL);
  desk_window_set_enabled (self, "save-tables-csv", tally != NULL);
}

static void
on_film_changed (DeskWindow *self)
{
  update_title (self);
  desk_window_update_actions (self);
}

static void
on_selected (DeskWindow *self, DeskFilm *film)
{
  if (self->film)
    g_signal_handlers_disconnect_by_func (self->film, on_film_changed, self);
  g_set_object (&self->film, film);
  if (film)
    {
      g_signal_connect_swapped (film, "edited", G_CALLBACK (on_film_changed), self);
      g_signal_connect_swapped (film, "tallied", G_CALLBACK (on_film_changed), self);
      g_signal_connect_swapped (film, "state-changed", G_CALLBACK (on_film_changed), self);
    }
  gtk_stack_set_visible_child_name (GTK_STACK (self->pages), film ? "work" : "empty");
  desk_bench_set_film (DESK_BENCH (self->bench), film);
  desk_ledger_set_film (DESK_LEDGER (self->ledger), film);
  on_film_changed (self);
}

void
desk_window_begin_in_folder (DeskWindow *self, GtkFileChooser *chooser)
{
  g_autofree char *here = g_get_current_dir ();
  gtk_file_chooser_set_current_folder (chooser, self->folder ? self->folder : here);
}

void
desk_window_keep_folder (DeskWindow *self, GtkFileChooser *chooser)
{
  char *folder = gtk_file_chooser_get_current_folder (chooser);
  if (!folder)
    return;
  g_free (self->folder);
  self->folder = folder;
}

static void
desk_window_dispose (GObject *object)
{
  DeskWindow *self = DESK_WINDOW (object);
  if (self->film)
    g_signal_handlers_disconnect_by_func (self->film, on_film_changed, self);
  if (self->fitter)
    desk_fitter_cancel_all (self->fitter);
  if (self->history)
    g_signal_handlers_disconnect_by_data (self->history, self);
  if (self->rack)
    g_signal_handlers_disconnect_by_data (self->rack, self);
  self->rack = NULL;
  g_clear_object (&self->film);
  g_clear_object (&self->history);
  g_clear_object (&self->films);
  g_clear_object (&self->fitter);
  g_clear_object (&self->print_settings);
  g_clear_object (&self->page_setup);
  g_clear_pointer (&self->folder, g_free);
  G_OBJECT_CLASS (desk_window_parent_class)->dispose (object);
}

static void
desk_window_class_init (DeskWindowClass *class)
{
  GtkWidgetClass *widget_class = GTK_WIDGET_CLASS (class);
  G_OBJECT_CLASS (class)->dispose = desk_window_dispose;
  gtk_widget_class_set_template_from_resource (widget_class, "/org/bandtally/Bandtally/desk-window.ui");
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, header);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, undo_button);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, redo_button);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, menu_button);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, notice_place);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, pages);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, panes);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, rack_place);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, right_panes);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, bench_place);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, quantity_alpha);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, quantity_absorbance);
  gtk_widget_class_bind_template_child (widget_class, DeskWindow, mark_button);
}

/* The two halves of a GtkPaned lie in windows of their own, at the same place in each, so that GTK cannot tell which comes first. */
static void
order_focus (GtkWidget *container, GtkWidget *first, GtkWidget *second)
{
  GList last = { second, NULL, NULL }, chain = { first, &last, NULL };
  last.prev = &chain;
  G_GNUC_BEGIN_IGNORE_DEPRECATIONS
  gtk_container_set_focus_chain (GTK_CONTAINER (container), &chain);
  G_GNUC_END_IGNORE_DEPRECATIONS
}

static void
desk_window_init (DeskWindow *self)
{
  gtk_widget_init_template (GTK_WIDGET (self));
  self->films = g_list_store_new (DESK_TYPE_FILM);
  self->history = desk_history_new ();
  self->fitter = desk_fitter_new ();

  self->notice = desk_notice_new ();
  gtk_container_add (GTK_CONTAINER (self->notice_place), self->notice);
  self->rack = desk_rack_new (self->films, self->fitter);
  self->bench = desk_bench_new (self->history);
  self->ledger = desk_ledger_new (self->history);
  gtk_box_pack_start (GTK_BOX (self->rack_place), self->rack, TRUE, TRUE, 0);
  gtk_box_pack_start (GTK_BOX (self->bench_place), self->bench, TRUE, TRUE, 0);
  gtk_paned_pack2 (GTK_PANED (self->right_panes), self->ledger, FALSE, FALSE);

  order_focus (self->panes, self->rack_place, self->right_panes);
  order_focus (self->right_panes, self->bench_place, self->ledger);

  desk_window_add_view_actions (self);
  desk_window_add_edit_actions (self);
  desk_window_add_open_actions (self);
  desk_window_add_reflectance_actions (self);
  desk_window_add_save_actions (self);
  desk_window_add_print_actions (self);
  desk_window_add_check_actions (self);
  desk_window_accept_drops (self);

  g_signal_connect_swapped (self->history, "changed", G_CALLBACK (on_history_changed), self);
  g_signal_connect_swapped (self->history, "went-to", G_CALLBACK (on_went_to), self);
  g_signal_connect_swapped (self->rack, "selected", G_CALLBACK (on_selected), self);
  on_history_changed (self);
  on_selected (self, NULL);
}

GtkWidget *
desk_window_new (GtkApplication *app)
{
  return g_object_new (DESK_TYPE_WINDOW, "application", app, NULL);
}
