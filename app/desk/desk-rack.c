#include "desk-rack.h"

#include <glib/gi18n.h>

#include "desk-strip-row.h"

struct _DeskRack {
  GtkBox parent;
  GListStore *films;
  DeskFitter *fitter;
  GtkWidget *list, *scroller, *revealer, *progress;
  DeskFilm *selected;
};

G_DEFINE_TYPE (DeskRack, desk_rack, GTK_TYPE_BOX)

static guint selected_signal;

static const char *
lot_of (DeskStripRow *row)
{
  const char *lot = bt_film_get_lot (desk_film_get_film (desk_strip_row_get_film (row)));
  return lot ? lot : "";
}

static int
compare_rows (GtkListBoxRow *a, GtkListBoxRow *b, gpointer data)
{
  const char *lot_a = lot_of (DESK_STRIP_ROW (a)), *lot_b = lot_of (DESK_STRIP_ROW (b));
  g_autofree char *title_a = desk_film_dup_title (desk_strip_row_get_film (DESK_STRIP_ROW (a)));
  g_autofree char *title_b = desk_film_dup_title (desk_strip_row_get_film (DESK_STRIP_ROW (b)));
  /* Films of no lot come last. */
  if (!*lot_a != !*lot_b)
    return *lot_a ? -1 : 1;
  int order = g_utf8_collate (lot_a, lot_b);
  return order ? order : g_utf8_collate (title_a, title_b);
}

static void
set_header (GtkListBoxRow *row, GtkListBoxRow *before, gpointer data)
{
  const char *lot = lot_of (DESK_STRIP_ROW (row));
  if (before && g_strcmp0 (lot, lot_of (DESK_STRIP_ROW (before))) == 0)
    {
      gtk_list_box_row_set_header (row, NULL);
      return;
    }
  GtkWidget *label = gtk_label_new (*lot ? lot : _("No lot"));
  gtk_label_set_xalign (GTK_LABEL (label), 0);
  gtk_label_set_ellipsize (GTK_LABEL (label), PANGO_ELLIPSIZE_END);
  gtk_style_context_add_class (gtk_widget_get_style_context (label), "desk-lot");
  gtk_widget_show (label);
  gtk_list_box_row_set_header (row, label);
}

static GtkListBoxRow *
find_row (DeskRack *self, DeskFilm *film)
{
  GtkListBoxRow *row;
  for (int i = 0; (row = gtk_list_box_get_row_at_index (GTK_LIST_BOX (self->list), i)); i++)
    if (desk_strip_row_get_film (DESK_STRIP_ROW (row)) == film)
      return row;
  return NULL;
}

static void
on_films_changed (GListModel *films, guint position, guint removed, guint added, DeskRack *self)
{
  /* Removed films are no longer in the model, so the rows say which they were. */
  g_autoptr (GList) rows = gtk_container_get_children (GTK_CONTAINER (self->list));
  int next = -1;
  for (GList *l = rows; removed && l; l = l->next)
    if (!g_list_store_find (self->films, desk_strip_row_get_film (l->data), NULL))
      {
        if (desk_strip_row_get_film (l->data) == self->selected)
          next = gtk_list_box_row_get_index (l->data);
        gtk_widget_destroy (l->data);
      }
  for (guint i = position; i < position + added; i++)
    {
      g_autoptr (DeskFilm) film = g_list_model_get_item (films, i);
      gtk_container_add (GTK_CONTAINER (self->list), desk_strip_row_new (film));
    }
  if (next >= 0 || !gtk_list_box_get_selected_row (GTK_LIST_BOX (self->list)))
    {
      guint n = g_list_model_get_n_items (films);
      GtkListBoxRow *row = gtk_list_box_get_row_at_index (GTK_LIST_BOX (self->list), CLAMP (next, 0, MAX (0, (int) n - 1)));
      if (row)
        gtk_list_box_select_row (GTK_LIST_BOX (self->list), row);
      else
        {
          g_clear_object (&self->selected);
          g_signal_emit (self, selected_signal, 0, NULL);
        }
    }
}

static void
on_row_selected (GtkListBox *list, GtkListBoxRow *row, DeskRack *self)
{
  DeskFilm *film = row ? desk_strip_row_get_film (DESK_STRIP_ROW (row)) : NULL;
  if (!film || film == self->selected)
    return;
  g_set_object (&self->selected, film);
  g_signal_emit (self, selected_signal, 0, film);
}

static void
on_fitter_changed (DeskFitter *fitter, DeskRack *self)
{
  guint n = desk_fitter_get_n_open (fitter);
  g_autofree char *text = g_strdup_printf (ngettext ("Fitting %u film", "Fitting %u films", n), n);
  /* One film's fit shows on its own strip; a bar that comes and goes with every edit would only flicker. */
  gtk_revealer_set_reveal_child (GTK_REVEALER (self->revealer), n > 1);
  if (n == 0)
    return;
  gtk_progress_bar_set_fraction (GTK_PROGRESS_BAR (self->progress), desk_fitter_get_progress (fitter));
  gtk_progress_bar_set_text (GTK_PROGRESS_BAR (self->progress), text);
}

static void
desk_rack_dispose (GObject *object)
{
  DeskRack *self = DESK_RACK (object);
  if (self->films)
    g_signal_handlers_disconnect_by_data (self->films, self);
  if (self->fitter)
    g_signal_handlers_disconnect_by_data (self->fitter, self);
  if (self->list)
    g_signal_handlers_disconnect_by_data (self->list, self);
  self->list = NULL;
  g_clear_object (&self->films);
  g_clear_object (&self->fitter);
  g_clear_object (&self->selected);
  G_OBJECT_CLASS (desk_rack_parent_class)->dispose (object);
}

static void
desk_rack_class_init (DeskRackClass *class)
{
  G_OBJECT_CLASS (class)->dispose = desk_rack_dispose;
  selected_signal = g_signal_new ("selected", G_TYPE_FROM_CLASS (class), G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 1,
                                  DESK_TYPE_FILM);
}

static GtkWidget *
build_progress (DeskRack *self)
{
  GtkWidget *box = gtk_box_new (GTK_ORIENTATION_HORIZONTAL, 6);
  GtkWidget *cancel = gtk_button_new_from_icon_name ("process-stop-symbolic", GTK_ICON_SIZE_MENU);
  gtk_style_context_add_class (gtk_widget_get_style_context (box), "desk-progress");
  self->progress = gtk_progress_bar_new ();
  gtk_progress_bar_set_show_text (GTK_PROGRESS_BAR (self->progress), TRUE);
  gtk_widget_set_valign (self->progress, GTK_ALIGN_CENTER);
  atk_object_set_name (gtk_widget_get_accessible (self->progress), _("Progress of the fits"));
  gtk_widget_set_tooltip_text (cancel, _("Cancel the fits"));
  atk_object_set_name (gtk_widget_get_accessible (cancel), _("Cancel the fits"));
  gtk_button_set_relief (GTK_BUTTON (cancel), GTK_RELIEF_NONE);
  gtk_actionable_set_action_name (GTK_ACTIONABLE (cancel), "win.cancel-fits");
  gtk_box_pack_start (GTK_BOX (box), self->progress, TRUE, TRUE, 0);
  gtk_box_pack_start (GTK_BOX (box), cancel, FALSE, FALSE, 0);
  self->revealer = gtk_revealer_new ();
  gtk_revealer_set_transition_type (GTK_REVEALER (self->revealer), GTK_REVEALER_TRANSITION_TYPE_SLIDE_UP);
  gtk_container_add (GTK_CONTAINER (self->revealer), box);
  return self->revealer;
}

static void
desk_rack_init (DeskRack *self)
{
  gtk_orientable_set_orientation (GTK_ORIENTABLE (self), GTK_ORIENTATION_VERTICAL);
  gtk_style_context_add_class (gtk_widget_get_style_context (GTK_WIDGET (self)), "desk-rack");
  self->list = gtk_list_box_new ();
  gtk_list_box_set_selection_mode (GTK_LIST_BOX (self->list), GTK_SELECTION_BROWSE);
  gtk_list_box_set_sort_func (GTK_LIST_BOX (self->list), compare_rows, NULL, NULL);
  gtk_list_box_set_header_func (GTK_LIST_BOX (self->list), set_header, NULL, NULL);
  atk_object_set_name (gtk_widget_get_accessible (self->list), _("Films on the rack"));
  g_signal_connect (self->list, "row-selected", G_CALLBACK (on_row_selected), self);
  self->scroller = gtk_scrolled_window_new (NULL, NULL);
  gtk_scrolled_window_set_policy (GTK_SCROLLED_WINDOW (self->scroller), GTK_POLICY_NEVER, GTK_POLICY_AUTOMATIC);
  gtk_container_add (GTK_CONTAINER (self->scroller), self->list);
  gtk_box_pack_start (GTK_BOX (self), self->scroller, TRUE, TRUE, 0);
  gtk_box_pack_start (GTK_BOX (self), build_progress (self), FALSE, FALSE, 0);
  gtk_widget_show_all (GTK_WIDGET (self));
}

GtkWidget *
desk_rack_new (GListStore *films, DeskFitter *fitter)
{
  DeskRack *self = g_object_new (DESK_TYPE_RACK, "width-request", 184, NULL);
  self->films = g_object_ref (films);
  self->fitter = g_object_ref (fitter);
  atk_object_set_name (gtk_widget_get_accessible (GTK_WIDGET (self)), _("Rack"));
  g_signal_connect (films, "items-changed", G_CALLBACK (on_films_changed), self);
  g_signal_connect (fitter, "changed", G_CALLBACK (on_fitter_changed), self);
  return GTK_WIDGET (self);
}

DeskFilm *
desk_rack_get_selected (DeskRack *self)
{
  return self->selected;
}

/* Once the list has been laid out: rows that were just added have no place yet. */
static gboolean
scroll_to_selected (gpointer data)
{
  DeskRack *self = data;
  GtkListBoxRow *row = self->list && self->selected ? find_row (self, self->selected) : NULL;
  GtkAllocation place;
  if (row)
    {
      gtk_widget_get_allocation (GTK_WIDGET (row), &place);
      gtk_adjustment_clamp_page (gtk_scrolled_window_get_vadjustment (GTK_SCROLLED_WINDOW (self->scroller)), place.y,
                                 place.y + place.height);
    }
  g_object_unref (self);
  return G_SOURCE_REMOVE;
}

void
desk_rack_select (DeskRack *self, DeskFilm *film)
{
  GtkListBoxRow *row = find_row (self, film);
  if (!row)
    return;
  gtk_list_box_select_row (GTK_LIST_BOX (self->list), row);
  g_idle_add (scroll_to_selected, g_object_ref (self));
}

void
desk_rack_step (DeskRack *self, int steps)
{
  GtkListBoxRow *row = gtk_list_box_get_selected_row (GTK_LIST_BOX (self->list));
  int index = row ? gtk_list_box_row_get_index (row) + steps : 0;
  GtkListBoxRow *other = gtk_list_box_get_row_at_index (GTK_LIST_BOX (self->list), MAX (0, index));
  if (other)
    desk_rack_select (self, desk_strip_row_get_film (DESK_STRIP_ROW (other)));
}
