/* The points as the pass wants them: those in use, in ascending order of x, in whole blocks. */
#include "fit-private.h"

#include <math.h>

static int
compare_x (gconstpointer a, gconstpointer b, gpointer data)
{
  const double *x = data, xa = x[*(const gsize *)a], xb = x[*(const gsize *)b];

  if (xa != xb)
    return xa < xb ? -1 : 1;
  return *(const gsize *)a < *(const gsize *)b ? -1 : 1;
}

static gboolean
in_use (const BtFit *self, gsize i)
{
  return !self->masked[i] && isfinite (self->x[i]) && isfinite (self->y[i])
         && (self->sigma == NULL || (isfinite (self->sigma[i]) && self->sigma[i] > 0));
}

BtFitPoints *
bt_fit_points_new (const BtFit *self)
{
  BtFitPoints *points = g_new0 (BtFitPoints, 1);
  gboolean sorted = TRUE;

  points->order = g_new (gsize, self->n);
  for (gsize i = 0; i < self->n; i++)
    if (in_use (self, i))
      {
        if (points->n > 0 && self->x[i] < self->x[points->order[points->n - 1]])
          sorted = FALSE;
        points->order[points->n++] = i;
      }
  if (!sorted)
    g_qsort_with_data (points->order, (gint)points->n, sizeof (gsize), compare_x, self->x);
  points->n_blocks = (points->n + BT_BLOCK - 1) / BT_BLOCK;
  points->x = g_aligned_alloc (points->n_blocks * BT_BLOCK, sizeof (double), 64);
  points->y = g_aligned_alloc (points->n_blocks * BT_BLOCK, sizeof (double), 64);
  points->w = g_aligned_alloc (points->n_blocks * BT_BLOCK, sizeof (double), 64);
  points->uniform = TRUE;
  for (gsize i = 0; i < points->n_blocks * BT_BLOCK; i++)
    {
      const gsize from = points->order[MIN (i, points->n - 1)];

      points->x[i] = self->x[from];
      points->y[i] = self->y[from];
      points->w[i] = i >= points->n ? 0 : self->sigma != NULL ? 1 / self->sigma[from] : 1;
      if (i < points->n && points->w[i] != points->w[0])
        points->uniform = FALSE;
    }
  points->weight = points->uniform && points->n > 0 ? points->w[0] : 1;
  for (gsize i = 0; points->uniform && i < points->n; i++)
    points->w[i] = 1;
  return points;
}

void
bt_fit_points_free (BtFitPoints *points)
{
  g_free (points->order);
  g_aligned_free (points->x);
  g_aligned_free (points->y);
  g_aligned_free (points->w);
  g_free (points);
}
