/* Groups against the ensemble: both as candidates for the fraction, weighed by one criterion. */
#include "fraction.h"

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

static const struct { const char *name; const char *title; } models[BT_N_MODELS] = {
  [BT_MODEL_GROUPS] = { "groups", N_ ("groups of bands") },
  [BT_MODEL_ENSEMBLE] = { "ensemble", N_ ("ensemble of tubes") },
};

const char *
bt_model_name (BtModelKind model)
{
  g_return_val_if_fail (model < BT_N_MODELS, NULL);
  return models[model].name;
}

const char *
bt_model_title (BtModelKind model)
{
  g_return_val_if_fail (model < BT_N_MODELS, NULL);
  return _ (models[model].title);
}

/* Independent points among those of the ensemble. */
static double
effective_points (const BtEnsembles *e)
{
  double sum = 0;

  for (gsize i = 0; i < e->data.n; i++)
    sum += (e->noise[i] * e->noise[i] + e->structure * e->structure) / (e->sigma[i] * e->sigma[i]);
  return sum;
}

static void
noise_part (BtCandidate *candidate, const BtEnsembles *e, const BtEnsembleFit *fit, const double *gs, const double *gm)
{
  g_autofree double *residual = g_new (double, e->data.n), *jacobian = g_new (double, e->data.n * fit->p);
  const BtLinear linear = { e->data.n, fit->p, fit->covariance, jacobian };

  bt_ensemble_fit_residual (fit, &e->data, residual, jacobian);
  bt_candidate_take_noise (candidate, &linear, e->noise, e->sigma, gs, gm);
}

void
bt_candidate_init_ensemble (BtCandidate *candidate, const BtEnsembles *e, guint tail, const BtPrepared *prepared)
{
  const BtEnsembleFit *fit = e->fits[tail];
  g_autofree double *gs = g_new (double, fit->p), *gm = g_new (double, fit->p), *gf = g_new (double, fit->p);
  const double k = bt_ensemble_fit_parameters (fit), points = effective_points (e);
  double sum;

  *candidate = (BtCandidate){ .model = BT_MODEL_ENSEMBLE, .tail = tail, .n_steps = fit->n_steps };
  candidate->criterion = fit->chi2 + fit->prior_chi2 + 2 * k;
  candidate->scale = fmax (1, fit->chi2 / fmax (points - k, points / 6));
  candidate->area_s = bt_ensemble_fit_area (fit, BT_S22, gs);
  candidate->area_m = bt_ensemble_fit_area (fit, BT_M11, gm);
  candidate->var_ss = candidate->scale * bt_ensemble_fit_covariance_of (fit, gs, gs);
  candidate->var_mm = candidate->scale * bt_ensemble_fit_covariance_of (fit, gm, gm);
  candidate->var_sm = candidate->scale * bt_ensemble_fit_covariance_of (fit, gs, gm);
  noise_part (candidate, e, fit, gs, gm);
  sum = candidate->area_s + candidate->area_m;
  for (gsize j = 0; j < fit->p; j++)
    gf[j] = (gs[j] * candidate->area_m - gm[j] * candidate->area_s) / (sum * sum);
  candidate->step_share = bt_step_share (fit->covariance, fit->p, fit->first_common - fit->n_fringe - fit->n_steps, fit->n_steps, gf);
  if (prepared->n_in_group[BT_S11] > 0)
    candidate->doping_u = bt_doping_u (exp (fit->x[fit->first_common + BT_ENSEMBLE_LOG_S11]), 1);
  /* As with the groups: an area below zero by more than its uncertainty says that the uncertainty is too small. */
  if (candidate->area_m < 0 && candidate->area_m * candidate->area_m > candidate->var_mm)
    candidate->var_mm = candidate->area_m * candidate->area_m;
}

/* The criterion of a group fit where the points weigh as in the ensemble. */
static double
group_criterion (const BtFilmFit *fit, const BtEnsembles *e)
{
  g_autofree double *model = g_new (double, e->data.n);
  double chi2 = 0;

  bt_film_fit_eval (fit, &e->data, e->energy_ev, e->data.n, model, NULL);
  for (gsize i = 0; i < e->data.n; i++)
    {
      double z = (model[i] - e->absorbance[i]) / e->sigma[i];

      chi2 += z * z;
    }
  return chi2 + 2 * bt_fit_parameters (fit);
}

static double
misfit_of (const BtEnsembles *e, const BtEnsembleFit *fit)
{
  g_autofree double *residual = g_new (double, e->data.n);
  double squares = 0;

  bt_ensemble_fit_residual (fit, &e->data, residual, NULL);
  for (gsize i = 0; i < e->data.n; i++)
    squares += residual[i] * residual[i] / (e->noise[i] * e->noise[i]);
  return sqrt (squares / (double) e->data.n);
}

static void
fill_ensembles (BtTally *tally, const BtEnsembles *e, const GArray *candidates)
{
  BtModelTally *model = &tally->models[BT_MODEL_ENSEMBLE];
  const BtEnsembleFit *best = NULL;
  double best_weight = -1;

  for (guint c = 0; c < candidates->len; c++)
    {
      const BtCandidate *candidate = &g_array_index (candidates, BtCandidate, c);
      const BtEnsembleFit *fit;
      BtTailTally *tail;
      gsize offset;

      if (candidate->model != BT_MODEL_ENSEMBLE)
        continue;
      fit = e->fits[candidate->tail];
      tail = &tally->ensembles[candidate->tail];
      offset = fit->first_common - fit->n_fringe - fit->n_steps - 1;
      tail->kind = tail->tail.kind = fit->tail;
      tail->tail.height = fit->x[0];
      for (gsize s = 1; s < offset; s++)
        tail->tail.shape[s - 1] = fit->x[s];
      tail->tail.offset = fit->x[offset];
      tail->aic = candidate->criterion;
      tail->misfit = misfit_of (e, fit);
      tail->n_parameters = (guint) lround (bt_ensemble_fit_parameters (fit));
      tail->state = fit->state;
      if (tail->weight > best_weight)
        {
          best_weight = tail->weight;
          best = fit;
        }
    }
  if (best == NULL)
    return;
  model->misfit = misfit_of (e, best);
  model->structure = e->structure;
  model->strain = best->prior_chi2;
  model->n_points = e->data.n;
  model->n_parameters = bt_ensemble_fit_parameters (best);
  model->diameter = (BtDiameterWindow){ best->x[best->first_common + BT_ENSEMBLE_MEAN], exp (best->x[best->first_common + BT_ENSEMBLE_LOG_SPREAD]) };
  model->diameter_u_nm = sqrt (best->covariance[(best->first_common + BT_ENSEMBLE_MEAN) * (best->p + 1)]);
}

void
bt_candidates_weigh_models (BtTally *tally, GArray *candidates, const BtEnsembles *ensembles, const BtPrepared *prepared)
{
  const guint n_groups = candidates->len;
  double least = INFINITY, sum = 0, sums[BT_N_MODELS] = { 0 };

  tally->models[BT_MODEL_GROUPS].weight = 1;
  if (ensembles == NULL)
    return;
  for (guint t = 0; t < ensembles->n_tails; t++)
    {
      BtCandidate candidate;

      if (ensembles->fits[t]->state == BT_SOLVE_SINGULAR)
        continue;
      bt_candidate_init_ensemble (&candidate, ensembles, t, prepared);
      if (isfinite (candidate.criterion) && candidate.area_s > 0)
        g_array_append_val (candidates, candidate);
    }
  if (candidates->len == n_groups)
    return;
  for (guint c = 0; c < candidates->len; c++)
    {
      BtCandidate *candidate = &g_array_index (candidates, BtCandidate, c);

      if (candidate->model == BT_MODEL_GROUPS)
        candidate->criterion = group_criterion (candidate->fit, ensembles);
      least = fmin (least, candidate->criterion);
    }
  for (guint c = 0; c < candidates->len; c++)
    {
      BtCandidate *candidate = &g_array_index (candidates, BtCandidate, c);

      candidate->weight = exp (-(candidate->criterion - least) / 2);
      sum += candidate->weight;
    }
  for (guint c = 0; c < candidates->len; c++)
    {
      BtCandidate *candidate = &g_array_index (candidates, BtCandidate, c);

      candidate->weight /= sum;
      sums[candidate->model] += candidate->weight;
    }
  for (guint m = 0; m < BT_N_MODELS; m++)
    tally->models[m].weight = sums[m];
  for (guint c = 0; c < candidates->len; c++)
    {
      const BtCandidate *candidate = &g_array_index (candidates, BtCandidate, c);

      if (candidate->model == BT_MODEL_ENSEMBLE && sums[BT_MODEL_ENSEMBLE] > 0)
        tally->ensembles[candidate->tail].weight = candidate->weight / sums[BT_MODEL_ENSEMBLE];
    }
  fill_ensembles (tally, ensembles, candidates);
}
