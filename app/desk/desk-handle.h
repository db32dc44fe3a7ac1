/* Handle: the place where a band or the diameter beam is taken hold of. A small widget that takes the focus, so that the keyboard
 * and assistive technology can do what the pointer does; the bench does the pointer's part. */
#pragma once

#include <bandtally/bandtally.h>
#include <gtk/gtk.h>

G_BEGIN_DECLS

typedef enum {
  DESK_HANDLE_CROWN,      /* value: centre, eV; up and down: height */
  DESK_HANDLE_FLANK_LOW,  /* value: FWHM, eV */
  DESK_HANDLE_FLANK_HIGH,
  DESK_HANDLE_BEAM,       /* value: mean diameter, nm */
  DESK_HANDLE_BEAM_LOW,   /* value: spread, nm */
  DESK_HANDLE_BEAM_HIGH
} DeskHandleKind;

#define DESK_TYPE_HANDLE (desk_handle_get_type ())
G_DECLARE_FINAL_TYPE (DeskHandle, desk_handle, DESK, HANDLE, GtkWidget)

/* Signals: "nudge" (int dx, int dy): arrow keys, in steps; "set-value" (double): by assistive technology. */
GtkWidget *desk_handle_new (DeskHandleKind kind, BtGroup group, guint index);
DeskHandleKind desk_handle_get_kind (DeskHandle *self);
BtGroup desk_handle_get_group (DeskHandle *self);
guint desk_handle_get_index (DeskHandle *self);
gboolean desk_handle_is_beam (DeskHandle *self);
gboolean desk_handle_is (DeskHandle *self, DeskHandleKind kind, BtGroup group, guint index);

void desk_handle_set_value (DeskHandle *self, double value, double low, double high, double step);
double desk_handle_get_value (DeskHandle *self);
double desk_handle_get_step (DeskHandle *self);
/* Whether the number is held: drawn full instead of hollow. */
void desk_handle_set_held (DeskHandle *self, gboolean held);
/* Whether it is drawn without being in focus. */
void desk_handle_set_shown (DeskHandle *self, gboolean shown);
/* Where its middle is, in the figure's pixels. */
void desk_handle_set_place (DeskHandle *self, double x, double y);
void desk_handle_get_place (DeskHandle *self, double *x, double *y);
int desk_handle_get_width (DeskHandle *self);
int desk_handle_get_height (DeskHandle *self);

G_END_DECLS
