/* What the bench's own files share: the view (desk-bench.c), handles and edits (desk-bench-edit.c), the pointer and the keyboard
 * (desk-bench-pointer.c), drawing (desk-bench-draw.c), the line that reads the crosshair (desk-bench-legend.c). */
#pragma once

#include "desk-bench.h"
#include "desk-handle.h"

typedef enum { DESK_DRAG_NONE, DESK_DRAG_HANDLE, DESK_DRAG_ZOOM, DESK_DRAG_PAN, DESK_DRAG_MARK } DeskDragKind;

typedef struct {
  DeskDragKind kind;
  double start_x, start_y, x, y; /* pixels */
  double grab_dx, grab_dy;       /* pointer minus the handle's middle */
  gboolean moved;                /* far enough to be no click */
  DeskHandle *handle;
  BtBand band;                   /* the band as the hand has it */
  BtRecipe *recipe;              /* being edited */
  BtFigure *figure;              /* as it was at the start: a tail that moves with every refit would carry the hand along */
  BtFigureView view;             /* for panning: what was shown at the start; for a handle: what the user had chosen to see */
} DeskDrag;

struct _DeskBench {
  GtkBox parent;
  DeskHistory *history;
  DeskFilm *film;
  GtkWidget *values, *tubes, *overlay, *area;
  GPtrArray *handles; /* (element-type DeskHandle), owned by the overlay */
  BtFigure *figure;
  BtFigureView view;
  BtBandPlan plan;    /* as shown: of the recipe under the hand */
  gboolean has_plan;
  cairo_surface_t *picture; /* the figure as drawn; NULL: draw it again */
  int picture_width, picture_height;
  double cursor_ev;   /* crosshair; NAN */
  double pointer_x, pointer_y;
  gboolean pointer_in, mark_mode, space_down;
  double mark_from_ev; /* marking by keyboard; NAN */
  DeskDrag drag;
  guint commit_timer;  /* nudges become one command when the keyboard rests */
  DeskHandle *nudged;
  guint refresh_idle;
};

/* desk-bench.c */
void desk_bench_redraw (DeskBench *self);
void desk_bench_view_changed (DeskBench *self);
void desk_bench_full_range (DeskBench *self, double *low_ev, double *high_ev);
void desk_bench_set_energies (DeskBench *self, double low_ev, double high_ev);
void desk_bench_zoom_at (DeskBench *self, double energy_ev, double factor);
void desk_bench_zoom_values_at (DeskBench *self, double y, double factor);
void desk_bench_set_cursor (DeskBench *self, double energy_ev);
gboolean desk_bench_in_panel (DeskBench *self, BtPanel panel, double x, double y);

/* desk-bench-edit.c */
void desk_bench_sync_handles (DeskBench *self);
DeskHandle *desk_bench_handle_at (DeskBench *self, double x, double y);
/* (nullable): the band whose hill the place lies in. */
const BtBand *desk_bench_band_at (DeskBench *self, double x, double y);
const BtBand *desk_bench_band_of (DeskBench *self, DeskHandle *handle);
void desk_bench_select_band (DeskBench *self, BtGroup group, guint index);
/* Absorbance under the foot of the band in the hand, at an energy. */
double desk_bench_hand_foot (DeskBench *self, double energy_ev);
/* Absorbance of the band's top above its foot: less than its height where it has a sideband. */
double desk_band_peak (const BtBand *band);
void desk_bench_begin_edit (DeskBench *self, DeskHandle *handle);
void desk_bench_move_to (DeskBench *self, double x, double y);
void desk_bench_commit_edit (DeskBench *self);
void desk_bench_cancel_edit (DeskBench *self);
/* Ends what the keyboard had begun. */
void desk_bench_commit_nudges (DeskBench *self);
void desk_bench_exclude (DeskBench *self, double from_ev, double to_ev);

/* desk-bench-pointer.c */
void desk_bench_connect_pointer (DeskBench *self);
void desk_bench_update_pointer_cursor (DeskBench *self);

/* desk-bench-menu.c */
void desk_bench_popup (DeskBench *self, const GdkEvent *event, const BtBand *band, double energy_ev);

/* desk-bench-draw.c */
gboolean desk_bench_draw (GtkWidget *area, cairo_t *cr, gpointer bench);

/* desk-bench-legend.c */
void desk_bench_update_legend (DeskBench *self);
