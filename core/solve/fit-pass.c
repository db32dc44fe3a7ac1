/* One pass over the points: columns, residual and all their products, block by block, so that nothing leaves the first-level
 * cache.
 *
 * A column is the derivative of the model by a free parameter. Where a parameter moves one thing only its column stays as the
 * shape wrote it and its factor (amplitude, tie, weight) is put on the products afterwards; columns of tied parameters are
 * summed in the block. A part is left out of the blocks where it is negligible. */
#include "fit-private.h"

#include <math.h>
#include <string.h>

/* Share of its height below which a shape is left out. */
#define NEGLIGIBLE 1e-16

BtFitWork *
bt_fit_work_new (const BtFit *fit, const BtFitPoints *points, const BtFitMap *map)
{
  BtFitWork *work = g_new0 (BtFitWork, 1);
  const gsize p = map->n_free, n_columns = (p + 1 + 3) & ~(gsize)3;

  work->fit = fit;
  work->points = points;
  work->map = map;
  work->y = points->y;
  work->kernel = bt_kernel ();
  bt_lm_init (&work->lm, p);
  work->lm.data = work;
  work->lm.evaluate = bt_fit_pass;
  work->lm.limits = bt_fit_limits;
  work->lm.curvature = bt_fit_curvature;
  work->lm.low = map->low;
  work->lm.high = map->high;
  work->full = g_new (double, map->n_full);
  work->columns = g_aligned_alloc (n_columns * BT_BLOCK, sizeof (double), 64);
  work->scratch = g_aligned_alloc ((2 + BT_FIT_MAX_NONLINEAR) * BT_BLOCK, sizeof (double), 64);
  work->rows = g_new (double, work->lm.stride *BT_BLOCK);
  work->append_work = g_new (double, work->lm.stride);
  work->scale = g_new (double, p + 1);
  work->ahead = g_new (double, p + 1);
  work->residual = g_aligned_alloc (points->n_blocks * BT_BLOCK, sizeof (double), 64);
  work->down = g_new (double, map->n_full);
  work->up = g_new (double, map->n_full);
  work->low_of_part = g_new (double, fit->parts->len);
  work->high_of_part = g_new (double, fit->parts->len);
  work->index = g_new0 (guint, n_columns);
  work->slot = g_new (guint, p + 1);
  return work;
}

void
bt_fit_work_free (BtFitWork *work)
{
  bt_lm_clear (&work->lm);
  g_free (work->full);
  g_aligned_free (work->columns);
  g_aligned_free (work->scratch);
  g_free (work->rows);
  g_free (work->append_work);
  g_free (work->scale);
  g_free (work->ahead);
  g_aligned_free (work->residual);
  g_free (work->down);
  g_free (work->up);
  g_free (work->low_of_part);
  g_free (work->high_of_part);
  g_free (work->index);
  g_free (work->slot);
  g_free (work);
}

static void
part_eval (const BtFitPart *part, const double *q, const double *x, double *f, double *const *df)
{
  if (part->func != NULL)
    part->func (q, x, BT_BLOCK, f, df, part->data);
  else
    bt_shape_eval (part->shape, q, x, BT_BLOCK, f, df);
}

/* What the columns are multiplied by in the end, and where each part counts. */
static void
prepare (BtFitWork *work, const double *z)
{
  const BtFitMap *map = work->map;

  bt_fit_map_expand (map, z, work->full);
  for (guint k = 0; k <= map->n_free; k++)
    work->scale[k] = 1;
  for (guint i = 0; i < work->fit->parts->len; i++)
    {
      const BtFitPart *part = bt_fit_part (work->fit, i);

      work->low_of_part[i] = -INFINITY;
      work->high_of_part[i] = INFINITY;
      if (part->func == NULL)
        bt_shape_support (part->shape, work->full + part->first + 1, NEGLIGIBLE, &work->low_of_part[i], &work->high_of_part[i]);
      for (guint j = part->first; j <= part->first + part->n_nonlinear; j++)
        if (map->index[j] >= 0 && map->n_users[map->index[j]] == 1)
          work->scale[map->index[j]] = (j == part->first ? 1 : work->full[part->first]) * map->factor[j];
    }
}

static double *
column_of (BtFitWork *work, guint z, guint *m)
{
  if (work->slot[z] == G_MAXUINT)
    {
      work->slot[z] = *m;
      work->index[*m] = z;
      (*m)++;
    }
  return work->columns + (gsize)work->slot[z] * BT_BLOCK;
}

/* Adds one part's columns to the block and its values to @model. */
static void
add_part (BtFitWork *work, const BtFitPart *part, const double *x, gboolean derived, double *model, guint *m)
{
  const BtFitMap *map = work->map;
  const double amplitude = work->full[part->first];
  double *values = work->scratch + BT_BLOCK, *derivatives[BT_FIT_MAX_NONLINEAR];
  gboolean wanted = FALSE;

  if (!derived)
    {
      part_eval (part, work->full + part->first + 1, x, values, NULL);
      work->kernel->add (model, amplitude, values);
      return;
    }
  if (map->index[part->first] >= 0 && map->n_users[map->index[part->first]] == 1)
    values = column_of (work, (guint)map->index[part->first], m);
  for (guint k = 0; k < part->n_derivatives; k++)
    {
      const int z = map->index[part->first + 1 + k];

      wanted |= z >= 0;
      if (z >= 0 && map->n_users[z] == 1)
        derivatives[k] = column_of (work, (guint)z, m);
      else
        derivatives[k] = z >= 0 || part->func != NULL ? work->scratch + (2 + k) * BT_BLOCK : NULL;
    }
  part_eval (part, work->full + part->first + 1, x, values, wanted ? derivatives : NULL);
  work->kernel->add (model, amplitude, values);
  for (guint k = 0; k <= part->n_derivatives; k++)
    {
      const int z = map->index[part->first + k];

      if (z >= 0 && map->n_users[z] > 1)
        {
          const guint before = *m;
          double *column = column_of (work, (guint)z, m);

          if (*m > before)
            memset (column, 0, sizeof (double) * BT_BLOCK);
          work->kernel->add (column, (k == 0 ? 1 : amplitude) * map->factor[part->first + k],
                             k == 0 ? values : derivatives[k - 1]);
        }
    }
}

guint
bt_fit_fill_block (BtFitWork *work, gsize block, gboolean derived)
{
  const BtFitPoints *points = work->points;
  const gsize from = block * BT_BLOCK, last = MIN (from + BT_BLOCK, points->n) - 1;
  const double *x = points->x + from, low = points->x[from], high = points->x[last];
  double *model = work->scratch, *residual;
  guint m = 0;

  memset (work->slot, 0xff, sizeof (guint) * (work->map->n_free + 1));
  memset (model, 0, sizeof (double) * BT_BLOCK);
  for (guint i = 0; i < work->fit->parts->len; i++)
    if (high >= work->low_of_part[i] && low <= work->high_of_part[i])
      add_part (work, bt_fit_part (work->fit, i), x, derived, model, &m);
  residual = column_of (work, work->map->n_free, &m);
  work->kernel->difference (residual, model, work->y + from);
  if (!points->uniform || from + BT_BLOCK > points->n)
    for (guint c = 0; c < m; c++)
      work->kernel->weigh (work->columns + (gsize)c * BT_BLOCK, points->w + from);
  return m;
}

static void
append_block (BtFitWork *work, gsize block, guint m, BtLmSystem *system)
{
  const BtFitPoints *points = work->points;
  const gsize p = work->map->n_free, stride = work->lm.stride, count = MIN (BT_BLOCK, points->n - block * BT_BLOCK);

  memset (work->rows, 0, sizeof (double) * stride * count);
  for (guint c = 0; c < m; c++)
    {
      const guint z = work->index[c];
      const double factor = work->scale[z] * points->weight;

      for (gsize i = 0; i < count; i++)
        work->rows[i * stride + z] = factor * work->columns[(gsize)c * BT_BLOCK + i];
    }
  for (gsize i = 0; i < count; i++)
    system->chi2 += work->rows[i * stride + p] * work->rows[i * stride + p];
  work->kernel->append (system->a, work->rows, count, p + 1, stride, work->append_work);
}

static void
add_priors (BtFitWork *work, gboolean orthogonal, BtLmSystem *system)
{
  const BtFitMap *map = work->map;
  const gsize p = map->n_free, stride = work->lm.stride;

  for (guint j = 0; j < map->n_full; j++)
    {
      const BtFitParameter *parameter = bt_fit_parameter (work->fit, j);
      double w, r;

      if (map->index[j] < 0 || !isfinite (parameter->prior_u))
        continue;
      w = map->factor[j] / parameter->prior_u;
      r = (work->full[j] - parameter->prior_mean) / parameter->prior_u;
      system->cost += r * r;
      if (orthogonal)
        {
          memset (work->rows, 0, sizeof (double) * stride);
          work->rows[map->index[j]] = w;
          work->rows[p] = r;
          work->kernel->append (system->a, work->rows, 1, p + 1, stride, work->append_work);
        }
      else
        {
          system->a[map->index[j] * stride + map->index[j]] += w * w;
          system->a[map->index[j] * stride + p] += w * r;
        }
    }
}

void
bt_fit_pass (gpointer data, const double *z, gboolean orthogonal, double above, BtLmSystem *system)
{
  BtFitWork *work = data;
  const gsize p = work->map->n_free, stride = work->lm.stride;

  prepare (work, z);
  system->chi2 = 0;
  memset (system->a, 0, sizeof (double) * (p + 1) * stride);
  for (gsize block = 0; block < work->points->n_blocks; block++)
    {
      const guint m = bt_fit_fill_block (work, block, TRUE);

      if (orthogonal)
        append_block (work, block, m, system);
      else
        work->kernel->products (work->columns, m, work->index, system->a, stride);
    }
  if (!orthogonal)
    {
      const double weight = work->points->weight * work->points->weight;

      for (gsize a = 0; a <= p; a++)
        {
          double *row = system->a + a * stride;
          const double factor = weight * work->scale[a];

          for (gsize b = a; b <= p; b++)
            row[b] *= factor * work->scale[b];
        }
      system->chi2 = system->a[p * stride + p];
    }
  system->cost = system->chi2;
  add_priors (work, orthogonal, system);
}

void
bt_fit_residuals (BtFitWork *work, const double *z, double *residual)
{
  const BtFitPoints *points = work->points;

  prepare (work, z);
  for (gsize block = 0; block < points->n_blocks; block++)
    {
      const gsize from = block * BT_BLOCK;
      const guint m = bt_fit_fill_block (work, block, FALSE);

      for (gsize i = 0; i < BT_BLOCK; i++)
        residual[from + i] = points->weight * work->columns[(gsize)(m - 1) * BT_BLOCK + i];
    }
}

/* J'r'' with r'' the second derivative of the residual along @v, by differences (Transtrum and Sethna 2012, eq. 12). */
void
bt_fit_curvature (gpointer data, const double *z, const double *v, double *out)
{
  const double h = 0.1;
  BtFitWork *work = data;
  const BtFitPoints *points = work->points;
  const gsize p = work->map->n_free;
  double *bend = work->scratch;

  for (gsize k = 0; k < p; k++)
    {
      work->ahead[k] = z[k] + h * v[k];
      out[k] = 0;
    }
  bt_fit_residuals (work, work->ahead, work->residual);
  prepare (work, z);
  for (gsize block = 0; block < points->n_blocks; block++)
    {
      const gsize from = block * BT_BLOCK;
      const guint m = bt_fit_fill_block (work, block, TRUE);
      const double *r = work->columns + (gsize)(m - 1) * BT_BLOCK;

      for (gsize t = 0; t < BT_BLOCK; t++)
        bend[t] = (work->residual[from + t] / points->weight - r[t]) / h;
      for (guint c = 0; c + 1 < m; c++)
        work->kernel->add (bend, -work->scale[work->index[c]] * v[work->index[c]], work->columns + (gsize)c * BT_BLOCK);
      for (guint c = 0; c + 1 < m; c++)
        out[work->index[c]] += work->kernel->dot (work->columns + (gsize)c * BT_BLOCK, bend);
    }
  for (gsize k = 0; k < p; k++)
    out[k] *= 2 / h * work->scale[k] * points->weight * points->weight;
}

void
bt_fit_limits (gpointer data, const double *z, double *down, double *up)
{
  BtFitWork *work = data;
  const BtFitMap *map = work->map;

  bt_fit_map_expand (map, z, work->full);
  for (guint j = 0; j < map->n_full; j++)
    work->down[j] = work->up[j] = map->limit[j];
  for (guint i = 0; i < work->fit->parts->len; i++)
    {
      const BtFitPart *part = bt_fit_part (work->fit, i);

      if (part->func == NULL)
        bt_fit_shape_limits (part->shape, work->full + part->first + 1, work->down + part->first + 1,
                             work->up + part->first + 1);
    }
  for (guint j = 0; j < map->n_full; j++)
    {
      const int k = map->index[j];
      const double by = k >= 0 ? fabs (map->factor[j]) : 1;

      if (k < 0)
        continue;
      down[k] = fmin (down[k], (map->factor[j] > 0 ? work->down[j] : work->up[j]) / by);
      up[k] = fmin (up[k], (map->factor[j] > 0 ? work->up[j] : work->down[j]) / by);
    }
}
