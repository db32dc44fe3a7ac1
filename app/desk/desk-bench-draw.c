/* The bench's drawing: the figure from a picture kept until something changes, and over it what moves with the hand. */
#include <math.h>

#include "desk-bench-private.h"

/* The band in the hand is drawn this many widths to either side. */
#define OUTLINE_WIDTHS 1.3

static void
set_ink (DeskBench *self, cairo_t *cr, double alpha)
{
  GdkRGBA ink;
  GtkStyleContext *style = gtk_widget_get_style_context (self->area);
  gtk_style_context_get_color (style, gtk_style_context_get_state (style), &ink);
  cairo_set_source_rgba (cr, ink.red, ink.green, ink.blue, alpha);
}

static void
keep_picture (DeskBench *self)
{
  int width = gtk_widget_get_allocated_width (self->area), height = gtk_widget_get_allocated_height (self->area);
  if (self->picture && self->picture_width == width && self->picture_height == height)
    return;
  g_clear_pointer (&self->picture, cairo_surface_destroy);
  self->picture = gdk_window_create_similar_surface (gtk_widget_get_window (self->area), CAIRO_CONTENT_COLOR_ALPHA, width, height);
  self->picture_width = width;
  self->picture_height = height;
  cairo_t *cr = cairo_create (self->picture);
  bt_figure_draw (self->figure, cr, width, height, &self->view);
  cairo_destroy (cr);
}

/* A stripe over all panels between two energies. */
static void
draw_stripe (DeskBench *self, cairo_t *cr, double from_ev, double to_ev)
{
  double px, py, width, height, kx, ky, kwidth, kheight;
  bt_figure_get_panel (self->figure, BT_PANEL_SPECTRUM, &px, &py, &width, &height);
  bt_figure_get_panel (self->figure, BT_PANEL_KATAURA, &kx, &ky, &kwidth, &kheight);
  double x0 = bt_figure_x_from_ev (self->figure, MIN (from_ev, to_ev));
  double x1 = bt_figure_x_from_ev (self->figure, MAX (from_ev, to_ev));
  double bottom = kheight > 0 ? ky + kheight : py + height;
  cairo_rectangle (cr, x0, py, x1 - x0, bottom - py);
  set_ink (self, cr, 0.15);
  cairo_fill_preserve (cr);
  set_ink (self, cr, 0.6);
  cairo_set_line_width (cr, 1);
  cairo_stroke (cr);
}

static void
draw_crosshair (DeskBench *self, cairo_t *cr)
{
  static const double dashes[] = { 3, 3 };
  for (BtPanel panel = 0; panel < BT_N_PANELS; panel++)
    {
      double px, py, width, height;
      bt_figure_get_panel (self->figure, panel, &px, &py, &width, &height);
      double x = floor (bt_figure_x_from_ev (self->figure, self->cursor_ev)) + 0.5;
      if (!(width > 0) || x < px || x > px + width)
        continue;
      cairo_move_to (cr, x, py);
      cairo_line_to (cr, x, py + height);
      if (self->pointer_in && self->pointer_y >= py && self->pointer_y <= py + height)
        {
          cairo_move_to (cr, px, floor (self->pointer_y) + 0.5);
          cairo_line_to (cr, px + width, floor (self->pointer_y) + 0.5);
        }
    }
  set_ink (self, cr, 0.55);
  cairo_set_line_width (cr, 1);
  cairo_set_dash (cr, dashes, G_N_ELEMENTS (dashes), 0);
  cairo_stroke (cr);
  cairo_set_dash (cr, NULL, 0, 0);
}

/* The band as the hand has it, before the fit has followed. */
static void
draw_moved_band (DeskBench *self, cairo_t *cr)
{
  double px, py, width, height;
  const BtBand *band = &self->drag.band;
  bt_figure_get_panel (self->figure, BT_PANEL_SPECTRUM, &px, &py, &width, &height);
  cairo_save (cr);
  cairo_rectangle (cr, px, py, width, height);
  cairo_clip (cr);
  double from = bt_figure_x_from_ev (self->figure, band->centre_ev - OUTLINE_WIDTHS * band->fwhm_ev);
  double to = bt_figure_x_from_ev (self->figure, band->centre_ev + OUTLINE_WIDTHS * band->fwhm_ev);
  for (double x = MAX (px, from); x <= MIN (px + width, to); x += 2)
    {
      double energy = bt_figure_ev_from_x (self->figure, x), value;
      bt_band_eval (band, &energy, 1, &value);
      cairo_line_to (cr, x, bt_figure_y_from_absorbance (self->figure, desk_bench_hand_foot (self, energy) + value));
    }
  set_ink (self, cr, 0.9);
  cairo_set_line_width (cr, 2);
  cairo_stroke (cr);
  if (self->has_plan && self->drag.handle && desk_handle_get_kind (self->drag.handle) == DESK_HANDLE_CROWN)
    {
      /* Where the plan expects the centre. */
      const BtBandWindow *window = &self->plan.bands[band->group];
      double ends[] = { window->low_ev, window->high_ev };
      static const double dashes[] = { 2, 4 };
      for (guint i = 0; i < 2; i++)
        {
          double x = floor (bt_figure_x_from_ev (self->figure, ends[i])) + 0.5;
          cairo_move_to (cr, x, py);
          cairo_line_to (cr, x, py + height);
        }
      set_ink (self, cr, 0.5);
      cairo_set_line_width (cr, 1);
      cairo_set_dash (cr, dashes, 2, 0);
      cairo_stroke (cr);
    }
  cairo_restore (cr);
}

static void
draw_rectangle (DeskBench *self, cairo_t *cr)
{
  const DeskDrag *drag = &self->drag;
  cairo_rectangle (cr, floor (MIN (drag->start_x, drag->x)) + 0.5, floor (MIN (drag->start_y, drag->y)) + 0.5,
                   fabs (drag->x - drag->start_x), fabs (drag->y - drag->start_y));
  set_ink (self, cr, 0.1);
  cairo_fill_preserve (cr);
  set_ink (self, cr, 0.7);
  cairo_set_line_width (cr, 1);
  cairo_stroke (cr);
}

gboolean
desk_bench_draw (GtkWidget *area, cairo_t *cr, gpointer bench)
{
  DeskBench *self = bench;
  if (!self->figure)
    return FALSE;
  keep_picture (self);
  cairo_set_source_surface (cr, self->picture, 0, 0);
  cairo_paint (cr);
  if (self->drag.kind == DESK_DRAG_HANDLE && self->drag.moved && !desk_handle_is_beam (self->drag.handle))
    draw_moved_band (self, cr);
  if (self->drag.kind == DESK_DRAG_ZOOM && self->drag.moved)
    draw_rectangle (self, cr);
  if (self->drag.kind == DESK_DRAG_MARK && self->drag.moved)
    draw_stripe (self, cr, bt_figure_ev_from_x (self->figure, self->drag.start_x),
                 bt_figure_ev_from_x (self->figure, self->drag.x));
  if (!isnan (self->mark_from_ev) && !isnan (self->cursor_ev))
    draw_stripe (self, cr, self->mark_from_ev, self->cursor_ev);
  if (!isnan (self->cursor_ev))
    draw_crosshair (self, cr);
  if (gtk_widget_has_visible_focus (area))
    gtk_render_focus (gtk_widget_get_style_context (area), cr, 0, 0, gtk_widget_get_allocated_width (area),
                      gtk_widget_get_allocated_height (area));
  return FALSE;
}
