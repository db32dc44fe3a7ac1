/* Fits to resampled data: whole ones from where the best fit stands, or a few steps with its Jacobian. */
#include "fit-private.h"

#include <math.h>
#include <string.h>

#include "random-private.h"

/* A warm start stands within a few uncertainties of the minimum: little damping will do. */
#define WARM_DAMPING 1e-5
/* Steps with the best fit's Jacobian at most; and the promised gain of chi2 below which the next is not made. */
#define MOST_STEPS 8
#define ENOUGH 1e-4
/* What a step may promise at most, over the one before. */
#define SLOW 0.5

/* The best fit, shared by all workers and left alone by them. */
typedef struct
{
  BtFit *fit;
  const BtFitPoints *points;
  const BtFitMap *map;
  BtResampleKind kind;
  gboolean refit;
  guint block, n_resamples;
  guint64 seed;
  double scale;              /* of the noise, over the points' uncertainties */
  double *best;              /* n_free */
  double *fitted, *residual; /* of all points in use; the residuals over their uncertainties */
  /* The Jacobian in blocks, and the factor of its normal equations. */
  guint *n_columns, *index;
  double *columns, *factor, *column_scale;
  gsize stride;
  gboolean usable;
  double *out;
  GCancellable *cancellable;
  GThread *caller;
  gint next;
} Resample;

static void
draw (const Resample *all, guint number, double *y)
{
  const BtFitPoints *points = all->points;
  BtRandom random = bt_random_new (all->seed, number);
  const gsize n = points->n, length = MIN (all->block, n);

  memcpy (y, all->fitted, sizeof (double) * points->n_blocks * BT_BLOCK);
  if (all->kind == BT_RESAMPLE_NOISE)
    {
      for (gsize i = 0; i < n; i++)
        y[i] += all->scale * bt_random_normal (&random) / (points->weight * points->w[i]);
      return;
    }
  for (gsize i = 0; i < n;)
    {
      const gsize from = (gsize)(bt_random_uniform (&random) * (double)(n - length + 1));

      for (gsize k = 0; k < length && i < n; k++, i++)
        y[i] += all->scale * all->residual[from + k] / (points->weight * points->w[i]);
    }
}

/* J'r with the best fit's J, and the cost, at @z. */
static double
fixed_gradient (BtFitWork *work, const Resample *all, const double *z, double *gradient)
{
  const BtFitPoints *points = all->points;
  const BtFitMap *map = all->map;
  const gsize p = map->n_free;
  const double *columns = all->columns;
  const guint *index = all->index;
  double cost = 0;

  memset (gradient, 0, sizeof (double) * p);
  bt_fit_residuals (work, z, work->residual);
  for (gsize block = 0; block < points->n_blocks; block++)
    {
      double *r = work->residual + block * BT_BLOCK;
      const guint m = all->n_columns[block];

      cost += work->kernel->dot (r, r);
      for (guint c = 0; c < m; c++, columns += BT_BLOCK)
        gradient[*index++] += work->kernel->dot (columns, r);
    }
  for (gsize k = 0; k < p; k++)
    gradient[k] *= all->column_scale[k] * points->weight;
  for (guint j = 0; j < map->n_full; j++)
    {
      const BtFitParameter *parameter = bt_fit_parameter (all->fit, j);

      if (map->index[j] >= 0 && isfinite (parameter->prior_u))
        {
          const double r = (map->factor[j] * z[map->index[j]] + map->offset[j] - parameter->prior_mean) / parameter->prior_u;

          cost += r * r;
          gradient[map->index[j]] += r * map->factor[j] / parameter->prior_u;
        }
    }
  return cost;
}

/* FALSE where the steps do not settle inside the bounds. */
static gboolean
few_steps (BtFitWork *work, const Resample *all, double *z)
{
  const gsize p = all->map->n_free;
  double *step = work->lm.right, last = INFINITY, last_gain = INFINITY;

  for (int i = 0; i < MOST_STEPS; i++)
    {
      const double cost = fixed_gradient (work, all, z, step);
      double gain = 0;

      if (!(cost < last * (1 + 1e-9)))
        return FALSE;
      last = cost;
      memcpy (work->lm.bend, step, sizeof (double) * p);
      bt_cholesky_solve (all->factor, p, all->stride, step);
      for (gsize k = 0; k < p; k++)
        {
          gain += step[k] * work->lm.bend[k];
          z[k] -= step[k];
          if (!(z[k] > work->lm.low[k] && z[k] < work->lm.high[k]))
            return FALSE;
        }
      if (gain < ENOUGH)
        return TRUE;
      /* Along a curved valley the steps hardly shrink; a whole fit is then the shorter way. */
      if (gain > SLOW * last_gain)
        return FALSE;
      last_gain = gain;
    }
  return FALSE;
}

static gpointer
worker (gpointer data)
{
  static const BtFitOptions options = BT_FIT_OPTIONS_INIT;
  Resample *all = data;
  const gsize p = all->map->n_free, bytes = sizeof (double) * p;
  g_autoptr (BtFitWork) work = bt_fit_work_new (all->fit, all->points, all->map);
  g_autofree double *z = g_new (double, p + 1);
  double *y = g_aligned_alloc (all->points->n_blocks * BT_BLOCK, sizeof (double), 64);

  work->y = y;
  work->lm.damping = WARM_DAMPING;
  for (;;)
    {
      const guint number = (guint)g_atomic_int_add (&all->next, 1);

      if (number >= all->n_resamples || g_cancellable_is_cancelled (all->cancellable))
        break;
      draw (all, number, y);
      memcpy (z, all->best, bytes);
      if (all->refit || !all->usable || !few_steps (work, all, z))
        {
          memcpy (z, all->best, bytes);
          bt_fit_run (work, &options, all->cancellable, z);
        }
      bt_fit_map_expand (all->map, z, all->out + (gsize)number * all->map->n_full);
      if (g_thread_self () == all->caller)
        bt_fit_tell (all->fit, (double)(number + 1) / all->n_resamples);
    }
  g_aligned_free (y);
  return NULL;
}

/* The best fit's Jacobian and the factor of its normal equations. */
static void
keep_jacobian (Resample *all, BtFitWork *work)
{
  const gsize p = all->map->n_free, n_blocks = all->points->n_blocks;
  double share;
  gsize used = 0;

  bt_fit_pass (work, all->best, FALSE, INFINITY, &work->lm.now);
  all->stride = work->lm.stride;
  all->factor = g_memdup2 (work->lm.now.a, sizeof (double) * (p + 1) * all->stride);
  all->usable = work->kernel->cholesky (all->factor, p, all->stride, &share);
  all->n_columns = g_new (guint, n_blocks);
  all->index = g_new (guint, n_blocks * (p + 1));
  all->columns = g_aligned_alloc (n_blocks * (p + 1) * BT_BLOCK, sizeof (double), 64);
  for (gsize block = 0; block < n_blocks; block++)
    {
      const guint m = bt_fit_fill_block (work, block, TRUE) - 1;

      all->n_columns[block] = m;
      memcpy (all->index + used, work->index, sizeof (guint) * m);
      memcpy (all->columns + used * BT_BLOCK, work->columns, sizeof (double) * m * BT_BLOCK);
      used += m;
    }
  all->column_scale = g_memdup2 (work->scale, sizeof (double) * (p + 1));
}

/* Carlstein, Ann. Statist. 14, 1171 (1986), for an AR(1) series; from memory. */
static guint
block_length (const double *residual, gsize n)
{
  const double r = fmin (fabs (bt_lag1_correlation (residual, n)), 0.99);
  const double length = ceil (pow (2 * r / (1 - r * r), 2.0 / 3) * cbrt ((double)n));

  return (guint)fmax (1, fmin (length, (double)n / 4));
}

static void
prepare (Resample *all, BtFitWork *work, const BtFitResult *best)
{
  const BtFitPoints *points = all->points;
  const double freedom = fmax (1, (double)points->n - best->n_free);

  all->best = g_new (double, all->map->n_free + 1);
  bt_fit_map_reduce (all->map, best->x, all->best);
  bt_fit_residuals (work, all->best, work->residual);
  all->residual = g_memdup2 (work->residual, sizeof (double) * points->n_blocks * BT_BLOCK);
  all->fitted = g_memdup2 (points->y, sizeof (double) * points->n_blocks * BT_BLOCK);
  for (gsize i = 0; i < points->n; i++)
    all->fitted[i] += all->residual[i] / (points->weight * points->w[i]);
  if (all->kind == BT_RESAMPLE_NOISE)
    all->scale = best->sigma_known ? 1 : sqrt (best->chi2 / freedom);
  else
    {
      double mean = 0;

      /* Residuals are smaller than the noise by what the parameters took up; and a draw must not shift all points. */
      all->scale = sqrt ((double)points->n / freedom);
      for (gsize i = 0; i < points->n; i++)
        mean += all->residual[i] / (double)points->n;
      for (gsize i = 0; i < points->n; i++)
        all->residual[i] -= mean;
      if (all->block == 0)
        all->block = block_length (all->residual, points->n);
    }
  if (!all->refit)
    keep_jacobian (all, work);
}

gboolean
bt_fit_resample (BtFit *self, const BtFitResult *best, BtResampleKind kind, guint block, guint n_resamples, gboolean refit,
                 guint64 seed, guint threads, double *out, GCancellable *cancellable, GError **error)
{
  g_autoptr (BtFitPoints) points = bt_fit_points_new (self);
  g_autoptr (BtFitMap) map = bt_fit_map_new (self);
  g_autoptr (BtFitWork) work = NULL;
  g_autoptr (GPtrArray) running = g_ptr_array_new ();
  Resample all = { .fit = self,
                   .points = points,
                   .map = map,
                   .kind = kind,
                   .refit = refit,
                   .block = block,
                   .n_resamples = n_resamples,
                   .seed = seed,
                   .out = out,
                   .cancellable = cancellable,
                   .caller = g_thread_self () };

  g_return_val_if_fail (points->n > 0 && best->n_parameters == map->n_full, FALSE);
  work = bt_fit_work_new (self, points, map);
  prepare (&all, work, best);
  threads = MIN (threads > 0 ? threads : g_get_num_processors (), MAX (n_resamples, 1));
  for (guint i = 1; i < threads; i++)
    g_ptr_array_add (running, g_thread_new ("resample", worker, &all));
  worker (&all);
  for (guint i = 0; i < running->len; i++)
    g_thread_join (g_ptr_array_index (running, i));
  g_free (all.best);
  g_free (all.fitted);
  g_free (all.residual);
  g_free (all.n_columns);
  g_free (all.index);
  g_aligned_free (all.columns);
  g_free (all.factor);
  g_free (all.column_scale);
  return !g_cancellable_set_error_if_cancelled (cancellable, error);
}
