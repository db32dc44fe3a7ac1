/* Theme: whether a widget stands on a dark ground. */
#pragma once

#include <bandtally/bandtally.h>
#include <gtk/gtk.h>

G_BEGIN_DECLS

BtTheme desk_theme_of (GtkWidget *widget);
/* Switches the whole program to dark or light. */
void desk_theme_set_dark (gboolean dark);
gboolean desk_theme_get_dark (void);

G_END_DECLS
