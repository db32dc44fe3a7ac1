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

/* Applies a formula that turns a transmittance into an absorbance, point by point; drops what it cannot. Returns how many. */
static gsize
apply (BtCurve *curve, BtFilm *self, const BtLightPath *how, double (*formula) (double transmittance, double energy_ev, BtFilm *, const BtLightPath *))
{
  gsize n = 0;

  for (gsize i = 0; i < curve->n; i++)
    {
      const double t = pow (10, -curve->absorbance[i]), h = 1e-4;
      double a = formula (t, curve->energy_ev[i], self, how);
      /* Slope of the new absorbance by the old one, for the noise. */
      double slope = (formula (t * pow (10, -h), curve->energy_ev[i], self, how) - a) / h;

      if (!isfinite (a) || !isfinite (slope))
        continue;
      curve->energy_ev[n] = curve->energy_ev[i];
      curve->absorbance_u[n] = fabs (slope) * curve->absorbance_u[i];
      curve->absorbance[n++] = a;
    }
  return curve->n - n;
}

static double
slab_formula (double transmittance, double energy_ev, BtFilm *self, const BtLightPath *how)
{
  double r = isnan (how->reflectance) ? bt_face_reflectance (index_at (self, how, energy_ev)) : how->reflectance;

  return bt_slab_depth (r, transmittance) / BT_LN10;
}

static double
sheet_formula (double transmittance, double energy_ev, BtFilm *self, const BtLightPath *how)
{
  double index = index_at (self, how, energy_ev);

  return 2 * BT_Z0_OHM * bt_sheet_conductance (transmittance, index) / ((1 + index) * BT_LN10);
}

/* Without a blank the reading stands for the whole, and the flag says so. */
static void
take_blank (BtCurve *curve, BtSpectrum *blank)
{
  gsize left_out;

  if (blank == NULL)
    {
      g_ptr_array_add (curve->flags,
                       bt_flag_new ("no-blank", _ ("No blank was given: what the substrate takes up and reflects is counted as the film's. Measure the "
                                                   "bare substrate and choose it as the blank, unless the instrument has subtracted it.")));
      return;
    }
  left_out = subtract_blank (curve, blank);
  curve->n -= left_out;
  flag_dropped (curve, "blank-short", left_out, _ ("%u point lies outside the blank's range and was left out; measure the blank over the film's whole range."),
                _ ("%u points lie outside the blank's range and were left out; measure the blank over the film's whole range."));
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
take_slab (BtCurve *curve, BtFilm *self, const BtLightPath *how)
{
  gsize dropped = apply (curve, self, how, slab_formula);

  curve->n -= dropped;
  curve->path = isnan (how->reflectance)
                  ? g_strdup_printf (_ ("slab with reflection at both faces taken off, T = (1-R)² e^-αt / (1 - R² e^-2αt); R from the index of %s"),
                                     how->substrate_index > 0 ? _ ("the value stated") : bt_film_get_substrate (self))
                  : g_strdup_printf (_ ("slab with reflection at both faces taken off, T = (1-R)² e^-αt / (1 - R² e^-2αt); R = %.4g"), how->reflectance);
  flag_dropped (curve, "outside-index", dropped, _ ("%u point lies outside the published range of the substrate's index and was left out."),
                _ ("%u points lie outside the published range of the substrate's index and were left out."));
}

static void
take_sheet (BtCurve *curve, BtFilm *self, const BtLightPath *how)
{
  const double t = bt_film_get_thickness_nm (self), shortest_nm = bt_nm_from_ev (curve->energy_ev[curve->n - 1]);
  gsize dropped = apply (curve, self, how, sheet_formula);

  curve->n -= dropped;
  curve->path = g_strdup_printf (_ ("thin conducting film on a substrate, T/T_blank = |1 + Z0 s/(1 + n)|^-2; absorbance 2 Z0 s/((1 + n) ln 10), on %s"),
                                 how->substrate_index > 0 ? _ ("a substrate of the index stated") : bt_film_get_substrate (self));
  flag_dropped (curve, "outside-index", dropped, _ ("%u point lies outside the published range of the substrate's index and was left out."),
                _ ("%u points lie outside the published range of the substrate's index and were left out."));
  /* The formula needs a film much thinner than lambda / (2 pi n); a nanotube film's index is about 1.5 (common practice). */
  if (t > 0 && t > 0.5 * shortest_nm / (2 * G_PI * 1.5))
    g_ptr_array_add (curve->flags,
                     bt_flag_new ("not-thin", _ ("At %.0f nm the film is not thin against %.0f nm light, which the thin-film light path asks for; use the "
                                                 "blank ratio, or trust only long wavelengths."),
                                  t, shortest_nm));
}

BtCurve *
bt_film_light_path (BtFilm *self, const BtLightPath *how)
{
  static const BtLightPath blank_ratio = BT_LIGHT_PATH_INIT;
  BtCurve *curve = g_new0 (BtCurve, 1);
  BtSpectrum *spectrum;
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
      curve->path = g_strdup (_ ("the file states the absorption coefficient itself (base e, 1/cm)"));
      return curve;
    }
  if ((how->kind == BT_LIGHT_PATH_THIN_FILM || (how->kind == BT_LIGHT_PATH_REFLECTION && isnan (how->reflectance))) && curve->n > 0
      && isnan (index_at (self, how, curve->energy_ev[curve->n / 2])))
    {
      flag_without_index (curve, self);
      how = &blank_ratio;
    }
  /* The slab's own reflection is in its formula; a blank would take it off twice. */
  if (how->kind != BT_LIGHT_PATH_REFLECTION)
    take_blank (curve, bt_film_get_blank (self));
  switch (how->kind)
    {
    case BT_LIGHT_PATH_REFLECTION:
      take_slab (curve, self, how);
      break;
    case BT_LIGHT_PATH_THIN_FILM:
      take_sheet (curve, self, how);
      break;
    case BT_LIGHT_PATH_BLANK_RATIO:
    case BT_N_LIGHT_PATHS:
    default:
      curve->path = g_strdup (bt_film_get_blank (self) == NULL
                                ? _ ("absorbance as read, without a blank; reflection left out")
                                : _ ("blank ratio: absorbance of the film less that of the blank; reflection beyond the blank's left out"));
    }
  return curve;
}
