/* Bands of the best fit, sums of groups, and the diameter they mean. */
#include "assemble.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#define FWHM_PER_SIGMA 2.3548200450309493

static int
by_energy (const void *a, const void *b)
{
  const BtBand *left = a, *right = b;

  return left->centre_ev < right->centre_ev ? -1 : left->centre_ev > right->centre_ev;
}

/* Indices count from low energy within a group, unless the user holds a number of it: then they stay with what is held. */
static void
number_bands (BtTally *tally)
{
  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      gboolean held = FALSE;
      guint count = 0;

      for (guint i = 0; i < tally->recipe->held->len; i++)
        held = held || g_array_index (tally->recipe->held, BtHeld, i).group == g;
      for (guint b = 0; b < tally->bands->len && !held; b++)
        if (g_array_index (tally->bands, BtBand, b).group == g)
          g_array_index (tally->bands, BtBand, b).index = count++;
    }
}

static void
add_band (BtTally *tally, const BtCandidate *best, guint b, guint index)
{
  const BtFilmFit *fit = best->fit;
  gsize j = bt_film_fit_band (fit, b);
  double gradient[BT_MODEL_MAX_PARAMETERS] = { 0 };
  BtBand band = { .group = fit->group[b], .index = index, .height = fit->x[j], .centre_ev = fit->x[j + 1],
                  .fwhm_ev = fit->x[j + 2], .held = fit->held[b], .wings = fit->x[bt_film_fit_wings (fit)],
                  .sideband = fit->group[b] <= BT_S22 ? fit->x[bt_film_fit_sideband (fit)] : 0 };

  band.area = bt_film_fit_area (fit, b, gradient);
  band.area_u = sqrt (best->scale * bt_film_fit_covariance_of (fit, gradient, gradient));
  band.height_u = sqrt (best->scale * fit->covariance[j * fit->p + j]);
  band.centre_u_ev = sqrt (best->scale * fit->covariance[(j + 1) * fit->p + j + 1]);
  band.fwhm_u_ev = sqrt (best->scale * fit->covariance[(j + 2) * fit->p + j + 2]);
  for (gsize k = 0; k < 3; k++)
    band.at_bound = band.at_bound || fit->at_bound[j + k];
  g_array_append_val (tally->bands, band);
}

static void
fill_tail_share (BtTally *tally, const BtCandidate *best, const BtPrepared *prepared)
{
  double centre = 0, area = 0, whole, tail;

  for (guint b = 0; b < tally->bands->len; b++)
    {
      const BtBand *band = &g_array_index (tally->bands, BtBand, b);

      if (band->group == BT_S22)
        {
          centre += band->area * band->centre_ev;
          area += band->area;
        }
    }
  tally->tail_share_at_s22 = NAN;
  if (area > 0)
    {
      centre /= area;
      bt_film_fit_eval (best->fit, &prepared->data, &centre, 1, &whole, &tail);
      if (whole > 0)
        tally->tail_share_at_s22 = tail / whole;
    }
}

void
bt_tally_fill_best (BtTally *tally, const BtCandidate *best, const BtPrepared *prepared)
{
  const BtFilmFit *fit = best->fit;
  guint index[BT_N_GROUPS] = { 0 };
  double gs[BT_MODEL_MAX_PARAMETERS] = { 0 }, gm[BT_MODEL_MAX_PARAMETERS] = { 0 }, ss, mm;

  tally->n = prepared->data.n;
  tally->energy_ev = g_memdup2 (prepared->energy_ev, sizeof (double) * tally->n);
  tally->absorbance = g_memdup2 (prepared->absorbance, sizeof (double) * tally->n);
  tally->noise = g_memdup2 (prepared->noise, sizeof (double) * tally->n);
  tally->fit = g_new (double, tally->n);
  tally->tail_curve = g_new (double, tally->n);
  tally->structure = prepared->structure;
  bt_film_fit_eval (fit, &prepared->data, tally->energy_ev, tally->n, tally->fit, tally->tail_curve);
  for (guint b = 0; b < fit->n_bands; b++)
    add_band (tally, best, b, index[fit->group[b]]++);
  g_array_sort (tally->bands, by_energy);
  number_bands (tally);
  fill_tail_share (tally, best, prepared);
  bt_film_fit_group_area (fit, BT_S22, gs);
  bt_film_fit_group_area (fit, BT_M11, gm);
  ss = bt_film_fit_covariance_of (fit, gs, gs);
  mm = bt_film_fit_covariance_of (fit, gm, gm);
  tally->s22_m11_correlation = ss > 0 && mm > 0 ? bt_film_fit_covariance_of (fit, gs, gm) / sqrt (ss * mm) : NAN;
}

/* The sum of a group's bands, sidebands left out: they are not what one reads a crown from. */
static double
group_sum (const BtFilmFit *fit, const double *x, BtGroup group, double energy_ev)
{
  double sum = 0;

  for (guint b = 0; b < fit->n_bands; b++)
    if (fit->group[b] == group)
      {
        const double *band = x + bt_film_fit_band (fit, b);

        sum += band[0] * bt_line_eval (energy_ev, band[1], band[2], x[bt_film_fit_wings (fit)], 0);
      }
  return sum;
}

/* Energy of the highest point of a group's sum: a scan at 2 meV, then a parabola through the top. */
static double
crown_of (const BtFilmFit *fit, const double *x, BtGroup group, double low, double high)
{
  const double step = 0.002;
  double best = low, top = -INFINITY, left, right, bend;

  for (double e = low; e <= high; e += step)
    {
      double value = group_sum (fit, x, group, e);

      if (value > top)
        {
          top = value;
          best = e;
        }
    }
  left = group_sum (fit, x, group, best - step);
  right = group_sum (fit, x, group, best + step);
  bend = left - 2 * top + right;
  return bend < 0 ? best + step * CLAMP (0.5 * (left - right) / bend, -1, 1) : best;
}

/* How far from the crown, towards @sign, the sum falls to half: a walk in 2 meV steps, then a straight line between the last two. */
static double
half_side (const BtFilmFit *fit, const double *x, BtGroup group, double crown, double half, double sign)
{
  const double step = 0.002;
  double last = group_sum (fit, x, group, crown);

  for (double d = step; d < 2; d += step)
    {
      double value = group_sum (fit, x, group, crown + sign * d);

      if (value <= half)
        return d - step * (half - value) / (last - value);
      last = value;
    }
  return 2;
}

static double
width_at_half (const BtFilmFit *fit, const double *x, BtGroup group, double crown)
{
  const double half = group_sum (fit, x, group, crown) / 2;

  return half_side (fit, x, group, crown, half, -1) + half_side (fit, x, group, crown, half, 1);
}

typedef struct { double crown, crown_var, mean, mean_var, fwhm, fwhm_var; } GroupShape;

/* FALSE for an empty or negative group. */
static gboolean
group_shape (const BtCandidate *candidate, BtGroup group, GroupShape *shape)
{
  const BtFilmFit *fit = candidate->fit;
  double area = 0, first = 0, low = INFINITY, high = -INFINITY, x[BT_MODEL_MAX_PARAMETERS];
  double mean_g[BT_MODEL_MAX_PARAMETERS] = { 0 }, crown_g[BT_MODEL_MAX_PARAMETERS] = { 0 }, fwhm_g[BT_MODEL_MAX_PARAMETERS] = { 0 };

  for (guint b = 0; b < fit->n_bands; b++)
    if (fit->group[b] == group)
      {
        gsize j = bt_film_fit_band (fit, b);
        double a = fmax (0, bt_film_fit_area (fit, b, NULL));

        area += a;
        first += a * fit->x[j + 1];
        low = fmin (low, fit->x[j + 1] - 0.02);
        high = fmax (high, fit->x[j + 1] + 0.02);
      }
  if (!(area > 0))
    return FALSE;
  shape->mean = first / area;
  shape->crown = crown_of (fit, fit->x, group, low, high);
  shape->fwhm = width_at_half (fit, fit->x, group, shape->crown);
  memcpy (x, fit->x, sizeof (double) * fit->p);
  for (guint b = 0; b < fit->n_bands; b++)
    if (fit->group[b] == group)
      {
        gsize j = bt_film_fit_band (fit, b);
        double a = fmax (0, bt_film_fit_area (fit, b, NULL));

        mean_g[j + 1] = a / area;
        if (a > 0)
          mean_g[j] = a / fit->x[j] * (fit->x[j + 1] - shape->mean) / area;
        for (gsize k = j; k < j + 3; k++)
          {
            double h = 1e-3 * fabs (fit->x[k]), crown;

            if (!(h > 0))
              continue;
            x[k] = fit->x[k] + h;
            crown = crown_of (fit, x, group, low, high);
            crown_g[k] = (crown - shape->crown) / h;
            fwhm_g[k] = (width_at_half (fit, x, group, crown) - shape->fwhm) / h;
            x[k] = fit->x[k];
          }
      }
  shape->mean_var = candidate->scale * bt_film_fit_covariance_of (fit, mean_g, mean_g);
  shape->fwhm_var = candidate->scale * bt_film_fit_covariance_of (fit, fwhm_g, fwhm_g);
  shape->crown_var = candidate->scale * bt_film_fit_covariance_of (fit, crown_g, crown_g);
  return TRUE;
}

/* Weighted mean and the standard uncertainty that holds the spread between the fits beside what each of them says. */
typedef struct { double weight, sum, squares; } Average;

static void
average_add (Average *average, double weight, double value, double variance)
{
  average->weight += weight;
  average->sum += weight * value;
  average->squares += weight * (value * value + variance);
}

static void
average_get (const Average *average, double *value, double *u)
{
  if (!(average->weight > 0))
    return;
  *value = average->sum / average->weight;
  *u = sqrt (fmax (0, average->squares / average->weight - *value * *value));
}

static void
average_group (BtGroupTally *out, const BtCandidate *candidates, gsize n, BtGroup group)
{
  Average area = { 0 }, crown = { 0 }, mean = { 0 }, fwhm = { 0 };

  for (gsize c = 0; c < n; c++)
    {
      const BtFilmFit *fit = candidates[c].fit;
      double w = candidates[c].weight, g[BT_MODEL_MAX_PARAMETERS] = { 0 }, a = bt_film_fit_group_area (fit, group, g);
      GroupShape shape;

      average_add (&area, w, a, candidates[c].scale * bt_film_fit_covariance_of (fit, g, g));
      /* Fits that count for next to nothing are not worth the search for their crown. */
      if (w > 1e-3 && group_shape (&candidates[c], group, &shape))
        {
          average_add (&crown, w, shape.crown, shape.crown_var);
          average_add (&mean, w, shape.mean, shape.mean_var);
          average_add (&fwhm, w, shape.fwhm, shape.fwhm_var);
        }
    }
  average_get (&area, &out->area, &out->area_u);
  average_get (&crown, &out->centre_ev, &out->centre_u_ev);
  average_get (&mean, &out->mean_ev, &out->mean_u_ev);
  average_get (&fwhm, &out->fwhm_ev, &out->fwhm_u_ev);
}

/* The diameter whose group lies at an energy (films' shift added back), by bisection: energies fall with diameter. */
static double
diameter_at (BtGroup group, double energy_ev)
{
  double low = 0.5, high = 4;

  for (int i = 0; i < 60; i++)
    {
      double middle = (low + high) / 2;

      if (bt_group_energy_ev (middle, group, BT_REFERENCE_EMPIRICAL) > energy_ev)
        low = middle;
      else
        high = middle;
    }
  return (low + high) / 2;
}

static void
fill_diameter (BtTally *tally)
{
  /* Width of a single tube's line in a film, eV (common practice), and how well the film's shift is known. */
  static const double line_ev[BT_N_GROUPS] = { [BT_S11] = 0.08, [BT_S22] = 0.115 };
  static const double shift_u_ev = 0.02;
  double mean = 0, weight = 0, spread = 0;

  tally->diameter = (BtDiameterWindow){ NAN, NAN };
  tally->diameter_u_nm = NAN;
  for (guint g = BT_S11; g <= BT_S22; g++)
    {
      const BtGroupTally *group = &tally->groups[g];
      double d, slope, sigma, u;

      if (group->n_bands == 0 || !(group->area > 2 * group->area_u) || !isfinite (group->mean_ev))
        continue;
      d = diameter_at ((BtGroup) g, group->mean_ev + tally->plan.shift_ev);
      slope = (diameter_at ((BtGroup) g, group->mean_ev + tally->plan.shift_ev - 0.01) - d) / 0.01;
      sigma = sqrt (fmax (0, group->fwhm_ev * group->fwhm_ev - line_ev[g] * line_ev[g])) / FWHM_PER_SIGMA;
      u = slope * hypot (hypot (group->mean_u_ev, shift_u_ev), 0.01);
      mean += d / (u * u);
      spread += sigma * slope / (u * u);
      weight += 1 / (u * u);
    }
  if (weight > 0)
    {
      tally->diameter.mean_nm = mean / weight;
      tally->diameter.spread_nm = spread / weight;
      tally->diameter_u_nm = sqrt (1 / weight);
    }
}

void
bt_tally_fill_groups (BtTally *tally, const BtCandidate *candidates, gsize n)
{
  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      tally->groups[g] = (BtGroupTally){ n > 0 ? candidates[0].fit->n_in_group[g] : 0, NAN, NAN, NAN, NAN, NAN, NAN, NAN, NAN };
      if (tally->groups[g].n_bands > 0)
        average_group (&tally->groups[g], candidates, n, (BtGroup) g);
    }
  fill_diameter (tally);
}
