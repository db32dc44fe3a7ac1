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

/* -2 ln likelihood of the ensemble, but for a constant that two windows of one film share: points with their noise unknown, and priors. */
static double
badness (const BtModelTally *model)
{
  return (double) model->n_points * log (model->misfit * model->misfit) + model->strain;
}

gboolean
bt_tally_refutes (const BtTally *tally, const BtTally *other)
{
  const BtModelTally *here = &tally->models[BT_MODEL_ENSEMBLE], *there = &other->models[BT_MODEL_ENSEMBLE];

  /* A difference of 30 is odds of three million to one, far beyond what the approximations could hide. */
  return tally->fraction.bound != BT_BOUND_NONE && here->weight > 0.99 && there->n_points > 0 && badness (there) > badness (here) + 30;
}

/* The window is no longer in doubt. */
static void
drop_ambiguity (BtTally *tally)
{
  for (guint i = tally->flags->len; i-- > 0;)
    if (g_str_equal (((const BtFlag *) g_ptr_array_index (tally->flags, i))->code, "window-ambiguous"))
      g_ptr_array_remove_index (tally->flags, i);
}

void
bt_tally_admit_alternative (BtTally *tally, const BtTally *other)
{
  BtFraction *fraction = &tally->fraction;
  double half;

  if (bt_tally_refutes (tally, other))
    {
      drop_ambiguity (tally);
      return;
    }
  if (fraction->bound == BT_BOUND_NONE || other->fraction.bound == BT_BOUND_NONE)
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
