/* Rack: one strip a film, grouped by lot, and how far the fits have come. */
#pragma once

#include <gtk/gtk.h>

#include "desk-fitter.h"

G_BEGIN_DECLS

#define DESK_TYPE_RACK (desk_rack_get_type ())
G_DECLARE_FINAL_TYPE (DeskRack, desk_rack, DESK, RACK, GtkBox)

/* @films: (element-type DeskFilm). Signal "selected" (DeskFilm *, nullable). */
GtkWidget *desk_rack_new (GListStore *films, DeskFitter *fitter);
/* (nullable) */
DeskFilm *desk_rack_get_selected (DeskRack *self);
void desk_rack_select (DeskRack *self, DeskFilm *film);
/* Selects the film @steps further down, as the rack shows them. */
void desk_rack_step (DeskRack *self, int steps);

G_END_DECLS
