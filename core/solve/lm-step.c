/* One step of Levenberg and Marquardt's method: by normal equations or by orthogonal factors, inside a box, bent along a
 * valley. */
#include "lm-private.h"

#include <float.h>
#include <string.h>

/* Why a parameter does not move freely in a step. */
enum { FREE, HELD, ON_FACE, ON_FACE_ABOVE };

/* Twice the acceleration over the step, at most; below the second it is not worth looking for. */
#define MOST_BEND 0.75
#define LEAST_BEND 0.02

double
bt_lm_squared_column (const BtLm *lm, gsize j)
{
  double sum = 0;

  if (!lm->orthogonal)
    return lm->now.a[j * lm->stride + j];
  for (gsize i = 0; i <= j; i++)
    sum += lm->now.a[i * lm->stride + j] * lm->now.a[i * lm->stride + j];
  return sum;
}

/* Damped normal equations of the free parameters: right becomes the step. */
static gboolean
solve_normal (BtLm *lm, gsize m, double damping)
{
  const gsize p = lm->p, stride = lm->stride;
  const double *n = lm->now.a;
  double share;

  for (gsize a = 0; a < m; a++)
    {
      const gsize ja = lm->free_index[a];
      const double *row = n + ja * stride;
      double g = -row[p];

      if (m == p)
        memcpy (lm->work + a * stride + a, row + a, sizeof (double) * (m - a));
      else
        for (gsize b = a; b < m; b++)
          lm->work[a * stride + b] = row[lm->free_index[b]];
      lm->work[a * stride + a] += damping * lm->diagonal[ja];
      for (gsize j = 0; m < p && j < p; j++)
        if (lm->pinned[j] && lm->step[j] != 0)
          g -= n[MIN (j, ja) * stride + MAX (j, ja)] * lm->step[j];
      lm->right[a] = g;
    }
  if (!lm->kernel->cholesky (lm->work, m, stride, &share))
    return FALSE;
  bt_cholesky_solve (lm->work, m, stride, lm->right);
  return TRUE;
}

/* The same by orthogonal factors: R of the free columns, below it the square roots of the damping. */
static gboolean
solve_orthogonal (BtLm *lm, gsize m, double damping)
{
  const gsize p = lm->p, stride = lm->stride;
  const double *r = lm->now.a;
  gsize n_rows = p;

  memset (lm->work, 0, sizeof (double) * (m + 1) * stride);
  for (gsize i = 0; i < p; i++)
    {
      double *row = lm->rows + i * stride;
      double right = -r[i * stride + p];

      for (gsize a = 0; a < m; a++)
        row[a] = lm->free_index[a] >= i ? r[i * stride + lm->free_index[a]] : 0;
      for (gsize j = i; j < p; j++)
        if (lm->pinned[j])
          right -= r[i * stride + j] * lm->step[j];
      row[m] = right;
    }
  for (gsize a = 0; damping > 0 && a < m; a++, n_rows++)
    {
      double *row = lm->rows + n_rows * stride;

      memset (row, 0, sizeof (double) * (m + 1));
      row[a] = sqrt (damping * lm->diagonal[lm->free_index[a]]);
    }
  lm->kernel->append (lm->work, lm->rows, n_rows, m + 1, stride, lm->right);
  for (gsize a = 0; a < m; a++)
    if (!(fabs (lm->work[a * stride + a]) > 1e-150) || !isfinite (lm->work[a * stride + a]))
      return FALSE;
  for (gsize a = 0; a < m; a++)
    lm->right[a] = lm->work[a * stride + m];
  bt_upper_solve (lm->work, m, stride, lm->right);
  return TRUE;
}

/* Slope of the damped quadratic model along parameter @j at the step. */
static double
slope (const BtLm *lm, gsize j, double damping)
{
  const gsize p = lm->p, stride = lm->stride;
  double sum = damping * lm->diagonal[j] * lm->step[j];

  if (!lm->orthogonal)
    {
      sum += lm->now.a[j * stride + p];
      for (gsize k = 0; k < p; k++)
        sum += lm->now.a[MIN (j, k) * stride + MAX (j, k)] * lm->step[k];
      return sum;
    }
  for (gsize i = 0; i <= j; i++)
    {
      const double *row = lm->now.a + i * stride;
      double along = row[p];

      for (gsize k = i; k < p; k++)
        along += row[k] * lm->step[k];
      sum += row[j] * along;
    }
  return sum;
}

/* Of what was put on a face of the box, lets go the one that wants most to come back inside now that others are there too; each once. */
static gboolean
release (BtLm *lm, double damping)
{
  gsize best = lm->p;
  double most = 0;

  for (gsize j = 0; j < lm->p; j++)
    if ((lm->pinned[j] == ON_FACE || lm->pinned[j] == ON_FACE_ABOVE) && !lm->released[j])
      {
        const double want = slope (lm, j, damping) * (lm->pinned[j] == ON_FACE ? -1 : 1)
                            / sqrt (fmax (bt_lm_squared_column (lm, j), DBL_MIN));

        if (want > most)
          {
            most = want;
            best = j;
          }
      }
  if (best == lm->p || most <= 1e-12 * sqrt (lm->now.cost))
    return FALSE;
  lm->pinned[best] = FREE;
  lm->released[best] = TRUE;
  return TRUE;
}

gboolean
bt_lm_solve_step (BtLm *lm, const double *x, double damping)
{
  const gsize p = lm->p;

  for (gsize j = 0; j < p; j++)
    {
      lm->pinned[j] = bt_lm_low (lm, j) >= bt_lm_high (lm, j) ? HELD : FREE;
      lm->released[j] = FALSE;
      lm->down[j] = lm->up[j] = INFINITY;
    }
  memset (lm->step, 0, sizeof (double) * p);
  if (lm->limits != NULL)
    lm->limits (lm->data, x, lm->down, lm->up);

  for (gsize round = 0; round <= 3 * p; round++)
    {
      gsize m = 0;
      gboolean left = FALSE;

      for (gsize j = 0; j < p; j++)
        if (lm->pinned[j] == FREE)
          lm->free_index[m++] = j;
      lm->n_moving = m;
      if (m > 0 && !(lm->orthogonal ? solve_orthogonal : solve_normal) (lm, m, damping))
        return FALSE;
      for (gsize a = 0; a < m; a++)
        {
          const gsize j = lm->free_index[a];
          const double low = fmax (bt_lm_low (lm, j) - x[j], -lm->down[j]), high = fmin (bt_lm_high (lm, j) - x[j], lm->up[j]);

          lm->step[j] = lm->right[a];
          if (!isfinite (lm->step[j]))
            return FALSE;
          if (lm->step[j] < low || lm->step[j] > high)
            {
              lm->pinned[j] = lm->step[j] < low ? ON_FACE : ON_FACE_ABOVE;
              lm->step[j] = lm->step[j] < low ? low : high;
              left = TRUE;
            }
        }
      if (!left && !release (lm, damping))
        return TRUE;
    }
  return TRUE;
}

double
bt_lm_promised (const BtLm *lm)
{
  const gsize p = lm->p, stride = lm->stride;
  double linear = 0, quadratic = 0;

  for (gsize i = 0; i < p; i++)
    {
      const double *row = lm->now.a + i * stride;
      double s0 = 0, s1 = 0;
      gsize j = i + 1;

      for (; j + 2 <= p; j += 2)
        {
          s0 += row[j] * lm->step[j];
          s1 += row[j + 1] * lm->step[j + 1];
        }
      for (; j < p; j++)
        s0 += row[j] * lm->step[j];
      s0 += s1;
      if (lm->orthogonal)
        {
          s0 += row[i] * lm->step[i];
          linear += row[p] * s0;
          quadratic += s0 * s0 / 2;
        }
      else
        {
          linear += row[p] * lm->step[i];
          quadratic += lm->step[i] * (s0 + row[i] * lm->step[i] / 2);
        }
    }
  return -2 * (linear + quadratic);
}

gboolean
bt_lm_accelerate (BtLm *lm, const double *x)
{
  const gsize m = lm->n_moving;
  double bent = 0, straight = 0;

  lm->curvature (lm->data, x, lm->step, lm->bend);
  for (gsize a = 0; a < m; a++)
    lm->right[a] = -lm->bend[lm->free_index[a]];
  bt_cholesky_solve (lm->work, m, lm->stride, lm->right);
  for (gsize a = 0; a < m; a++)
    {
      const gsize j = lm->free_index[a];

      bent += lm->right[a] * lm->right[a] * lm->diagonal[j];
      straight += lm->step[j] * lm->step[j] * lm->diagonal[j];
    }
  if (!(4 * bent <= MOST_BEND * MOST_BEND * straight))
    return TRUE;
  for (gsize a = 0; a < m; a++)
    {
      const gsize j = lm->free_index[a];
      const double low = fmax (bt_lm_low (lm, j) - x[j], -lm->down[j]), high = fmin (bt_lm_high (lm, j) - x[j], lm->up[j]);

      lm->step[j] = fmin (fmax (lm->step[j] + lm->right[a] / 2, low), high);
    }
  return 4 * bent > LEAST_BEND * LEAST_BEND * straight;
}
