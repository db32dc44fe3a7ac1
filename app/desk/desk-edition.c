#include "desk-edition.h"

struct _DeskEdition {
  gatomicrefcount refs;
  BtFilm *film;
  BtRecipe *recipe;
  BtTally *tally;
};

DeskEdition *
desk_edition_new (BtFilm *film, const BtRecipe *recipe)
{
  DeskEdition *self = g_new0 (DeskEdition, 1);
  g_atomic_ref_count_init (&self->refs);
  self->film = g_object_ref (film);
  self->recipe = bt_recipe_copy (recipe);
  return self;
}

DeskEdition *
desk_edition_ref (DeskEdition *self)
{
  g_atomic_ref_count_inc (&self->refs);
  return self;
}

void
desk_edition_unref (DeskEdition *self)
{
  if (!g_atomic_ref_count_dec (&self->refs))
    return;
  g_object_unref (self->film);
  bt_recipe_free (self->recipe);
  g_clear_pointer (&self->tally, bt_tally_unref);
  g_free (self);
}

BtFilm *
desk_edition_get_film (DeskEdition *self)
{
  return self->film;
}

const BtRecipe *
desk_edition_get_recipe (DeskEdition *self)
{
  return self->recipe;
}

BtTally *
desk_edition_get_tally (DeskEdition *self)
{
  return self->tally;
}

void
desk_edition_set_tally (DeskEdition *self, BtTally *tally)
{
  if (tally)
    bt_tally_ref (tally);
  g_clear_pointer (&self->tally, bt_tally_unref);
  self->tally = tally;
}
