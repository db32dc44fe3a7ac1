/* One reading along a light path. */
#include "point.h"

#include <math.h>

double
bt_point_absorbance (const BtPoint *point)
{
  double face, depth;

  switch (point->kind)
    {
    case BT_LIGHT_PATH_REFLECTION:
      if (point->measured)
        return bt_slab_invert (point->reflectance, pow (10, -point->film), &face, &depth) ? depth / BT_LN10 : NAN;
      return bt_slab_depth (point->reflectance, pow (10, -point->film)) / BT_LN10;
    case BT_LIGHT_PATH_THIN_FILM:
      return 2 * BT_Z0_OHM * bt_sheet_conductance (pow (10, point->blank - point->film), point->index) / ((1 + point->index) * BT_LN10);
    case BT_LIGHT_PATH_BLANK_RATIO:
    case BT_N_LIGHT_PATHS:
    default:
      return point->film - point->blank;
    }
}

/* Central difference of the absorbance by one of the point's numbers; one-sided where the other side gives no film. */
static double
slope (const BtPoint *point, double at, BtPoint *moved, double *number)
{
  const double h = 1e-5;
  double up, down, here = bt_point_absorbance (point);

  *number = at + h;
  up = bt_point_absorbance (moved);
  *number = at - h;
  down = bt_point_absorbance (moved);
  *number = at;
  if (isfinite (up) && isfinite (down))
    return (up - down) / (2 * h);
  return isfinite (up) ? (up - here) / h : (here - down) / h;
}

void
bt_point_slopes (const BtPoint *point, double *by_film, double *by_blank, double *by_reflectance)
{
  BtPoint moved = *point;
  const gboolean slab = point->kind == BT_LIGHT_PATH_REFLECTION;

  *by_film = slope (point, point->film, &moved, &moved.film);
  *by_blank = slab ? 0 : slope (point, point->blank, &moved, &moved.blank);
  *by_reflectance = slab ? slope (point, point->reflectance, &moved, &moved.reflectance) : 0;
}

static double
noise_at (BtSpectrum *spectrum, double energy_ev)
{
  gsize n, low = 0, high;
  const double *energy = bt_spectrum_get_energy_ev (spectrum, &n), *noise = bt_spectrum_get_noise (spectrum, NULL);

  for (high = n - 1; high - low > 1;)
    {
      gsize middle = (low + high) / 2;

      if (energy[middle] <= energy_ev)
        low = middle;
      else
        high = middle;
    }
  return fmax (noise[low], noise[high]);
}

/* Interpolates another spectrum of the film; 0 without one. FALSE where it does not reach. */
static gboolean
other_at (BtSpectrum *other, double energy_ev, double *value, double *u)
{
  *value = 0;
  if (u != NULL)
    *u = 0;
  if (other == NULL)
    return TRUE;
  *value = bt_spectrum_absorbance_at (other, energy_ev);
  if (isnan (*value))
    return FALSE;
  if (u != NULL)
    *u = noise_at (other, energy_ev);
  return TRUE;
}

gboolean
bt_point_at (BtPoint *point, BtFilm *film, const BtLightPath *how, double energy_ev, double film_absorbance, double *u)
{
  const gboolean slab = how->kind == BT_LIGHT_PATH_REFLECTION;

  *point = (BtPoint){ how->kind, film_absorbance, 0, 0, NAN, slab && bt_film_get_reflectance (film) != NULL };
  if (u != NULL)
    u[0] = noise_at (bt_film_get_spectrum (film), energy_ev);
  if (how->kind == BT_LIGHT_PATH_THIN_FILM || (slab && !point->measured && isnan (how->reflectance)))
    point->index = how->substrate_index > 0 ? how->substrate_index : bt_substrate_index (bt_film_get_substrate (film), BT_HC_EV_NM / energy_ev);
  /* The slab's own reflection is in its formula; a blank would take it off twice. */
  if (!other_at (slab ? NULL : bt_film_get_blank (film), energy_ev, &point->blank, u != NULL ? u + 1 : NULL)
      || !other_at (point->measured ? bt_film_get_reflectance (film) : NULL, energy_ev, &point->reflectance, u != NULL ? u + 2 : NULL))
    return FALSE;
  if (slab && !point->measured)
    point->reflectance = isnan (how->reflectance) ? bt_face_reflectance (point->index) : how->reflectance;
  /* A reading of nearly nothing may scatter below it. */
  if (point->measured && point->reflectance < 0)
    point->reflectance = 0;
  return TRUE;
}
