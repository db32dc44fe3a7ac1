/* What a light path leaves out or cannot know, with its size. */
#include <bandtally/film.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

/* Indices between which nanotube films lie in the visible (common practice). */
#define FILM_INDEX_LOW 1.5
#define FILM_INDEX_HIGH 2.0
/* A film thinner than this lets waves interfere in any spectrophotometer: at 500 nm and 5 nm bandwidth light is coherent over 50 um, and a plate's two
 * faces are then no slab of incoherent bounces. */
#define LEAST_SLAB_NM 10000

static void
add (BtCurve *curve, BtFlag *flag)
{
  if (bt_flags_find (curve->flags, flag->code) == NULL)
    g_ptr_array_add (curve->flags, flag);
  else
    bt_flag_free (flag);
}

/* The largest absorbance in a range; 0 where there is none. */
static double
highest_in (const BtCurve *curve, BtRange range, double *at_ev)
{
  double highest = 0;

  for (gsize i = 0; i < curve->n; i++)
    if (curve->energy_ev[i] >= range.low_ev && curve->energy_ev[i] <= range.high_ev && curve->absorbance[i] > highest)
      {
        highest = curve->absorbance[i];
        *at_ev = curve->energy_ev[i];
      }
  return highest;
}

/* A reading averages the light and not the absorbance: where the thickness varies normally by r of itself, it is low by ln (10) A^2 r^2 / 2 exactly. */
static void
judge_evenness (BtFilm *film, const BtCurve *curve, BtRange range, BtCurve *out)
{
  gsize n;
  const double *readings = bt_film_get_thickness_readings (film, &n);
  double at_ev = 0, spread, highest = highest_in (curve, range, &at_ev), missing;

  if (readings == NULL || n < 2 || !(bt_film_get_thickness_nm (film) > 0))
    return;
  spread = bt_film_get_thickness_u_nm (film) * sqrt ((double) n) / bt_film_get_thickness_nm (film);
  missing = BT_LN10 / 2 * highest * highest * spread * spread;
  if (missing > 0.005 * highest)
    add (out, bt_flag_new ("flattening", _ ("The film is uneven by %.0f %% of its thickness: where it is darkest, at %.0f nm, the reading is low by about %.4f "
                                            "(%.1f %%), elsewhere by less, which flattens bands. Measure a smaller spot, or a more even film."),
                           100 * spread, bt_nm_from_ev (at_ev), missing, 100 * missing / highest));
}

/* A_read = -log10 ((T + s) / (1 + s)), turned round. */
static double
stray_missing (double absorbance, double stray)
{
  const double t = pow (10, -absorbance) * (1 + stray) - stray;

  return t > 0 ? -log10 (t) - absorbance : INFINITY;
}

static void
judge_stray_light (BtFilm *film, double stray, BtRange range, BtCurve *curve)
{
  BtSpectrum *spectrum = bt_film_get_spectrum (film);
  gsize n, n_saturated;
  const double *energy = bt_spectrum_get_energy_ev (spectrum, &n), *absorbance = bt_spectrum_get_absorbance (spectrum, NULL);
  double highest = 0, at_ev = 0, missing;

  for (gsize i = 0; i < n; i++)
    if (energy[i] >= range.low_ev && energy[i] <= range.high_ev && absorbance[i] > highest)
      {
        highest = absorbance[i];
        at_ev = energy[i];
      }
  bt_spectrum_get_saturated (spectrum, &n_saturated);
  if (stray > 0)
    {
      missing = stray_missing (highest, stray);
      if (isinf (missing))
        add (curve, bt_flag_new ("stray-light", _ ("With %.2g %% of stray light no more than A = %.2f can be read; at %.0f nm it is %.2f. Readings near that are "
                                                   "stray light alone: measure a thinner film, or check the share."),
                                 100 * stray, -log10 (stray / (1 + stray)), bt_nm_from_ev (at_ev), highest));
      else if (missing > 0.005 * highest)
        add (curve, bt_flag_new ("stray-light", _ ("%.2g %% of stray light hides %.4f of the absorbance (%.1f %%) where the film is darkest, at %.0f nm, and less "
                                                   "elsewhere. Measure a thinner film, or leave that range out."),
                                 100 * stray, missing, 100 * missing / highest, bt_nm_from_ev (at_ev)));
    }
  else if (n_saturated > 0)
    {
      double ceiling = 0;

      for (gsize i = 0; i < n; i++)
        ceiling = fmax (ceiling, absorbance[i]);
      stray = pow (10, -ceiling) / (1 - pow (10, -ceiling));
      missing = stray_missing (ceiling - 1, stray);
      add (curve, bt_flag_new ("stray-light", _ ("The highest reading, A = %.2f, means stray light of at most %.2g %%: readings of A = %.1f may be low by %.3f "
                                                 "(%.1f %%), higher ones by more. State the instrument's share to have it judged."),
                               ceiling, 100 * stray, ceiling - 1, missing, 100 * missing / (ceiling - 1)));
    }
}

static double
substrate_index (BtFilm *film, const BtLightPath *how, double wavelength_nm)
{
  double index = how->substrate_index > 0 ? how->substrate_index : bt_substrate_index (bt_film_get_substrate (film), wavelength_nm);

  /* Near enough to most substrates for a size. */
  return isnan (index) ? 1.5 : index;
}

/* What the film's front face reflects beyond the bare substrate's, for the lowest and the highest index of films; and, for a film much thinner than the
 * wave, how much the blank ratio's absorption coefficient is above the bulk's, 2n / (1 + n_s): the ratio of
 * 2 Z0 s / (1 + n_s), Glover and Tinkham (1957) to first order in s, to Z0 s / n. */
static void
judge_reflection (BtFilm *film, const BtLightPath *how, BtCurve *curve)
{
  const double t = bt_film_get_thickness_nm (film);
  double at_nm = 550, here, index, substrate, low, high;

  if (curve->kind != BT_LIGHT_PATH_BLANK_RATIO || !(t > 0) || curve->n < 2)
    return;
  if (!bt_curve_at (curve, bt_ev_from_nm (at_nm), &here, NULL))
    {
      at_nm = bt_nm_from_ev ((curve->energy_ev[0] + curve->energy_ev[curve->n - 1]) / 2);
      if (!bt_curve_at (curve, bt_ev_from_nm (at_nm), &here, NULL))
        return;
    }
  index = substrate_index (film, how, at_nm);
  substrate = bt_face_reflectance (index);
  low = -log10 ((1 - bt_face_reflectance (FILM_INDEX_LOW)) / (1 - substrate));
  high = -log10 ((1 - bt_face_reflectance (FILM_INDEX_HIGH)) / (1 - substrate));
  if (t < at_nm / 10)
    add (curve, bt_flag_new ("reflection-left-out", _ ("The absorption coefficient is that of the blank ratio: in a film this thin the bulk's is lower by the factor 2n/(1+n_s), "
                                                       "%.2f to %.2f for a film of index 1.5 to 2 at %.0f nm. State the film's index beside it."),
                             2 * FILM_INDEX_LOW / (1 + index), 2 * FILM_INDEX_HIGH / (1 + index), at_nm));
  else
    add (curve, bt_flag_new ("reflection-left-out", _ ("Reflection is left out of the absorption coefficient: a film of index 1.5 to 2 reflects so much more than "
                                                       "its substrate that the absorbance is high by %.3f to %.3f, up to %.1f %% at %.0f nm. Measure the reflectance to "
                                                       "have it taken off."),
                             fmax (0, fmin (low, high)), fmax (low, high), here > 0 ? 100 * fmax (low, high) / here : 100, at_nm));
}

static void
judge_slab (BtFilm *film, BtCurve *curve)
{
  const double t = bt_film_get_thickness_nm (film);

  if (curve->kind == BT_LIGHT_PATH_REFLECTION && bt_film_get_reflectance (film) == NULL && t > 0 && t < LEAST_SLAB_NM)
    add (curve, bt_flag_new ("not-slab", _ ("The reflection path is that of a thick plate; in a film of %.0f nm waves interfere, and its faces are not alike. Choose "
                                            "the blank ratio or the thin film, or measure the reflectance."),
                             t));
}

/* Where common substrates of a millimetre stop passing light, nm (common practice; fused silica's is that of grades with water bands). */
static const struct { const char *name; double low_nm, high_nm; } windows[] = {
  { "fused silica", 185, 2600 }, { "N-BK7", 340, 2500 },  { "glass", 340, 2600 },      { "sapphire", 180, 5000 }, { "CaF2", 150, 9000 },
  { "PET", 320, 1650 },          { "PEN", 385, 1650 },    { "polyimide", 500, 1650 },  { "silicon", 1150, 6000 },  { "quartz", 185, 2600 },
};

static void
flag_cutoff (BtCurve *curve, const char *what, double from_nm, double to_nm)
{
  add (curve, bt_flag_new ("substrate-cutoff", _ ("From %.0f to %.0f nm %s lets hardly any light through: what is read there is not the film's. Leave that range out, or "
                                                  "use a substrate that is clear there."),
                           from_nm, to_nm, what));
}

/* Where the blank itself is dark, at either end. */
static gboolean
judge_blank (BtSpectrum *blank, BtRange range, BtCurve *curve)
{
  gsize n, i, k;
  const double *energy = bt_spectrum_get_energy_ev (blank, &n), *absorbance = bt_spectrum_get_absorbance (blank, NULL);

  for (k = n; k > 0 && absorbance[k - 1] > 1; k--)
    ;
  for (i = 0; i < n && absorbance[i] > 1; i++)
    ;
  if (k < n && k > 0 && energy[k] < range.high_ev)
    flag_cutoff (curve, _ ("the blank"), bt_nm_from_ev (fmin (range.high_ev, energy[n - 1])), bt_nm_from_ev (energy[k]));
  else if (i > 0 && i < n && energy[i - 1] > range.low_ev)
    flag_cutoff (curve, _ ("the blank"), bt_nm_from_ev (energy[i - 1]), bt_nm_from_ev (fmax (range.low_ev, energy[0])));
  else
    return FALSE;
  return TRUE;
}

/* A wall at the ultraviolet end: no tail of nanotubes rises so steeply. */
static void
judge_wall (BtRange range, BtCurve *curve)
{
  const double end = fmin (range.high_ev, curve->energy_ev[curve->n - 1]);
  double at_end, before;
  double at_ev = end;

  if (!bt_curve_at (curve, end, &at_end, NULL) || !bt_curve_at (curve, end - 0.15, &before, NULL))
    return;
  if (!(at_end > 1.8 * before && at_end > before + 0.3))
    return;
  /* Back to where it begins to rise so. */
  for (double a; bt_curve_at (curve, at_ev - 0.05, &a, NULL) && bt_curve_at (curve, at_ev, &at_end, NULL) && at_end > 1.15 * a;)
    at_ev -= 0.05;
  flag_cutoff (curve, _ ("the substrate"), bt_nm_from_ev (end), bt_nm_from_ev (at_ev));
}

static void
judge_cutoff (BtFilm *film, BtRange range, BtCurve *curve)
{
  const char *name = bt_film_get_substrate (film);

  if (curve->n < 2 || (bt_film_get_blank (film) != NULL && judge_blank (bt_film_get_blank (film), range, curve)))
    return;
  judge_wall (range, curve);
  for (gsize w = 0; w < G_N_ELEMENTS (windows); w++)
    {
      const double shortest = bt_nm_from_ev (fmin (range.high_ev, curve->energy_ev[curve->n - 1])), longest = bt_nm_from_ev (fmax (range.low_ev, curve->energy_ev[0]));

      if (g_ascii_strcasecmp (name, windows[w].name) != 0)
        continue;
      if (shortest < windows[w].low_nm)
        flag_cutoff (curve, name, shortest, windows[w].low_nm);
      else if (longest > windows[w].high_nm)
        flag_cutoff (curve, name, windows[w].high_nm, longest);
    }
}

/* The lowest mean over a tenth of an electronvolt: a valley, not a point. */
static void
judge_baseline (BtCurve *curve)
{
  double lowest = INFINITY, at_ev = 0, lowest_u = 0;

  for (gsize a = 0, b = 0; b < curve->n; b++)
    {
      double sum = 0, squares = 0;

      while (curve->energy_ev[b] - curve->energy_ev[a] > 0.1)
        a++;
      if (b - a < 5)
        continue;
      for (gsize i = a; i <= b; i++)
        {
          sum += curve->absorbance[i] / (double) (b - a + 1);
          squares += curve->absorbance_u[i] * curve->absorbance_u[i];
        }
      if (sum < lowest)
        {
          lowest = sum;
          lowest_u = sqrt (squares) / (double) (b - a + 1);
          at_ev = (curve->energy_ev[a] + curve->energy_ev[b]) / 2;
        }
      /* A window costs its length: move on by a third of it. */
      b += (b - a) / 3;
    }
  if (lowest < -0.003 - 3 * lowest_u)
    add (curve, bt_flag_new ("baseline-offset", _ ("The film's own absorbance lies %.4f below zero about %.0f nm: the baseline or the blank is too high by at least that. "
                                                   "Measure both again; the fit takes a constant into account."),
                             -lowest, bt_nm_from_ev (at_ev)));
}

void
bt_film_judge_path (BtFilm *self, const BtLightPath *how, double stray_light, BtRange range, BtCurve *curve)
{
  static const BtLightPath blank_ratio = BT_LIGHT_PATH_INIT;

  g_return_if_fail (BT_IS_FILM (self));
  if (bt_spectrum_get_y_unit (bt_film_get_spectrum (self)) == BT_Y_ALPHA_PER_CM)
    return;
  judge_cutoff (self, range, curve);
  judge_evenness (self, curve, range, curve);
  judge_stray_light (self, stray_light, range, curve);
  judge_reflection (self, how != NULL ? how : &blank_ratio, curve);
  judge_slab (self, curve);
  judge_baseline (curve);
}
