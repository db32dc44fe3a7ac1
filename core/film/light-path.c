/* From reading to the film's own absorbance, and on to an absorption coefficient. */
#include <bandtally/film.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "point.h"

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
  for (guint k = 0; k < BT_N_PARTS; k++)
    g_free (curve->parts[k]);
  g_free (curve->path);
  g_free (curve->alpha);
  g_ptr_array_unref (curve->flags);
  g_free (curve);
}

static const char *const path_names[BT_N_LIGHT_PATHS] = { "blank ratio", "reflection", "thin film" };

const char *
bt_light_path_name (BtLightPathKind kind)
{
  g_return_val_if_fail (kind < BT_N_LIGHT_PATHS, NULL);
  return path_names[kind];
}

gboolean
bt_light_path_from_name (const char *name, BtLightPathKind *kind)
{
  for (guint k = 0; k < BT_N_LIGHT_PATHS; k++)
    if (g_ascii_strcasecmp (name, path_names[k]) == 0)
      {
        *kind = (BtLightPathKind) k;
        return TRUE;
      }
  return FALSE;
}

static void
flag_dropped (BtCurve *curve, const char *code, gsize n, const char *singular, const char *plural)
{
  if (n > 0)
    g_ptr_array_add (curve->flags, bt_flag_new (code, g_dngettext (GETTEXT_PACKAGE, singular, plural, (gulong) n), (guint) n));
}

/* Index of the substrate: stated, or published for its name; NAN where neither is to be had. */
static double
index_at (BtFilm *self, const BtLightPath *how, double energy_ev)
{
  return how->substrate_index > 0 ? how->substrate_index
                                  : bt_substrate_index (bt_film_get_substrate (self), BT_HC_EV_NM / energy_ev);
}

static const char *
substrate_words (BtFilm *self, const BtLightPath *how)
{
  return how->substrate_index > 0 ? _ ("a substrate of the index stated") : bt_film_get_substrate (self);
}

typedef struct { gsize n_blank, n_reflectance, n_formula; } Dropped;

/* Takes every point along the path, with the uncertainty of each source; drops what cannot be taken, counted by reason. */
static void
take_points (BtCurve *curve, BtFilm *self, const BtLightPath *how, const BtAccuracy *accuracy, Dropped *dropped)
{
  const gboolean blank = how->kind != BT_LIGHT_PATH_REFLECTION && bt_film_get_blank (self) != NULL;
  const gboolean reflectance = how->kind == BT_LIGHT_PATH_REFLECTION
                               && (how->reflectance_u > 0 || bt_film_get_reflectance (self) != NULL);
  gsize n = 0;

  curve->parts[BT_PART_NOISE] = g_new (double, curve->n);
  if (blank)
    curve->parts[BT_PART_BLANK] = g_new (double, curve->n);
  if (reflectance)
    curve->parts[BT_PART_REFLECTANCE] = g_new (double, curve->n);
  if (accuracy != NULL && accuracy->photometric_u > 0)
    curve->parts[BT_PART_PHOTOMETRIC] = g_new (double, curve->n);
  for (gsize i = 0; i < curve->n; i++)
    {
      double a, by_film, by_blank, by_reflectance, u[3];
      BtPoint point;

      if (!bt_point_at (&point, self, how, curve->energy_ev[i], curve->absorbance[i], u))
        {
          *(blank ? &dropped->n_blank : &dropped->n_reflectance) += 1;
          continue;
        }
      a = bt_point_absorbance (&point);
      if (isfinite (a))
        bt_point_slopes (&point, &by_film, &by_blank, &by_reflectance);
      if (!isfinite (a) || !isfinite (by_film) || !isfinite (by_reflectance))
        {
          dropped->n_formula++;
          continue;
        }
      curve->parts[BT_PART_NOISE][n] = fabs (by_film) * curve->absorbance_u[i];
      if (blank)
        curve->parts[BT_PART_BLANK][n] = fabs (by_blank) * u[1];
      if (reflectance)
        curve->parts[BT_PART_REFLECTANCE][n] = fabs (by_reflectance) * hypot (u[2], how->reflectance_u);
      if (curve->parts[BT_PART_PHOTOMETRIC] != NULL)
        curve->parts[BT_PART_PHOTOMETRIC][n] = fabs (by_film) * accuracy->photometric_u;
      curve->energy_ev[n] = curve->energy_ev[i];
      curve->absorbance_u[n] = hypot (curve->parts[BT_PART_NOISE][n], blank ? curve->parts[BT_PART_BLANK][n] : 0);
      curve->absorbance[n++] = a;
    }
  curve->n = n;
}

/* What an error of the wavelength scale does on a slope, from the neighbours of each point. */
static void
take_wavelength (BtCurve *curve, double wavelength_u_nm)
{
  double *part = curve->parts[BT_PART_WAVELENGTH] = g_new0 (double, MAX (curve->n, 1));

  for (gsize i = 0; i < curve->n && curve->n > 1; i++)
    {
      gsize a = i > 0 ? i - 1 : 0, b = MIN (i + 1, curve->n - 1);
      double e = curve->energy_ev[i], slope = (curve->absorbance[b] - curve->absorbance[a]) / (curve->energy_ev[b] - curve->energy_ev[a]);

      /* The neighbours' noise is no slope. */
      double noise = hypot (curve->absorbance_u[a], curve->absorbance_u[b]) / (curve->energy_ev[b] - curve->energy_ev[a]);

      part[i] = sqrt (fmax (0, slope * slope - noise * noise)) * wavelength_u_nm * e * e / BT_HC_EV_NM;
    }
}

static void
flag_no_blank (BtCurve *curve)
{
  g_ptr_array_add (curve->flags,
                   bt_flag_new ("no-blank", _ ("No blank was given: what the substrate takes up and reflects is counted as the film's. Measure the "
                                               "bare substrate and choose it as the blank, unless the instrument has subtracted it.")));
}

static void
flag_without_index (BtCurve *curve, BtFilm *self)
{
  g_autofree char *known = g_strjoinv (", ", (char **) bt_substrate_names ());

  g_ptr_array_add (curve->flags,
                   bt_flag_new ("no-substrate-index", _ ("No refractive index is known for the substrate \"%s\", so reflection was left out. Name one of %s, or "
                                                         "state the index."),
                                bt_film_get_substrate (self), known));
}

static void
say_slab (BtCurve *curve, BtFilm *self, const BtLightPath *how)
{
  if (bt_film_get_reflectance (self) != NULL)
    curve->path = g_strdup (_ ("slab with reflection at both faces taken off, T = (1-R)² e^-αt / (1 - R² e^-2αt); R from the measured reflectance and T "
                               "together"));
  else if (isnan (how->reflectance))
    curve->path = g_strdup_printf (_ ("slab with reflection at both faces taken off, T = (1-R)² e^-αt / (1 - R² e^-2αt); R from the index of %s"),
                                   how->substrate_index > 0 ? _ ("the value stated") : bt_film_get_substrate (self));
  else
    curve->path = g_strdup_printf (_ ("slab with reflection at both faces taken off, T = (1-R)² e^-αt / (1 - R² e^-2αt); R = %.4g"), how->reflectance);
  curve->alpha = g_strdup (_ ("α of the slab's inside, base e: what plate and film take up together, over the film's thickness"));
}

static void
say_sheet (BtCurve *curve, BtFilm *self, const BtLightPath *how)
{
  const double t = bt_film_get_thickness_nm (self), shortest_nm = bt_nm_from_ev (curve->energy_ev[curve->n > 0 ? curve->n - 1 : 0]);

  curve->path = g_strdup_printf (_ ("thin conducting film on a substrate, T/T_blank = |1 + Z0 s/(1 + n)|^-2; absorbance 2 Z0 s/((1 + n) ln 10), on %s"),
                                 substrate_words (self, how));
  curve->alpha = g_strdup_printf (_ ("α of a thin film on %s, base e, 2 Z0 s/((1 + n_s) t): 2n/(1 + n_s) times the bulk value"), substrate_words (self, how));
  /* The formula needs a film much thinner than lambda / (2 pi n); a nanotube film's index is about 1.5 (common practice). */
  if (t > 0 && t > 0.5 * shortest_nm / (2 * G_PI * 1.5))
    g_ptr_array_add (curve->flags,
                     bt_flag_new ("not-thin", _ ("At %.0f nm the film is not thin against %.0f nm light, which the thin-film light path asks for; use the "
                                                 "blank ratio, or trust only long wavelengths."),
                                  t, shortest_nm));
}

static void
say_ratio (BtCurve *curve, BtFilm *self, const BtLightPath *how)
{
  const double index = curve->n > 0 ? index_at (self, how, curve->energy_ev[curve->n / 2]) : NAN;

  curve->path = g_strdup (bt_film_get_blank (self) == NULL
                            ? _ ("absorbance as read, without a blank; reflection left out")
                            : _ ("blank ratio: absorbance of the film less that of the blank; reflection beyond the blank's left out"));
  /* 2n / (1 + n_s): a film much thinner than the wavelength. Its index of about 1.5 is common practice. */
  curve->alpha = isnan (index)
                   ? g_strdup (_ ("blank-ratio α, base e, ln(10) A/t: for a film much thinner than the wavelength 2n/(1 + n_s) times the bulk value"))
                   : g_strdup_printf (_ ("blank-ratio α, base e, ln(10) A/t, on %s: for a film much thinner than the wavelength 2n/(1 + n_s) times the bulk "
                                         "value, %.2f for a film index of 1.5"),
                                      substrate_words (self, how), 2 * 1.5 / (1 + index));
  if (bt_film_get_reflectance (self) != NULL)
    g_ptr_array_add (curve->flags, bt_flag_new ("reflectance-unused", _ ("A measured reflectance is there but this light path does not use it; choose the "
                                                                         "light path \"reflection\" to have it taken off.")));
}

static void
flag_all_dropped (BtCurve *curve, const BtLightPath *how, gboolean measured, const Dropped *dropped)
{
  flag_dropped (curve, "blank-short", dropped->n_blank,
                _ ("%u point lies outside the blank's range and was left out; measure the blank over the film's whole range."),
                _ ("%u points lie outside the blank's range and were left out; measure the blank over the film's whole range."));
  flag_dropped (curve, "reflectance-short", dropped->n_reflectance,
                _ ("%u point lies outside the range of the measured reflectance and was left out; measure it over the film's whole range."),
                _ ("%u points lie outside the range of the measured reflectance and were left out; measure it over the film's whole range."));
  if (measured)
    flag_dropped (curve, "reflectance-impossible", dropped->n_formula,
                  _ ("%u point was left out where reflectance and transmittance add up to more than 1: check the units of both files and the mirror's "
                     "calibration."),
                  _ ("%u points were left out where reflectance and transmittance add up to more than 1: check the units of both files and the mirror's "
                     "calibration."));
  else if (how->kind != BT_LIGHT_PATH_BLANK_RATIO)
    flag_dropped (curve, "outside-index", dropped->n_formula, _ ("%u point lies outside the published range of the substrate's index and was left out."),
                  _ ("%u points lie outside the published range of the substrate's index and were left out."));
}

BtCurve *
bt_film_light_path (BtFilm *self, const BtLightPath *how, const BtAccuracy *accuracy)
{
  static const BtLightPath blank_ratio = BT_LIGHT_PATH_INIT;
  BtCurve *curve = g_new0 (BtCurve, 1);
  Dropped dropped = { 0 };
  BtSpectrum *spectrum;
  gboolean measured;
  gsize n;

  g_return_val_if_fail (BT_IS_FILM (self), NULL);
  if (how == NULL)
    how = &blank_ratio;
  spectrum = bt_film_get_spectrum (self);
  n = curve->n = bt_spectrum_get_n_points (spectrum);
  curve->energy_ev = g_memdup2 (bt_spectrum_get_energy_ev (spectrum, NULL), sizeof (double) * n);
  curve->absorbance = g_memdup2 (bt_spectrum_get_absorbance (spectrum, NULL), sizeof (double) * n);
  curve->absorbance_u = g_memdup2 (bt_spectrum_get_noise (spectrum, NULL), sizeof (double) * n);
  curve->flags = bt_flags_new ();
  if (bt_spectrum_get_y_unit (spectrum) == BT_Y_ALPHA_PER_CM)
    {
      curve->parts[BT_PART_NOISE] = g_memdup2 (curve->absorbance_u, sizeof (double) * n);
      curve->path = g_strdup (_ ("the file states the absorption coefficient itself (base e, 1/cm)"));
      curve->alpha = g_strdup (_ ("α as the file states it, base e"));
      return curve;
    }
  measured = how->kind == BT_LIGHT_PATH_REFLECTION && bt_film_get_reflectance (self) != NULL;
  if ((how->kind == BT_LIGHT_PATH_THIN_FILM || (how->kind == BT_LIGHT_PATH_REFLECTION && isnan (how->reflectance) && !measured)) && curve->n > 0
      && isnan (index_at (self, how, curve->energy_ev[curve->n / 2])))
    {
      flag_without_index (curve, self);
      how = &blank_ratio;
    }
  curve->kind = how->kind;
  if (how->kind != BT_LIGHT_PATH_REFLECTION && bt_film_get_blank (self) == NULL)
    flag_no_blank (curve);
  take_points (curve, self, how, accuracy, &dropped);
  if (accuracy != NULL && accuracy->wavelength_u_nm > 0)
    take_wavelength (curve, accuracy->wavelength_u_nm);
  switch (how->kind)
    {
    case BT_LIGHT_PATH_REFLECTION:
      say_slab (curve, self, how);
      break;
    case BT_LIGHT_PATH_THIN_FILM:
      say_sheet (curve, self, how);
      break;
    case BT_LIGHT_PATH_BLANK_RATIO:
    case BT_N_LIGHT_PATHS:
    default:
      say_ratio (curve, self, how);
    }
  flag_all_dropped (curve, how, measured, &dropped);
  return curve;
}
