/* Statistics of residuals and of competing fits. */
#include <bandtally/solve.h>

#include <math.h>

double
bt_lag1_correlation (const double *residual, gsize n)
{
  double product = 0, square = 0;

  for (gsize i = 0; i < n; i++)
    {
      square += residual[i] * residual[i];
      if (i + 1 < n)
        product += residual[i] * residual[i + 1];
    }
  return square > 0 ? product / square : 0;
}

double
bt_effective_points (gsize n, double lag1)
{
  return (double) n * (1 - lag1) / (1 + lag1);
}

void
bt_akaike_weights (const double *aic, gsize n, double *weight)
{
  double best = INFINITY, sum = 0;

  for (gsize i = 0; i < n; i++)
    best = fmin (best, aic[i]);
  for (gsize i = 0; i < n; i++)
    sum += weight[i] = exp (-(aic[i] - best) / 2);
  for (gsize i = 0; i < n; i++)
    weight[i] /= sum;
}
