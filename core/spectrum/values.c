/* Units from the values, where a file does not say them. */
#include "text-private.h"

/* Covariance of x and y: its sign tells which end is the higher. */
static double
covariance (const double *x, const double *y, gsize n)
{
  double mean_x = 0, mean_y = 0, sum = 0;
  gsize count = 0;

  for (gsize i = 0; i < n; i++)
    if (isfinite (x[i]) && isfinite (y[i]))
      {
        mean_x += x[i];
        mean_y += y[i];
        count++;
      }
  if (count == 0)
    return 0;
  mean_x /= (double) count;
  mean_y /= (double) count;
  for (gsize i = 0; i < n; i++)
    if (isfinite (x[i]) && isfinite (y[i]))
      sum += (x[i] - mean_x) * (y[i] - mean_y);
  return sum;
}

static void
range_of (const double *x, gsize n, double *low, double *high)
{
  *low = INFINITY;
  *high = -INFINITY;
  for (gsize i = 0; i < n; i++)
    if (isfinite (x[i]))
      {
        *low = fmin (*low, x[i]);
        *high = fmax (*high, x[i]);
      }
}

BtXUnit
bt_values_x_unit (const double *x, const double *y, gsize n, gboolean wavelength)
{
  double low, high, y_low, y_high, sign;

  range_of (x, n, &low, &high);
  if (high > 5000 && !wavelength)
    return BT_X_PER_CM;
  if (high > 40)
    return BT_X_NM;
  if (wavelength)
    return BT_X_UM;
  /* Micrometres and electronvolts look alike; a film's absorbance rises towards high energy, its transmittance falls. */
  range_of (y, n, &y_low, &y_high);
  sign = covariance (x, y, n);
  if (y_high > 8 && y_high <= 200)
    sign = -sign;
  return sign > 0 ? BT_X_EV : BT_X_UM;
}

BtYUnit
bt_values_y_unit (const double *x, const double *y, gsize n, BtXUnit x_unit)
{
  double low, high, sign = covariance (x, y, n);

  range_of (y, n, &low, &high);
  if (x_unit == BT_X_NM || x_unit == BT_X_UM)
    sign = -sign;
  if (high > 200)
    return BT_Y_ALPHA_PER_CM;
  if (high > 8)
    return BT_Y_TRANSMITTANCE_PERCENT;
  /* Between 0 and 1 both are possible: absorbance rises towards high energy. */
  if (low >= 0 && high <= 1.02 && sign < 0)
    return BT_Y_TRANSMITTANCE;
  return BT_Y_ABSORBANCE;
}
