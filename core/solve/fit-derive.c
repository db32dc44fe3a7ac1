/* Quantities that follow from a fit's parameters, and how sure they are. */
#include <bandtally/fit.h>

#include <math.h>
#include <stdlib.h>

double
bt_fit_result_correlation (const BtFitResult *result, guint a, guint b)
{
  const guint p = result->n_parameters;

  g_return_val_if_fail (a < p && b < p, 0);
  if (!(result->u[a] > 0) || !(result->u[b] > 0))
    return 0;
  return CLAMP (result->covariance[(gsize) a * p + b] / (result->u[a] * result->u[b]), -1, 1);
}

double
bt_fit_result_derive (const BtFitResult *result, BtFitDerivedFunc func, gpointer data, double *u)
{
  const guint p = result->n_parameters;
  g_autofree double *x = g_memdup2 (result->x, sizeof (double) * MAX (p, 1)), *gradient = g_new0 (double, MAX (p, 1));
  const double value = func (x, data);
  double variance = 0;

  for (guint j = 0; j < p && u != NULL; j++)
    {
      /* A small part of what the parameter is known to, so that rounding and bend both stay below it. */
      const double h = 1e-3 * result->u[j];
      double up;

      if (!(h > 0))
        continue;
      x[j] = result->x[j] + h;
      up = func (x, data);
      x[j] = result->x[j] - h;
      gradient[j] = (up - func (x, data)) / (2 * h);
      x[j] = result->x[j];
    }
  for (guint a = 0; a < p; a++)
    for (guint b = 0; b < p; b++)
      variance += gradient[a] * result->covariance[(gsize) a * p + b] * gradient[b];
  if (u != NULL)
    *u = sqrt (fmax (0, variance));
  return value;
}

static int
by_value (const void *a, const void *b)
{
  const double x = *(const double *) a, y = *(const double *) b;

  return (x > y) - (x < y);
}

static double
quantile (const double *sorted, guint n, double share)
{
  const double place = CLAMP (share * n - 0.5, 0, n - 1.0);
  const guint low = (guint) place, high = MIN (low + 1, n - 1);

  return sorted[low] + (place - low) * (sorted[high] - sorted[low]);
}

void
bt_fit_derive_from_draws (const double *draws, guint n_draws, guint n_parameters, BtFitDerivedFunc func, gpointer data, double level, double *mean,
                          double *u, double *low, double *high)
{
  g_autofree double *value = NULL;
  double sum = 0, squares = 0;

  g_return_if_fail (n_draws > 1);
  value = g_new (double, n_draws);
  for (guint i = 0; i < n_draws; i++)
    sum += value[i] = func (draws + (gsize) i * n_parameters, data);
  sum /= n_draws;
  for (guint i = 0; i < n_draws; i++)
    squares += (value[i] - sum) * (value[i] - sum);
  qsort (value, n_draws, sizeof *value, by_value);
  if (mean != NULL)
    *mean = sum;
  if (u != NULL)
    *u = sqrt (squares / (n_draws - 1));
  if (low != NULL)
    *low = quantile (value, n_draws, (1 - level) / 2);
  if (high != NULL)
    *high = quantile (value, n_draws, (1 + level) / 2);
}
