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
