/* Fitter: fits films in threads of its own. Of one film only the newest request counts; a quick fit that follows the hand never
 * waits behind a whole fit of another film. */
#pragma once

#include "desk-film.h"

G_BEGIN_DECLS

#define DESK_TYPE_FITTER (desk_fitter_get_type ())
G_DECLARE_FINAL_TYPE (DeskFitter, desk_fitter, DESK, FITTER, GObject)

/* Signal "changed": the number of open fits, or their progress. */
DeskFitter *desk_fitter_new (void);
/* Takes what the film holds now; the film hears of the outcome in the main thread. */
void desk_fitter_request (DeskFitter *self, DeskFilm *film, BtEffort effort);
/* Drops the film's fit, if any; the film hears nothing more of it. */
void desk_fitter_cancel (DeskFitter *self, DeskFilm *film);
/* Drops all fits at the user's wish; films without a tally say so. */
void desk_fitter_cancel_all (DeskFitter *self);
guint desk_fitter_get_n_open (DeskFitter *self);
/* Share done of all whole fits since the desk was last idle, 0 to 1. */
double desk_fitter_get_progress (DeskFitter *self);

G_END_DECLS
