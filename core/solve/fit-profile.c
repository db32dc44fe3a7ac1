/* Intervals by profile likelihood: one parameter held at trial values, all others fitted again. */
#include "fit-private.h"

#include <math.h>
#include <string.h>

#include <gsl/gsl_cdf.h>

typedef struct
{
  BtFitWork *work;
  BtFitMap *map;
  guint k;           /* which free parameter */
  double *best, *z;  /* where the best fit stands; where the last trial ended */
  double cost, unit; /* of the best fit; what counts as 1 */
  double low, high;  /* bounds of the free parameter */
} Profile;

/* Square root of the rise of chi2 with the parameter at @value: nearly a straight line. NaN where the fit fails. */
static double
rise (Profile *profile, double value)
{
  static const BtFitOptions options = BT_FIT_OPTIONS_INIT;
  const BtLm *lm = &profile->work->lm;

  profile->map->low[profile->k] = profile->map->high[profile->k] = value;
  profile->z[profile->k] = value;
  if (bt_fit_run (profile->work, &options, NULL, profile->z) != BT_SOLVE_CONVERGED
      || lm->now.cost < profile->cost - 1e-6 * profile->unit)
    return NAN;
  return sqrt (fmax (0, lm->now.cost - profile->cost) / profile->unit);
}

/* The value towards @bound where the rise is @target. FALSE where there is none. */
static gboolean
find_end (Profile *profile, double target, double step, double bound, double *end)
{
  double inside = profile->best[profile->k], at_inside = 0, outside, at_outside;

  memcpy (profile->z, profile->best, sizeof (double) * profile->map->n_free);
  *end = inside;
  for (int i = 0;; i++)
    {
      gboolean last = FALSE;

      outside = inside + step;
      if (step > 0 ? outside >= bound : outside <= bound)
        {
          outside = bound;
          last = TRUE;
        }
      at_outside = rise (profile, outside);
      if (isnan (at_outside) || i > 60)
        return FALSE;
      if (at_outside >= target)
        break;
      *end = inside = outside;
      at_inside = at_outside;
      if (last)
        return FALSE;
      step *= at_outside > 0 ? fmin (2, 1.2 * target / at_outside) : 2;
    }
  /* Regula falsi between the two, with bisection where it creeps. */
  for (int i = 0; i < 60 && fabs (at_outside - target) > 1e-6 * target && fabs (outside - inside) > 1e-12 * fabs (step); i++)
    {
      double share = i % 4 == 3 ? 0.5 : (target - at_inside) / (at_outside - at_inside),
             value = inside + share * (outside - inside);
      double at = rise (profile, value);

      if (isnan (at))
        return FALSE;
      if (at < target)
        {
          inside = value;
          at_inside = at;
          if (target - at < 1e-6 * target)
            {
              outside = value;
              break;
            }
        }
      else
        {
          outside = value;
          at_outside = at;
        }
    }
  *end = outside;
  return TRUE;
}

gboolean
bt_fit_profile (BtFit *self, const BtFitResult *best, guint parameter, double level, double *low, double *high)
{
  g_autoptr (BtFitPoints) points = bt_fit_points_new (self);
  g_autoptr (BtFitMap) map = bt_fit_map_new (self);
  g_autoptr (BtFitWork) work = NULL;
  g_autofree double *start = NULL, *z = NULL;
  Profile profile = { .map = map };
  double target, step, at_low, at_high;
  gboolean down, up;

  g_return_val_if_fail (parameter < map->n_full && level > 0 && level < 1 && points->n > 0, FALSE);
  *low = *high = best->x[parameter];
  if (map->index[parameter] < 0)
    return FALSE;
  work = bt_fit_work_new (self, points, map);
  work->lm.damping = 1e-3;
  start = g_new (double, map->n_free);
  z = g_new (double, map->n_free);
  bt_fit_map_reduce (map, best->x, start);
  bt_fit_pass (work, start, FALSE, INFINITY, &work->lm.now);
  profile.work = work;
  profile.k = (guint)map->index[parameter];
  profile.best = start;
  profile.z = z;
  profile.cost = work->lm.now.cost;
  profile.unit = best->sigma_known ? 1 : best->chi2 / fmax (1, (double)points->n - best->n_free);
  profile.low = map->low[profile.k];
  profile.high = map->high[profile.k];
  target = sqrt (gsl_cdf_chisq_Pinv (level, 1));
  step = best->u[parameter] / fabs (map->factor[parameter]);
  if (!(step > 0))
    step = 1e-3 * fmax (fabs (start[profile.k]), 1e-3);
  down = find_end (&profile, target, -step * target, profile.low, &at_low);
  up = find_end (&profile, target, step * target, profile.high, &at_high);
  *low = map->factor[parameter] * at_low + map->offset[parameter];
  *high = map->factor[parameter] * at_high + map->offset[parameter];
  if (map->factor[parameter] < 0)
    {
      const double swap = *low;

      *low = *high;
      *high = swap;
    }
  return down && up;
}
