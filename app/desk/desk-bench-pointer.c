/* The bench's pointer and keyboard.
 *
 * Drag: a handle, or else pan. Shift and drag: zoom to a rectangle. Alt or Control and drag, or mark mode: leave a range out.
 * Middle button or space and drag: pan. Wheel: zoom at the pointer; with Control the values. Escape: let go. */
#include <math.h>

#include "desk-bench-private.h"

#define CLICK_SLACK 3
#define WHEEL_FACTOR 1.2
#define KEY_PAN 0.1

static void
set_pointer_shape (DeskBench *self, const char *name)
{
  GdkWindow *window = gtk_widget_get_window (self->area);
  if (!window)
    return;
  g_autoptr (GdkCursor) cursor = name ? gdk_cursor_new_from_name (gdk_window_get_display (window), name) : NULL;
  gdk_window_set_cursor (window, cursor);
}

static const char *
shape_of (DeskHandle *handle)
{
  switch (desk_handle_get_kind (handle))
    {
    case DESK_HANDLE_CROWN:
      return "move";
    case DESK_HANDLE_FLANK_LOW:
    case DESK_HANDLE_FLANK_HIGH:
      return "ew-resize";
    default:
      return "ns-resize";
    }
}

void
desk_bench_update_pointer_cursor (DeskBench *self)
{
  DeskHandle *handle = self->figure ? desk_bench_handle_at (self, self->pointer_x, self->pointer_y) : NULL;
  if (self->drag.kind == DESK_DRAG_PAN)
    set_pointer_shape (self, "grabbing");
  else if (self->drag.kind == DESK_DRAG_HANDLE && self->drag.handle)
    set_pointer_shape (self, shape_of (self->drag.handle));
  else if (self->mark_mode)
    set_pointer_shape (self, "col-resize");
  else
    set_pointer_shape (self, handle ? shape_of (handle) : "crosshair");
}

static gboolean
over_plot (DeskBench *self, double x, double y)
{
  for (BtPanel panel = 0; panel < BT_N_PANELS; panel++)
    if (desk_bench_in_panel (self, panel, x, y))
      return TRUE;
  return FALSE;
}

static void
begin_drag (DeskBench *self, DeskDragKind kind, double x, double y)
{
  self->drag.kind = kind;
  self->drag.start_x = self->drag.x = x;
  self->drag.start_y = self->drag.y = y;
  self->drag.moved = FALSE;
  if (kind == DESK_DRAG_PAN)
    bt_figure_get_shown (self->figure, &self->drag.view);
}

static void
take_hold (DeskBench *self, DeskHandle *handle, double x, double y)
{
  double hx, hy;
  desk_bench_begin_edit (self, handle);
  begin_drag (self, DESK_DRAG_HANDLE, x, y);
  desk_handle_get_place (handle, &hx, &hy);
  self->drag.grab_dx = x - hx;
  self->drag.grab_dy = y - hy;
  gtk_widget_grab_focus (GTK_WIDGET (handle));
}

static gboolean
on_press (GtkWidget *area, GdkEventButton *event, DeskBench *self)
{
  if (!self->figure || event->type != GDK_BUTTON_PRESS || self->drag.kind != DESK_DRAG_NONE)
    return GDK_EVENT_STOP;
  DeskHandle *handle = desk_bench_handle_at (self, event->x, event->y);
  double energy = bt_figure_ev_from_x (self->figure, event->x);
  desk_bench_commit_nudges (self);
  if (gdk_event_triggers_context_menu ((GdkEvent *) event))
    {
      const BtBand *band = handle ? desk_bench_band_of (self, handle) : desk_bench_band_at (self, event->x, event->y);
      desk_bench_popup (self, (GdkEvent *) event, band, energy);
      return GDK_EVENT_STOP;
    }
  if (!gtk_widget_has_focus (area) && !handle)
    gtk_widget_grab_focus (area);
  if (event->button == GDK_BUTTON_MIDDLE || (event->button == GDK_BUTTON_PRIMARY && self->space_down))
    begin_drag (self, DESK_DRAG_PAN, event->x, event->y);
  else if (event->button != GDK_BUTTON_PRIMARY || (!handle && !over_plot (self, event->x, event->y)))
    return GDK_EVENT_PROPAGATE;
  else if (event->state & GDK_SHIFT_MASK)
    begin_drag (self, DESK_DRAG_ZOOM, event->x, event->y);
  else if (self->mark_mode || (event->state & (GDK_MOD1_MASK | GDK_CONTROL_MASK)))
    begin_drag (self, DESK_DRAG_MARK, event->x, event->y);
  else if (handle)
    take_hold (self, handle, event->x, event->y);
  else
    begin_drag (self, DESK_DRAG_PAN, event->x, event->y);
  desk_bench_update_pointer_cursor (self);
  return GDK_EVENT_STOP;
}

static void
pan_to (DeskBench *self, double x, double y)
{
  double px, py, width, height;
  const BtFigureView *from = &self->drag.view;
  bt_figure_get_panel (self->figure, BT_PANEL_SPECTRUM, &px, &py, &width, &height);
  double shift = (self->drag.start_x - x) / width * (from->high_ev - from->low_ev);
  /* The values stand still until the user has zoomed them. */
  if (!isnan (self->view.low_value))
    {
      double rise = (y - self->drag.start_y) / height * (from->high_value - from->low_value);
      self->view.low_value = from->low_value + rise;
      self->view.high_value = from->high_value + rise;
    }
  desk_bench_set_energies (self, from->low_ev + shift, from->high_ev + shift);
}

static void
point_at (DeskBench *self, double x, double y)
{
  self->pointer_x = x;
  self->pointer_y = y;
  self->pointer_in = TRUE;
  desk_bench_set_cursor (self, over_plot (self, x, y) ? bt_figure_ev_from_x (self->figure, x) : NAN);
}

static void
light_band_at (DeskBench *self, double x, double y)
{
  const BtBand *band = desk_bench_band_at (self, x, y);
  DeskHandle *handle = desk_bench_handle_at (self, x, y);
  if (handle && desk_bench_band_of (self, handle))
    band = desk_bench_band_of (self, handle);
  if (band)
    desk_bench_select_band (self, band->group, band->index);
}

static gboolean
on_motion (GtkWidget *area, GdkEventMotion *event, DeskBench *self)
{
  DeskDrag *drag = &self->drag;
  if (!self->figure)
    return GDK_EVENT_PROPAGATE;
  point_at (self, event->x, event->y);
  if (drag->kind != DESK_DRAG_NONE && !self->nudged)
    {
      drag->x = event->x;
      drag->y = event->y;
      if (hypot (drag->x - drag->start_x, drag->y - drag->start_y) > CLICK_SLACK)
        drag->moved = TRUE;
      if (!drag->moved)
        return GDK_EVENT_STOP;
      if (drag->kind == DESK_DRAG_HANDLE)
        desk_bench_move_to (self, event->x - drag->grab_dx, event->y - drag->grab_dy);
      else if (drag->kind == DESK_DRAG_PAN)
        pan_to (self, event->x, event->y);
      else
        gtk_widget_queue_draw (self->area);
      return GDK_EVENT_STOP;
    }
  light_band_at (self, event->x, event->y);
  desk_bench_update_pointer_cursor (self);
  return GDK_EVENT_STOP;
}

static void
zoom_to_rectangle (DeskBench *self)
{
  const DeskDrag *drag = &self->drag;
  double left = MIN (drag->start_x, drag->x), right = MAX (drag->start_x, drag->x);
  double top = MIN (drag->start_y, drag->y), bottom = MAX (drag->start_y, drag->y);
  double low_ev = bt_figure_ev_from_x (self->figure, left), high_ev = bt_figure_ev_from_x (self->figure, right);
  if (desk_bench_in_panel (self, BT_PANEL_SPECTRUM, drag->start_x, drag->start_y) && bottom - top > 2 * CLICK_SLACK)
    {
      BtFigureView shown;
      double px, py, width, height;
      bt_figure_get_shown (self->figure, &shown);
      bt_figure_get_panel (self->figure, BT_PANEL_SPECTRUM, &px, &py, &width, &height);
      double span = shown.high_value - shown.low_value;
      self->view.low_value = shown.low_value + (py + height - MIN (bottom, py + height)) / height * span;
      self->view.high_value = shown.low_value + (py + height - MAX (top, py)) / height * span;
    }
  desk_bench_set_energies (self, MIN (low_ev, high_ev), MAX (low_ev, high_ev));
}

static gboolean
on_release (GtkWidget *area, GdkEventButton *event, DeskBench *self)
{
  DeskDrag *drag = &self->drag;
  DeskDragKind kind = drag->kind;
  if (kind == DESK_DRAG_NONE || self->nudged)
    return GDK_EVENT_PROPAGATE;
  if (kind == DESK_DRAG_HANDLE)
    {
      if (drag->moved)
        desk_bench_commit_edit (self);
      else
        desk_bench_cancel_edit (self);
    }
  drag->kind = DESK_DRAG_NONE;
  if (drag->moved && kind == DESK_DRAG_ZOOM)
    zoom_to_rectangle (self);
  if (drag->moved && kind == DESK_DRAG_MARK)
    {
      desk_bench_exclude (self, bt_figure_ev_from_x (self->figure, drag->start_x), bt_figure_ev_from_x (self->figure, drag->x));
      desk_bench_set_mark_mode (self, FALSE);
    }
  desk_bench_update_pointer_cursor (self);
  gtk_widget_queue_draw (self->area);
  return GDK_EVENT_STOP;
}

static gboolean
on_scroll (GtkWidget *area, GdkEventScroll *event, DeskBench *self)
{
  double steps = 0, dx = 0, dy = 0;
  if (!self->figure || self->drag.kind != DESK_DRAG_NONE)
    return GDK_EVENT_STOP;
  if (gdk_event_get_scroll_deltas ((GdkEvent *) event, &dx, &dy))
    steps = -dy;
  else if (event->direction == GDK_SCROLL_UP)
    steps = 1;
  else if (event->direction == GDK_SCROLL_DOWN)
    steps = -1;
  else
    dx = event->direction == GDK_SCROLL_RIGHT ? 1 : -1;
  if (event->state & GDK_SHIFT_MASK && dx == 0)
    {
      dx = -steps;
      steps = 0;
    }
  if (dx != 0)
    desk_bench_pan (self, dx * KEY_PAN, 0);
  if (steps != 0 && event->state & GDK_CONTROL_MASK)
    desk_bench_zoom_values_at (self, event->y, pow (WHEEL_FACTOR, steps));
  else if (steps != 0)
    desk_bench_zoom_at (self, bt_figure_ev_from_x (self->figure, event->x), pow (WHEEL_FACTOR, steps));
  return GDK_EVENT_STOP;
}

static gboolean
on_leave (GtkWidget *area, GdkEventCrossing *event, DeskBench *self)
{
  /* A handle under the pointer is no leaving. */
  if (event->detail == GDK_NOTIFY_INFERIOR || self->drag.kind != DESK_DRAG_NONE)
    return GDK_EVENT_PROPAGATE;
  self->pointer_in = FALSE;
  desk_bench_set_cursor (self, NAN);
  return GDK_EVENT_PROPAGATE;
}

static void
let_go (DeskBench *self)
{
  desk_bench_cancel_edit (self);
  self->drag.kind = DESK_DRAG_NONE;
  self->mark_from_ev = NAN;
  desk_bench_set_mark_mode (self, FALSE);
  desk_bench_set_cursor (self, NAN);
}

/* The crosshair by keyboard: it starts in the middle. */
static void
step_cursor (DeskBench *self, int direction, double share)
{
  BtFigureView shown;
  bt_figure_get_shown (self->figure, &shown);
  double at = isnan (self->cursor_ev) ? (shown.low_ev + shown.high_ev) / 2
                                      : self->cursor_ev + direction * share * (shown.high_ev - shown.low_ev);
  desk_bench_set_cursor (self, CLAMP (at, shown.low_ev, shown.high_ev));
}

/* Twice E: a range is left out from the one place of the crosshair to the other. */
static void
mark_by_key (DeskBench *self)
{
  if (isnan (self->cursor_ev))
    step_cursor (self, 0, 0);
  else if (isnan (self->mark_from_ev))
    self->mark_from_ev = self->cursor_ev;
  else
    {
      double from = self->mark_from_ev;
      self->mark_from_ev = NAN;
      if (from != self->cursor_ev)
        desk_bench_exclude (self, from, self->cursor_ev);
    }
  gtk_widget_queue_draw (self->area);
}

static gboolean
on_arrow (DeskBench *self, guint key, gboolean shift)
{
  int dx = key == GDK_KEY_Left || key == GDK_KEY_KP_Left ? -1 : key == GDK_KEY_Right || key == GDK_KEY_KP_Right ? 1 : 0;
  int dy = key == GDK_KEY_Down || key == GDK_KEY_KP_Down ? -1 : key == GDK_KEY_Up || key == GDK_KEY_KP_Up ? 1 : 0;
  if (!dx && !dy)
    return FALSE;
  if (shift && dx)
    step_cursor (self, dx, 0.005);
  else if (!shift && dx)
    desk_bench_pan (self, dx * KEY_PAN, 0);
  else if (dy)
    desk_bench_pan (self, 0, dy * KEY_PAN);
  return TRUE;
}

static gboolean
on_key (GtkWidget *area, GdkEventKey *event, DeskBench *self)
{
  if (!self->figure)
    return GDK_EVENT_PROPAGATE;
  if (event->keyval == GDK_KEY_Escape)
    {
      let_go (self);
      return GDK_EVENT_STOP;
    }
  if (event->state & (GDK_CONTROL_MASK | GDK_MOD1_MASK))
    return GDK_EVENT_PROPAGATE;
  if (on_arrow (self, event->keyval, (event->state & GDK_SHIFT_MASK) != 0))
    return GDK_EVENT_STOP;
  switch (event->keyval)
    {
    case GDK_KEY_plus:
    case GDK_KEY_equal:
    case GDK_KEY_KP_Add:
      desk_bench_zoom (self, 1.25);
      return GDK_EVENT_STOP;
    case GDK_KEY_minus:
    case GDK_KEY_KP_Subtract:
      desk_bench_zoom (self, 0.8);
      return GDK_EVENT_STOP;
    case GDK_KEY_0:
    case GDK_KEY_KP_0:
      desk_bench_zoom_all (self);
      return GDK_EVENT_STOP;
    case GDK_KEY_e:
      mark_by_key (self);
      return GDK_EVENT_STOP;
    case GDK_KEY_space:
      self->space_down = TRUE;
      return GDK_EVENT_STOP;
    default:
      return GDK_EVENT_PROPAGATE;
    }
}

static gboolean
on_key_release (GtkWidget *area, GdkEventKey *event, DeskBench *self)
{
  if (event->keyval == GDK_KEY_space)
    self->space_down = FALSE;
  return GDK_EVENT_PROPAGATE;
}

static gboolean
on_popup_menu (GtkWidget *area, DeskBench *self)
{
  if (!self->figure)
    return FALSE;
  BtTally *tally = desk_film_get_tally (self->film);
  int selected = self->view.selected_band;
  const BtBand *band
      = tally && selected >= 0 && selected < (int) tally->bands->len ? &g_array_index (tally->bands, BtBand, selected) : NULL;
  desk_bench_popup (self, NULL, band, band ? band->centre_ev : self->cursor_ev);
  return TRUE;
}

void
desk_bench_connect_pointer (DeskBench *self)
{
  gtk_widget_add_events (self->area, GDK_BUTTON_PRESS_MASK | GDK_BUTTON_RELEASE_MASK | GDK_POINTER_MOTION_MASK | GDK_SCROLL_MASK
                                         | GDK_SMOOTH_SCROLL_MASK | GDK_LEAVE_NOTIFY_MASK | GDK_KEY_PRESS_MASK
                                         | GDK_KEY_RELEASE_MASK);
  g_signal_connect (self->area, "button-press-event", G_CALLBACK (on_press), self);
  g_signal_connect (self->area, "button-release-event", G_CALLBACK (on_release), self);
  g_signal_connect (self->area, "motion-notify-event", G_CALLBACK (on_motion), self);
  g_signal_connect (self->area, "scroll-event", G_CALLBACK (on_scroll), self);
  g_signal_connect (self->area, "leave-notify-event", G_CALLBACK (on_leave), self);
  /* The bench's own keys also work while one of its handles has the focus: what a handle does not want comes up to the bench. */
  g_signal_connect (self, "key-press-event", G_CALLBACK (on_key), self);
  g_signal_connect (self, "key-release-event", G_CALLBACK (on_key_release), self);
  g_signal_connect (self, "popup-menu", G_CALLBACK (on_popup_menu), self);
}
