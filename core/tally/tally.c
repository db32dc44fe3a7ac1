/* A tally: prepares the film, fits every tail of the recipe, and puts the outcome together. */
#include <bandtally/tally.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "assemble.h"

/* Fits whose AICc lies further than this above the best are not averaged: their weight is below 1e-4 of it. */
#define AVERAGED_DELTA 18.0

G_DEFINE_QUARK (bt-tally-error-quark, bt_tally_error)
G_DEFINE_BOXED_TYPE (BtTally, bt_tally, bt_tally_ref, bt_tally_unref)

static void
tally_clear (BtTally *tally)
{
  g_free (tally->energy_ev);
  g_free (tally->absorbance);
  g_free (tally->noise);
  g_free (tally->fit);
  g_free (tally->tail_curve);
  bt_curve_free (tally->curve);
  g_array_unref (tally->bands);
  g_array_unref (tally->budget);
  g_array_unref (tally->readings);
  g_ptr_array_unref (tally->flags);
  g_free (tally->decision_rule);
  bt_recipe_free (tally->recipe);
}

BtTally *
bt_tally_ref (BtTally *tally)
{
  return g_atomic_rc_box_acquire (tally);
}

void
bt_tally_unref (BtTally *tally)
{
  if (tally != NULL)
    g_atomic_rc_box_release_full (tally, (GDestroyNotify) tally_clear);
}

static BtTally *
tally_new (const BtPrepared *prepared, const BtRecipe *recipe)
{
  BtTally *tally = g_atomic_rc_box_new0 (BtTally);

  tally->bands = g_array_new (FALSE, TRUE, sizeof (BtBand));
  tally->budget = g_array_new (FALSE, TRUE, sizeof (BtBudgetLine));
  tally->readings = g_array_new (FALSE, TRUE, sizeof (BtReading));
  tally->flags = bt_flags_new ();
  tally->recipe = bt_recipe_copy (recipe);
  tally->recipe->window = prepared->plan.window;
  tally->plan = prepared->plan;
  tally->range = prepared->range;
  tally->window_proposed = prepared->window_proposed;
  tally->tail_share_at_s22 = tally->s22_m11_correlation = NAN;
  tally->m11_decision = tally->m11_detection = NAN;
  tally->diameter = (BtDiameterWindow){ NAN, NAN };
  tally->diameter_u_nm = NAN;
  tally->fraction = (BtFraction){ NAN, NAN, NAN, NAN, recipe->level, BT_BOUND_NONE };
  tally->conformance = tally->acceptance_limit = tally->refusal_limit = NAN;
  for (guint m = 0; m < BT_N_MODELS; m++)
    tally->models[m] = (BtModelTally){ 0, NAN, NAN, NAN, NAN, NAN, NAN, 0, { NAN, NAN }, NAN };
  for (guint t = 0; t < BT_N_TAILS; t++)
    tally->ensembles[t].aic = tally->ensembles[t].fraction = tally->ensembles[t].fraction_u = tally->ensembles[t].misfit = NAN;
  for (guint g = 0; g < BT_N_GROUPS; g++)
    tally->groups[g] = (BtGroupTally){ 0, NAN, NAN, NAN, NAN, NAN, NAN, NAN, NAN };
  return tally;
}

static void
state_rule (BtTally *tally)
{
  g_free (tally->decision_rule);
  if (isnan (tally->recipe->limit))
    tally->decision_rule = g_strdup (_ ("No limit was set, so the film is not judged."));
  else if (tally->fraction.bound == BT_BOUND_NONE)
    tally->decision_rule = g_strdup_printf (_ ("There is no fraction to hold against the limit of %.1f %%."), 100 * tally->recipe->limit);
  else
    tally->decision_rule
      = g_strdup_printf (_ ("Guarded acceptance (JCGM 106:2012): accepted where the probability that the fraction is at least %.1f %% is 95 %% "
                            "or more, refused where it is 5 %% or less, undecided between. Here it is %.1f %%."),
                         100 * tally->recipe->limit, 100 * tally->conformance);
}

static gboolean
any_band (const guint n_in_group[BT_N_GROUPS])
{
  for (guint g = 0; g < BT_N_GROUPS; g++)
    if (n_in_group[g] > 0)
      return TRUE;
  return FALSE;
}

static void
fill_tail (BtTailTally *out, const BtFilmFit *best, const BtPrepared *prepared)
{
  g_autofree double *residual = g_new (double, prepared->data.n);
  double sum = 0;
  gsize offset = bt_film_fit_offset (best);

  bt_film_fit_residual (best, &prepared->data, residual, NULL);
  for (gsize i = 0; i < prepared->data.n; i++)
    sum += residual[i] * residual[i] / (prepared->noise[i] * prepared->noise[i]);
  out->kind = best->tail;
  out->tail.kind = best->tail;
  out->tail.height = best->x[0];
  for (gsize s = 1; s < offset; s++)
    out->tail.shape[s - 1] = best->x[s];
  out->tail.offset = best->x[offset];
  out->aic = best->aic;
  out->fraction = out->fraction_u = NAN;
  out->misfit = sqrt (sum / (double) prepared->data.n);
  out->n_parameters = (guint) best->p;
  out->state = best->state;
}

/* Akaike weights over all fits of all tails, and a candidate for each that counts; the best of each tail always counts. */
static GArray *
weigh_fits (BtTally *tally, GPtrArray *const fits[], const BtPrepared *prepared)
{
  GArray *candidates = g_array_new (FALSE, TRUE, sizeof (BtCandidate));
  double best = INFINITY, sum = 0;

  for (guint t = 0; t < tally->n_tails; t++)
    best = fmin (best, ((BtFilmFit *) g_ptr_array_index (fits[t], 0))->aic);
  for (guint t = 0; t < tally->n_tails; t++)
    for (guint f = 0; f < fits[t]->len; f++)
      {
        const BtFilmFit *fit = g_ptr_array_index (fits[t], f);
        BtCandidate candidate = { 0 };

        if (f > 0 && !(fit->aic - best < AVERAGED_DELTA))
          continue;
        bt_candidate_init (&candidate, fit, prepared);
        candidate.tail = t;
        candidate.weight = exp (-(fit->aic - best) / 2);
        sum += candidate.weight;
        g_array_append_val (candidates, candidate);
      }
  for (guint c = 0; c < candidates->len; c++)
    {
      BtCandidate *candidate = &g_array_index (candidates, BtCandidate, c);

      candidate->weight /= sum;
      tally->tails[candidate->tail].weight += candidate->weight;
    }
  tally->best = 0;
  for (guint t = 1; t < tally->n_tails; t++)
    if (tally->tails[t].weight > tally->tails[tally->best].weight)
      tally->best = t;
  return candidates;
}

static const BtCandidate *
best_candidate (const BtTally *tally, const GArray *candidates)
{
  const BtCandidate *best = NULL;

  for (guint c = 0; c < candidates->len; c++)
    {
      const BtCandidate *candidate = &g_array_index (candidates, BtCandidate, c);

      if (candidate->tail == tally->best && (best == NULL || candidate->fit->aic < best->fit->aic))
        best = candidate;
    }
  return best;
}

static void
free_fits (GPtrArray **fits, guint n)
{
  for (guint t = 0; t < n; t++)
    g_clear_pointer (&fits[t], g_ptr_array_unref);
}

/* Learns the amplitude of the structure from the plasmon tail's (or the first tail's) best fit, in two rounds. */
static gboolean
learn_structure (BtPrepared *prepared, const BtRecipe *recipe, GCancellable *cancellable, GError **error)
{
  BtTailKind tail = BT_TAIL_PLASMON;

  while (!(recipe->tails & (1u << tail)))
    tail++;
  for (int round = 0; round < 2; round++)
    {
      g_autoptr (GPtrArray) fits = bt_select_bands (prepared, recipe, tail, cancellable, error);

      if (fits == NULL)
        return FALSE;
      bt_prepared_set_structure (prepared, fmax (bt_fit_structure (g_ptr_array_index (fits, 0), prepared), prepared->least_structure));
    }
  return TRUE;
}

/* The previous tally's best fit, run on from where it stood. */
static BtFilmFit *
follow_previous (BtPrepared *prepared, const BtRecipe *recipe, const BtTally *previous, GCancellable *cancellable)
{
  const BtTailTally *tail = &previous->tails[previous->best];
  guint n_in_group[BT_N_GROUPS] = { 0 }, first[BT_N_GROUPS], sum = 0;
  g_autoptr (BtFilmFit) start = NULL;
  gsize offset;

  for (guint b = 0; b < previous->bands->len; b++)
    n_in_group[g_array_index (previous->bands, BtBand, b).group]++;
  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      if (prepared->n_in_group[g] == 0)
        n_in_group[g] = 0;
      first[g] = sum;
      sum += n_in_group[g];
    }
  bt_prepared_set_structure (prepared, previous->structure);
  start = bt_film_fit_new (tail->kind, &prepared->plan, n_in_group, &prepared->data);
  offset = bt_film_fit_offset (start);
  start->x[0] = tail->tail.height;
  for (gsize s = 1; s < offset; s++)
    start->x[s] = tail->tail.shape[s - 1];
  start->x[offset] = tail->tail.offset;
  for (guint b = 0; b < previous->bands->len; b++)
    {
      const BtBand *band = &g_array_index (previous->bands, BtBand, b);
      gsize j;

      if (n_in_group[band->group] == 0 || band->index >= n_in_group[band->group])
        continue;
      j = bt_film_fit_band (start, first[band->group] + band->index);
      start->x[j] = band->height;
      start->x[j + 1] = band->centre_ev;
      start->x[j + 2] = band->fwhm_ev;
      start->x[bt_film_fit_wings (start)] = band->wings;
      if (band->group <= BT_S22)
        start->x[bt_film_fit_sideband (start)] = band->sideband;
    }
  return bt_fit_bands (prepared, recipe, tail->kind, n_in_group, start, cancellable);
}

/* One tail's fits, in a thread of its own. */
typedef struct {
  const BtPrepared *prepared;
  const BtRecipe *recipe;
  BtTailKind kind;
  GCancellable *cancellable;
  GPtrArray *fits;
  GError *error;
} TailTask;

static gpointer
run_tail (gpointer data)
{
  TailTask *task = data;

  task->fits = bt_select_bands (task->prepared, task->recipe, task->kind, task->cancellable, &task->error);
  return NULL;
}

/* Fits every tail; fits[t] is sorted, the best first. FALSE with @error set. */
static gboolean
fit_tails (BtTally *tally, BtPrepared *prepared, BtEffort effort, const BtTally *previous, GPtrArray **fits, BtProgressFunc progress,
           gpointer progress_data, GCancellable *cancellable, GError **error)
{
  TailTask tasks[BT_N_TAILS];
  GThread *threads[BT_N_TAILS];
  gboolean good = TRUE;
  guint n = 0;

  if (effort == BT_EFFORT_QUICK && previous != NULL && previous->bands->len > 0)
    {
      BtFilmFit *fit = follow_previous (prepared, tally->recipe, previous, cancellable);

      fits[0] = g_ptr_array_new_with_free_func ((GDestroyNotify) bt_film_fit_free);
      g_ptr_array_add (fits[0], fit);
      tally->n_tails = 1;
      if (fit->state == BT_SOLVE_CANCELLED)
        g_set_error_literal (error, BT_TALLY_ERROR, BT_TALLY_ERROR_CANCELLED, _ ("The fit was cancelled."));
      return fit->state != BT_SOLVE_CANCELLED;
    }
  if (!learn_structure (prepared, tally->recipe, cancellable, error))
    return FALSE;
  if (progress != NULL)
    progress (0.4, progress_data);
  /* The tails do not know of each other, so the outcome is the same however many threads there are. */
  for (guint kind = 0; kind < BT_N_TAILS; kind++)
    if (tally->recipe->tails & (1u << kind))
      {
        tasks[n] = (TailTask){ prepared, tally->recipe, (BtTailKind) kind, cancellable, NULL, NULL };
        threads[n] = g_thread_new ("tail", run_tail, &tasks[n]);
        n++;
      }
  for (guint t = 0; t < n; t++)
    {
      g_thread_join (threads[t]);
      fits[t] = tasks[t].fits;
      if (tasks[t].error != NULL && good)
        g_propagate_error (error, tasks[t].error);
      else
        g_clear_error (&tasks[t].error);
      good = good && fits[t] != NULL;
      if (progress != NULL)
        progress (0.4 + 0.5 * (t + 1) / n, progress_data);
    }
  tally->n_tails = n;
  return good;
}

/* Where the data leave two windows open the other one is fitted too. (transfer full): what to go on with: @tally, whose fraction then holds for both
 * windows, or the other window's where this one is refuted; %NULL with @error set where cancelled. Takes @tally. */
static BtTally *
consider_alternative (BtTally *tally, BtFilm *film, const BtRecipe *recipe, BtDiameterWindow window, GCancellable *cancellable, GError **error)
{
  BtRecipe *stated = bt_recipe_copy (recipe);
  BtTally *other;

  stated->window = window;
  other = bt_tally_film (film, stated, BT_EFFORT_FULL, NULL, NULL, NULL, cancellable, error);
  bt_recipe_free (stated);
  if (other != NULL && bt_tally_refutes (other, tally))
    {
      bt_tally_unref (tally);
      other->window_proposed = TRUE;
      return other;
    }
  if (other != NULL)
    bt_tally_admit_alternative (tally, other);
  else
    g_clear_pointer (&tally, bt_tally_unref);
  g_clear_pointer (&other, bt_tally_unref);
  return tally;
}

BtTally *
bt_tally_film (BtFilm *film, const BtRecipe *recipe, BtEffort effort, const BtTally *previous, BtProgressFunc progress,
               gpointer progress_data, GCancellable *cancellable, GError **error)
{
  g_autoptr (BtPrepared) prepared = NULL;
  BtTally *tally;
  GPtrArray *fits[BT_N_TAILS] = { NULL };
  g_autoptr (GArray) candidates = NULL;
  g_autoptr (BtEnsembles) ensembles = NULL;

  g_return_val_if_fail (BT_IS_FILM (film), NULL);
  if (!bt_recipe_check (recipe, error))
    return NULL;
  prepared = bt_prepare (film, recipe, effort == BT_EFFORT_QUICK ? previous : NULL, error);
  if (prepared == NULL)
    return NULL;
  tally = tally_new (prepared, recipe);
  if (any_band (prepared->n_in_group))
    {
      if (!fit_tails (tally, prepared, effort, previous, fits, progress, progress_data, cancellable, error))
        {
          free_fits (fits, BT_N_TAILS);
          bt_tally_unref (tally);
          return NULL;
        }
      for (guint t = 0; t < tally->n_tails; t++)
        fill_tail (&tally->tails[t], g_ptr_array_index (fits[t], 0), prepared);
      candidates = weigh_fits (tally, fits, prepared);
      /* What describes the bands; the ensemble comes in where the fraction is drawn. */
      bt_tally_fill_best (tally, best_candidate (tally, candidates), prepared);
      bt_tally_fill_groups (tally, (const BtCandidate *) (void *) candidates->data, candidates->len);
      /* Numbers held by hand are of the groups: then the groups alone decide. */
      if (effort == BT_EFFORT_FULL && recipe->held->len == 0)
        ensembles = bt_ensembles_fit (prepared, fits, tally->n_tails, cancellable);
      bt_candidates_weigh_models (tally, candidates, ensembles, prepared);
      tally->models[BT_MODEL_GROUPS].misfit = tally->tails[tally->best].misfit;
      tally->models[BT_MODEL_GROUPS].structure = prepared->structure;
      tally->models[BT_MODEL_GROUPS].n_parameters = tally->tails[tally->best].n_parameters;
      bt_fraction_tally (tally, (const BtCandidate *) (void *) candidates->data, candidates->len, prepared);
    }
  tally->curve = g_steal_pointer (&prepared->curve);
  bt_tally_fill_readings (tally, film, effort);
  prepared->curve = tally->curve;
  bt_tally_fill_flags (tally, film, prepared);
  prepared->curve = NULL;
  free_fits (fits, BT_N_TAILS);
  if (effort == BT_EFFORT_FULL && prepared->alternative.mean_nm > 0)
    tally = consider_alternative (tally, film, recipe, prepared->alternative, cancellable, error);
  if (tally == NULL)
    return NULL;
  state_rule (tally);
  if (progress != NULL)
    progress (1, progress_data);
  return tally;
}

const char *
bt_verdict_name (BtVerdict verdict)
{
  static const char *const names[] = { "not judged", "accepted", "refused", "undecided" };

  return names[verdict];
}

const char *
bt_verdict_title (BtVerdict verdict)
{
  static const char *const titles[] = { N_ ("not judged"), N_ ("accepted"), N_ ("refused"), N_ ("undecided") };

  return _ (titles[verdict]);
}

char *
bt_tally_answer (const BtTally *tally)
{
  const BtFraction *fraction = &tally->fraction;

  switch (fraction->bound)
    {
    case BT_BOUND_TWO_SIDED:
      return g_strdup_printf (_ ("%.1f %% semiconducting, %.1f to %.1f %% (%.0f %% confidence)"), 100 * fraction->value,
                              100 * fraction->low, 100 * fraction->high, 100 * fraction->level);
    case BT_BOUND_LOWER:
      return g_strdup_printf (_ ("at least %.1f %% semiconducting (%.0f %% confidence)"), 100 * fraction->low, 100 * fraction->level);
    case BT_BOUND_NONE:
    default:
      if (bt_flags_find (tally->flags, "no-s22") != NULL)
        return g_strdup (_ ("no fraction: S22 is not in the data"));
      if (bt_flags_find (tally->flags, "no-m11") != NULL)
        return g_strdup (_ ("no fraction: M11 is not in the data"));
      return g_strdup (_ ("no fraction: see the flags"));
    }
}

void
bt_band_eval (const BtBand *band, const double *energy_ev, gsize n, double *out)
{
  for (gsize i = 0; i < n; i++)
    out[i] = band->height * bt_line_eval (energy_ev[i], band->centre_ev, band->fwhm_ev, band->wings, band->sideband);
}
