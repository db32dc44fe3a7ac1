/* Check the instrument: the scan of a published standard against its values, in a window of its own beside the films. */
#pragma once

#include "desk-window-private.h"

G_BEGIN_DECLS

#define DESK_TYPE_CHECK (desk_check_get_type ())
G_DECLARE_FINAL_TYPE (DeskCheck, desk_check, DESK, CHECK, GtkWindow)

/* Shows the window that belongs to @parent; there is one at most. */
void desk_check_show (DeskWindow *parent);

/* The table of a check's lines, and its outcome (desk-check-result.c). */
GtkWidget *desk_check_table_new (void);
void desk_check_table_fill (GtkWidget *table, const BtInstrumentCheck *check);
/* Name of the icon for a state: shapes that differ without colour. */
const char *desk_check_icon (BtCheckState state);

G_END_DECLS
