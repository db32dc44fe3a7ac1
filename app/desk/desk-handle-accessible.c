#include "desk-handle-accessible.h"

#include <math.h>

typedef struct { GtkWidgetAccessible parent; } DeskHandleAccessible;
typedef struct { GtkWidgetAccessibleClass parent; } DeskHandleAccessibleClass;

static void value_iface_init (AtkValueIface *iface);

G_DEFINE_TYPE_WITH_CODE (DeskHandleAccessible, desk_handle_accessible, GTK_TYPE_WIDGET_ACCESSIBLE,
                         G_IMPLEMENT_INTERFACE (ATK_TYPE_VALUE, value_iface_init))

static DeskHandle *
handle_of (gpointer object)
{
  GtkWidget *widget = gtk_accessible_get_widget (GTK_ACCESSIBLE (object));
  return widget ? DESK_HANDLE (widget) : NULL;
}

static void
initialize (AtkObject *object, gpointer data)
{
  ATK_OBJECT_CLASS (desk_handle_accessible_parent_class)->initialize (object, data);
  atk_object_set_role (object, ATK_ROLE_SLIDER);
}

static void
desk_handle_accessible_class_init (DeskHandleAccessibleClass *class)
{
  ATK_OBJECT_CLASS (class)->initialize = initialize;
}

static void
desk_handle_accessible_init (DeskHandleAccessible *self)
{
}

static void
get_value_and_text (AtkValue *value, double *number, char **text)
{
  DeskHandle *handle = handle_of (value);
  *number = handle ? desk_handle_get_value (handle) : NAN;
  if (text)
    *text = g_strdup_printf (handle && desk_handle_is_beam (handle) ? "%.4f nm" : "%.4f eV", *number);
}

static AtkRange *
get_range (AtkValue *value)
{
  double low = 0, high = 0;
  DeskHandle *handle = handle_of (value);
  if (handle)
    desk_handle_get_range (handle, &low, &high);
  return atk_range_new (low, high, NULL);
}

static double
get_increment (AtkValue *value)
{
  DeskHandle *handle = handle_of (value);
  return handle ? desk_handle_get_step (handle) : 0;
}

static void
set_value (AtkValue *value, double number)
{
  DeskHandle *handle = handle_of (value);
  if (handle && isfinite (number))
    desk_handle_ask (handle, number);
}

static void
value_iface_init (AtkValueIface *iface)
{
  iface->get_value_and_text = get_value_and_text;
  iface->get_range = get_range;
  iface->get_increment = get_increment;
  iface->set_value = set_value;
}

void
desk_handle_accessible_value_changed (AtkObject *object)
{
  g_object_notify (G_OBJECT (object), "accessible-value");
}
