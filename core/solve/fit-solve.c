/* Solving: from the given start, and from others where it is asked for and the first did not do. */
#include "fit-private.h"

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "random-private.h"

BtSolveState
bt_fit_run (BtFitWork *work, const BtFitOptions *options, GCancellable *cancellable, double *z)
{
  work->lm.cancellable = cancellable;
  work->lm.max_iterations = options->max_iterations > 0 ? (int)options->max_iterations : 200;
  work->lm.tolerance = options->tolerance > 0 ? options->tolerance : 1e-10;
  return bt_lm_run (&work->lm, z);
}

/* Another start: around the given one and around the best so far by turns; the later, the farther. */
static void
draw_start (const BtFitMap *map, BtRandom *random, guint number, const double *from, const double *best, double *z)
{
  const double *centre = number % 2 == 1 ? from : best;

  for (guint k = 0; k < map->n_free; k++)
    {
      const double width = map->high[k] - map->low[k], u = 2 * bt_random_uniform (random) - 1;
      double reach = 0.5 * fabs (centre[k]);

      if (isfinite (width))
        reach = fmin (reach, width / 4);
      z[k] = fmin (fmax (centre[k] + u * reach, map->low[k]), map->high[k]);
    }
}

static void
solve_from_many (BtFitWork *work, const BtFitOptions *options, GCancellable *cancellable, double *best, guint *n_starts,
                 guint *n_reached, BtSolveState *state)
{
  const BtFitMap *map = work->map;
  const gsize bytes = sizeof (double) * map->n_free;
  const guint most = MAX (options->starts, 1);
  const double freedom = fmax (1, (double)work->points->n - map->n_free);
  g_autofree double *from = g_memdup2 (best, bytes), *z = g_new (double, map->n_free + 1), *costs = g_new (double, most);
  double best_cost = INFINITY;
  guint iterations = 0;

  for (guint i = 0; i < most; i++)
    {
      BtRandom random = bt_random_new (options->seed, i);
      BtSolveState now;

      if (i == 0 && bytes > 0)
        memcpy (z, from, bytes);
      else if (i > 0)
        draw_start (map, &random, i, from, best, z);
      work->lm.hopeless_above = i > 0 ? best_cost : 0;
      now = bt_fit_run (work, options, cancellable, z);
      iterations += (guint)work->lm.iterations;
      (*n_starts)++;
      costs[i] = isfinite (work->lm.now.cost) ? work->lm.now.cost : INFINITY;
      if (i == 0 || costs[i] < best_cost)
        {
          best_cost = costs[i];
          *state = now;
          memcpy (best, z, bytes);
        }
      bt_fit_tell (work->fit, (double)(i + 1) / most);
      if (now == BT_SOLVE_CANCELLED)
        break;
      if (options->good_enough > 0 && *state == BT_SOLVE_CONVERGED && best_cost <= options->good_enough * freedom)
        break;
    }
  for (guint i = 0; i < *n_starts; i++)
    *n_reached += costs[i] <= 1.01 * best_cost;
  /* The system at the best point, where another start came last. */
  work->lm.hopeless_above = 0;
  if (*n_starts > 1)
    {
      work->lm.max_iterations = 1;
      bt_lm_run (&work->lm, best);
      work->lm.state = *state;
    }
  work->lm.iterations = (int)iterations;
}

BtFitResult *
bt_fit_solve (BtFit *self, const BtFitOptions *options, GCancellable *cancellable, GError **error)
{
  static const BtFitOptions usual = BT_FIT_OPTIONS_INIT;
  g_autoptr (BtFitPoints) points = NULL;
  g_autoptr (BtFitMap) map = NULL;
  g_autoptr (BtFitWork) work = NULL;
  g_autofree double *z = NULL, *full = NULL;
  BtFitResult *result;
  BtSolveState state = BT_SOLVE_CONVERGED;
  guint n_starts = 0, n_reached = 0;

  if (options == NULL)
    options = &usual;
  if (g_cancellable_set_error_if_cancelled (cancellable, error))
    return NULL;
  points = bt_fit_points_new (self);
  map = bt_fit_map_new (self);
  if (points->n == 0 || self->parts->len == 0)
    {
      g_set_error_literal (error, G_IO_ERROR, G_IO_ERROR_INVALID_DATA,
                           points->n == 0 ? _ ("The fit has no points: all are masked or without a finite value; unmask some.")
                                          : _ ("The fit has no shapes; add one."));
      return NULL;
    }
  work = bt_fit_work_new (self, points, map);
  z = g_new (double, map->n_free + 1);
  full = g_new (double, map->n_full);
  for (guint j = 0; j < map->n_full; j++)
    full[j] = bt_fit_parameter (self, j)->start;
  bt_fit_map_reduce (map, full, z);
  solve_from_many (work, options, cancellable, z, &n_starts, &n_reached, &state);
  if (!isfinite (work->lm.now.cost))
    {
      g_set_error_literal (
          error, G_IO_ERROR, G_IO_ERROR_INVALID_DATA,
          _ ("The fit cannot begin: with its starting values the model is not a number somewhere; change them, "
             "or mask the points where it is not."));
      return NULL;
    }
  result = bt_fit_result_new (work, options, z);
  result->n_starts = n_starts;
  result->n_reached = n_reached;
  return result;
}
