/* Ensemble fits of a film, one a tail. */
#include "ensembles.h"

#include <math.h>
#include <string.h>

/* Lines of single tubes are wider than 40 meV: so many points over the usual range show all of them. */
#define MAX_POINTS 350
/* Smooth waves that photometers leave in any reading, as a share of the mean absorbance (common practice). */
#define LEAST_STRUCTURE 8e-4
#define STRUCTURE_FACTOR 2.5
/* Rounds of fitting and learning the structure that is left. */
#define ROUNDS 3
/* A tail so much worse than the best one cannot come back: its weight is below e^-50. */
#define HOPELESS 100
/* What the priors of a sound population cost at most: 10 to 40 in forecast films. */
#define SUSPECT 60

/* Averages neighbours until there are few enough points. */
static void
take_points (BtEnsembles *e, const BtPrepared *prepared)
{
  const BtFilmData *from = &prepared->data;
  const gsize step = (from->n + MAX_POINTS - 1) / MAX_POINTS;
  gsize n = 0;

  e->energy_ev = g_new (double, from->n);
  e->absorbance = g_new (double, from->n);
  e->noise = g_new (double, from->n);
  e->sigma = g_new (double, from->n);
  e->per_length = g_new (double, from->n);
  for (gsize i = 0; i < from->n; i += step)
    {
      const gsize count = MIN (step, from->n - i);
      double energy = 0, absorbance = 0, variance = 0, per_length = 0;

      for (gsize k = i; k < i + count; k++)
        {
          energy += from->energy_ev[k];
          absorbance += from->absorbance[k];
          variance += prepared->noise[k] * prepared->noise[k];
          per_length += prepared->per_length[k];
        }
      e->energy_ev[n] = energy / (double) count;
      e->absorbance[n] = absorbance / (double) count;
      e->noise[n] = sqrt (variance) / (double) count;
      e->per_length[n] = fmax (1, per_length / (double) (count * count));
      n++;
    }
  e->data = *from;
  e->data.n = n;
  e->data.energy_ev = e->energy_ev;
  e->data.absorbance = e->absorbance;
  e->data.sigma = e->sigma;
}

static void
set_structure (BtEnsembles *e, double structure)
{
  e->structure = structure;
  for (gsize i = 0; i < e->data.n; i++)
    e->sigma[i] = sqrt (e->noise[i] * e->noise[i] + e->per_length[i] * structure * structure);
}

/* What a fit leaves beyond the noise, corrected for what its parameters soaked up. */
static double
structure_of (const BtEnsembles *e, const BtEnsembleFit *fit)
{
  const gsize n = e->data.n;
  const double k = fmin (bt_ensemble_fit_parameters (fit), 0.7 * (double) n);
  g_autofree double *residual = g_new (double, n);
  double squares = 0, noise = 0;

  bt_ensemble_fit_residual (fit, &e->data, residual, NULL);
  for (gsize i = 0; i < n; i++)
    {
      squares += residual[i] * residual[i];
      noise += e->noise[i] * e->noise[i];
    }
  return STRUCTURE_FACTOR * sqrt (fmax (0, squares - noise * (1 - k / (double) n)) / ((double) n - k));
}

/* A fit's standing: what is minimised. The tails have as many open parameters, but for one. */
static double
cost (const BtEnsembleFit *fit)
{
  return fit->chi2 + fit->prior_chi2;
}

/* One tail's fit, in a thread of its own. */
typedef struct { BtEnsembles *ensembles; guint tail; GCancellable *cancellable; } TailTask;

static gpointer
run_tail (gpointer data)
{
  TailTask *task = data;

  bt_ensemble_fit_run (task->ensembles->fits[task->tail], &task->ensembles->data, task->cancellable);
  return NULL;
}

/* The tails do not know of each other, so the outcome is the same however many threads there are. */
static gboolean
run_tails (BtEnsembles *e, const BtPrepared *prepared, GPtrArray *const group_fits[], const gboolean *dropped, GCancellable *cancellable)
{
  TailTask tasks[BT_N_TAILS];
  GThread *threads[BT_N_TAILS];

  for (guint t = 0; t < e->n_tails; t++)
    {
      if (e->fits[t] == NULL)
        e->fits[t] = bt_ensemble_fit_new (&prepared->plan, g_ptr_array_index (group_fits[t], 0), &e->data);
      tasks[t] = (TailTask){ e, t, cancellable };
      threads[t] = dropped[t] ? NULL : g_thread_new ("ensemble", run_tail, &tasks[t]);
    }
  for (guint t = 0; t < e->n_tails; t++)
    if (threads[t] != NULL)
      g_thread_join (threads[t]);
  return !g_cancellable_is_cancelled (cancellable);
}

/* The tail with the least cost. */
static guint
find_best (const BtEnsembles *e)
{
  guint best = 0;

  for (guint t = 1; t < e->n_tails; t++)
    if (cost (e->fits[t]) < cost (e->fits[best]))
      best = t;
  return best;
}

/* A population that had to be bent far from what is known beforehand is a wrong minimum, or a wrong tail's attempt to live with the film: the other tails
 * try again from there, and the best one from theirs. */
static void
try_again (BtEnsembles *e, const BtPrepared *prepared, GPtrArray *const group_fits[], GCancellable *cancellable)
{
  const guint best = find_best (e);

  if (e->n_tails < 2 || e->fits[best]->prior_chi2 < SUSPECT)
    return;
  for (guint t = 0; t < e->n_tails; t++)
    {
      const guint from = t == best ? (best + 1) % e->n_tails : best;
      BtEnsembleFit *trial = bt_ensemble_fit_new (&prepared->plan, g_ptr_array_index (group_fits[t], 0), &e->data);

      bt_ensemble_fit_start_from (trial, e->fits[from]);
      if (bt_ensemble_fit_run (trial, &e->data, cancellable) != BT_SOLVE_CANCELLED && cost (trial) < cost (e->fits[t]))
        {
          BtEnsembleFit *worse = e->fits[t];

          e->fits[t] = trial;
          trial = worse;
        }
      bt_ensemble_fit_free (trial);
    }
}

BtEnsembles *
bt_ensembles_fit (const BtPrepared *prepared, GPtrArray *const group_fits[], guint n_tails, GCancellable *cancellable)
{
  g_autoptr (BtEnsembles) e = g_new0 (BtEnsembles, 1);
  gboolean dropped[BT_N_TAILS] = { FALSE };
  double level = 0, least;

  if (prepared->n_in_group[BT_S22] == 0 || prepared->n_in_group[BT_M11] == 0)
    return NULL;
  take_points (e, prepared);
  for (gsize i = 0; i < e->data.n; i++)
    level += fabs (e->absorbance[i]) / (double) e->data.n;
  least = LEAST_STRUCTURE * level;
  set_structure (e, least);
  e->n_tails = n_tails;
  for (int round = 0; round < ROUNDS; round++)
    {
      const BtEnsembleFit *best;
      double structure;

      if (!run_tails (e, prepared, group_fits, dropped, cancellable))
        return NULL;
      if (round == 0)
        try_again (e, prepared, group_fits, cancellable);
      best = e->fits[find_best (e)];
      structure = fmax (least, structure_of (e, best));
      for (guint t = 0; t < n_tails; t++)
        dropped[t] = cost (e->fits[t]) > cost (best) + HOPELESS;
      if (round + 1 == ROUNDS || (structure > 0.8 * e->structure && structure < 1.25 * e->structure))
        break;
      set_structure (e, structure);
    }
  return g_steal_pointer (&e);
}

void
bt_ensembles_free (BtEnsembles *e)
{
  if (e == NULL)
    return;
  for (guint t = 0; t < BT_N_TAILS; t++)
    bt_ensemble_fit_free (e->fits[t]);
  g_free (e->energy_ev);
  g_free (e->absorbance);
  g_free (e->noise);
  g_free (e->sigma);
  g_free (e->per_length);
  g_free (e);
}
