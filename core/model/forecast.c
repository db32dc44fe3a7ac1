/* Forecast: a spectrum from a population of tubes. */
#include <bandtally/forecast.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>
#include <gsl/gsl_randist.h>
#include <gsl/gsl_rng.h>

#include <bandtally/film.h>
#include <bandtally/spectrum.h>

#include "shapes-private.h"

/* Area per carbon against M11's, times the strength ratio for semiconducting groups. Invented, in the published order
 * S11 > S22 > S33 per carbon. */
static const double strengths[BT_N_GROUPS]
    = { [BT_S11] = 1.6, [BT_S22] = 1.0, [BT_M11] = 1.0, [BT_S33] = 0.6, [BT_S44] = 0.5, [BT_M22] = 0.5 };
/* S22 loses this share of what S11 loses to doping. */
#define BLEACH_OF_S22 0.1
/* Thickness to which s22_absorbance and the tail refer. */
#define REFERENCE_THICKNESS_NM 100.0

void
bt_forecast_init (BtForecast *forecast)
{
  *forecast = (BtForecast){
    .window = { 1.4, 0.1 },
    .fraction = 2.0 / 3,
    .strength_ratio = 1,
    .shift_ev = 0.04,
    .fwhm_ev = { [BT_S11] = 0.07, [BT_S22] = 0.10, [BT_M11] = 0.14, [BT_S33] = 0.17, [BT_S44] = 0.19, [BT_M22] = 0.19 },
    .lorentzian = 0.2,
    .sideband = 0.06,
    .s22_absorbance = 0.25,
    .tail = { BT_TAIL_PLASMON, 0.9, { 4.6, 1.3 }, 0.01 },
    .low_nm = 300,
    .high_nm = 2500,
    .step_nm = 1,
    .noise = 5e-4,
    .thickness_nm = REFERENCE_THICKNESS_NM,
    .thickness_u_nm = 4,
    .seed = 1
  };
}

void
bt_forecast_set_tail (BtForecast *forecast, BtTailKind kind)
{
  static const double shapes[BT_N_TAILS][2]
    = { [BT_TAIL_PLASMON] = { 4.5, 1.0 }, [BT_TAIL_POWER] = { 1.5, 0 }, [BT_TAIL_EXPONENTIAL] = { 0.0015, 0 } };
  const double at_ev = bt_ev_from_nm (BT_TAIL_REFERENCE_NM);
  double height, unit;

  g_return_if_fail (kind < BT_N_TAILS);
  if (kind == forecast->tail.kind)
    return;
  bt_tail_eval (&forecast->tail, &at_ev, 1, &height);
  forecast->tail = (BtTail){ kind, 1, { shapes[kind][0], shapes[kind][1] }, 0 };
  bt_tail_eval (&forecast->tail, &at_ev, 1, &unit);
  forecast->tail.height = height / unit;
}

gsize
bt_forecast_n_points (const BtForecast *forecast)
{
  /* Also for numbers that make no axis: bt_forecast_compute() is the one to complain. */
  if (!(forecast->high_nm >= forecast->low_nm && forecast->step_nm > 0
        && (forecast->high_nm - forecast->low_nm) / forecast->step_nm <= 1e6))
    return 0;
  return (gsize)floor ((forecast->high_nm - forecast->low_nm) / forecast->step_nm + 1.5);
}

static gboolean
refuse (GError **error, const char *field, const char *wanted)
{
  g_set_error (error, BT_SPECTRUM_ERROR, BT_SPECTRUM_ERROR_VALUES, _ ("Forecast: %s has to be %s."), field, wanted);
  return FALSE;
}

/* Widths and the tail: arrays, so that their names are made here. */
static gboolean
check_shapes (const BtForecast *f, GError **error)
{
  for (guint g = 0; g < BT_N_GROUPS; g++)
    if (!(f->fwhm_ev[g] >= 0.005 && f->fwhm_ev[g] <= 2))
      {
        g_autofree char *field = g_strdup_printf (_ ("the width of %s"), bt_group_name ((BtGroup)g));

        return refuse (error, field, _ ("between 0.005 and 2 eV"));
      }
  if (!(f->tail.kind < BT_N_TAILS))
    return refuse (error, _ ("the tail"), _ ("plasmon, power or exponential"));
  if (!(f->tail.height >= 0 && f->tail.height <= 20))
    return refuse (error, _ ("the tail's height"), _ ("between 0 and 20"));
  if (!(fabs (f->tail.offset) <= 5))
    return refuse (error, _ ("the tail's offset"), _ ("between -5 and 5"));
  switch (f->tail.kind)
    {
    case BT_TAIL_PLASMON:
      if (!(f->tail.shape[0] >= 2 && f->tail.shape[0] <= 10))
        return refuse (error, _ ("the energy of the tail's pi-plasmon"), _ ("between 2 and 10 eV"));
      if (!(f->tail.shape[1] >= 0.05 && f->tail.shape[1] <= 20))
        return refuse (error, _ ("the half width of the tail's pi-plasmon"), _ ("between 0.05 and 20 eV"));
      break;
    case BT_TAIL_POWER:
      if (!(f->tail.shape[0] >= 0 && f->tail.shape[0] <= 8))
        return refuse (error, _ ("the tail's power"), _ ("between 0 and 8"));
      break;
    case BT_TAIL_EXPONENTIAL:
    case BT_N_TAILS:
    default:
      if (!(f->tail.shape[0] >= 0 && f->tail.shape[0] <= 0.05))
        return refuse (error, _ ("the tail's decay"), _ ("between 0 and 0.05 per nm"));
    }
  return TRUE;
}

static gboolean
check_instrument (const BtForecast *f, GError **error)
{
  if (!(f->low_nm >= 100 && f->high_nm > f->low_nm && f->high_nm <= 20000))
    return refuse (error, _ ("the range"), _ ("from a shorter to a longer wavelength within 100 to 20000 nm"));
  if (!(f->step_nm > 0) || (f->high_nm - f->low_nm) / f->step_nm > 1e6)
    return refuse (error, _ ("the step"), _ ("above 0 nm and at least a millionth of the range"));
  if (bt_forecast_n_points (f) < BT_SPECTRUM_MIN_POINTS)
    return refuse (error, _ ("the step"), _ ("small enough for at least 8 points"));
  if (!(f->noise >= 0 && f->noise < 1))
    return refuse (error, _ ("the noise"), _ ("between 0 and 1"));
  if (!(f->step_at_nm >= 0 && f->step_at_nm <= 20000))
    return refuse (error, _ ("the wavelength of the detector step"), _ ("between 0 and 20000 nm"));
  if (!(fabs (f->step_size) <= 5))
    return refuse (error, _ ("the size of the detector step"), _ ("between -5 and 5"));
  if (!(f->ceiling >= 0 && f->ceiling <= 10))
    return refuse (error, _ ("the ceiling"), _ ("between 0 and 10"));
  if (!(f->thickness_nm > 0 && f->thickness_nm <= 1e5))
    return refuse (error, _ ("the thickness"), _ ("above 0 nm and at most 100 um"));
  if (!(f->thickness_u_nm >= 0 && f->thickness_u_nm <= 1e5))
    return refuse (error, _ ("the uncertainty of the thickness"), _ ("between 0 nm and 100 um"));
  return TRUE;
}

static gboolean
check (const BtForecast *f, GError **error)
{
  if (!(f->window.mean_nm >= 0.5 && f->window.mean_nm <= 4))
    return refuse (error, _ ("the mean diameter"), _ ("between 0.5 and 4 nm"));
  if (!(f->window.spread_nm >= 0.01 && f->window.spread_nm <= 0.6))
    return refuse (error, _ ("the spread of diameters"), _ ("between 0.01 and 0.6 nm"));
  if (!(f->fraction >= 0 && f->fraction <= 1))
    return refuse (error, _ ("the semiconducting fraction"), _ ("between 0 and 1"));
  if (!(f->strength_ratio > 0.05 && f->strength_ratio < 20))
    return refuse (error, _ ("the strength ratio"), _ ("between 0.05 and 20"));
  if (!(f->shift_ev > -0.2 && f->shift_ev < 0.4))
    return refuse (error, _ ("the red shift"), _ ("between -0.2 and 0.4 eV"));
  if (!(f->abundance_scatter >= 0 && f->abundance_scatter <= 2))
    return refuse (error, _ ("the scatter of abundances"), _ ("between 0 and 2"));
  if (!(f->jitter_ev >= 0 && f->jitter_ev <= 0.1))
    return refuse (error, _ ("the jitter of energies"), _ ("between 0 and 0.1 eV"));
  if (!(f->lorentzian >= 0 && f->lorentzian <= 1))
    return refuse (error, _ ("the Lorentzian share"), _ ("between 0 and 1"));
  if (!(f->sideband >= 0 && f->sideband <= 0.5))
    return refuse (error, _ ("the sideband's share"), _ ("between 0 and 0.5"));
  if (!(f->s22_absorbance > 0 && f->s22_absorbance <= 10))
    return refuse (error, _ ("the absorbance of S22"), _ ("above 0 and at most 10"));
  if (!(f->bleach >= 0 && f->bleach <= 1))
    return refuse (error, _ ("the bleached share"), _ ("between 0 and 1"));
  return check_shapes (f, error) && check_instrument (f, error);
}

/* Carbon mass share of every tube: normal in diameter, scattered, each kind normalised to its part. Every window
 * that check() lets pass holds tubes of both kinds. */
static double *
mass_shares (const BtForecast *f, const GArray *tubes, gsl_rng *rng)
{
  double *share = g_new (double, tubes->len), metallic = 0, semiconducting = 0;

  for (guint i = 0; i < tubes->len; i++)
    {
      BtTube tube = g_array_index (tubes, BtTube, i);
      double z = (bt_tube_diameter_nm (tube) - f->window.mean_nm) / f->window.spread_nm;
      double scatter = sqrt (log1p (f->abundance_scatter * f->abundance_scatter));

      share[i] = exp (-z * z / 2 + gsl_ran_gaussian (rng, 1) * scatter);
      *(bt_tube_kind (tube) == BT_TUBE_METALLIC ? &metallic : &semiconducting) += share[i];
    }
  for (guint i = 0; i < tubes->len; i++)
    {
      gboolean is_metallic = bt_tube_kind (g_array_index (tubes, BtTube, i)) == BT_TUBE_METALLIC;
      double total = is_metallic ? metallic : semiconducting;

      share[i] *= total > 0 ? (is_metallic ? 1 - f->fraction : f->fraction) / total : 0;
    }
  return share;
}

/* Adds a line of this area; both shapes have the same FWHM. */
static void
add_line (const BtForecast *f, const double *energy_ev, gsize n, double centre, double fwhm, double area, double *out,
          double *scratch)
{
  const double gaussian = area * (1 - f->lorentzian) / (BT_GAUSSIAN_AREA * fwhm),
               lorentzian = area * f->lorentzian / (G_PI / 2 * fwhm);

  bt_gaussian_eval (energy_ev, n, centre, fwhm, scratch);
  for (gsize i = 0; i < n; i++)
    out[i] += gaussian * scratch[i];
  if (!(f->lorentzian > 0))
    return;
  bt_lorentzian_eval (energy_ev, n, centre, fwhm, scratch);
  for (gsize i = 0; i < n; i++)
    out[i] += lorentzian * scratch[i];
}

static double
group_strength (const BtForecast *f, BtGroup group)
{
  double strength = strengths[group] * (bt_group_is_metallic (group) ? 1 : f->strength_ratio);

  if (group == BT_S11)
    strength *= 1 - f->bleach;
  if (group == BT_S22)
    strength *= 1 - BLEACH_OF_S22 * f->bleach;
  return strength;
}

/* Adds every line of a tube. Random numbers are drawn in a fixed order whatever the options. */
static void
add_tube (const BtForecast *f, BtTube tube, double share, gsl_rng *rng, const double *energy_ev, gsize n, double *out,
          double *scratch)
{
  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      const gboolean two = !isnan (bt_tube_energy_ev (tube, (BtGroup)g, 1, BT_REFERENCE_EMPIRICAL));

      for (int branch = 0; branch < 2; branch++)
        {
          double centre = bt_tube_energy_ev (tube, (BtGroup)g, branch, BT_REFERENCE_EMPIRICAL);
          double jitter = gsl_ran_gaussian (rng, 1) * f->jitter_ev;
          double area = share * group_strength (f, (BtGroup)g) / (two ? 2 : 1);
          double side = g == BT_S11 || g == BT_S22 ? f->sideband : 0;

          if (isnan (centre) || !(area > 0))
            continue;
          centre += jitter - f->shift_ev;
          add_line (f, energy_ev, n, centre, f->fwhm_ev[g], (1 - side) * area, out, scratch);
          if (side > 0)
            add_line (f, energy_ev, n, centre + BT_SIDEBAND_EV, BT_SIDEBAND_WIDTH * f->fwhm_ev[g], side * area, out, scratch);
        }
    }
}

/* Crown of S22 for unit area, all carbon semiconducting: what s22_absorbance is to be. */
static double
s22_crown (const BtForecast *f, const GArray *tubes)
{
  double weight = 0, top = 0;
  g_autofree double *share = g_new0 (double, tubes->len);

  for (guint i = 0; i < tubes->len; i++)
    {
      BtTube tube = g_array_index (tubes, BtTube, i);
      double z = (bt_tube_diameter_nm (tube) - f->window.mean_nm) / f->window.spread_nm;

      if (bt_tube_kind (tube) != BT_TUBE_METALLIC)
        weight += share[i] = exp (-z * z / 2);
    }
  for (double e = 0.3; e < 3; e += 0.005)
    {
      double sum = 0;

      for (guint i = 0; i < tubes->len; i++)
        {
          double centre = bt_tube_energy_ev (g_array_index (tubes, BtTube, i), BT_S22, 0, BT_REFERENCE_EMPIRICAL), u;

          if (isnan (centre))
            continue;
          u = (e - centre + f->shift_ev) / f->fwhm_ev[BT_S22];
          sum += share[i] / weight * exp (-2.772588722239781 * u * u) / (BT_GAUSSIAN_AREA * f->fwhm_ev[BT_S22]);
        }
      top = fmax (top, sum);
    }
  return top;
}

/* What the instrument makes of it: stray light that sets a ceiling, a detector step, noise that grows as light gets scarce. */
static void
add_instrument (const BtForecast *f, const double *wavelength_nm, double *absorbance, gsize n, gsl_rng *rng)
{
  for (gsize i = 0; i < n; i++)
    {
      double a = absorbance[i], noise = gsl_ran_gaussian (rng, 1);

      if (f->ceiling > 0)
        {
          double stray = pow (10, -f->ceiling);

          a = -log10 ((pow (10, -a) + stray) / (1 + stray));
        }
      if (f->step_at_nm > 0 && wavelength_nm[i] > f->step_at_nm)
        a += f->step_size;
      /* Half detector noise, half source noise at A = 0; the detector's part grows as 10^A. */
      a += noise * f->noise * (0.5 + 0.5 * pow (10, fmin (a, 6)));
      absorbance[i] = a;
    }
}

gboolean
bt_forecast_compute (const BtForecast *f, double *wavelength_nm, double *absorbance, GError **error)
{
  const double reach = 4 * f->window.spread_nm, scale = f->thickness_nm / REFERENCE_THICKNESS_NM;
  g_autoptr (GArray) tubes = NULL;
  g_autofree double *energy = NULL, *scratch = NULL, *tail = NULL, *share = NULL;
  double crown;
  gsize n;
  gsl_rng *rng;

  if (!check (f, error))
    return FALSE;
  n = bt_forecast_n_points (f);
  tubes = bt_tubes_in_diameter (fmax (0.35, f->window.mean_nm - reach), f->window.mean_nm + reach);
  crown = s22_crown (f, tubes);
  if (!(crown > 0))
    return refuse (error, _ ("the spread of diameters"), _ ("wide enough to hold at least one semiconducting tube"));
  energy = g_new (double, n);
  scratch = g_new (double, n);
  tail = g_new (double, n);
  for (gsize i = 0; i < n; i++)
    {
      wavelength_nm[i] = f->low_nm + f->step_nm * (double)i;
      energy[i] = bt_ev_from_nm (wavelength_nm[i]);
      absorbance[i] = 0;
    }
  rng = gsl_rng_alloc (gsl_rng_mt19937);
  gsl_rng_set (rng, (unsigned long)f->seed);
  share = mass_shares (f, tubes, rng);
  for (guint i = 0; i < tubes->len; i++)
    add_tube (f, g_array_index (tubes, BtTube, i), share[i], rng, energy, n, absorbance, scratch);
  bt_tail_eval (&f->tail, energy, n, tail);
  if (f->more_tail.height > 0 || fabs (f->more_tail.offset) > 0)
    {
      bt_tail_eval (&f->more_tail, energy, n, scratch);
      for (gsize i = 0; i < n; i++)
        tail[i] += scratch[i];
    }
  for (gsize i = 0; i < n; i++)
    absorbance[i] = scale * (absorbance[i] * f->s22_absorbance / (crown * f->strength_ratio) + tail[i]);
  add_instrument (f, wavelength_nm, absorbance, n, rng);
  gsl_rng_free (rng);
  return TRUE;
}

static void
note (GString *text, const char *key, double value)
{
  char buffer[G_ASCII_DTOSTR_BUF_SIZE];

  g_string_append_printf (text, "# %s = %s\n", key, g_ascii_formatd (buffer, sizeof buffer, "%.6g", value));
}

/* A name that stays on its line of the preamble. */
static void
note_name (GString *text, const char *key, const char *name)
{
  g_autofree char *line = g_strdelimit (g_strdup (name != NULL ? name : "forecast"), "\r\n\v\f", ' ');

  g_string_append_printf (text, "# %s = %s\n", key, line);
}

static void
note_population (GString *text, const BtForecast *f)
{
  note (text, "made with semiconducting fraction", f->fraction);
  note (text, "made with strength ratio", f->strength_ratio);
  note (text, "made with diameter nm", f->window.mean_nm);
  note (text, "made with diameter spread nm", f->window.spread_nm);
  note (text, "made with abundance scatter", f->abundance_scatter);
  note (text, "made with energy jitter eV", f->jitter_ev);
  note (text, "made with red shift eV", f->shift_ev);
  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      g_autofree char *key = g_strdup_printf ("made with %s FWHM eV", bt_group_name ((BtGroup)g));

      note (text, key, f->fwhm_ev[g]);
    }
  note (text, "made with Lorentzian share", f->lorentzian);
  note (text, "made with sideband share", f->sideband);
  note (text, "made with S22 absorbance at 100 nm", f->s22_absorbance);
  if (f->bleach > 0)
    note (text, "made with share of S11 bleached", f->bleach);
}

static void
note_tail_and_instrument (GString *text, const BtForecast *f)
{
  static const char *const shape_names[BT_N_TAILS][2]
      = { [BT_TAIL_PLASMON] = { "made with tail centre eV", "made with tail half width eV" },
          [BT_TAIL_POWER] = { "made with tail power", NULL },
          [BT_TAIL_EXPONENTIAL] = { "made with tail decay per nm", NULL } };

  g_string_append_printf (text, "# made with tail = %s\n", bt_tail_name (f->tail.kind));
  note (text, "made with tail height", f->tail.height);
  for (guint k = 0; k < 2 && shape_names[f->tail.kind][k] != NULL; k++)
    note (text, shape_names[f->tail.kind][k], f->tail.shape[k]);
  note (text, "made with tail offset", f->tail.offset);
  if (f->more_tail.height > 0)
    {
      g_string_append_printf (text, "# made with more tail = %s\n", bt_tail_name (f->more_tail.kind));
      note (text, "made with more tail height", f->more_tail.height);
      for (guint k = 0; k < 2 && shape_names[f->more_tail.kind][k] != NULL; k++)
        note (text, shape_names[f->more_tail.kind][k], f->more_tail.shape[k]);
    }
  note (text, "made with noise", f->noise);
  if (f->step_at_nm > 0)
    {
      note (text, "made with detector step at nm", f->step_at_nm);
      note (text, "made with detector step of", f->step_size);
    }
  if (f->ceiling > 0)
    note (text, "made with instrument ceiling", f->ceiling);
  g_string_append_printf (text, "# made with seed = %" G_GUINT64_FORMAT "\n", f->seed);
}

char *
bt_forecast_to_text (const BtForecast *f, const char *film, const char *lot, GError **error)
{
  const gsize n = bt_forecast_n_points (f);
  g_autofree double *wavelength_nm = g_new (double, MAX (n, 1)), *absorbance = g_new (double, MAX (n, 1));
  char x[G_ASCII_DTOSTR_BUF_SIZE], y[G_ASCII_DTOSTR_BUF_SIZE];
  GString *text;

  if (!bt_forecast_compute (f, wavelength_nm, absorbance, error))
    return NULL;
  text = g_string_new ("# Invented data: made by bandtally-cli forecast, not measured on any film.\n");
  note_name (text, "film", film);
  note_name (text, "lot", lot);
  g_string_append (text, "# substrate = fused silica\n");
  note (text, "thickness nm", f->thickness_nm);
  note (text, "thickness u nm", f->thickness_u_nm);
  note_population (text, f);
  note_tail_and_instrument (text, f);
  g_string_append (text, "wavelength_nm,absorbance\n");
  for (gsize i = 0; i < n; i++)
    g_string_append_printf (text, "%s,%s\n", g_ascii_formatd (x, sizeof x, "%.8g", wavelength_nm[i]),
                            g_ascii_formatd (y, sizeof y, "%.5f", absorbance[i]));
  return g_string_free (text, FALSE);
}
