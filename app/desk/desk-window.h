/* Window: rack, bench and ledger, and the actions on them. */
#pragma once

#include <gtk/gtk.h>

G_BEGIN_DECLS

#define DESK_TYPE_WINDOW (desk_window_get_type ())
G_DECLARE_FINAL_TYPE (DeskWindow, desk_window, DESK, WINDOW, GtkApplicationWindow)

GtkWidget *desk_window_new (GtkApplication *app);
/* Reads @files (element-type GFile) in the background; those that cannot be read are named in a notice, the rest is shown. */
void desk_window_open_files (DeskWindow *self, GPtrArray *files);
void desk_window_open_demo (DeskWindow *self);

G_END_DECLS
