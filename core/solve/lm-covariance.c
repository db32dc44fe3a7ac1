/* What the Jacobian at the minimum tells: condition and covariance. */
#include "lm-private.h"

#include <float.h>
#include <string.h>

/* Factor of the columns in free_index, into work; the smallest share that a column kept, 0 where one kept nothing. */
static double
factorise (BtLm *lm, gsize m)
{
  const gsize p = lm->p, stride = lm->stride;
  double share = 1;

  if (!lm->orthogonal)
    {
      for (gsize a = 0; a < m; a++)
        for (gsize b = a; b < m; b++)
          lm->work[a * stride + b] = lm->now.a[lm->free_index[a] * stride + lm->free_index[b]];
      return lm->kernel->cholesky (lm->work, m, stride, &share) ? share : 0;
    }
  memset (lm->work, 0, sizeof (double) * (m + 1) * stride);
  for (gsize i = 0; i < p; i++)
    for (gsize a = 0; a < m; a++)
      lm->rows[i * stride + a] = lm->free_index[a] >= i ? lm->now.a[i * stride + lm->free_index[a]] : 0;
  lm->kernel->append (lm->work, lm->rows, p, m, stride, lm->right);
  for (gsize a = 0; a < m; a++)
    share = fmin (share, pow (lm->work[a * stride + a], 2) / bt_lm_squared_column (lm, lm->free_index[a]));
  return share > 64 * DBL_EPSILON * DBL_EPSILON ? share : 0;
}

double
bt_lm_smallest_share (BtLm *lm, const double *x)
{
  gsize m = 0;

  for (gsize j = 0; j < lm->p; j++)
    if (x[j] > bt_lm_low (lm, j) && x[j] < bt_lm_high (lm, j) && bt_lm_squared_column (lm, j) > 0)
      lm->free_index[m++] = j;
  return factorise (lm, m);
}

void
bt_lm_covariance (BtLm *lm, const double *x, double *covariance, gboolean *at_bound)
{
  const gsize p = lm->p, stride = lm->stride;
  gsize m = 0;
  double share;

  for (gsize j = 0; j < p; j++)
    {
      const double low = bt_lm_low (lm, j), high = bt_lm_high (lm, j), room = 1e-9 * (1 + fabs (x[j]));
      const gboolean fixed = low >= high, bound = !fixed && (x[j] <= low + room || x[j] >= high - room);

      if (at_bound != NULL)
        at_bound[j] = bound;
      /* A parameter without any effect at the minimum (the width of a band of height 0) has no row either. */
      if (!fixed && !bound && bt_lm_squared_column (lm, j) > 0)
        lm->free_index[m++] = j;
    }
  if (covariance != NULL)
    memset (covariance, 0, sizeof (double) * p * p);
  share = factorise (lm, m);
  lm->condition = share > 0 ? 1 / share : INFINITY;
  if (!(share > 0) && lm->state != BT_SOLVE_CANCELLED)
    lm->state = BT_SOLVE_SINGULAR;
  if (!(share > 0) || covariance == NULL)
    return;
  bt_upper_invert (lm->work, m, stride, lm->rows);
  for (gsize a = 0; a < m; a++)
    for (gsize b = a; b < m; b++)
      {
        double sum = 0;

        for (gsize k = b; k < m; k++)
          sum += lm->rows[a * stride + k] * lm->rows[b * stride + k];
        covariance[lm->free_index[a] * p + lm->free_index[b]] = covariance[lm->free_index[b] * p + lm->free_index[a]] = sum;
      }
}
