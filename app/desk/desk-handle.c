#include "desk-handle.h"

#include <glib/gi18n.h>
#include <math.h>

#include "desk-handle-accessible.h"

struct _DeskHandle {
  GtkWidget parent;
  DeskHandleKind kind;
  BtGroup group;
  guint index;
  double value, low, high, step;
  double x, y;
  gboolean held, shown;
};

G_DEFINE_TYPE (DeskHandle, desk_handle, GTK_TYPE_WIDGET)

enum { NUDGE, SET_VALUE, N_SIGNALS };
static guint signals[N_SIGNALS];

/* Pixels: larger than what is drawn, so that the focus ring and the pin fit in. */
static const struct { int width, height; } sizes[] = {
  [DESK_HANDLE_CROWN] = { 22, 22 },      [DESK_HANDLE_FLANK_LOW] = { 16, 22 }, [DESK_HANDLE_FLANK_HIGH] = { 16, 22 },
  [DESK_HANDLE_BEAM] = { 30, 18 },       [DESK_HANDLE_BEAM_LOW] = { 26, 14 },  [DESK_HANDLE_BEAM_HIGH] = { 26, 14 },
};

int
desk_handle_get_width (DeskHandle *self)
{
  return sizes[self->kind].width;
}

int
desk_handle_get_height (DeskHandle *self)
{
  return sizes[self->kind].height;
}

static void
get_preferred_width (GtkWidget *widget, int *minimum, int *natural)
{
  *minimum = *natural = desk_handle_get_width (DESK_HANDLE (widget));
}

static void
get_preferred_height (GtkWidget *widget, int *minimum, int *natural)
{
  *minimum = *natural = desk_handle_get_height (DESK_HANDLE (widget));
}

static void
trace_shape (DeskHandle *self, cairo_t *cr, double width, double height)
{
  double x = width / 2, y = height / 2;
  switch (self->kind)
    {
    case DESK_HANDLE_CROWN:
      cairo_arc (cr, x, y, 4.2, 0, 2 * G_PI);
      break;
    case DESK_HANDLE_FLANK_LOW:
    case DESK_HANDLE_FLANK_HIGH:
      cairo_rectangle (cr, x - 2.5, y - 6, 5, 12);
      break;
    case DESK_HANDLE_BEAM:
      cairo_rectangle (cr, x - 10, y - 4, 20, 8);
      break;
    case DESK_HANDLE_BEAM_LOW:
    case DESK_HANDLE_BEAM_HIGH:
      cairo_rectangle (cr, x - 8, y - 2.5, 16, 5);
      break;
    }
}

static gboolean
draw (GtkWidget *widget, cairo_t *cr)
{
  DeskHandle *self = DESK_HANDLE (widget);
  double width = gtk_widget_get_allocated_width (widget), height = gtk_widget_get_allocated_height (widget);
  gboolean focused = gtk_widget_has_visible_focus (widget);
  GtkStyleContext *style = gtk_widget_get_style_context (widget);
  GdkRGBA ink, ground;
  if (!self->shown && !focused && !self->held)
    return FALSE;
  gtk_style_context_get_color (style, gtk_style_context_get_state (style), &ink);
  if (!gtk_style_context_lookup_color (style, "theme_base_color", &ground))
    ground = (GdkRGBA){ 1, 1, 1, 1 };
  trace_shape (self, cr, width, height);
  gdk_cairo_set_source_rgba (cr, self->held ? &ink : &ground);
  cairo_fill_preserve (cr);
  gdk_cairo_set_source_rgba (cr, &ink);
  cairo_set_line_width (cr, 1.5);
  cairo_stroke (cr);
  if (self->held && self->kind == DESK_HANDLE_CROWN)
    {
      /* A pin through the crown: held. */
      cairo_move_to (cr, width / 2, height / 2 + 4);
      cairo_line_to (cr, width / 2, height - 1);
      cairo_stroke (cr);
    }
  if (focused)
    gtk_render_focus (style, cr, 0, 0, width, height);
  return FALSE;
}

static gboolean
key_press_event (GtkWidget *widget, GdkEventKey *event)
{
  int dx = 0, dy = 0;
  int factor = event->state & GDK_SHIFT_MASK ? 10 : 1;
  if (event->state & (GDK_CONTROL_MASK | GDK_MOD1_MASK))
    return GDK_EVENT_PROPAGATE;
  switch (event->keyval)
    {
    case GDK_KEY_Left:
    case GDK_KEY_KP_Left:
      dx = -1;
      break;
    case GDK_KEY_Right:
    case GDK_KEY_KP_Right:
      dx = 1;
      break;
    case GDK_KEY_Up:
    case GDK_KEY_KP_Up:
      dy = 1;
      break;
    case GDK_KEY_Down:
    case GDK_KEY_KP_Down:
      dy = -1;
      break;
    default:
      return GDK_EVENT_PROPAGATE;
    }
  g_signal_emit (widget, signals[NUDGE], 0, dx * factor, dy * factor);
  return GDK_EVENT_STOP;
}

static gboolean
focus_changed (GtkWidget *widget, GdkEventFocus *event)
{
  gtk_widget_queue_draw (widget);
  return GDK_EVENT_PROPAGATE;
}

static void
desk_handle_class_init (DeskHandleClass *class)
{
  GType type = G_TYPE_FROM_CLASS (class);
  GtkWidgetClass *widget_class = GTK_WIDGET_CLASS (class);
  widget_class->get_preferred_width = get_preferred_width;
  widget_class->get_preferred_height = get_preferred_height;
  widget_class->draw = draw;
  widget_class->key_press_event = key_press_event;
  widget_class->focus_in_event = focus_changed;
  widget_class->focus_out_event = focus_changed;
  gtk_widget_class_set_accessible_type (widget_class, DESK_TYPE_HANDLE_ACCESSIBLE);
  gtk_widget_class_set_css_name (widget_class, "handle");
  signals[NUDGE]
      = g_signal_new ("nudge", type, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 2, G_TYPE_INT, G_TYPE_INT);
  signals[SET_VALUE]
      = g_signal_new ("set-value", type, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 1, G_TYPE_DOUBLE);
}

static void
desk_handle_init (DeskHandle *self)
{
  gtk_widget_set_has_window (GTK_WIDGET (self), FALSE);
  gtk_widget_set_can_focus (GTK_WIDGET (self), TRUE);
  self->value = NAN;
}

static char *
name_for (DeskHandleKind kind, BtGroup group, guint index)
{
  const char *name = bt_group_name (group);
  switch (kind)
    {
    case DESK_HANDLE_CROWN:
      return g_strdup_printf (_("%s band %u, crown: centre in eV, height with up and down"), name, index + 1);
    case DESK_HANDLE_FLANK_LOW:
      return g_strdup_printf (_("%s band %u, left flank: width in eV"), name, index + 1);
    case DESK_HANDLE_FLANK_HIGH:
      return g_strdup_printf (_("%s band %u, right flank: width in eV"), name, index + 1);
    case DESK_HANDLE_BEAM:
      return g_strdup (_("Diameter beam: mean in nm"));
    case DESK_HANDLE_BEAM_LOW:
      return g_strdup (_("Diameter beam, lower edge: spread in nm"));
    case DESK_HANDLE_BEAM_HIGH:
      return g_strdup (_("Diameter beam, upper edge: spread in nm"));
    }
  return NULL;
}

GtkWidget *
desk_handle_new (DeskHandleKind kind, BtGroup group, guint index)
{
  DeskHandle *self = g_object_new (DESK_TYPE_HANDLE, "visible", TRUE, NULL);
  g_autofree char *name = name_for (kind, group, index);
  self->kind = kind;
  self->group = group;
  self->index = index;
  atk_object_set_name (gtk_widget_get_accessible (GTK_WIDGET (self)), name);
  return GTK_WIDGET (self);
}

DeskHandleKind
desk_handle_get_kind (DeskHandle *self)
{
  return self->kind;
}

BtGroup
desk_handle_get_group (DeskHandle *self)
{
  return self->group;
}

guint
desk_handle_get_index (DeskHandle *self)
{
  return self->index;
}

gboolean
desk_handle_is_beam (DeskHandle *self)
{
  return self->kind >= DESK_HANDLE_BEAM;
}

gboolean
desk_handle_is (DeskHandle *self, DeskHandleKind kind, BtGroup group, guint index)
{
  return self->kind == kind && (desk_handle_is_beam (self) || (self->group == group && self->index == index));
}

void
desk_handle_set_value (DeskHandle *self, double value, double low, double high, double step)
{
  gboolean changed = value != self->value;
  self->value = value;
  self->low = low;
  self->high = high;
  self->step = step;
  if (changed)
    desk_handle_accessible_value_changed (gtk_widget_get_accessible (GTK_WIDGET (self)));
}

double
desk_handle_get_value (DeskHandle *self)
{
  return self->value;
}

double
desk_handle_get_step (DeskHandle *self)
{
  return self->step;
}

void
desk_handle_get_range (DeskHandle *self, double *low, double *high)
{
  *low = self->low;
  *high = self->high;
}

void
desk_handle_ask (DeskHandle *self, double value)
{
  g_signal_emit (self, signals[SET_VALUE], 0, CLAMP (value, self->low, self->high));
}

void
desk_handle_set_held (DeskHandle *self, gboolean held)
{
  if (held == self->held)
    return;
  self->held = held;
  atk_object_set_description (gtk_widget_get_accessible (GTK_WIDGET (self)), held ? _("held") : "");
  gtk_widget_queue_draw (GTK_WIDGET (self));
}

void
desk_handle_set_shown (DeskHandle *self, gboolean shown)
{
  if (shown == self->shown)
    return;
  self->shown = shown;
  gtk_widget_queue_draw (GTK_WIDGET (self));
}

void
desk_handle_set_place (DeskHandle *self, double x, double y)
{
  self->x = x;
  self->y = y;
}

void
desk_handle_get_place (DeskHandle *self, double *x, double *y)
{
  *x = self->x;
  *y = self->y;
}
