/* Levenberg and Marquardt's method (Marquardt 1963; damping after Nielsen 1999) in a box.
 *
 * Bounds and step limits are one mechanism: each iteration solves for the step inside a box; what would leave the box is put on
 * its face and the rest is solved again. The normal equations serve as long as they keep enough digits. Where the pivots say
 * that they do not, the fit goes on with the triangular factor of the Jacobian itself, which loses half as many. */
#include "lm-private.h"

#include <float.h>
#include <math.h>
#include <string.h>

/* Below this share of a diagonal the normal equations are left: of 16 digits, 6 are gone. */
#define LEAST_SHARE 1e-6

/* A fit creeps along a valley once this many steps have brought less than this share of what they promised. */
#define CREEPING_STEPS 5
#define POOR 0.9
/* Undamped steps at the end, at most. */
#define MOST_POLISHING 60
#define LONG_WAY 100
/* How often a fit that stands still under its damping is pushed on. */
#define MOST_PUSHES 10

void
bt_lm_init (BtLm *lm, gsize p)
{
  memset (lm, 0, sizeof *lm);
  lm->p = p;
  lm->stride = (p + 1 + 3) & ~(gsize)3;
  lm->now.a = g_new0 (double, (p + 1) * lm->stride);
  lm->trial_system.a = g_new0 (double, (p + 1) * lm->stride);
  lm->work = g_new0 (double, (p + 1) * lm->stride);
  lm->rows = g_new0 (double, (2 * p + 1) * lm->stride);
  lm->diagonal = g_new (double, p + 1);
  lm->step = g_new (double, p + 1);
  lm->trial = g_new (double, p + 1);
  lm->down = g_new (double, p + 1);
  lm->up = g_new (double, p + 1);
  lm->bend = g_new (double, p + 1);
  lm->right = g_new (double, lm->stride);
  lm->free_index = g_new (gsize, p + 1);
  lm->pinned = g_new (int, p + 1);
  lm->released = g_new (gboolean, p + 1);
  lm->max_iterations = 200;
  lm->tolerance = 1e-10;
  lm->damping = 0.1;
  lm->kernel = bt_kernel ();
}

void
bt_lm_clear (BtLm *lm)
{
  g_free (lm->now.a);
  g_free (lm->trial_system.a);
  g_free (lm->work);
  g_free (lm->rows);
  g_free (lm->diagonal);
  g_free (lm->step);
  g_free (lm->trial);
  g_free (lm->down);
  g_free (lm->up);
  g_free (lm->bend);
  g_free (lm->right);
  g_free (lm->free_index);
  g_free (lm->pinned);
  g_free (lm->released);
}

static double
largest_move (const BtLm *lm, const double *x)
{
  double largest = 0;

  for (gsize j = 0; j < lm->p; j++)
    if (lm->step[j] != 0)
      largest = fmax (largest, fabs (lm->step[j]) / fmax (fabs (x[j]), DBL_MIN));
  return largest;
}

static void
accept (BtLm *lm, double *x)
{
  BtLmSystem old = lm->now;

  memcpy (x, lm->trial, sizeof (double) * lm->p);
  lm->now = lm->trial_system;
  lm->trial_system = old;
}

/* The scale of the damping: the largest diagonal seen so far (Moré 1978), which keeps early steps short; a fit that has gone a
 * long way forgets the scale of where it came from. */
static void
update_diagonal (BtLm *lm)
{
  const double keep = lm->iterations > LONG_WAY ? 0.5 : 1;

  for (gsize j = 0; j < lm->p; j++)
    lm->diagonal[j] = fmax (keep * lm->diagonal[j], fmax (bt_lm_squared_column (lm, j), DBL_MIN));
}

/* Whether a fit that stands still has arrived: damping may hold it where a free step would still win much. */
static gboolean
arrived (BtLm *lm, const double *x)
{
  return !bt_lm_solve_step (lm, x, 0)
         || !(bt_lm_promised (lm) > 1e3 * lm->tolerance * lm->now.cost && bt_lm_promised (lm) > 1e-10 * lm->now.cost);
}

/* Iterations in one form of the system. */
static BtSolveState
iterate (BtLm *lm, double *x)
{
  double damping = lm->damping, growth = 2;
  int quiet = 0, poor = 0, pushes = 0;

  while (lm->iterations < lm->max_iterations)
    {
      double expected, gain, before = lm->now.cost;
      gboolean straight = FALSE;

      if (lm->cancellable != NULL && g_cancellable_is_cancelled (lm->cancellable))
        return BT_SOLVE_CANCELLED;
      lm->iterations++;
      update_diagonal (lm);
      if (!bt_lm_solve_step (lm, x, damping))
        {
          damping = fmax (damping * growth, 1e-12);
          growth *= 2;
          if (damping > 1e16)
            return BT_SOLVE_SINGULAR;
          continue;
        }
      for (gsize j = 0; j < lm->p; j++)
        lm->trial[j] = x[j] + lm->step[j];
      expected = bt_lm_promised (lm);
      if (expected <= lm->tolerance * before || largest_move (lm, x) < 1e-15)
        {
          if (pushes++ > MOST_PUSHES || arrived (lm, x))
            return BT_SOLVE_CONVERGED;
          damping *= 1e-3;
          growth = 2;
          continue;
        }
      if (lm->curvature != NULL && poor >= CREEPING_STEPS)
        {
          straight = !bt_lm_accelerate (lm, x);
          for (gsize j = 0; j < lm->p; j++)
            lm->trial[j] = x[j] + lm->step[j];
        }
      lm->evaluate (lm->data, lm->trial, lm->orthogonal, before, &lm->trial_system);
      gain = before - lm->trial_system.cost;
      if (isfinite (lm->trial_system.cost) && gain > 0)
        {
          const double f = 2 * fmin (gain / expected, 1) - 1;

          poor = gain < POOR * expected ? poor + 1 : straight ? CREEPING_STEPS - 1 : poor;
          accept (lm, x);
          damping *= fmax (1.0 / 10, 1 - f * f * f);
          growth = 2;
          quiet = gain <= lm->tolerance * before && expected <= 10 * lm->tolerance * before ? quiet + 1 : 0;
          if (quiet >= 2)
            {
              if (pushes++ > MOST_PUSHES || arrived (lm, x))
                return BT_SOLVE_CONVERGED;
              damping *= 1e-3;
              quiet = 0;
            }
          /* Even ten more steps as good as this one would not do. */
          if (lm->hopeless_above > 0 && lm->iterations > 12 && before - 10 * gain > lm->hopeless_above)
            {
              lm->abandoned = TRUE;
              return BT_SOLVE_STOPPED_EARLY;
            }
        }
      else
        {
          damping *= growth;
          growth *= 2;
          poor++;
          /* The cost no longer changes at the precision of the sum: there is nothing left to win. */
          if (expected <= 1e-13 * before || damping > 1e14)
            {
              if (pushes++ > MOST_PUSHES || arrived (lm, x))
                return expected <= 1e-6 * before ? BT_SOLVE_CONVERGED : BT_SOLVE_STOPPED_EARLY;
              damping *= 1e-3;
              growth = 2;
            }
        }
    }
  return BT_SOLVE_STOPPED_EARLY;
}

/* The trial point is the step's; takes it where it is no worse. */
static gboolean
try_step (BtLm *lm, double *x, double above)
{
  for (gsize j = 0; j < lm->p; j++)
    lm->trial[j] = x[j] + lm->step[j];
  lm->evaluate (lm->data, lm->trial, lm->orthogonal, INFINITY, &lm->trial_system);
  if (!(lm->trial_system.cost <= above))
    return FALSE;
  accept (lm, x);
  return TRUE;
}

/* Undamped steps for as long as they shrink: the last digits. The last of them is taken unseen: what it promises is below the tolerance, and
 * to look at the points once more would only say so. */
static void
polish (BtLm *lm, double *x)
{
  double last = INFINITY;

  for (int i = 0; i < MOST_POLISHING; i++)
    {
      double size;

      if (!bt_lm_solve_step (lm, x, 0))
        return;
      size = bt_lm_promised (lm);
      if (!(size >= 0 && size < 0.9 * last) || largest_move (lm, x) < 4 * DBL_EPSILON)
        return;
      if (size <= lm->tolerance * lm->now.cost)
        {
          for (gsize j = 0; j < lm->p; j++)
            x[j] += lm->step[j];
          lm->now.cost -= size;
          lm->now.chi2 -= size;
          return;
        }
      last = size;
      /* Near the minimum the cost is known to its rounding only. */
      if (!try_step (lm, x, lm->now.cost * (1 + 1e-9)))
        return;
    }
}

BtSolveState
bt_lm_run (BtLm *lm, double *x)
{
  double share;

  for (gsize j = 0; j < lm->p; j++)
    {
      x[j] = fmin (fmax (x[j], bt_lm_low (lm, j)), bt_lm_high (lm, j));
      lm->diagonal[j] = 0;
    }
  lm->iterations = 0;
  lm->orthogonal = lm->abandoned = FALSE;
  lm->evaluate (lm->data, x, FALSE, INFINITY, &lm->now);
  if (!isfinite (lm->now.cost))
    return lm->state = BT_SOLVE_SINGULAR;
  lm->state = iterate (lm, x);
  if (lm->state == BT_SOLVE_CANCELLED || lm->abandoned)
    return lm->state;
  share = bt_lm_smallest_share (lm, x);
  if (share < LEAST_SHARE)
    {
      lm->orthogonal = TRUE;
      lm->evaluate (lm->data, x, TRUE, INFINITY, &lm->now);
      if (lm->state == BT_SOLVE_STOPPED_EARLY)
        lm->iterations = 0;
      lm->state = iterate (lm, x);
      share = bt_lm_smallest_share (lm, x);
    }
  if (lm->state == BT_SOLVE_CONVERGED)
    polish (lm, x);
  lm->condition = 1 / share;
  return lm->state;
}
