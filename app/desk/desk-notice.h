/* Notice: messages that ask for no answer, a line each, above the bench; never a dialog. */
#pragma once

#include <gtk/gtk.h>

G_BEGIN_DECLS

#define DESK_TYPE_NOTICE (desk_notice_get_type ())
G_DECLARE_FINAL_TYPE (DeskNotice, desk_notice, DESK, NOTICE, GtkInfoBar)

GtkWidget *desk_notice_new (void);
/* Adds a line. */
void desk_notice_say (DeskNotice *self, GtkMessageType type, const char *sentence);
void desk_notice_clear (DeskNotice *self);

G_END_DECLS
