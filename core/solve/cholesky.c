/* Cholesky for the normal equations of a few dozen parameters: small enough that a library's set-up would cost more than the work,
 * and without a global error handler. Pivots are judged
 * against the diagonal they came from, so the units of the parameters do not decide what counts as zero. */
#include "cholesky-private.h"

#include <float.h>
#include <math.h>

gboolean
bt_cholesky_decompose (double *a, gsize m, double *condition)
{
  double smallest = 1, largest = 1e-300;

  for (gsize i = 0; i < m; i++)
    {
      const double original = a[i * m + i];

      if (!(original > 0) || !isfinite (original))
        return FALSE;
      for (gsize j = 0; j <= i; j++)
        {
          double sum = a[i * m + j];

          for (gsize k = 0; k < j; k++)
            sum -= a[i * m + k] * a[j * m + k];
          if (j < i)
            a[i * m + j] = sum / a[j * m + j];
          else
            {
              /* What is left of the diagonal, as a share of it, is the squared pivot of the scaled matrix. */
              double share = sum / original;

              if (!(share > 64 * DBL_EPSILON))
                return FALSE;
              smallest = fmin (smallest, share);
              largest = fmax (largest, share);
              a[i * m + i] = sqrt (sum);
            }
        }
    }
  if (condition != NULL)
    *condition = m > 0 ? largest / smallest : 1;
  return TRUE;
}

void
bt_cholesky_solve (const double *a, gsize m, double *b)
{
  for (gsize i = 0; i < m; i++)
    {
      for (gsize k = 0; k < i; k++)
        b[i] -= a[i * m + k] * b[k];
      b[i] /= a[i * m + i];
    }
  for (gsize i = m; i-- > 0;)
    {
      for (gsize k = i + 1; k < m; k++)
        b[i] -= a[k * m + i] * b[k];
      b[i] /= a[i * m + i];
    }
}
