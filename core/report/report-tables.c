/* A film's tables on paper: bands, budget, tails, readings, recipe. */
#include <glib/gi18n-lib.h>
#include <math.h>

#include "report-private.h"

static const BtColumnKind pair_kinds[] = { BT_COLUMN_LEFT, BT_COLUMN_LEFT };

char *
bt_report_range_text (BtRange range)
{
  return g_strdup_printf (_ ("%.0f to %.0f nm, %.3f to %.3f eV"), bt_nm_from_ev (range.high_ev), bt_nm_from_ev (range.low_ev),
                          range.low_ev, range.high_ev);
}

/* Numbers of a band, or of a group's sum, from the centre to the area. */
static void
take_band (BtGrid *grid, BtFace face, double centre_ev, double centre_u_ev, double fwhm_ev, double fwhm_u_ev, double area,
           double area_u)
{
  const double centre_nm = bt_nm_from_ev (centre_ev);

  bt_grid_take (grid, face, bt_format_uncertain (centre_ev, centre_u_ev));
  bt_grid_take (grid, face, bt_format_uncertain (centre_nm, centre_nm * centre_u_ev / centre_ev));
  bt_grid_take (grid, face, bt_format_uncertain (1000 * fwhm_ev, 1000 * fwhm_u_ev));
  bt_grid_take (grid, face, bt_format_uncertain (area, area_u));
}

static void
take_single_bands (BtGrid *grid, const BtTally *tally, BtGroup group, gboolean *any_at_bound, gboolean *any_held)
{
  for (guint i = 0; i < tally->bands->len; i++)
    {
      const BtBand *band = &g_array_index (tally->bands, BtBand, i);

      if (band->group != group)
        continue;
      *any_at_bound |= band->at_bound;
      *any_held |= band->held != 0;
      /* Translators: a band by its number within its group; the marks after it are explained below the table. */
      bt_grid_take (
          grid, BT_FACE_NOTE,
          g_strdup_printf (_ ("     band %u%s%s"), band->index + 1, band->at_bound ? " †" : "", band->held ? " ‡" : ""));
      take_band (grid, BT_FACE_NOTE, band->centre_ev, band->centre_u_ev, band->fwhm_ev, band->fwhm_u_ev, band->area,
                 band->area_u);
    }
}

void
bt_report_add_bands (BtFlow *flow, PangoContext *context, BtFilm *film, const BtTally *tally, double width)
{
  static const BtColumnKind kinds[] = { BT_COLUMN_LEFT, BT_COLUMN_RIGHT, BT_COLUMN_RIGHT, BT_COLUMN_RIGHT, BT_COLUMN_RIGHT };
  const gboolean alpha = bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) == BT_Y_ALPHA_PER_CM;
  gboolean any = FALSE, any_at_bound = FALSE, any_held = FALSE;
  g_autoptr (GString) note = g_string_new (NULL);
  BtGrid *grid = bt_grid_new (5, kinds);

  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Group")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Centre, eV")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Centre, nm")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("FWHM, meV")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (alpha ? _ ("Area, eV/cm (decadic)") : _ ("Area, absorbance eV")));
  for (int g = 0; g < BT_N_GROUPS; g++)
    {
      const BtGroupTally *sum = &tally->groups[g];

      if (sum->n_bands == 0)
        continue;
      any = TRUE;
      bt_grid_take_chip (grid, BT_FACE_STRONG, g_strdup (bt_group_name ((BtGroup)g)), g);
      take_band (grid, BT_FACE_BODY, sum->centre_ev, sum->centre_u_ev, sum->fwhm_ev, sum->fwhm_u_ev, sum->area, sum->area_u);
      take_single_bands (grid, tally, (BtGroup)g, &any_at_bound, &any_held);
    }
  bt_flow_add (flow, bt_block_new_heading (context, _ ("Bands"), width), 11);
  if (!any)
    {
      bt_grid_free (grid);
      bt_flow_add (flow, bt_block_new_text (context, BT_FACE_BODY, _ ("No bands were fitted; the flags say why."), width), 4);
      return;
    }
  bt_flow_add (flow, bt_block_new_grid (context, grid, TRUE, TRUE, width), 4);
  g_string_append (note,
                   _ ("In brackets: the standard uncertainty, in the last digits of the value. Groups are averaged over the "
                      "tails by their weights; single bands are those of the tail with the greatest weight."));
  if (any_at_bound)
    g_string_append_printf (note, " † %s", _ ("A number of this band stands at the bound that its band plan sets."));
  if (any_held)
    g_string_append_printf (note, " ‡ %s", _ ("A number of this band is held by hand and has no uncertainty."));
  bt_flow_add (flow, bt_block_new_text (context, BT_FACE_NOTE, note->str, width), 3);
}

void
bt_report_add_budget (BtFlow *flow, PangoContext *context, const BtTally *tally, double width)
{
  static const BtColumnKind kinds[] = { BT_COLUMN_LEFT, BT_COLUMN_RIGHT, BT_COLUMN_BAR };
  BtGrid *grid;
  double most = 0;

  bt_flow_add (flow, bt_block_new_heading (context, _ ("Uncertainty of the fraction"), width), 11);
  if (tally->budget->len == 0)
    {
      bt_flow_add (flow, bt_block_new_text (context, BT_FACE_BODY, _ ("There is no budget without a fraction."), width), 4);
      return;
    }
  grid = bt_grid_new (3, kinds);
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Source")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("u, points")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (""));
  for (guint i = 0; i < tally->budget->len; i++)
    most = fmax (most, g_array_index (tally->budget, BtBudgetLine, i).u);
  for (guint i = 0; i < tally->budget->len; i++)
    {
      const BtBudgetLine *line = &g_array_index (tally->budget, BtBudgetLine, i);

      /* What would read 0.00 gives nothing. */
      if (line->u < 5e-5)
        continue;
      bt_grid_take (grid, BT_FACE_BODY, g_strdup (line->title));
      bt_grid_take (grid, BT_FACE_BODY, g_strdup_printf ("%.2f", 100 * line->u));
      bt_grid_take_bar (grid, most > 0 ? line->u / most : 0);
    }
  if (tally->fraction.bound != BT_BOUND_NONE)
    {
      bt_grid_take (grid, BT_FACE_STRONG, g_strdup (_ ("all together")));
      bt_grid_take (grid, BT_FACE_STRONG, g_strdup_printf ("%.2f", 100 * tally->fraction.u));
      bt_grid_take_bar (grid, most > 0 ? tally->fraction.u / fmax (most, tally->fraction.u) : 0);
    }
  bt_flow_add (flow, bt_block_new_grid (context, grid, TRUE, TRUE, width), 4);
}

/* "groups 0.73, 0.25, 0.02": weights in the order of the rows. */
static char *
weights_text (const BtTally *tally)
{
  GString *text = g_string_new (NULL);

  for (guint m = 0; m < BT_N_MODELS; m++)
    {
      const BtTailTally *tails = m == BT_MODEL_GROUPS ? tally->tails : tally->ensembles;

      g_string_append (text, m == BT_MODEL_GROUPS ? _ ("groups ") : _ ("; ensemble "));
      for (guint t = 0; t < tally->n_tails; t++)
        g_string_append_printf (text, "%s%.2f", t > 0 ? ", " : "", tails[t].weight);
    }
  return g_string_free (text, FALSE);
}

/* Tails of the groups beside those of the ensemble. */
static void
add_two_models (BtFlow *flow, PangoContext *context, const BtTally *tally, double width)
{
  static const BtColumnKind kinds[] = { BT_COLUMN_LEFT, BT_COLUMN_RIGHT, BT_COLUMN_RIGHT };
  BtGrid *grid = bt_grid_new (3, kinds);
  g_autofree char *weights = weights_text (tally), *note = NULL;

  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Fraction by tail")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Groups")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Ensemble")));
  for (guint t = 0; t < tally->n_tails; t++)
    {
      bt_grid_take (grid, BT_FACE_BODY, g_strdup (bt_tail_short_title (tally->tails[t].kind)));
      bt_grid_take (grid, BT_FACE_BODY, bt_format_uncertain (tally->tails[t].fraction, tally->tails[t].fraction_u));
      bt_grid_take (grid, BT_FACE_BODY, bt_format_uncertain (tally->ensembles[t].fraction, tally->ensembles[t].fraction_u));
    }
  bt_grid_take (grid, BT_FACE_STRONG, g_strdup (_ ("all tails")));
  for (guint m = 0; m < BT_N_MODELS; m++)
    bt_grid_take (grid, BT_FACE_STRONG, bt_format_uncertain (tally->models[m].fraction, tally->models[m].fraction_u));
  bt_grid_take (grid, BT_FACE_BODY, g_strdup (_ ("weight")));
  for (guint m = 0; m < BT_N_MODELS; m++)
    bt_grid_take (grid, BT_FACE_BODY, g_strdup_printf ("%.3f", tally->models[m].weight));
  bt_flow_add (flow, bt_block_new_grid (context, grid, TRUE, TRUE, width), 4);
  note = g_strdup_printf (_ ("Weights of the tails: %s. Residual over noise: groups %.3g, ensemble %.3g."), weights, tally->models[BT_MODEL_GROUPS].misfit,
                          tally->models[BT_MODEL_ENSEMBLE].misfit);
  bt_flow_add (flow, bt_block_new_text (context, BT_FACE_NOTE, note, width), 3);
}

static void
add_one_model (BtFlow *flow, PangoContext *context, const BtTally *tally, double width)
{
  static const BtColumnKind kinds[] = { BT_COLUMN_LEFT, BT_COLUMN_RIGHT, BT_COLUMN_RIGHT };
  BtGrid *grid = bt_grid_new (3, kinds);

  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Tail")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Weight")));
  bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Fraction")));
  for (guint i = 0; i < tally->n_tails; i++)
    {
      const BtTailTally *tail = &tally->tails[i];

      bt_grid_take (grid, BT_FACE_BODY, g_strdup (bt_tail_title (tail->kind)));
      bt_grid_take (grid, BT_FACE_BODY, g_strdup_printf ("%.3f", tail->weight));
      bt_grid_take (grid, BT_FACE_BODY, bt_format_uncertain (tail->fraction, tail->fraction_u));
    }
  bt_flow_add (flow, bt_block_new_grid (context, grid, TRUE, TRUE, width), 4);
}

void
bt_report_add_tails (BtFlow *flow, PangoContext *context, const BtTally *tally, double width)
{
  const gboolean two = tally->models[BT_MODEL_ENSEMBLE].weight > 0;

  bt_flow_add (flow, bt_block_new_heading (context, two ? _ ("Models and tails") : _ ("Tails"), width), 11);
  if (tally->n_tails == 0)
    {
      bt_flow_add (flow, bt_block_new_text (context, BT_FACE_BODY, _ ("No tail was fitted."), width), 4);
      return;
    }
  (two ? add_two_models : add_one_model) (flow, context, tally, width);
  if (!isnan (tally->tail_share_at_s22))
    {
      g_autofree char *share
          = g_strdup_printf (_ ("At S22 the tail is %.1f %% of the absorbance."), 100 * tally->tail_share_at_s22);

      bt_flow_add (flow, bt_block_new_text (context, BT_FACE_NOTE, share, width), 3);
    }
}

static void
add_mean (BtFlow *flow, PangoContext *context, const BtTally *tally, double width)
{
  g_autofree char *alpha = NULL, *text = NULL;

  if (isnan (tally->mean_alpha.value))
    {
      bt_flow_add (
          flow,
          bt_block_new_text (context, BT_FACE_NOTE,
                             _ ("There is no absorption coefficient where the thickness is not known or the wavelength "
                                "was not measured."),
                             width),
          3);
      return;
    }
  alpha = bt_format_uncertain (tally->mean_alpha.value, tally->mean_alpha.u);
  text = g_strdup_printf (_ ("Mean absorption coefficient from %.0f to %.0f nm: %s 1/cm"),
                          bt_nm_from_ev (tally->mean_range.high_ev), bt_nm_from_ev (tally->mean_range.low_ev), alpha);
  bt_flow_add (flow, bt_block_new_text (context, BT_FACE_BODY, text, width), 3);
}

static void
add_note (BtFlow *flow, PangoContext *context, const char *text, double width)
{
  if (text != NULL)
    bt_flow_add (flow, bt_block_new_text (context, BT_FACE_NOTE, text, width), 3);
}

/* Which coefficient it is, how sure the first one is and why; and what a thin conducting film is besides. */
static void
add_reasoning (BtFlow *flow, PangoContext *context, const BtTally *tally, double width)
{
  const BtReading *first = NULL;
  g_autofree char *conductor = bt_conductor_text (&tally->conductor);

  for (guint i = tally->readings->len; i-- > 0;)
    if (!isnan (g_array_index (tally->readings, BtReading, i).alpha.value))
      first = &g_array_index (tally->readings, BtReading, i);
  if (tally->curve != NULL && first != NULL)
    add_note (flow, context, tally->curve->alpha, width);
  if (first != NULL && !isnan (first->alpha.low))
    {
      g_autofree char *interval = bt_alpha_interval_text (&first->alpha), *parts = bt_alpha_parts_text (&first->alpha);
      g_autofree char *text
          = g_strdup_printf (_ ("At %.6g nm %.4g %% interval %s 1/cm (Monte Carlo); standard uncertainty from %s"), first->wavelength_nm,
                             100 * tally->recipe->level, interval, parts);

      add_note (flow, context, text, width);
    }
  for (guint i = 0; i < tally->readings->len; i++)
    {
      const BtReading *reading = &g_array_index (tally->readings, BtReading, i);
      g_autofree char *sheet = bt_sheet_text (reading);
      g_autofree char *text = sheet != NULL ? g_strdup_printf (_ ("Sheet conductance at %.6g nm: %s"), reading->wavelength_nm, sheet) : NULL;

      add_note (flow, context, text, width);
    }
  add_note (flow, context, conductor, width);
}

void
bt_report_add_readings (BtFlow *flow, PangoContext *context, const BtTally *tally, double width)
{
  static const BtColumnKind kinds[] = { BT_COLUMN_RIGHT, BT_COLUMN_RIGHT, BT_COLUMN_RIGHT, BT_COLUMN_RIGHT };
  BtGrid *grid;

  bt_flow_add (flow, bt_block_new_heading (context, _ ("Light taken up"), width), 11);
  if (tally->readings->len > 0)
    {
      grid = bt_grid_new (4, kinds);
      bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Wavelength, nm")));
      bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Absorption coefficient, 1/cm")));
      bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Absorbance")));
      bt_grid_take (grid, BT_FACE_NOTE, g_strdup (_ ("Absorptance")));
      for (guint i = 0; i < tally->readings->len; i++)
        {
          const BtReading *reading = &g_array_index (tally->readings, BtReading, i);

          bt_grid_take (grid, BT_FACE_BODY, g_strdup_printf ("%.6g", reading->wavelength_nm));
          bt_grid_take (grid, BT_FACE_BODY, bt_format_uncertain (reading->alpha.value, reading->alpha.u));
          bt_grid_take (grid, BT_FACE_BODY, bt_format_uncertain (reading->absorbance, reading->absorbance_u));
          bt_grid_take (grid, BT_FACE_BODY, bt_format_uncertain (reading->absorptance, reading->absorptance_u));
        }
      bt_flow_add (flow, bt_block_new_grid (context, grid, TRUE, TRUE, width), 4);
    }
  add_mean (flow, context, tally, width);
  add_reasoning (flow, context, tally, width);
}

static char *
tails_text (const BtRecipe *recipe)
{
  GString *text = g_string_new (NULL);

  for (int kind = 0; kind < BT_N_TAILS; kind++)
    if (recipe->tails & (1u << kind))
      g_string_append_printf (text, "%s%s", text->len > 0 ? "; " : "", bt_tail_title ((BtTailKind)kind));
  return g_string_free (text, FALSE);
}

static char *
excluded_text (const BtRecipe *recipe)
{
  GString *text = g_string_new (NULL);

  for (guint i = 0; i < recipe->excluded->len; i++)
    {
      g_autofree char *range = bt_report_range_text (g_array_index (recipe->excluded, BtRange, i));

      g_string_append_printf (text, "%s%s", text->len > 0 ? "; " : "", range);
    }
  return text->len > 0 ? g_string_free (text, FALSE) : (g_string_free (text, TRUE), g_strdup (_ ("nothing")));
}

static char *
held_text (const BtRecipe *recipe)
{
  GString *text = g_string_new (NULL);

  for (guint i = 0; i < recipe->held->len; i++)
    {
      const BtHeld *held = &g_array_index (recipe->held, BtHeld, i);
      const char *format = held->field == BT_BAND_CENTRE ? _ ("%s band %u: centre %.4f eV")
                           : held->field == BT_BAND_FWHM ? _ ("%s band %u: FWHM %.4f eV")
                                                         : _ ("%s band %u: height %.4g absorbance");

      g_string_append (text, text->len > 0 ? "; " : "");
      g_string_append_printf (text, format, bt_group_name (held->group), held->index + 1, held->value);
    }
  return text->len > 0 ? g_string_free (text, FALSE) : (g_string_free (text, TRUE), g_strdup (_ ("nothing")));
}

static char *
most_bands_text (const BtRecipe *recipe)
{
  GString *text = g_string_new (NULL);

  for (int g = 0; g < BT_N_GROUPS; g++)
    if (recipe->max_bands[g] > 0)
      g_string_append_printf (text, "%s%s %u", text->len > 0 ? ", " : "", bt_group_name ((BtGroup)g), recipe->max_bands[g]);
  return g_string_free (text, FALSE);
}

static char *
window_text (const BtTally *tally)
{
  const BtDiameterWindow *window = &tally->plan.window;

  if (!(window->mean_nm > 0))
    return g_strdup (_ ("none"));
  return g_strdup_printf (tally->window_proposed ? _ ("mean %.3f nm, spread %.3f nm, proposed from the data")
                                                 : _ ("mean %.3f nm, spread %.3f nm, as given"),
                          window->mean_nm, window->spread_nm);
}

/* What is known of the instrument; (nullable) where nothing is. */
static char *
instrument_text (const BtRecipe *recipe)
{
  GString *text = g_string_new (NULL);

  if (recipe->photometric_u > 0)
    g_string_append_printf (text, _ ("photometric %.2g"), recipe->photometric_u);
  if (recipe->wavelength_u_nm > 0)
    {
      g_string_append (text, text->len > 0 ? "; " : "");
      g_string_append_printf (text, _ ("wavelength %.2g nm"), recipe->wavelength_u_nm);
    }
  if (recipe->stray_light > 0)
    {
      g_string_append (text, text->len > 0 ? "; " : "");
      g_string_append_printf (text, _ ("stray light %.2g %%"), 100 * recipe->stray_light);
    }
  return text->len > 0 ? g_string_free (text, FALSE) : (g_string_free (text, TRUE), NULL);
}

/* (nullable) where none is stated. */
static char *
steps_text (const BtRecipe *recipe)
{
  static const char *const sides[BT_N_STEP_CORRECTIONS] = { N_ ("not taken off"), N_ ("taken off, visible side kept"), N_ ("taken off, infrared side kept") };
  GString *text = g_string_new (NULL);

  for (guint i = 0; i < recipe->steps_nm->len; i++)
    g_string_append_printf (text, "%s%.6g", i > 0 ? ", " : "", g_array_index (recipe->steps_nm, double, i));
  if (recipe->steps_nm->len > 0)
    g_string_append (text, " nm; ");
  else if (recipe->step_correction == BT_STEP_LEFT)
    return g_string_free (text, TRUE);
  g_string_append (text, _ (sides[recipe->step_correction]));
  return g_string_free (text, FALSE);
}

static char *
ratio_text (const BtRecipe *recipe)
{
  return g_strdup_printf (_ ("%.3g, standard uncertainty %.2g; %s"), recipe->strength_ratio, recipe->strength_ratio_u,
                          recipe->strength_ratio_source != NULL ? recipe->strength_ratio_source : _ ("source not stated"));
}

static char *
fitted_text (const BtTally *tally)
{
  g_autofree char *range = NULL;

  if (tally->n == 0)
    return g_strdup (_ ("nothing"));
  range = bt_report_range_text (tally->range);
  return g_strdup_printf (ngettext ("%s, %u point", "%s, %u points", (gulong)tally->n), range, (guint)tally->n);
}

void
bt_report_add_recipe (BtFlow *flow, PangoContext *context, const BtTally *tally, double width)
{
  const BtRecipe *recipe = tally->recipe;
  BtGrid *grid = bt_grid_new (2, pair_kinds);
  g_autofree char *instrument = instrument_text (recipe), *steps = steps_text (recipe);

  if (recipe->name != NULL && recipe->name[0] != '\0')
    bt_grid_take_pair (grid, _ ("Recipe"), g_strdup (recipe->name));
  bt_grid_take_pair (grid, _ ("Range fitted"), fitted_text (tally));
  bt_grid_take_pair (grid, _ ("Tails fitted"), tails_text (recipe));
  bt_grid_take_pair (grid, _ ("Diameter window"), window_text (tally));
  bt_grid_take_pair (grid, _ ("Red shift of films"),
                     g_strdup_printf (_ ("%.3f eV off the reference energies"), recipe->shift_ev));
  bt_grid_take_pair (grid, _ ("Most bands"), most_bands_text (recipe));
  bt_grid_take_pair (grid, _ ("Strength ratio S22 : M11"), ratio_text (recipe));
  bt_grid_take_pair (grid, _ ("Limit"),
                     isnan (recipe->limit) ? g_strdup (_ ("none"))
                                           : g_strdup_printf (_ ("at least %.1f %% semiconducting"), 100 * recipe->limit));
  bt_grid_take_pair (grid, _ ("Intervals"), g_strdup_printf (_ ("%.4g %% confidence"), 100 * recipe->level));
  bt_grid_take_pair (grid, _ ("Left out above"), g_strdup_printf (_ ("absorbance %.3g"), recipe->max_absorbance));
  if (instrument != NULL)
    bt_grid_take_pair (grid, _ ("Instrument"), g_steal_pointer (&instrument));
  if (steps != NULL)
    bt_grid_take_pair (grid, _ ("Detector changes"), g_steal_pointer (&steps));
  bt_grid_take_pair (grid, _ ("Excluded"), excluded_text (recipe));
  bt_grid_take_pair (grid, _ ("Held by hand"), held_text (recipe));
  bt_flow_add (flow, bt_block_new_heading (context, _ ("Recipe"), width), 11);
  bt_flow_add (flow, bt_block_new_grid (context, grid, FALSE, FALSE, width), 4);
}
