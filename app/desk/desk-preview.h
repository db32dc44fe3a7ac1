/* Preview: the report's pages on the screen, drawn by the same code that prints them. */
#pragma once

#include <gtk/gtk.h>

#include "desk-edition.h"

G_BEGIN_DECLS

#define DESK_TYPE_PREVIEW (desk_preview_get_type ())
G_DECLARE_FINAL_TYPE (DeskPreview, desk_preview, DESK, PREVIEW, GtkWindow)

/* Takes over @report. "print" is emitted when the user wants them on paper. */
GtkWidget *desk_preview_new (GtkWindow *parent, const char *title, BtReport *report, BtPaper paper);

G_END_DECLS
