/* What the user must know about a fit, in sentences with what to do. */
#include "assemble.h"

#include <math.h>

#include <glib/gi18n-lib.h>

static void
add (BtTally *tally, BtFlag *flag)
{
  if (bt_flags_find (tally->flags, flag->code) == NULL)
    g_ptr_array_add (tally->flags, flag);
  else
    bt_flag_free (flag);
}

static void
flag_range (BtTally *tally, const BtPrepared *prepared)
{
  const BtBandPlan *plan = &tally->plan;
  double first_nm = bt_nm_from_ev (prepared->curve->energy_ev[prepared->curve->n - 1]);
  double last_nm = bt_nm_from_ev (prepared->curve->energy_ev[0]);

  if (tally->groups[BT_S22].n_bands == 0)
    add (tally, bt_flag_new ("no-s22", _ ("S22 is expected near %.0f nm, outside the data used (%.0f to %.0f nm): no fraction can be "
                                          "given. Measure that range, or correct the diameter."),
                             bt_nm_from_ev (plan->bands[BT_S22].centre_ev), first_nm, last_nm));
  if (tally->groups[BT_M11].n_bands == 0)
    add (tally, bt_flag_new ("no-m11", _ ("M11 is expected near %.0f nm, outside the data used (%.0f to %.0f nm): no fraction can be "
                                          "given. Measure that range, or correct the diameter."),
                             bt_nm_from_ev (plan->bands[BT_M11].centre_ev), first_nm, last_nm));
  if (tally->groups[BT_S11].n_bands == 0)
    add (tally, bt_flag_new ("no-s11", _ ("S11 is expected near %.0f nm, outside the data used: doping cannot be seen, and the tail is "
                                          "held on one side only. Measure further into the infrared if the instrument can."),
                             bt_nm_from_ev (plan->bands[BT_S11].centre_ev)));
  if (tally->groups[BT_M11].n_bands > 0 && prepared->range.high_ev < plan->bands[BT_M11].centre_ev + 0.3)
    add (tally, bt_flag_new ("tail-range", _ ("The data used end at %.0f nm, hardly beyond M11: what lies under it can only be guessed from one side, and the interval is "
                                              "wide for that reason. Measure down to %.0f nm."),
                             bt_nm_from_ev (prepared->range.high_ev), bt_nm_from_ev (plan->bands[BT_S33].centre_ev)));
  if (prepared->n_over_limit > 0)
    add (tally, bt_flag_new ("over-limit", g_dngettext (GETTEXT_PACKAGE,
                                                        "%u point above the photometric limit of A = %.2g was left out of the fit.",
                                                        "%u points above the photometric limit of A = %.2g were left out of the fit.",
                                                        prepared->n_over_limit),
                             prepared->n_over_limit, tally->recipe->max_absorbance));
}

static void
flag_fringe (BtTally *tally, const BtPrepared *prepared)
{
  if (prepared->has_fringe)
    add (tally, bt_flag_new ("fringe", _ ("The reading oscillates every %.1f 1/cm with an amplitude of %.4f: interference in a layer whose index times "
                                          "thickness is about %.0f µm. The fit takes the wave into account; a wider slit or a wedged substrate "
                                          "avoids it."),
                             prepared->fringe.spacing_per_cm, prepared->fringe.amplitude, prepared->fringe.optical_thickness_um));
}

static void
flag_window (BtTally *tally, const BtPrepared *prepared)
{
  if (prepared->window_proposed && !prepared->window_found)
    add (tally, bt_flag_new ("window-guessed", _ ("The data show no band to propose a diameter from; %.2f nm was assumed. State the "
                                                  "diameter of the material."),
                             tally->plan.window.mean_nm));
  if (prepared->window_proposed && prepared->alternative.mean_nm > 0)
    add (tally, bt_flag_new ("window-ambiguous", _ ("The bands fit diameters about %.2f nm nearly as well as the %.2f nm that were taken; the interval "
                                                    "allows for both. State the diameter of the material, or measure a wider range."),
                             prepared->alternative.mean_nm, tally->plan.window.mean_nm));
}

static void
flag_overlap (BtTally *tally)
{
  double overlap = bt_band_plan_overlap (&tally->plan);

  /* Where the ensemble decides it has told them apart as well as the interval says. */
  if (tally->models[BT_MODEL_ENSEMBLE].weight > 0.99)
    return;
  if (tally->fraction.bound != BT_BOUND_NONE && tally->s22_m11_correlation < -0.5)
    add (tally, bt_flag_new ("overlap", _ ("S22 and M11 overlap so much that the data tell only their sum well (correlation %.2f); the "
                                           "interval is wide for that reason. Narrow the diameter window if the material is known."),
                             tally->s22_m11_correlation));
  else if (tally->fraction.bound != BT_BOUND_NONE && overlap > 0.05)
    add (tally, bt_flag_new ("overlap", _ ("At these diameters bands of S22 and M11 can coincide (%.0f %% of M11's window); the interval "
                                           "allows for bands that could be either. Narrow the diameter window if the material is known."),
                             100 * overlap));
}

static void
flag_fraction (BtTally *tally)
{
  const BtGroupTally *m11 = &tally->groups[BT_M11];

  if (tally->fraction.bound == BT_BOUND_NONE && tally->groups[BT_S22].n_bands > 0 && m11->n_bands > 0)
    add (tally, bt_flag_new ("no-bands", _ ("Neither S22 nor M11 rises above what the fit leaves unexplained, so no fraction can be given. Check that this is "
                                            "a nanotube film, its units and the diameter; a thicker film shows more.")));
  if (tally->fraction.bound == BT_BOUND_LOWER)
    {
      if (m11->area < -tally->m11_decision / 2)
        add (tally, bt_flag_new ("m11-negative", _ ("The metallic area came out below zero: the tail takes more than its share there. The "
                                                    "fraction is given as a bound; look at the tail between 1.5 and 2.3 eV.")));
      else
        add (tally, bt_flag_new ("m11-not-detected", _ ("The metallic band is below its detection limit in this film; the fraction is given "
                                                        "as a lower bound at %.0f %% confidence, never as 100 %%."),
                                 100 * tally->fraction.level));
    }
}

/* S11 per carbon is stronger than S22 (published order of strengths); far less of it means that charge has bleached it. */
static void
flag_doping (BtTally *tally)
{
  const BtGroupTally *s11 = &tally->groups[BT_S11], *s22 = &tally->groups[BT_S22];

  if (s11->n_bands > 0 && s22->n_bands > 0 && s22->area > 3 * s22->area_u && s11->area + 1.645 * s11->area_u < 0.9 * s22->area)
    add (tally, bt_flag_new ("s11-bleached", _ ("S11 is weak against S22 (area ratio %.2f): the film looks doped. The fraction rests on S22 "
                                                "and M11, and S22 may have lost some area too. Anneal and measure again to be sure."),
                             s11->area / s22->area));
}

/* The groups' numbers are for the eye where the ensemble decides. */
static void
flag_models (BtTally *tally)
{
  const BtModelTally *groups = &tally->models[BT_MODEL_GROUPS], *ensemble = &tally->models[BT_MODEL_ENSEMBLE];

  if (tally->recipe->held->len > 0 && tally->fraction.bound != BT_BOUND_NONE)
    add (tally, bt_flag_new ("held-by-hand", _ ("Numbers of bands are held by hand, so the fraction rests on the groups of bands alone. Release them to have "
                                                "the ensemble of tubes decide too.")));
  if (ensemble->weight > 0.01 && groups->weight > 0.01 && fabs (ensemble->fraction - groups->fraction) > 0.05)
    add (tally, bt_flag_new ("models-disagree", _ ("Groups of bands give %.1f %%, the ensemble of tubes %.1f %%, and the data do not decide between them; the "
                                                   "interval covers both. State the diameter of the material, or measure a wider range."),
                             100 * groups->fraction, 100 * ensemble->fraction));
}

static void
flag_fit (BtTally *tally)
{
  const BtTailTally *best = &tally->tails[tally->best];
  guint at_bound = 0;
  double largest = 0;

  for (guint b = 0; b < tally->bands->len; b++)
    {
      const BtBand *band = &g_array_index (tally->bands, BtBand, b);

      if (band->at_bound && (band->group == BT_S22 || band->group == BT_M11) && band->area > 0.1 * tally->groups[band->group].area)
        at_bound++;
    }
  for (guint m = 0; m < BT_N_MODELS; m++)
    for (guint t = 0; t < tally->n_tails; t++)
      {
        const BtTailTally *tail = m == BT_MODEL_GROUPS ? &tally->tails[t] : &tally->ensembles[t];

        if (isfinite (tail->fraction) && tail->weight * tally->models[m].weight > 0.01)
          largest = fmax (largest, fabs (tail->fraction - tally->fraction.value));
      }
  if (best->state == BT_SOLVE_STOPPED_EARLY || best->state == BT_SOLVE_SINGULAR)
    add (tally, bt_flag_new ("fit-unfinished", "%s", bt_solve_state_text ((BtSolveState) best->state)));
  if (at_bound > 0)
    add (tally, bt_flag_new ("band-at-bound", _ ("A band of S22 or M11 sits on the edge of what the diameter window allows: check the "
                                                 "diameter, or move the band by hand.")));
  if (best->misfit > 10 && !(tally->models[BT_MODEL_ENSEMBLE].weight > 0.5 && tally->models[BT_MODEL_ENSEMBLE].misfit < 10))
    add (tally, bt_flag_new ("structure", _ ("The residual is %.0f times the noise: lines of single tubes or an instrument's fault that no "
                                             "band follows. The interval allows for it."),
                             best->misfit));
  if (tally->fraction.bound == BT_BOUND_TWO_SIDED && largest > 0.02)
    add (tally, bt_flag_new ("tails-disagree", _ ("The tails disagree about the fraction by up to %.1f points; the interval covers them. "
                                                  "A wider range, above all towards the ultraviolet, would settle it."),
                             100 * largest));
}

/* Wavelengths of interest that the film was not measured at. */
static void
flag_readings (BtTally *tally)
{
  g_autoptr (GString) names = g_string_new (NULL);

  for (guint i = 0; i < tally->readings->len; i++)
    {
      const BtReading *reading = &g_array_index (tally->readings, BtReading, i);

      if (isnan (reading->alpha.value) && isnan (reading->absorbance))
        g_string_append_printf (names, "%s%.6g", names->len > 0 ? ", " : "", reading->wavelength_nm);
    }
  if (names->len > 0)
    add (tally, bt_flag_new ("wavelength-not-measured", _ ("The film was not measured at %s nm, so there is no absorption there. Measure that "
                                                           "range, or ask for other wavelengths."),
                             names->str));
}

void
bt_tally_fill_flags (BtTally *tally, BtFilm *film, const BtPrepared *prepared)
{
  bt_flags_add_all (tally->flags, bt_spectrum_get_flags (bt_film_get_spectrum (film)));
  bt_flags_add_all (tally->flags, tally->curve->flags);
  flag_window (tally, prepared);
  flag_fringe (tally, prepared);
  if (!(bt_film_get_thickness_nm (film) > 0) && bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) != BT_Y_ALPHA_PER_CM)
    add (tally, bt_flag_new ("no-thickness", _ ("No thickness is known, so there is no absorption coefficient; the fraction does not need "
                                                "it. Type the film's thickness to have both.")));
  flag_range (tally, prepared);
  flag_readings (tally);
  if (tally->bands->len == 0)
    return;
  flag_fraction (tally);
  flag_overlap (tally);
  flag_doping (tally);
  flag_models (tally);
  flag_fit (tally);
}
