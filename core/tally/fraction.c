/* The semiconducting fraction: from competing fits to one value, interval and budget.
 *
 * All uncertainty is kept in the areas, where M11's may go below zero, and turned into a fraction by drawing from it (JCGM 101:2008);
 * limits of 0 and 1 are set where the fraction is stated, never where it is estimated. */
#include "fraction.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include <glib/gi18n-lib.h>
#include <gsl/gsl_cdf.h>
#include <gsl/gsl_randist.h>
#include <gsl/gsl_rng.h>

/* JCGM 101:2008, 7.2.1: at least 10^4 / (1 - p) draws; 2 x 10^5 for p = 0.95. A tenth of it moves the ends of an interval by less than
 * two hundredths of u, well below the digits that are shown. */
#define DRAWS 20000
#define SEED 20190520

double
bt_doping_u (double area_s11, double area_s22)
{
  const double lost = area_s22 > 0 && area_s11 >= 0 ? 1 - area_s11 / area_s22 : 0;

  /* Root mean square of a loss that is rectangular between 0 and a fifth. */
  return lost > 0 ? 0.2 / sqrt (3) * lost : 0;
}

double
bt_area_fraction (double area_s, double area_m, double strength_ratio)
{
  return area_s / (area_s + strength_ratio * area_m);
}

void
bt_candidate_take_noise (BtCandidate *candidate, const BtLinear *fit, const double *noise, const double *sigma, const double *gs, const double *gm)
{
  const gsize p = fit->p;
  g_autofree double *vs = g_new0 (double, p), *vm = g_new0 (double, p);

  for (gsize a = 0; a < p; a++)
    for (gsize b = 0; b < p; b++)
      {
        vs[a] += fit->covariance[a * p + b] * gs[b];
        vm[a] += fit->covariance[a * p + b] * gm[b];
      }
  candidate->noise_ss = candidate->noise_mm = candidate->noise_sm = 0;
  for (gsize i = 0; i < fit->n; i++)
    {
      double s = 0, m = 0, ratio = noise[i] / sigma[i];

      for (gsize a = 0; a < p; a++)
        {
          s += fit->jacobian[i * p + a] * vs[a];
          m += fit->jacobian[i * p + a] * vm[a];
        }
      candidate->noise_ss += s * s * ratio * ratio;
      candidate->noise_mm += m * m * ratio * ratio;
      candidate->noise_sm += s * m * ratio * ratio;
    }
}

double
bt_step_share (const double *covariance, gsize p, gsize first_step, guint n_steps, const double *g)
{
  double share = 0, variance = 0;

  for (gsize a = 0; a < p; a++)
    for (gsize b = 0; b < p && fabs (g[a]) > 0; b++)
      variance += g[a] * covariance[a * p + b] * g[b];
  for (guint k = 0; k < n_steps; k++)
    {
      const gsize j = first_step + k;
      double c = 0, v = covariance[j * p + j];

      for (gsize b = 0; b < p; b++)
        c += covariance[j * p + b] * g[b];
      if (v > 0 && variance > 0)
        share += c * c / v / variance;
    }
  return fmin (share, 1);
}

static void
noise_part (BtCandidate *candidate, const BtPrepared *prepared, const double *gs, const double *gm)
{
  const BtFilmFit *fit = candidate->fit;
  const BtFilmData *data = &prepared->data;
  g_autofree double *residual = g_new (double, data->n), *jacobian = g_new (double, data->n * fit->p);
  const BtLinear linear = { data->n, fit->p, fit->covariance, jacobian };

  bt_film_fit_residual (fit, data, residual, jacobian);
  bt_candidate_take_noise (candidate, &linear, prepared->noise, data->sigma, gs, gm);
}

static double
density_in (const BtBandWindow *window, double energy_ev)
{
  double sigma = fmax (window->fwhm_ev, 0.05) / 2.354820045, z = (energy_ev - window->centre_ev) / sigma;

  return exp (-z * z / 2) / sigma;
}

/* A band inside the windows of two groups belongs to either with the odds of the densities that the plan expects there. */
static void
find_ambiguous (BtCandidate *candidate, const BtPrepared *prepared)
{
  static const BtGroup pairs[][2] = { { BT_S22, BT_M11 }, { BT_M11, BT_S22 }, { BT_M11, BT_S33 }, { BT_S33, BT_M11 } };
  const BtFilmFit *fit = candidate->fit;

  candidate->n_ambiguous = 0;
  for (guint b = 0; b < fit->n_bands; b++)
    for (guint k = 0; k < G_N_ELEMENTS (pairs); k++)
      {
        const BtBandWindow *own = &prepared->plan.bands[pairs[k][0]], *other = &prepared->plan.bands[pairs[k][1]];
        double centre = fit->x[bt_film_fit_band (fit, b) + 1], mine, theirs;
        BtAmbiguous *entry = &candidate->ambiguous[candidate->n_ambiguous];

        if (fit->group[b] != pairs[k][0] || fit->n_in_group[pairs[k][1]] == 0 || centre < other->low_ev || centre > other->high_ev)
          continue;
        mine = density_in (own, centre);
        theirs = density_in (other, centre);
        if (!(mine + theirs > 0) || theirs / (mine + theirs) < 1e-3 || candidate->n_ambiguous == BT_MAX_AMBIGUOUS)
          continue;
        *entry = (BtAmbiguous){ pairs[k][0], pairs[k][1], bt_film_fit_area (fit, b, NULL), theirs / (mine + theirs) };
        candidate->n_ambiguous++;
      }
}

static void
move_area (const BtAmbiguous *entry, double share, double *area_s, double *area_m)
{
  double area = share * entry->area;

  if (entry->from == BT_S22)
    *area_s -= area;
  if (entry->from == BT_M11)
    *area_m -= area;
  if (entry->to == BT_S22)
    *area_s += area;
  if (entry->to == BT_M11)
    *area_m += area;
}

void
bt_candidate_expected (const BtCandidate *candidate, double *area_s, double *area_m)
{
  *area_s = candidate->area_s;
  *area_m = candidate->area_m;
  for (guint a = 0; a < candidate->n_ambiguous; a++)
    move_area (&candidate->ambiguous[a], candidate->ambiguous[a].probability, area_s, area_m);
}

void
bt_candidate_init (BtCandidate *candidate, const BtFilmFit *fit, const BtPrepared *prepared)
{
  double gs[BT_MODEL_MAX_PARAMETERS] = { 0 }, gm[BT_MODEL_MAX_PARAMETERS] = { 0 }, gf[BT_MODEL_MAX_PARAMETERS];
  double room = fmax (prepared->n_effective - bt_fit_parameters (fit), prepared->n_effective / 6), sum;

  candidate->model = BT_MODEL_GROUPS;
  candidate->fit = fit;
  candidate->n_steps = fit->n_steps;
  candidate->scale = fmax (1, fit->chi2 / room);
  candidate->area_s = bt_film_fit_group_area (fit, BT_S22, gs);
  candidate->area_m = bt_film_fit_group_area (fit, BT_M11, gm);
  candidate->var_ss = candidate->scale * bt_film_fit_covariance_of (fit, gs, gs);
  candidate->var_mm = candidate->scale * bt_film_fit_covariance_of (fit, gm, gm);
  candidate->var_sm = candidate->scale * bt_film_fit_covariance_of (fit, gs, gm);
  noise_part (candidate, prepared, gs, gm);
  sum = candidate->area_s + candidate->area_m;
  for (gsize j = 0; j < fit->p; j++)
    gf[j] = (gs[j] * candidate->area_m - gm[j] * candidate->area_s) / (sum * sum);
  /* An area below zero by more than its uncertainty says that the uncertainty is too small: something else, most often the tail, takes from
   * it at least as much as it is short of zero. */
  if (candidate->area_m < 0 && candidate->area_m * candidate->area_m > candidate->var_mm)
    candidate->var_mm = candidate->area_m * candidate->area_m;
  candidate->step_share = bt_step_share (fit->covariance, fit->p, bt_film_fit_offset (fit) + 1, fit->n_steps, gf);
  if (fit->n_in_group[BT_S11] > 0)
    candidate->doping_u = bt_doping_u (bt_film_fit_group_area (fit, BT_S11, NULL), candidate->area_s);
  find_ambiguous (candidate, prepared);
}

/* First-order variance of the fraction from a covariance of the areas. */
static double
fraction_variance (double area_s, double area_m, double k, double ss, double mm, double sm)
{
  double sum = area_s + k * area_m, ds = k * area_m / (sum * sum), dm = -k * area_s / (sum * sum);

  return fmax (0, ds * ds * ss + dm * dm * mm + 2 * ds * dm * sm);
}

/* What ambiguous bands add to var(fraction), to first order. */
static double
ambiguous_variance (const BtCandidate *candidate, double area_s, double area_m, double k)
{
  double sum = area_s + k * area_m, ds = k * area_m / (sum * sum), dm = -k * area_s / (sum * sum), variance = 0;

  for (guint a = 0; a < candidate->n_ambiguous; a++)
    {
      const BtAmbiguous *entry = &candidate->ambiguous[a];
      double s = 0, m = 0, change;

      move_area (entry, 1, &s, &m);
      change = ds * s + dm * m;
      variance += entry->probability * (1 - entry->probability) * change * change;
    }
  return variance;
}

/* Areas at which a candidate's variances are taken: the expected ones, on the physical side. */
static void
areas_stated (const BtCandidate *candidate, double *area_s, double *area_m)
{
  bt_candidate_expected (candidate, area_s, area_m);
  *area_s = fmax (*area_s, 0);
  *area_m = fmax (*area_m, 0);
  if (!(*area_s + *area_m > 0))
    *area_s = *area_m = sqrt (candidate->var_ss + candidate->var_mm);
}

/* var(fraction) within one candidate. */
static double
candidate_variance (const BtCandidate *candidate, double k)
{
  double s, m;

  areas_stated (candidate, &s, &m);
  return fraction_variance (s, m, k, candidate->var_ss + pow (s * candidate->doping_u, 2), candidate->var_mm, candidate->var_sm)
         + ambiguous_variance (candidate, s, m, k);
}

static int
compare_double (const void *a, const void *b)
{
  double x = *(const double *) a, y = *(const double *) b;

  return x < y ? -1 : x > y;
}

/* Draws of the fraction, ascending, M11 as it comes (@limited FALSE) or not below 0 and S22 not below 0. */
static void
draw_fractions (double *draws, const BtCandidate *candidates, gsize n, const BtRecipe *recipe)
{
  gsl_rng *rng = gsl_rng_alloc (gsl_rng_mt19937);
  double reached = 0;
  gsize c = 0;

  gsl_rng_set (rng, SEED);
  for (gsize d = 0; d < DRAWS; d++)
    {
      const BtCandidate *candidate;
      double s, m, k, us, rest, slope, shift;

      /* Candidates in turn, each for its weight's share of the draws. */
      while (c + 1 < n && ((double) d + 0.5) / DRAWS > reached + candidates[c].weight)
        reached += candidates[c++].weight;
      candidate = &candidates[c];
      us = sqrt (fmax (0, candidate->var_ss));
      slope = candidate->var_ss > 0 ? candidate->var_sm / candidate->var_ss : 0;
      rest = sqrt (fmax (0, candidate->var_mm - slope * candidate->var_sm));
      shift = fmin (candidate->area_m, 0);
      s = gsl_ran_gaussian_ziggurat (rng, us);
      m = candidate->area_m - shift + slope * s + gsl_ran_gaussian_ziggurat (rng, rest);
      s += candidate->area_s;
      s *= 1 + gsl_ran_gaussian_ziggurat (rng, candidate->doping_u);
      for (guint a = 0; a < candidate->n_ambiguous; a++)
        if (gsl_rng_uniform (rng) < candidate->ambiguous[a].probability)
          move_area (&candidate->ambiguous[a], 1, &s, &m);
      do
        k = recipe->strength_ratio + gsl_ran_gaussian_ziggurat (rng, recipe->strength_ratio_u);
      while (!(k > 0.02 * recipe->strength_ratio));
      s = fmax (s, 0);
      m = fmax (m, 0);
      draws[d] = s + m > 0 ? bt_area_fraction (s, m, k) : 0.5;
    }
  gsl_rng_free (rng);
  qsort (draws, DRAWS, sizeof *draws, compare_double);
}

static double
quantile (const double *sorted, gsize n, double share)
{
  double place = CLAMP (share * (double) n - 0.5, 0, (double) n - 1);
  gsize low = (gsize) place, high = MIN (low + 1, n - 1);

  return sorted[low] + (place - (double) low) * (sorted[high] - sorted[low]);
}

static void
add_line (BtTally *tally, const char *source, const char *title, double variance)
{
  BtBudgetLine line = { source, title, sqrt (fmax (0, variance)) };

  g_array_append_val (tally->budget, line);
}

/* Variances of the fraction by source, first order about each candidate. Returns their sum. */
static double
fill_budget (BtTally *tally, const BtCandidate *candidates, gsize n, double mean)
{
  const double k = tally->recipe->strength_ratio, uk = tally->recipe->strength_ratio_u;
  double noise = 0, structure = 0, step = 0, doping = 0, between_tails = 0, between_models = 0, plans = 0, ratio = mean * (1 - mean) / k * uk;
  gboolean any_step = FALSE, two_models = tally->models[BT_MODEL_ENSEMBLE].weight > 0;

  for (guint m = 0; m < BT_N_MODELS; m++)
    {
      const BtModelTally *model = &tally->models[m];

      if (!(model->weight > 0) || !isfinite (model->fraction))
        continue;
      between_models += model->weight * (model->fraction - mean) * (model->fraction - mean);
      for (guint t = 0; t < tally->n_tails; t++)
        {
          const BtTailTally *tail = m == BT_MODEL_GROUPS ? &tally->tails[t] : &tally->ensembles[t];

          if (tail->weight > 0 && isfinite (tail->fraction))
            between_tails += model->weight * tail->weight * (tail->fraction - model->fraction) * (tail->fraction - model->fraction);
        }
    }
  for (gsize c = 0; c < n; c++)
    {
      const BtCandidate *candidate = &candidates[c];
      const BtTailTally *tail = candidate->model == BT_MODEL_GROUPS ? &tally->tails[candidate->tail] : &tally->ensembles[candidate->tail];
      double s, m, f, all, from_noise, w = candidate->weight;

      areas_stated (candidate, &s, &m);
      f = bt_area_fraction (s, m, k);
      all = fraction_variance (s, m, k, candidate->var_ss, candidate->var_mm, candidate->var_sm);
      from_noise = fmin (all, fraction_variance (s, m, k, candidate->noise_ss, candidate->noise_mm, candidate->noise_sm));
      doping += w * pow (f * (1 - f) * candidate->doping_u, 2);
      any_step = any_step || candidate->n_steps > 0;
      step += w * all * candidate->step_share;
      noise += w * from_noise * (1 - candidate->step_share);
      structure += w * (all - from_noise) * (1 - candidate->step_share);
      plans += w * ((f - tail->fraction) * (f - tail->fraction) + ambiguous_variance (candidate, s, m, k));
    }
  add_line (tally, "noise", _ ("noise of the reading"), noise);
  add_line (tally, "residual structure", _ ("structure that no band follows"), structure);
  add_line (tally, "tail", _ ("choice of tail"), between_tails);
  add_line (tally, "band plan", _ ("band plan: number and assignment of bands"), plans);
  if (two_models)
    add_line (tally, "model", _ ("choice of model: groups or ensemble"), between_models);
  add_line (tally, "strength ratio", _ ("strength ratio S22 : M11"), ratio * ratio);
  if (any_step)
    add_line (tally, "detector step", _ ("detector step"), step);
  if (doping > 0)
    add_line (tally, "doping", _ ("doping: what S22 may have lost"), doping);
  return noise + structure + step + doping + between_tails + between_models + plans + ratio * ratio;
}

void
bt_tally_judge (BtTally *tally, double conformance)
{
  const double limit = tally->recipe->limit;

  tally->conformance = conformance;
  tally->acceptance_limit = limit + gsl_cdf_ugaussian_Pinv (0.95) * tally->fraction.u;
  tally->refusal_limit = limit - gsl_cdf_ugaussian_Pinv (0.95) * tally->fraction.u;
  tally->verdict = conformance >= 0.95 ? BT_VERDICT_ACCEPTED : conformance <= 0.05 ? BT_VERDICT_REFUSED : BT_VERDICT_UNDECIDED;
}

static void
judge (BtTally *tally, const double *draws)
{
  gsize above = 0;

  if (isnan (tally->recipe->limit))
    return;
  for (gsize d = 0; d < DRAWS; d++)
    above += draws[d] >= tally->recipe->limit ? 1 : 0;
  bt_tally_judge (tally, (double) above / DRAWS);
}

/* Fraction of mean areas, limited to 0 .. 1 only here, where it is stated: M11 below zero stands for "none seen". */
static double
stated_fraction (double area_s, double area_m, double k)
{
  area_s = fmax (area_s, 0);
  area_m = fmax (area_m, 0);
  return area_s + area_m > 0 ? bt_area_fraction (area_s, area_m, k) : 0.5;
}

/* Mean areas of the candidates that @accept, and the spread of their fractions, their own variance included. FALSE where there is none. */
typedef struct { double weight, area_s, area_m, fraction, variance; } Average;

static gboolean
average (const BtCandidate *candidates, gsize n, BtModelKind model, int tail, double k, Average *out)
{
  *out = (Average){ 0 };
  for (int pass = 0; pass < 2; pass++)
    {
      for (gsize c = 0; c < n; c++)
        {
          /* A weight may round to nothing; its tail's own average still has to have one. */
          double w = fmax (candidates[c].weight, 1e-300), s, m;

          if (candidates[c].model != model || (tail >= 0 && candidates[c].tail != (guint) tail))
            continue;
          bt_candidate_expected (&candidates[c], &s, &m);
          if (pass == 0)
            {
              out->weight += w;
              out->area_s += w * s;
              out->area_m += w * m;
            }
          else
            {
              double f = stated_fraction (s, m, k);

              out->variance += w / out->weight * ((f - out->fraction) * (f - out->fraction) + candidate_variance (&candidates[c], k));
            }
        }
      if (!(out->weight > 0))
        return FALSE;
      if (pass == 0)
        {
          out->area_s /= out->weight;
          out->area_m /= out->weight;
          out->fraction = stated_fraction (out->area_s, out->area_m, k);
        }
    }
  return TRUE;
}

/* Mean fraction of each tail, each model and all, from mean areas; that of all is returned. */
static double
average_fractions (BtTally *tally, const BtCandidate *candidates, gsize n)
{
  const double k = tally->recipe->strength_ratio;
  double all_s = 0, all_m = 0;

  for (guint m = 0; m < BT_N_MODELS; m++)
    {
      Average mean;

      for (guint t = 0; t < tally->n_tails; t++)
        if (average (candidates, n, (BtModelKind) m, (int) t, k, &mean))
          {
            BtTailTally *tail = m == BT_MODEL_GROUPS ? &tally->tails[t] : &tally->ensembles[t];

            tail->fraction = mean.fraction;
            /* No quantity between 0 and 1 has a larger standard deviation than 0.5. */
            tail->fraction_u = fmin (sqrt (mean.variance), 0.5);
          }
      if (!average (candidates, n, (BtModelKind) m, -1, k, &mean))
        continue;
      tally->models[m].fraction = mean.fraction;
      tally->models[m].fraction_u = fmin (sqrt (mean.variance), 0.5);
      if (tally->models[m].weight > 0)
        {
          all_s += tally->models[m].weight * mean.area_s;
          all_m += tally->models[m].weight * mean.area_m;
        }
    }
  return stated_fraction (all_s, all_m, k);
}

/* Decision and detection limits of M11's area (Currie, Anal. Chem. 40, 586 (1968)): 1.645 and 3.29 times its whole u. Returns u. */
static double
detection_limits (BtTally *tally, const BtCandidate *candidates, gsize n, double *area_m)
{
  double mean = 0, variance = 0;

  for (gsize c = 0; c < n; c++)
    {
      double s, m;

      bt_candidate_expected (&candidates[c], &s, &m);
      mean += candidates[c].weight * m;
    }
  for (gsize c = 0; c < n; c++)
    {
      double s, m;

      bt_candidate_expected (&candidates[c], &s, &m);
      variance += candidates[c].weight * (candidates[c].var_mm + (m - mean) * (m - mean));
      for (guint a = 0; a < candidates[c].n_ambiguous; a++)
        {
          const BtAmbiguous *entry = &candidates[c].ambiguous[a];

          variance += candidates[c].weight * entry->probability * (1 - entry->probability) * entry->area * entry->area;
        }
    }
  *area_m = mean;
  tally->m11_decision = 1.645 * sqrt (variance);
  tally->m11_detection = 3.29 * sqrt (variance);
  return sqrt (variance);
}

/* Whether S22 stands out of its own uncertainty, spread between the fits included (decision limit as for M11). */
static gboolean
sees_s22 (const BtCandidate *candidates, gsize n)
{
  double mean = 0, variance = 0, s, m;

  for (gsize c = 0; c < n; c++)
    {
      bt_candidate_expected (&candidates[c], &s, &m);
      mean += candidates[c].weight * s;
    }
  for (gsize c = 0; c < n; c++)
    {
      bt_candidate_expected (&candidates[c], &s, &m);
      variance += candidates[c].weight * (candidates[c].var_ss + (s - mean) * (s - mean));
    }
  return mean > 1.645 * sqrt (variance);
}

void
bt_fraction_tally (BtTally *tally, const BtCandidate *candidates, gsize n, const BtPrepared *prepared)
{
  BtFraction *fraction = &tally->fraction;
  g_autofree double *draws = NULL;
  double level = tally->recipe->level, mean, variance, area_m, mean_draw = 0, square_draw = 0;

  *fraction = (BtFraction){ NAN, NAN, NAN, NAN, level, BT_BOUND_NONE };
  tally->m11_decision = tally->m11_detection = NAN;
  tally->verdict = BT_VERDICT_NOT_JUDGED;
  tally->conformance = tally->acceptance_limit = tally->refusal_limit = NAN;
  if (n == 0 || prepared->n_in_group[BT_S22] == 0 || prepared->n_in_group[BT_M11] == 0)
    return;
  mean = average_fractions (tally, candidates, n);
  detection_limits (tally, candidates, n, &area_m);
  /* Neither kind of tube is seen: any number would be invented. */
  if (area_m < tally->m11_decision && !sees_s22 (candidates, n))
    {
      for (guint t = 0; t < tally->n_tails; t++)
        {
          tally->tails[t].fraction = tally->tails[t].fraction_u = NAN;
          tally->ensembles[t].fraction = tally->ensembles[t].fraction_u = NAN;
        }
      for (guint m = 0; m < BT_N_MODELS; m++)
        tally->models[m].fraction = tally->models[m].fraction_u = NAN;
      return;
    }
  variance = fill_budget (tally, candidates, n, mean);

  draws = g_new (double, DRAWS);
  draw_fractions (draws, candidates, n, tally->recipe);
  for (gsize d = 0; d < DRAWS; d++)
    {
      mean_draw += draws[d] / DRAWS;
      square_draw += draws[d] * draws[d] / DRAWS;
    }
  fraction->value = CLAMP (mean, 0, 1);
  /* Far from the ends both agree; near them the drawn spread knows that a fraction ends at 1. */
  fraction->u = sqrt (fmin (variance, fmax (1e-12, square_draw - mean_draw * mean_draw)));
  /* The lines are shares of what is stated: first order gives their proportions, the draws their sum. */
  for (guint b = 0; b < tally->budget->len && variance > 0; b++)
    g_array_index (tally->budget, BtBudgetLine, b).u *= fraction->u / sqrt (variance);
  if (area_m < tally->m11_decision)
    {
      fraction->bound = BT_BOUND_LOWER;
      fraction->low = quantile (draws, DRAWS, 1 - level);
      fraction->high = 1;
    }
  else
    {
      fraction->bound = BT_BOUND_TWO_SIDED;
      fraction->low = quantile (draws, DRAWS, (1 - level) / 2);
      fraction->high = quantile (draws, DRAWS, (1 + level) / 2);
    }
  judge (tally, draws);
}
