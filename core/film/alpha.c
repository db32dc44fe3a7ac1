/* The absorption coefficient at an energy, with its uncertainty by first order and by draws. */
#include <bandtally/film.h>

#include <math.h>
#include <stdlib.h>
#include <string.h>

#include <glib/gi18n-lib.h>
#include <gsl/gsl_randist.h>
#include <gsl/gsl_rng.h>

#include "point.h"

#define SEED 20260105

static const struct { const char *name; const char *title; } parts[BT_N_PARTS] = {
  [BT_PART_NOISE] = { "noise", N_ ("noise of the reading") },
  [BT_PART_BLANK] = { "blank", N_ ("noise of the blank") },
  [BT_PART_PHOTOMETRIC] = { "photometric", N_ ("photometric accuracy") },
  [BT_PART_WAVELENGTH] = { "wavelength", N_ ("wavelength scale") },
  [BT_PART_REFLECTANCE] = { "reflectance", N_ ("reflectance") },
  [BT_PART_STEP] = { "detector step", N_ ("detector step") },
  [BT_PART_THICKNESS] = { "thickness", N_ ("thickness") },
};

const char *
bt_part_name (BtPart part)
{
  g_return_val_if_fail (part < BT_N_PARTS, NULL);
  return parts[part].name;
}

const char *
bt_part_title (BtPart part)
{
  g_return_val_if_fail (part < BT_N_PARTS, NULL);
  return _ (parts[part].title);
}

gboolean
bt_curve_at (const BtCurve *curve, double energy_ev, double *absorbance, double *u)
{
  gsize low = 0, high;
  double t;

  if (curve->n < 2 || !(energy_ev >= curve->energy_ev[0] && energy_ev <= curve->energy_ev[curve->n - 1]))
    return FALSE;
  for (high = curve->n - 1; high - low > 1;)
    {
      gsize middle = (low + high) / 2;

      if (curve->energy_ev[middle] <= energy_ev)
        low = middle;
      else
        high = middle;
    }
  t = (energy_ev - curve->energy_ev[low]) / (curve->energy_ev[high] - curve->energy_ev[low]);
  *absorbance = (1 - t) * curve->absorbance[low] + t * curve->absorbance[high];
  for (guint k = 0; u != NULL && k < BT_N_PARTS; k++)
    {
      const double *part = curve->parts[k];

      if (part == NULL)
        u[k] = 0;
      else if (k == BT_PART_NOISE || k == BT_PART_BLANK)
        u[k] = hypot ((1 - t) * part[low], t * part[high]);
      else
        u[k] = (1 - t) * part[low] + t * part[high];
    }
  return TRUE;
}

/* What is drawn for one energy. */
typedef struct {
  BtPoint point;
  double u_film, u_blank, u_reflectance, u_photometric;
  double u_shift; /* wavelength and step: absorbances added at the end */
  double correction; /* curve less point: interpolation, steps taken off */
  double thickness_nm, thickness_u_nm;
  gsize n_readings;
} Draws;

/* A thickness above 0. */
static double
draw_thickness (const Draws *draws, gsl_rng *rng)
{
  double t;

  for (int tries = 0; tries < 100; tries++)
    {
      t = draws->thickness_nm
          + draws->thickness_u_nm
              * (draws->n_readings > 1 ? gsl_ran_tdist (rng, (double) (draws->n_readings - 1)) : gsl_ran_gaussian_ziggurat (rng, 1));
      if (t > 0)
        return t;
    }
  return draws->thickness_nm;
}

static int
by_value (const void *a, const void *b)
{
  double x = *(const double *) a, y = *(const double *) b;

  return (x > y) - (x < y);
}

/* Monte Carlo propagation of distributions (JCGM 101:2008 clause 7). */
static void
draw (const Draws *draws, guint n_draws, double level, BtAlpha *alpha)
{
  gsl_rng *rng = gsl_rng_alloc (gsl_rng_mt19937);
  g_autofree double *value = g_new (double, n_draws);
  double mean = 0, squares = 0;
  guint n = 0;

  gsl_rng_set (rng, SEED);
  for (guint i = 0; i < n_draws; i++)
    {
      BtPoint point = draws->point;
      double a;

      point.film += draws->u_film * gsl_ran_gaussian_ziggurat (rng, 1) + draws->u_photometric * gsl_ran_gaussian_ziggurat (rng, 1);
      point.blank += draws->u_blank * gsl_ran_gaussian_ziggurat (rng, 1);
      point.reflectance += draws->u_reflectance * gsl_ran_gaussian_ziggurat (rng, 1);
      if (point.reflectance < 0)
        point.reflectance = -point.reflectance;
      a = bt_point_absorbance (&point) + draws->correction + draws->u_shift * gsl_ran_gaussian_ziggurat (rng, 1);
      if (draws->thickness_nm > 0)
        a = bt_alpha_per_cm (a, draw_thickness (draws, rng));
      else
        a *= BT_LN10;
      if (!isfinite (a))
        continue;
      value[n++] = a;
      squares += (a - mean) * (a - mean) * (double) (n - 1) / (double) n;
      mean += (a - mean) / (double) n;
    }
  gsl_rng_free (rng);
  if (n < 100)
    return;
  qsort (value, n, sizeof *value, by_value);
  alpha->mean = mean;
  alpha->spread = sqrt (squares / (double) (n - 1));
  alpha->low = value[(gsize) ((1 - level) / 2 * (double) (n - 1))];
  alpha->high = value[(gsize) ((1 + level) / 2 * (double) (n - 1))];
}

gboolean
bt_film_alpha (BtFilm *self, const BtCurve *curve, const BtLightPath *how, const BtAccuracy *accuracy, double energy_ev, guint n_draws, double level,
               BtAlpha *alpha)
{
  const gboolean stated = bt_spectrum_get_y_unit (bt_film_get_spectrum (self)) == BT_Y_ALPHA_PER_CM;
  const double t = stated ? 0 : bt_film_get_thickness_nm (self), factor = stated ? BT_LN10 : bt_alpha_per_cm (1, t);
  BtLightPath path = how != NULL ? *how : (BtLightPath) BT_LIGHT_PATH_INIT;
  Draws draws = { .thickness_nm = t, .thickness_u_nm = bt_film_get_thickness_u_nm (self) };
  double a, u[BT_N_PARTS], noise[3], squares = 0;

  *alpha = (BtAlpha){ NAN, NAN, { 0 }, NAN, NAN, NAN, NAN };
  if (!bt_curve_at (curve, energy_ev, &a, u))
    return FALSE;
  if (!stated && !(t > 0))
    return TRUE;
  u[BT_PART_THICKNESS] = stated ? 0 : fabs (a) * draws.thickness_u_nm / t;
  alpha->value = factor * a;
  for (guint k = 0; k < BT_N_PARTS; k++)
    {
      alpha->parts[k] = factor * u[k];
      squares += alpha->parts[k] * alpha->parts[k];
    }
  alpha->u = sqrt (squares);
  path.kind = curve->kind;
  if (n_draws == 0
      || !bt_point_at (&draws.point, self, &path, energy_ev, bt_spectrum_absorbance_at (bt_film_get_spectrum (self), energy_ev), noise))
    return TRUE;
  if (stated)
    draws.point.kind = BT_LIGHT_PATH_BLANK_RATIO;
  bt_film_get_thickness_readings (self, &draws.n_readings);
  draws.correction = a - bt_point_absorbance (&draws.point);
  /* The curve knows the noise between its points better than the nearest one does. */
  draws.u_film = noise[0];
  draws.u_blank = noise[1];
  if (isfinite (draws.correction))
    {
      double by_film, by_blank, by_reflectance;

      bt_point_slopes (&draws.point, &by_film, &by_blank, &by_reflectance);
      if (fabs (by_film) > 0)
        draws.u_film = u[BT_PART_NOISE] / fabs (by_film);
      if (fabs (by_blank) > 0)
        draws.u_blank = u[BT_PART_BLANK] / fabs (by_blank);
      draws.u_reflectance = hypot (noise[2], path.reflectance_u);
      draws.u_photometric = accuracy != NULL ? accuracy->photometric_u : 0;
      draws.u_shift = hypot (u[BT_PART_WAVELENGTH], u[BT_PART_STEP]);
      draw (&draws, n_draws, level, alpha);
    }
  return TRUE;
}
