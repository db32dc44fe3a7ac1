#include "desk-recipe.h"

static int
compare_ranges (gconstpointer a, gconstpointer b)
{
  const BtRange *range_a = a, *range_b = b;
  return (range_a->low_ev > range_b->low_ev) - (range_a->low_ev < range_b->low_ev);
}

void
desk_recipe_exclude (BtRecipe *recipe, double from_ev, double to_ev)
{
  GArray *ranges = recipe->excluded;
  BtRange range = { MIN (from_ev, to_ev), MAX (from_ev, to_ev) };
  guint kept = 0;
  g_array_append_val (ranges, range);
  g_array_sort (ranges, compare_ranges);
  for (guint i = 1; i < ranges->len; i++)
    {
      BtRange *last = &g_array_index (ranges, BtRange, kept);
      BtRange next = g_array_index (ranges, BtRange, i);
      if (next.low_ev <= last->high_ev)
        last->high_ev = MAX (last->high_ev, next.high_ev);
      else
        g_array_index (ranges, BtRange, ++kept) = next;
    }
  g_array_set_size (ranges, kept + 1);
}

int
desk_recipe_find_excluded (const BtRecipe *recipe, double energy_ev)
{
  for (guint i = 0; i < recipe->excluded->len; i++)
    {
      const BtRange *range = &g_array_index (recipe->excluded, BtRange, i);
      if (energy_ev >= range->low_ev && energy_ev <= range->high_ev)
        return (int) i;
    }
  return -1;
}

void
desk_recipe_release_from (BtRecipe *recipe, BtGroup group, guint n)
{
  for (guint index = n; index < BT_RECIPE_MAX_BANDS; index++)
    for (int field = BT_BAND_CENTRE; field <= BT_BAND_HEIGHT; field++)
      bt_recipe_release (recipe, group, index, (BtBandField) field);
}
