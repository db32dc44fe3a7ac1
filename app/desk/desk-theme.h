/* Theme: whether a widget stands on a dark ground. */
#pragma once

#include <bandtally/bandtally.h>
#include <gtk/gtk.h>

G_BEGIN_DECLS

BtTheme desk_theme_of (GtkWidget *widget);
/* Size of a figure's tick labels that goes with the widget's own text. */
double desk_theme_figure_font_pt (GtkWidget *widget);
/* Switches the whole program to dark or light. */
void desk_theme_set_dark (gboolean dark);
gboolean desk_theme_get_dark (void);

G_END_DECLS
