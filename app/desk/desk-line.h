/* Line of the ledger: a name, a value with its uncertainty and unit; opens in place for editing. */
#pragma once

#include <gtk/gtk.h>

#include "desk-field.h"

G_BEGIN_DECLS

#define DESK_TYPE_LINE (desk_line_get_type ())
G_DECLARE_FINAL_TYPE (DeskLine, desk_line, DESK, LINE, GtkGrid)

/* Signals: "open" returns (transfer full) the text to start editing from; "apply" (text) takes what was typed and returns
 * (transfer full) (nullable) the sentence that says why it cannot be. */
DeskLine *desk_line_new (void);
void desk_line_set_name (DeskLine *self, const char *name);
/* The value as shown; it may hold several lines' worth and wraps. */
void desk_line_set_value (DeskLine *self, const char *format, ...) G_GNUC_PRINTF (2, 3);
/* (nullable): a sentence below in small. */
void desk_line_set_detail (DeskLine *self, const char *detail);
/* The line opens for editing this. */
void desk_line_set_field (DeskLine *self, DeskField field);
const DeskField *desk_line_get_field (DeskLine *self);
/* (nullable): a press on the value runs this action ("win.set-blank"). */
void desk_line_set_action (DeskLine *self, const char *detailed_action);
/* A press on the value opens a menu of choices (win.* actions). */
void desk_line_set_choices (DeskLine *self, GMenuModel *choices);
/* (nullable): a small button beside the value. */
void desk_line_set_side (DeskLine *self, const char *icon, const char *name, const char *detailed_action);
/* A bar instead of nothing, 0 to 1; NAN: none. */
void desk_line_set_share (DeskLine *self, double share);
/* A check box before the name that runs @detailed_action. */
void desk_line_set_check_action (DeskLine *self, gboolean active, const char *detailed_action);
/* (nullable): a symbol before the name. */
void desk_line_set_icon (DeskLine *self, const char *icon);
/* The value alone, over the whole width: for sentences. */
void desk_line_set_sentence (DeskLine *self, const char *sentence);
gboolean desk_line_is_open (DeskLine *self);
void desk_line_open (DeskLine *self);
void desk_line_close (DeskLine *self);

G_END_DECLS
