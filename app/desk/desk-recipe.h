/* What the window does to recipes beyond setting a field. */
#pragma once

#include <bandtally/bandtally.h>

G_BEGIN_DECLS

/* Leaves a range out; ranges that meet become one. */
void desk_recipe_exclude (BtRecipe *recipe, double from_ev, double to_ev);
/* Index of the range left out that holds @energy_ev, or -1. */
int desk_recipe_find_excluded (const BtRecipe *recipe, double energy_ev);
/* Releases all numbers held of bands that a group of @n bands has not. */
void desk_recipe_release_from (BtRecipe *recipe, BtGroup group, guint n);

G_END_DECLS
