/* Bench: the figure, and all that is done to a film by hand. */
#pragma once

#include <gtk/gtk.h>

#include "desk-history.h"

G_BEGIN_DECLS

#define DESK_TYPE_BENCH (desk_bench_get_type ())
G_DECLARE_FINAL_TYPE (DeskBench, desk_bench, DESK, BENCH, GtkBox)

/* Property "mark-mode": dragging paints a range to leave out. */
GtkWidget *desk_bench_new (DeskHistory *history);
/* (nullable) */
void desk_bench_set_film (DeskBench *self, DeskFilm *film);
const BtFigureView *desk_bench_get_view (DeskBench *self);
void desk_bench_set_quantity (DeskBench *self, BtQuantity quantity);
/* Zooms by a factor (above 1: closer) about the crosshair, or the middle. */
void desk_bench_zoom (DeskBench *self, double factor);
void desk_bench_zoom_all (DeskBench *self);
/* Moves the view by shares of what is shown. */
void desk_bench_pan (DeskBench *self, double energy_share, double value_share);
gboolean desk_bench_get_mark_mode (DeskBench *self);
void desk_bench_set_mark_mode (DeskBench *self, gboolean mark);
/* (transfer full): a figure of the film as it stands; (nullable). */
BtFigure *desk_bench_dup_figure (DeskBench *self);

G_END_DECLS
