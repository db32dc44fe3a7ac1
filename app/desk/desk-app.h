/* The program: its windows, its options, and what belongs to no window. */
#pragma once

#include <gtk/gtk.h>

G_BEGIN_DECLS

#define DESK_TYPE_APP (desk_app_get_type ())
G_DECLARE_FINAL_TYPE (DeskApp, desk_app, DESK, APP, GtkApplication)

DeskApp *desk_app_new (void);

G_END_DECLS
