/* Formulas of film optics: pure functions. */
#include <bandtally/film.h>

#include <math.h>

double
bt_face_reflectance (double index)
{
  return (index - 1) * (index - 1) / ((index + 1) * (index + 1));
}

double
bt_slab_transmittance (double reflectance, double depth)
{
  double x = exp (-depth), r = 1 - reflectance;

  return r * r * x / (1 - reflectance * reflectance * x * x);
}

double
bt_slab_depth (double reflectance, double transmittance)
{
  const double r2 = (1 - reflectance) * (1 - reflectance), t = transmittance, q = 2 * t * reflectance;
  double x;

  if (!(t > 0) || !(reflectance >= 0 && reflectance < 1))
    return NAN;
  /* R^2 T x^2 + (1 - R)^2 x - T = 0 for x = e^-at, in the form that loses no digits for small R. */
  x = 2 * t / (r2 + sqrt (r2 * r2 + q * q));
  return x > 0 ? -log (x) : NAN;
}

/* How far a slab whose inside passes @x misses the transmittance, with the face that its reflectance then asks for. */
static double
slab_misses (double reflectance, double transmittance, double x, double *face)
{
  const double r = reflectance / (1 + transmittance * x);

  *face = r;
  return (1 - r) * (1 - r) * x - transmittance * (1 - r * r * x * x);
}

/* Noise of a clear film may lift R + T a little above 1: depths so far below 0 are let through, for cutting them off would bias the mean. */
#define MOST_GAIN 1.03

gboolean
bt_slab_invert (double reflectance, double transmittance, double *face, double *depth)
{
  double low = 0, high = MOST_GAIN, at_low = -transmittance, at_high, x = MOST_GAIN;

  if (!(transmittance > 0) || !(reflectance >= 0) || !(reflectance < 1))
    return FALSE;
  at_high = slab_misses (reflectance, transmittance, high, face);
  if (!(at_high >= 0))
    return FALSE;
  /* The miss rises with x. False position that halves the value of an end that stays twice (Illinois; Dowell and Jarratt, BIT 11, 168 (1971)). */
  for (int i = 0, side = 0; i < 100 && at_high > 0 && high - low > 4e-16 * high; i++)
    {
      double miss;

      x = (low * at_high - high * at_low) / (at_high - at_low);
      if (!(x > low && x < high))
        break;
      miss = slab_misses (reflectance, transmittance, x, face);
      if (miss < 0)
        {
          low = x;
          at_low = miss;
          at_high /= side < 0 ? 2 : 1;
          side = -1;
        }
      else
        {
          high = x;
          at_high = miss;
          at_low /= side > 0 ? 2 : 1;
          side = 1;
        }
    }
  slab_misses (reflectance, transmittance, x, face);
  *depth = -log (x);
  return TRUE;
}

double
bt_sheet_transmittance (double conductance_s, double substrate_index)
{
  double y = 1 + BT_Z0_OHM * conductance_s / (1 + substrate_index);

  return 1 / (y * y);
}

double
bt_sheet_conductance (double transmittance_ratio, double substrate_index)
{
  return transmittance_ratio > 0 ? (1 + substrate_index) / BT_Z0_OHM * (1 / sqrt (transmittance_ratio) - 1) : NAN;
}

double
bt_conductivity_ratio (double sheet_resistance_ohm, double transmittance_ratio, double substrate_index)
{
  return BT_Z0_OHM / (sheet_resistance_ohm * (1 + substrate_index) * (1 / sqrt (transmittance_ratio) - 1));
}

double
bt_haacke_merit (double sheet_resistance_ohm, double transmittance)
{
  return pow (transmittance, 10) / sheet_resistance_ohm;
}
