/* What assistive technology sees of a handle: a slider. */
#pragma once

#include <gtk/gtk-a11y.h>

#include "desk-handle.h"

G_BEGIN_DECLS

#define DESK_TYPE_HANDLE_ACCESSIBLE (desk_handle_accessible_get_type ())
GType desk_handle_accessible_get_type (void);
void desk_handle_accessible_value_changed (AtkObject *object);

/* The handle's part of it. */
void desk_handle_get_range (DeskHandle *self, double *low, double *high);
void desk_handle_ask (DeskHandle *self, double value);

G_END_DECLS
