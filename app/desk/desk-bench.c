#include "desk-bench.h"

#include <glib/gi18n.h>
#include <math.h>

#include "desk-bench-private.h"
#include "desk-theme.h"

/* Closest zoom, eV: a few points of the finest instruments. */
#define CLOSEST_EV 0.02

G_DEFINE_TYPE (DeskBench, desk_bench, GTK_TYPE_BOX)

enum { PROP_0, PROP_MARK_MODE };

void
desk_bench_redraw (DeskBench *self)
{
  g_clear_pointer (&self->picture, cairo_surface_destroy);
  gtk_widget_queue_draw (self->area);
}

static void
lay_out (DeskBench *self)
{
  int width = gtk_widget_get_allocated_width (self->area), height = gtk_widget_get_allocated_height (self->area);
  if (self->figure && width > 1 && height > 1)
    bt_figure_draw (self->figure, NULL, width, height, &self->view);
}

void
desk_bench_view_changed (DeskBench *self)
{
  self->view.theme = desk_theme_of (GTK_WIDGET (self));
  self->view.font_pt = desk_theme_figure_font_pt (GTK_WIDGET (self));
  lay_out (self);
  desk_bench_sync_handles (self);
  desk_bench_redraw (self);
  desk_bench_update_legend (self);
}

static void
update_plan (DeskBench *self)
{
  BtTally *tally = self->film ? desk_film_get_tally (self->film) : NULL;
  const BtRecipe *recipe = self->film ? desk_film_get_recipe (self->film) : NULL;
  self->has_plan = tally || (recipe && recipe->window.mean_nm > 0);
  if (!self->has_plan)
    return;
  if (tally)
    self->plan = tally->plan;
  if (recipe->window.mean_nm > 0)
    {
      BtRange range = recipe->range;
      if (tally)
        range = tally->range;
      else
        desk_bench_full_range (self, &range.low_ev, &range.high_ev);
      bt_band_plan_init (&self->plan, recipe->window, recipe->shift_ev, range);
    }
}

BtFigure *
desk_bench_dup_figure (DeskBench *self)
{
  if (!self->film)
    return NULL;
  return bt_figure_new (desk_film_get_film (self->film), desk_film_get_tally (self->film),
                        self->has_plan ? &self->plan : NULL, desk_film_get_recipe (self->film));
}

static void
refresh (DeskBench *self)
{
  g_clear_handle_id (&self->refresh_idle, g_source_remove);
  update_plan (self);
  g_clear_pointer (&self->figure, bt_figure_free);
  self->figure = desk_bench_dup_figure (self);
  desk_bench_view_changed (self);
}

static gboolean
refresh_now (gpointer data)
{
  DeskBench *self = data;
  self->refresh_idle = 0;
  refresh (self);
  return G_SOURCE_REMOVE;
}

/* Before the next frame, once for all that happens until then. */
static void
refresh_soon (DeskBench *self)
{
  if (!self->refresh_idle)
    self->refresh_idle = g_idle_add_full (G_PRIORITY_HIGH_IDLE, refresh_now, self, NULL);
}

void
desk_bench_set_film (DeskBench *self, DeskFilm *film)
{
  if (film == self->film)
    return;
  desk_bench_commit_nudges (self);
  desk_bench_cancel_edit (self);
  if (self->film)
    g_signal_handlers_disconnect_by_data (self->film, self);
  g_set_object (&self->film, film);
  self->view.low_ev = self->view.high_ev = 0;
  self->view.low_value = self->view.high_value = NAN;
  self->view.low_nm = self->view.high_nm = 0;
  self->view.selected_band = -1;
  if (film)
    {
      g_signal_connect_swapped (film, "edited", G_CALLBACK (refresh_soon), self);
      g_signal_connect_swapped (film, "tallied", G_CALLBACK (refresh_soon), self);
    }
  refresh (self);
}

const BtFigureView *
desk_bench_get_view (DeskBench *self)
{
  return &self->view;
}

void
desk_bench_set_quantity (DeskBench *self, BtQuantity quantity)
{
  self->view.quantity = quantity;
  self->view.low_value = self->view.high_value = NAN;
  desk_bench_view_changed (self);
}

void
desk_bench_full_range (DeskBench *self, double *low_ev, double *high_ev)
{
  gsize n;
  const double *energy = bt_spectrum_get_energy_ev (bt_film_get_spectrum (desk_film_get_film (self->film)), &n);
  *low_ev = energy[0];
  *high_ev = energy[n - 1];
}

void
desk_bench_set_energies (DeskBench *self, double low_ev, double high_ev)
{
  double full_low, full_high;
  if (!self->film)
    return;
  desk_bench_full_range (self, &full_low, &full_high);
  double width = CLAMP (high_ev - low_ev, CLOSEST_EV, full_high - full_low);
  double low = CLAMP (low_ev, full_low, full_high - width);
  self->view.low_ev = low;
  self->view.high_ev = low + width;
  desk_bench_view_changed (self);
}

void
desk_bench_zoom_at (DeskBench *self, double energy_ev, double factor)
{
  BtFigureView shown;
  if (!self->figure)
    return;
  bt_figure_get_shown (self->figure, &shown);
  double at = CLAMP (energy_ev, shown.low_ev, shown.high_ev);
  desk_bench_set_energies (self, at - (at - shown.low_ev) / factor, at + (shown.high_ev - at) / factor);
}

void
desk_bench_zoom_values_at (DeskBench *self, double y, double factor)
{
  BtFigureView shown;
  double px, py, width, height;
  if (!self->figure)
    return;
  bt_figure_get_shown (self->figure, &shown);
  bt_figure_get_panel (self->figure, BT_PANEL_SPECTRUM, &px, &py, &width, &height);
  double span = shown.high_value - shown.low_value;
  double share = CLAMP ((py + height - y) / height, 0, 1);
  double at = shown.low_value + share * span;
  self->view.low_value = at - share * span / factor;
  self->view.high_value = at + (1 - share) * span / factor;
  desk_bench_view_changed (self);
}

void
desk_bench_zoom (DeskBench *self, double factor)
{
  BtFigureView shown;
  if (!self->figure)
    return;
  bt_figure_get_shown (self->figure, &shown);
  gboolean inside = self->cursor_ev > shown.low_ev && self->cursor_ev < shown.high_ev;
  desk_bench_zoom_at (self, inside ? self->cursor_ev : (shown.low_ev + shown.high_ev) / 2, factor);
}

void
desk_bench_zoom_all (DeskBench *self)
{
  self->view.low_ev = self->view.high_ev = 0;
  self->view.low_value = self->view.high_value = NAN;
  self->view.low_nm = self->view.high_nm = 0;
  desk_bench_view_changed (self);
}

void
desk_bench_pan (DeskBench *self, double energy_share, double value_share)
{
  BtFigureView shown;
  if (!self->figure)
    return;
  bt_figure_get_shown (self->figure, &shown);
  double step = (shown.high_ev - shown.low_ev) * energy_share;
  if (value_share != 0)
    {
      double rise = (shown.high_value - shown.low_value) * value_share;
      self->view.low_value = shown.low_value + rise;
      self->view.high_value = shown.high_value + rise;
    }
  desk_bench_set_energies (self, shown.low_ev + step, shown.high_ev + step);
}

void
desk_bench_set_cursor (DeskBench *self, double energy_ev)
{
  self->cursor_ev = energy_ev;
  gtk_widget_queue_draw (self->area);
  desk_bench_update_legend (self);
}

gboolean
desk_bench_in_panel (DeskBench *self, BtPanel panel, double x, double y)
{
  double px, py, width, height;
  if (!self->figure)
    return FALSE;
  bt_figure_get_panel (self->figure, panel, &px, &py, &width, &height);
  return x >= px && x <= px + width && y >= py && y <= py + height;
}

gboolean
desk_bench_get_mark_mode (DeskBench *self)
{
  return self->mark_mode;
}

void
desk_bench_set_mark_mode (DeskBench *self, gboolean mark)
{
  if (mark == self->mark_mode)
    return;
  self->mark_mode = mark;
  desk_bench_update_pointer_cursor (self);
  desk_bench_update_legend (self);
  g_object_notify (G_OBJECT (self), "mark-mode");
}

static gboolean
place_child (GtkOverlay *overlay, GtkWidget *child, GdkRectangle *place, DeskBench *self)
{
  double x, y;
  DeskHandle *handle = DESK_HANDLE (child);
  desk_handle_get_place (handle, &x, &y);
  place->width = desk_handle_get_width (handle);
  place->height = desk_handle_get_height (handle);
  place->x = (int) lround (x - place->width / 2.0);
  place->y = (int) lround (y - place->height / 2.0);
  return TRUE;
}

static void
on_size_allocate (GtkWidget *area, GdkRectangle *place, DeskBench *self)
{
  if (self->picture && place->width == self->picture_width && place->height == self->picture_height)
    return;
  lay_out (self);
  desk_bench_sync_handles (self);
  desk_bench_redraw (self);
}

static void
on_style_updated (GtkWidget *area, DeskBench *self)
{
  if (desk_theme_of (GTK_WIDGET (self)) != self->view.theme
      || desk_theme_figure_font_pt (GTK_WIDGET (self)) != self->view.font_pt)
    desk_bench_view_changed (self);
}

/* Tab goes from the figure to the bands' handles, by energy, to those of the beam, and out. */
static gboolean
desk_bench_focus (GtkWidget *widget, GtkDirectionType direction)
{
  DeskBench *self = DESK_BENCH (widget);
  if (direction != GTK_DIR_TAB_FORWARD && direction != GTK_DIR_TAB_BACKWARD)
    return FALSE; /* the arrow keys move what is in focus */
  g_autoptr (GPtrArray) stops = g_ptr_array_new ();
  int now = -1;
  g_ptr_array_add (stops, self->area);
  for (guint i = 0; i < self->handles->len; i++)
    if (gtk_widget_get_visible (self->handles->pdata[i]) && gtk_widget_get_can_focus (self->handles->pdata[i]))
      g_ptr_array_add (stops, self->handles->pdata[i]);
  for (guint i = 0; i < stops->len; i++)
    if (gtk_widget_is_focus (stops->pdata[i]))
      now = (int) i;
  int next = direction == GTK_DIR_TAB_FORWARD ? now + 1 : now < 0 ? (int) stops->len - 1 : now - 1;
  if (next < 0 || next >= (int) stops->len)
    return FALSE;
  gtk_widget_grab_focus (stops->pdata[next]);
  return TRUE;
}

static void
desk_bench_get_property (GObject *object, guint id, GValue *value, GParamSpec *spec)
{
  g_value_set_boolean (value, DESK_BENCH (object)->mark_mode);
}

static void
desk_bench_set_property (GObject *object, guint id, const GValue *value, GParamSpec *spec)
{
  desk_bench_set_mark_mode (DESK_BENCH (object), g_value_get_boolean (value));
}

static void
desk_bench_dispose (GObject *object)
{
  DeskBench *self = DESK_BENCH (object);
  g_clear_handle_id (&self->refresh_idle, g_source_remove);
  g_clear_handle_id (&self->commit_timer, g_source_remove);
  g_clear_pointer (&self->drag.recipe, bt_recipe_free);
  g_clear_pointer (&self->drag.figure, bt_figure_free);
  self->drag.kind = DESK_DRAG_NONE;
  if (self->film)
    g_signal_handlers_disconnect_by_data (self->film, self);
  if (self->area)
    g_signal_handlers_disconnect_by_data (self->area, self);
  self->area = NULL;
  g_clear_object (&self->film);
  g_clear_object (&self->history);
  g_clear_pointer (&self->figure, bt_figure_free);
  g_clear_pointer (&self->picture, cairo_surface_destroy);
  g_clear_pointer (&self->handles, g_ptr_array_unref);
  G_OBJECT_CLASS (desk_bench_parent_class)->dispose (object);
}

static void
desk_bench_class_init (DeskBenchClass *class)
{
  GObjectClass *object_class = G_OBJECT_CLASS (class);
  GTK_WIDGET_CLASS (class)->focus = desk_bench_focus;
  object_class->dispose = desk_bench_dispose;
  object_class->get_property = desk_bench_get_property;
  object_class->set_property = desk_bench_set_property;
  g_object_class_install_property (
      object_class, PROP_MARK_MODE,
      g_param_spec_boolean ("mark-mode", NULL, NULL, FALSE,
                            G_PARAM_READWRITE | G_PARAM_EXPLICIT_NOTIFY | G_PARAM_STATIC_STRINGS));
}

static GtkWidget *
reading_label (const char *name)
{
  GtkWidget *label = gtk_label_new (NULL);
  gtk_label_set_xalign (GTK_LABEL (label), 0);
  gtk_label_set_ellipsize (GTK_LABEL (label), PANGO_ELLIPSIZE_END);
  gtk_style_context_add_class (gtk_widget_get_style_context (label), "desk-reading");
  return label;
}

static void
desk_bench_init (DeskBench *self)
{
  gtk_orientable_set_orientation (GTK_ORIENTABLE (self), GTK_ORIENTATION_VERTICAL);
  gtk_style_context_add_class (gtk_widget_get_style_context (GTK_WIDGET (self)), "desk-bench");
  bt_figure_view_init (&self->view);
  self->view.selected_band = -1;
  self->view.quantity = BT_QUANTITY_ALPHA;
  self->cursor_ev = self->mark_from_ev = NAN;
  self->handles = g_ptr_array_new ();

  GtkWidget *legend = gtk_box_new (GTK_ORIENTATION_VERTICAL, 0);
  gtk_style_context_add_class (gtk_widget_get_style_context (legend), "desk-legend");
  self->values = reading_label (NULL);
  self->tubes = reading_label (NULL);
  gtk_style_context_add_class (gtk_widget_get_style_context (self->tubes), "desk-detail");
  gtk_container_add (GTK_CONTAINER (legend), self->values);
  gtk_container_add (GTK_CONTAINER (legend), self->tubes);

  self->area = gtk_drawing_area_new ();
  gtk_widget_set_can_focus (self->area, TRUE);
  gtk_widget_set_size_request (self->area, 320, 300);
  self->overlay = gtk_overlay_new ();
  gtk_container_add (GTK_CONTAINER (self->overlay), self->area);
  gtk_box_pack_start (GTK_BOX (self), legend, FALSE, FALSE, 0);
  gtk_box_pack_start (GTK_BOX (self), self->overlay, TRUE, TRUE, 0);
  g_signal_connect (self->overlay, "get-child-position", G_CALLBACK (place_child), self);
  g_signal_connect_after (self->area, "size-allocate", G_CALLBACK (on_size_allocate), self);
  g_signal_connect (self->area, "style-updated", G_CALLBACK (on_style_updated), self);
  g_signal_connect (self->area, "draw", G_CALLBACK (desk_bench_draw), self);
  desk_bench_connect_pointer (self);
  atk_object_set_name (gtk_widget_get_accessible (self->area), _("Figure"));
  atk_object_set_role (gtk_widget_get_accessible (self->area), ATK_ROLE_CANVAS);
  atk_object_set_name (gtk_widget_get_accessible (GTK_WIDGET (self)), _("Bench"));
  gtk_widget_show_all (GTK_WIDGET (self));
  desk_bench_update_legend (self);
}

GtkWidget *
desk_bench_new (DeskHistory *history)
{
  DeskBench *self = g_object_new (DESK_TYPE_BENCH, NULL);
  self->history = g_object_ref (history);
  return GTK_WIDGET (self);
}
