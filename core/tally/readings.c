/* What the film takes up at wavelengths of interest. */
#include "assemble.h"

#include <math.h>

/* Draws for the distribution of an absorption coefficient. */
#define N_DRAWS 20000

static double
sum_of_squares (const double *parts)
{
  double squares = 0;

  for (guint k = 0; k < BT_N_PARTS; k++)
    squares += parts[k] * parts[k];
  return sqrt (squares);
}

/* Mean over wavelength by the trapezoidal rule. Noise goes down with the number of points; what is common to them stays. FALSE where the curve has
 * nothing in the range. */
static gboolean
mean_absorbance (const BtCurve *curve, BtRange range, double *mean, double *parts)
{
  double area = 0, length = 0;

  for (guint k = 0; k < BT_N_PARTS; k++)
    parts[k] = 0;
  for (gsize i = 0; i + 1 < curve->n; i++)
    {
      double step;

      if (curve->energy_ev[i] < range.low_ev || curve->energy_ev[i + 1] > range.high_ev)
        continue;
      step = bt_nm_from_ev (curve->energy_ev[i]) - bt_nm_from_ev (curve->energy_ev[i + 1]);
      area += step * (curve->absorbance[i] + curve->absorbance[i + 1]) / 2;
      length += step;
      for (guint k = 0; k < BT_N_PARTS; k++)
        if (curve->parts[k] != NULL)
          parts[k] += k == BT_PART_NOISE || k == BT_PART_BLANK ? step * step * curve->parts[k][i] * curve->parts[k][i] : step * curve->parts[k][i];
    }
  if (!(length > 0))
    return FALSE;
  *mean = area / length;
  for (guint k = 0; k < BT_N_PARTS; k++)
    parts[k] = (k == BT_PART_NOISE || k == BT_PART_BLANK ? sqrt (parts[k]) : parts[k]) / length;
  return TRUE;
}

static void
fill_mean (BtTally *tally, BtFilm *film)
{
  const BtCurve *curve = tally->curve;
  const gboolean stated = bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) == BT_Y_ALPHA_PER_CM;
  const double t = bt_film_get_thickness_nm (film), factor = stated ? BT_LN10 : bt_alpha_per_cm (1, t);
  BtAlpha *alpha = &tally->mean_alpha;
  double mean;

  *alpha = (BtAlpha){ NAN, NAN, { 0 }, NAN, NAN, NAN, NAN };
  tally->mean_range = (BtRange){ bt_ev_from_nm (tally->recipe->mean_high_nm), bt_ev_from_nm (tally->recipe->mean_low_nm) };
  tally->mean_range.low_ev = fmax (tally->mean_range.low_ev, curve->energy_ev[0]);
  tally->mean_range.high_ev = fmin (tally->mean_range.high_ev, curve->energy_ev[curve->n - 1]);
  if (!(tally->mean_range.high_ev > tally->mean_range.low_ev) || isnan (factor) || !mean_absorbance (curve, tally->mean_range, &mean, alpha->parts))
    return;
  alpha->value = factor * mean;
  if (!stated)
    alpha->parts[BT_PART_THICKNESS] = fabs (mean) * bt_film_get_thickness_u_nm (film) / t;
  for (guint k = 0; k < BT_N_PARTS; k++)
    alpha->parts[k] *= factor;
  alpha->u = sum_of_squares (alpha->parts);
}

/* Optical sheet conductance from the thin-film absorbance 2 Z0 s / ((1 + n_s) ln 10). */
static void
fill_sheet (BtReading *reading, double index, double a, double u)
{
  const double factor = BT_LN10 * (1 + index) / (2 * BT_Z0_OHM);

  reading->sheet_conductance_s = factor * a;
  reading->sheet_conductance_u_s = factor * u;
}

static double
substrate_index (const BtTally *tally, BtFilm *film, double wavelength_nm)
{
  return tally->recipe->light_path.substrate_index > 0 ? tally->recipe->light_path.substrate_index
                                                       : bt_substrate_index (bt_film_get_substrate (film), wavelength_nm);
}

/* The ratio of conductivities is 1 / (R s): relative uncertainties add in squares. */
static void
fill_conductor (BtTally *tally, BtFilm *film)
{
  const double ohm = bt_film_get_sheet_resistance_ohm (film), ohm_u = bt_film_get_sheet_resistance_u_ohm (film);
  BtConductor *conductor = &tally->conductor;
  double a, parts[BT_N_PARTS], u, slope;

  *conductor = (BtConductor){ NAN, NAN, NAN, NAN, NAN, NAN, NAN };
  if (!(ohm > 0) || tally->curve->kind == BT_LIGHT_PATH_REFLECTION || bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) == BT_Y_ALPHA_PER_CM
      || !bt_curve_at (tally->curve, bt_ev_from_nm (BT_CONDUCTOR_NM), &a, parts))
    return;
  conductor->substrate_index = substrate_index (tally, film, BT_CONDUCTOR_NM);
  if (isnan (conductor->substrate_index))
    return;
  u = sum_of_squares (parts);
  if (tally->curve->kind == BT_LIGHT_PATH_THIN_FILM)
    {
      /* Back from the sheet's absorbance to T / T_blank = (1 + a ln 10 / 2)^-2. */
      const double y = 1 + a * BT_LN10 / 2;

      conductor->transmittance = 1 / (y * y);
      slope = BT_LN10 / (y * y * y);
    }
  else
    {
      conductor->transmittance = pow (10, -a);
      slope = BT_LN10 * conductor->transmittance;
    }
  conductor->transmittance_u = slope * u;
  if (!(conductor->transmittance < 1))
    return;
  conductor->ratio = bt_conductivity_ratio (ohm, conductor->transmittance, conductor->substrate_index);
  /* d ln(T^-1/2 - 1) = -dT / (2 T (1 - sqrt T)) */
  conductor->ratio_u = conductor->ratio
                       * hypot (ohm_u / ohm, conductor->transmittance_u / (2 * conductor->transmittance * (1 - sqrt (conductor->transmittance))));
  conductor->haacke_s = bt_haacke_merit (ohm, conductor->transmittance);
  conductor->haacke_u_s = conductor->haacke_s * hypot (ohm_u / ohm, 10 * conductor->transmittance_u / conductor->transmittance);
}

static void
fill_reading (BtReading *reading, const BtTally *tally, BtFilm *film, guint n_draws)
{
  const BtRecipe *recipe = tally->recipe;
  const BtAccuracy accuracy = { recipe->photometric_u, recipe->wavelength_u_nm };
  const double energy_ev = bt_ev_from_nm (reading->wavelength_nm);
  double a, parts[BT_N_PARTS], u;

  if (!bt_curve_at (tally->curve, energy_ev, &a, parts))
    return;
  u = sum_of_squares (parts);
  bt_film_alpha (film, tally->curve, &recipe->light_path, &accuracy, energy_ev, n_draws, recipe->level, &reading->alpha);
  if (bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) == BT_Y_ALPHA_PER_CM)
    return;
  reading->absorbance = a;
  reading->absorbance_u = u;
  reading->absorptance = bt_absorptance (a);
  reading->absorptance_u = BT_LN10 * (1 - reading->absorptance) * u;
  if (tally->curve->kind == BT_LIGHT_PATH_THIN_FILM)
    fill_sheet (reading, substrate_index (tally, film, reading->wavelength_nm), a, u);
}

void
bt_tally_fill_readings (BtTally *tally, BtFilm *film, BtEffort effort)
{
  for (guint i = 0; i < tally->recipe->wavelengths_nm->len; i++)
    {
      BtReading reading = { g_array_index (tally->recipe->wavelengths_nm, double, i), NAN, NAN, NAN, NAN, { NAN, NAN, { 0 }, NAN, NAN, NAN, NAN }, NAN, NAN };

      fill_reading (&reading, tally, film, effort == BT_EFFORT_FULL ? N_DRAWS : 0);
      g_array_append_val (tally->readings, reading);
    }
  fill_mean (tally, film);
  fill_conductor (tally, film);
}
