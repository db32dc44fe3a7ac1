#include "desk-film.h"

#include <glib/gi18n.h>

#include "desk-fitter.h"

struct _DeskFilm {
  GObject parent;
  DeskEdition *edition;
  DeskFitter *fitter;
  BtRecipe *preview;
  BtTally *tally;
  DeskFilmState state;
  char *error;
};

G_DEFINE_TYPE (DeskFilm, desk_film, G_TYPE_OBJECT)

enum { EDITED, TALLIED, STATE_CHANGED, N_SIGNALS };
static guint signals[N_SIGNALS];

static void
desk_film_finalize (GObject *object)
{
  DeskFilm *self = DESK_FILM (object);
  g_clear_pointer (&self->edition, desk_edition_unref);
  g_clear_object (&self->fitter);
  g_clear_pointer (&self->preview, bt_recipe_free);
  g_clear_pointer (&self->tally, bt_tally_unref);
  g_free (self->error);
  G_OBJECT_CLASS (desk_film_parent_class)->finalize (object);
}

static void
desk_film_class_init (DeskFilmClass *class)
{
  GType type = G_TYPE_FROM_CLASS (class);
  G_OBJECT_CLASS (class)->finalize = desk_film_finalize;
  signals[EDITED] = g_signal_new ("edited", type, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 0);
  signals[TALLIED] = g_signal_new ("tallied", type, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 0);
  signals[STATE_CHANGED] = g_signal_new ("state-changed", type, G_SIGNAL_RUN_LAST, 0, NULL, NULL, NULL, G_TYPE_NONE, 0);
}

static void
desk_film_init (DeskFilm *self)
{
}

static void
take_tally (DeskFilm *self, BtTally *tally)
{
  if (tally == self->tally)
    return;
  if (tally)
    bt_tally_ref (tally);
  g_clear_pointer (&self->tally, bt_tally_unref);
  self->tally = tally;
  g_signal_emit (self, signals[TALLIED], 0);
}

static void
set_state (DeskFilm *self, DeskFilmState state, const char *error)
{
  g_free (self->error);
  self->error = g_strdup (error);
  self->state = state;
  g_signal_emit (self, signals[STATE_CHANGED], 0);
}

static void
settle (DeskFilm *self)
{
  BtTally *tally = desk_edition_get_tally (self->edition);
  if (tally)
    {
      desk_fitter_cancel (self->fitter, self);
      take_tally (self, tally);
      set_state (self, DESK_FILM_IDLE, NULL);
    }
  else
    desk_fitter_request (self->fitter, self, BT_EFFORT_FULL);
}

DeskFilm *
desk_film_new (DeskEdition *edition, DeskFitter *fitter)
{
  DeskFilm *self = g_object_new (DESK_TYPE_FILM, NULL);
  self->fitter = g_object_ref (fitter);
  self->edition = desk_edition_ref (edition);
  settle (self);
  return self;
}

DeskEdition *
desk_film_get_edition (DeskFilm *self)
{
  return self->edition;
}

void
desk_film_set_edition (DeskFilm *self, DeskEdition *edition)
{
  desk_edition_ref (edition);
  g_clear_pointer (&self->edition, desk_edition_unref);
  self->edition = edition;
  g_clear_pointer (&self->preview, bt_recipe_free);
  g_signal_emit (self, signals[EDITED], 0);
  settle (self);
}

void
desk_film_refit (DeskFilm *self)
{
  g_clear_pointer (&self->preview, bt_recipe_free);
  desk_edition_set_tally (self->edition, NULL);
  desk_fitter_request (self->fitter, self, BT_EFFORT_FULL);
}

void
desk_film_preview (DeskFilm *self, const BtRecipe *recipe)
{
  if (!recipe && !self->preview)
    return;
  g_clear_pointer (&self->preview, bt_recipe_free);
  self->preview = recipe ? bt_recipe_copy (recipe) : NULL;
  g_signal_emit (self, signals[EDITED], 0);
  if (!recipe)
    settle (self);
  else if (self->tally) /* the quick fit starts from a tally */
    desk_fitter_request (self->fitter, self, BT_EFFORT_QUICK);
}

gboolean
desk_film_is_previewing (DeskFilm *self)
{
  return self->preview != NULL;
}

BtFilm *
desk_film_get_film (DeskFilm *self)
{
  return desk_edition_get_film (self->edition);
}

const BtRecipe *
desk_film_get_recipe (DeskFilm *self)
{
  return self->preview ? self->preview : desk_edition_get_recipe (self->edition);
}

BtTally *
desk_film_get_tally (DeskFilm *self)
{
  return self->tally;
}

gboolean
desk_film_is_settled (DeskFilm *self)
{
  return self->tally && self->tally == desk_edition_get_tally (self->edition) && !self->preview;
}

DeskFilmState
desk_film_get_state (DeskFilm *self)
{
  return self->state;
}

const char *
desk_film_get_error (DeskFilm *self)
{
  return self->error;
}

char *
desk_film_dup_title (DeskFilm *self)
{
  BtFilm *film = desk_film_get_film (self);
  const char *label = bt_film_get_label (film);
  if (label && *label)
    return g_strdup (label);
  const char *file = bt_spectrum_get_file (bt_film_get_spectrum (film));
  return file ? g_path_get_basename (file) : g_strdup (_("Film without a name"));
}

void
desk_film_fit_started (DeskFilm *self)
{
  set_state (self, DESK_FILM_FITTING, NULL);
}

void
desk_film_fit_done (DeskFilm *self, BtTally *tally, BtEffort effort, const GError *error)
{
  if (!tally)
    {
      /* A tally of another recipe must not stand there as if it were the answer; a quick one may fail while the hand moves. */
      if (effort == BT_EFFORT_FULL)
        take_tally (self, NULL);
      set_state (self, DESK_FILM_FAILED, error ? error->message : _("The fit gave no result."));
      return;
    }
  if (effort == BT_EFFORT_FULL)
    desk_edition_set_tally (self->edition, tally);
  take_tally (self, tally);
  set_state (self, DESK_FILM_IDLE, NULL);
}
