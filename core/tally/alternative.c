/* Two diameter windows that explain a spectrum about as well: the fraction has to hold for both. */
#include "assemble.h"

#include <math.h>

static void
widen_budget (BtTally *tally, double variance)
{
  for (guint b = 0; b < tally->budget->len; b++)
    {
      BtBudgetLine *line = &g_array_index (tally->budget, BtBudgetLine, b);

      if (g_str_equal (line->source, "band plan"))
        line->u = sqrt (line->u * line->u + variance);
    }
}

/* Where the ensemble of one window follows the film and that of the other misses it by half as much again, the other window is none. */
static gboolean
is_refuted (const BtTally *tally, const BtTally *other)
{
  const BtModelTally *here = &tally->models[BT_MODEL_ENSEMBLE], *there = &other->models[BT_MODEL_ENSEMBLE];

  return here->weight > 0.99 && there->weight > 0 && there->misfit > 1.5 * here->misfit;
}

void
bt_tally_admit_alternative (BtTally *tally, const BtTally *other)
{
  BtFraction *fraction = &tally->fraction;
  double half;

  if (fraction->bound == BT_BOUND_NONE || other->fraction.bound == BT_BOUND_NONE || is_refuted (tally, other))
    return;
  /* Either may be true, so the mean is one of two values half their difference away. */
  half = (other->fraction.value - fraction->value) / 2;
  fraction->u = sqrt (fraction->u * fraction->u + half * half);
  widen_budget (tally, half * half);
  fraction->low = fmin (fraction->low, other->fraction.low);
  fraction->high = fmax (fraction->high, other->fraction.high);
  if (isnan (tally->conformance) || isnan (other->conformance))
    return;
  bt_tally_judge (tally, (tally->conformance + other->conformance) / 2);
}
