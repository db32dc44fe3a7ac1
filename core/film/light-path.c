/* From reading to the film's own absorbance, and on to an absorption coefficient. */
#include <bandtally/film.h>

#include <math.h>

#include <glib/gi18n-lib.h>

double
bt_alpha_per_cm (double absorbance, double thickness_nm)
{
  return thickness_nm > 0 ? BT_LN10 * absorbance / (thickness_nm * 1e-7) : NAN;
}

double
bt_alpha_u_per_cm (double absorbance, double absorbance_u, double thickness_nm, double thickness_u_nm)
{
  /* Both relative parts as absolute ones, so that A = 0 is no special case. */
  return thickness_nm > 0 ? BT_LN10 / (thickness_nm * 1e-7) * hypot (absorbance_u, absorbance * thickness_u_nm / thickness_nm) : NAN;
}

double
bt_absorptance (double absorbance)
{
  return 1 - pow (10, -absorbance);
}

void
bt_curve_free (BtCurve *curve)
{
  if (curve == NULL)
    return;
  g_free (curve->energy_ev);
  g_free (curve->absorbance);
  g_free (curve->absorbance_u);
  g_free (curve->path);
  g_ptr_array_unref (curve->flags);
  g_free (curve);
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

/* Subtracts the blank where it reaches; returns how many points it does not cover. */
static gsize
subtract_blank (BtCurve *curve, BtSpectrum *blank)
{
  gsize n = 0;

  for (gsize i = 0; i < curve->n; i++)
    {
      double a = bt_spectrum_absorbance_at (blank, curve->energy_ev[i]);

      if (isnan (a))
        continue;
      curve->energy_ev[n] = curve->energy_ev[i];
      curve->absorbance[n] = curve->absorbance[i] - a;
      curve->absorbance_u[n] = hypot (curve->absorbance_u[i], noise_at (blank, curve->energy_ev[i]));
      n++;
    }
  return curve->n - n;
}

BtCurve *
bt_film_light_path (BtFilm *self)
{
  BtCurve *curve = g_new0 (BtCurve, 1);
  BtSpectrum *spectrum, *blank;
  gsize n, left_out;

  g_return_val_if_fail (BT_IS_FILM (self), NULL);
  spectrum = bt_film_get_spectrum (self);
  blank = bt_film_get_blank (self);
  n = bt_spectrum_get_n_points (spectrum);
  curve->energy_ev = g_memdup2 (bt_spectrum_get_energy_ev (spectrum, NULL), sizeof (double) * n);
  curve->absorbance = g_memdup2 (bt_spectrum_get_absorbance (spectrum, NULL), sizeof (double) * n);
  curve->absorbance_u = g_memdup2 (bt_spectrum_get_noise (spectrum, NULL), sizeof (double) * n);
  curve->n = n;
  curve->flags = bt_flags_new ();
  if (bt_spectrum_get_y_unit (spectrum) == BT_Y_ALPHA_PER_CM)
    {
      curve->path = g_strdup (_ ("the file states the absorption coefficient itself (base e, 1/cm)"));
      return curve;
    }
  if (blank == NULL)
    {
      curve->path = g_strdup (_ ("absorbance as read, without a blank; reflection left out"));
      g_ptr_array_add (curve->flags,
                       bt_flag_new ("no-blank", _ ("No blank was given: what the substrate takes up and reflects is counted as the film's. Measure the "
                                                   "bare substrate and choose it as the blank, unless the instrument has subtracted it.")));
      return curve;
    }
  curve->path = g_strdup (_ ("blank ratio: absorbance of the film less that of the blank; reflection beyond the blank's left out"));
  left_out = subtract_blank (curve, blank);
  curve->n -= left_out;
  if (left_out > 0)
    g_ptr_array_add (curve->flags,
                     bt_flag_new ("blank-short", g_dngettext (GETTEXT_PACKAGE,
                                                              "%u point lies outside the blank's range and was left out; measure the blank over the "
                                                              "film's whole range.",
                                                              "%u points lie outside the blank's range and were left out; measure the blank over the "
                                                              "film's whole range.", (gulong) left_out), (guint) left_out));
  return curve;
}
