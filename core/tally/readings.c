/* What the film takes up at wavelengths of interest. */
#include "assemble.h"

#include <math.h>

/* Index of the last point at or below an energy; n where out of range. */
static gsize
find_point (const BtCurve *curve, double energy_ev)
{
  gsize low = 0, high = curve->n - 1;

  if (curve->n < 2 || energy_ev < curve->energy_ev[0] || energy_ev > curve->energy_ev[curve->n - 1])
    return curve->n;
  while (high - low > 1)
    {
      gsize middle = (low + high) / 2;

      if (curve->energy_ev[middle] <= energy_ev)
        low = middle;
      else
        high = middle;
    }
  return low;
}

/* Linear interpolation with the neighbours' noise carried along. FALSE out of range. */
static gboolean
absorbance_at (const BtCurve *curve, double energy_ev, double *a, double *u)
{
  gsize i = find_point (curve, energy_ev);
  double t;

  if (i == curve->n)
    return FALSE;
  t = (energy_ev - curve->energy_ev[i]) / (curve->energy_ev[i + 1] - curve->energy_ev[i]);
  *a = (1 - t) * curve->absorbance[i] + t * curve->absorbance[i + 1];
  *u = hypot ((1 - t) * curve->absorbance_u[i], t * curve->absorbance_u[i + 1]);
  return TRUE;
}

static double
alpha_of (BtFilm *film, double a, double u, double *alpha_u)
{
  /* A file that states the absorption coefficient already needs no thickness. */
  if (bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) == BT_Y_ALPHA_PER_CM)
    {
      *alpha_u = BT_LN10 * u;
      return BT_LN10 * a;
    }
  if (!(bt_film_get_thickness_nm (film) > 0))
    {
      *alpha_u = NAN;
      return NAN;
    }
  *alpha_u = bt_alpha_u_per_cm (a, u, bt_film_get_thickness_nm (film), bt_film_get_thickness_u_nm (film));
  return bt_alpha_per_cm (a, bt_film_get_thickness_nm (film));
}

static void
fill_mean (BtTally *tally, BtFilm *film)
{
  const BtCurve *curve = tally->curve;
  double high_ev = bt_ev_from_nm (tally->recipe->mean_low_nm), low_ev = bt_ev_from_nm (tally->recipe->mean_high_nm);
  double area = 0, variance = 0, length = 0;

  tally->mean_alpha_per_cm = tally->mean_alpha_u_per_cm = NAN;
  low_ev = fmax (low_ev, curve->energy_ev[0]);
  high_ev = fmin (high_ev, curve->energy_ev[curve->n - 1]);
  tally->mean_range = (BtRange){ low_ev, high_ev };
  if (!(high_ev > low_ev))
    return;
  /* Mean over wavelength by the trapezoidal rule. */
  for (gsize i = 0; i + 1 < curve->n; i++)
    {
      double step;

      if (curve->energy_ev[i] < low_ev || curve->energy_ev[i + 1] > high_ev)
        continue;
      step = bt_nm_from_ev (curve->energy_ev[i]) - bt_nm_from_ev (curve->energy_ev[i + 1]);
      area += step * (curve->absorbance[i] + curve->absorbance[i + 1]) / 2;
      variance += step * step * curve->absorbance_u[i] * curve->absorbance_u[i];
      length += step;
    }
  if (length > 0)
    tally->mean_alpha_per_cm = alpha_of (film, area / length, sqrt (variance) / length, &tally->mean_alpha_u_per_cm);
}

void
bt_tally_fill_readings (BtTally *tally, BtFilm *film)
{
  gboolean is_alpha = bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) == BT_Y_ALPHA_PER_CM;

  for (guint i = 0; i < tally->recipe->wavelengths_nm->len; i++)
    {
      BtReading reading = { g_array_index (tally->recipe->wavelengths_nm, double, i), NAN, NAN, NAN, NAN, NAN, NAN };
      double a, u;

      if (absorbance_at (tally->curve, bt_ev_from_nm (reading.wavelength_nm), &a, &u))
        {
          if (!is_alpha)
            {
              reading.absorbance = a;
              reading.absorbance_u = u;
              reading.absorptance = bt_absorptance (a);
              reading.absorptance_u = BT_LN10 * (1 - reading.absorptance) * u;
            }
          reading.alpha_per_cm = alpha_of (film, a, u, &reading.alpha_u_per_cm);
        }
      g_array_append_val (tally->readings, reading);
    }
  fill_mean (tally, film);
}
