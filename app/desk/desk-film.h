/* Film at the desk: the model that rack, bench and ledger observe. It holds the film's present edition, the preview of an edit
 * that is still under the hand, the tally that is shown, and whether a fit is under way. */
#pragma once

#include "desk-edition.h"

G_BEGIN_DECLS

typedef enum { DESK_FILM_IDLE, DESK_FILM_FITTING, DESK_FILM_FAILED } DeskFilmState;

#define DESK_TYPE_FILM (desk_film_get_type ())
G_DECLARE_FINAL_TYPE (DeskFilm, desk_film, DESK, FILM, GObject)

typedef struct _DeskFitter DeskFitter;

/* Signals: "edited" (the film or its recipe is another), "tallied" (the tally shown is another), "state-changed". */
DeskFilm *desk_film_new (DeskEdition *edition, DeskFitter *fitter);

DeskEdition *desk_film_get_edition (DeskFilm *self);
/* Shows this edition's tally, or fits it where it has none yet. Only commands call this. */
void desk_film_set_edition (DeskFilm *self, DeskEdition *edition);
/* Fits again, from the start. */
void desk_film_refit (DeskFilm *self);
/* Lets the fit follow @recipe without an entry in the history; %NULL goes back to the edition. */
void desk_film_preview (DeskFilm *self, const BtRecipe *recipe);
gboolean desk_film_is_previewing (DeskFilm *self);

BtFilm *desk_film_get_film (DeskFilm *self);
/* The preview's, or else the edition's. */
const BtRecipe *desk_film_get_recipe (DeskFilm *self);
/* (nullable): the newest tally there is, also while the next one is being made. */
BtTally *desk_film_get_tally (DeskFilm *self);
/* Whether the tally shown is a whole one of the present edition. */
gboolean desk_film_is_settled (DeskFilm *self);
DeskFilmState desk_film_get_state (DeskFilm *self);
/* (nullable): why there is no tally. */
const char *desk_film_get_error (DeskFilm *self);
/* (transfer full): the name to show: the label, or the file's name. */
char *desk_film_dup_title (DeskFilm *self);

/* For the fitter. */
void desk_film_fit_started (DeskFilm *self);
void desk_film_fit_done (DeskFilm *self, BtTally *tally, BtEffort effort, const GError *error);

G_END_DECLS
