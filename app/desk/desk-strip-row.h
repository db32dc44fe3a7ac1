/* Strip row: one film on the rack. */
#pragma once

#include <gtk/gtk.h>

#include "desk-film.h"

G_BEGIN_DECLS

#define DESK_TYPE_STRIP_ROW (desk_strip_row_get_type ())
G_DECLARE_FINAL_TYPE (DeskStripRow, desk_strip_row, DESK, STRIP_ROW, GtkListBoxRow)

GtkWidget *desk_strip_row_new (DeskFilm *film);
DeskFilm *desk_strip_row_get_film (DeskStripRow *self);

G_END_DECLS
