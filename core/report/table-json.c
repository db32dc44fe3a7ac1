/* Tallies as JSON, for programs: names never change with the locale, doubles come back exactly, NAN is null. */
#include <json-glib/json-glib.h>
#include <math.h>

#include <bandtally/bandtally.h>

#include "../tally/json-numbers.h"

BtFailure *
bt_failure_new (const char *file, const char *reason)
{
  BtFailure *failure = g_new (BtFailure, 1);

  failure->file = g_strdup (file);
  failure->reason = g_strdup (reason);
  return failure;
}

void
bt_failure_free (BtFailure *failure)
{
  if (failure == NULL)
    return;
  g_free (failure->file);
  g_free (failure->reason);
  g_free (failure);
}

static void
put_number (JsonBuilder *builder, const char *name, double value)
{
  json_builder_set_member_name (builder, name);
  if (isfinite (value))
    json_builder_add_double_value (builder, value);
  else
    json_builder_add_null_value (builder);
}

static void
put_integer (JsonBuilder *builder, const char *name, gint64 value)
{
  json_builder_set_member_name (builder, name);
  json_builder_add_int_value (builder, value);
}

static void
put_string (JsonBuilder *builder, const char *name, const char *value)
{
  json_builder_set_member_name (builder, name);
  if (value != NULL)
    json_builder_add_string_value (builder, value);
  else
    json_builder_add_null_value (builder);
}

/* File names are bytes; JSON is UTF-8. */
static void
put_file (JsonBuilder *builder, const char *file)
{
  char *name = file != NULL ? g_filename_display_name (file) : NULL;

  put_string (builder, "file", name);
  g_free (name);
}

static void
put_pair (JsonBuilder *builder, const char *name, double low, double high)
{
  json_builder_set_member_name (builder, name);
  json_builder_begin_array (builder);
  json_builder_add_double_value (builder, low);
  json_builder_add_double_value (builder, high);
  json_builder_end_array (builder);
}

static void
begin_object (JsonBuilder *builder, const char *name)
{
  json_builder_set_member_name (builder, name);
  json_builder_begin_object (builder);
}

static void
begin_array (JsonBuilder *builder, const char *name)
{
  json_builder_set_member_name (builder, name);
  json_builder_begin_array (builder);
}

static void
put_reading (JsonBuilder *builder, BtFilm *film)
{
  BtSpectrum *spectrum = bt_film_get_spectrum (film);
  gsize n;
  const double *energy_ev = bt_spectrum_get_energy_ev (spectrum, &n), *thicknesses_nm;

  put_file (builder, bt_spectrum_get_file (spectrum));
  put_string (builder, "sha256", bt_spectrum_get_sha256 (spectrum));
  put_string (builder, "film", bt_film_get_label (film));
  put_string (builder, "lot", bt_film_get_lot (film));
  put_string (builder, "reading", bt_spectrum_get_reading (spectrum));
  put_integer (builder, "points", (gint64) n);
  put_pair (builder, "range_nm", bt_nm_from_ev (energy_ev[n - 1]), bt_nm_from_ev (energy_ev[0]));
  put_number (builder, "thickness_nm", bt_film_get_thickness_nm (film) > 0 ? bt_film_get_thickness_nm (film) : NAN);
  put_number (builder, "thickness_u_nm", bt_film_get_thickness_nm (film) > 0 ? bt_film_get_thickness_u_nm (film) : NAN);
  thicknesses_nm = bt_film_get_thickness_readings (film, &n);
  begin_array (builder, "thickness_readings_nm");
  for (gsize i = 0; i < n; i++)
    json_builder_add_double_value (builder, thicknesses_nm[i]);
  json_builder_end_array (builder);
  put_number (builder, "sheet_resistance_ohm", bt_film_get_sheet_resistance_ohm (film) > 0 ? bt_film_get_sheet_resistance_ohm (film) : NAN);
  put_number (builder, "sheet_resistance_u_ohm", bt_film_get_sheet_resistance_ohm (film) > 0 ? bt_film_get_sheet_resistance_u_ohm (film) : NAN);
}

static void
put_fraction (JsonBuilder *builder, const BtFraction *fraction)
{
  begin_object (builder, "semiconducting_fraction");
  put_number (builder, "value", fraction->value);
  put_number (builder, "u", fraction->u);
  put_number (builder, "low", fraction->low);
  put_number (builder, "high", fraction->high);
  put_number (builder, "level", fraction->level);
  put_string (builder, "bound",
              fraction->bound == BT_BOUND_LOWER       ? "lower"
              : fraction->bound == BT_BOUND_TWO_SIDED ? "two-sided"
                                                      : NULL);
  json_builder_end_object (builder);
}

static void
put_bands (JsonBuilder *builder, const BtTally *tally)
{
  begin_array (builder, "bands");
  for (guint i = 0; i < tally->bands->len; i++)
    {
      const BtBand *band = &g_array_index (tally->bands, BtBand, i);

      json_builder_begin_object (builder);
      put_string (builder, "group", bt_group_name (band->group));
      put_number (builder, "centre_ev", band->centre_ev);
      put_number (builder, "centre_u_ev", band->centre_u_ev);
      put_number (builder, "centre_nm", bt_nm_from_ev (band->centre_ev));
      put_number (builder, "fwhm_ev", band->fwhm_ev);
      put_number (builder, "fwhm_u_ev", band->fwhm_u_ev);
      put_number (builder, "height", band->height);
      put_number (builder, "height_u", band->height_u);
      put_number (builder, "area", band->area);
      put_number (builder, "area_u", band->area_u);
      json_builder_end_object (builder);
    }
  json_builder_end_array (builder);
}

/* S11, S22 and M11 are always there, with nulls where they were not fitted (a flag says why); others where the range reaches them. */
static void
put_groups (JsonBuilder *builder, const BtTally *tally)
{
  begin_object (builder, "groups");
  for (int group = 0; group < BT_N_GROUPS; group++)
    {
      const BtGroupTally *sum = &tally->groups[group];
      gboolean fitted = sum->n_bands > 0;

      if (!fitted && group != BT_S11 && group != BT_S22 && group != BT_M11)
        continue;
      begin_object (builder, bt_group_name ((BtGroup) group));
      put_integer (builder, "bands", sum->n_bands);
      put_number (builder, "area", fitted ? sum->area : NAN);
      put_number (builder, "area_u", fitted ? sum->area_u : NAN);
      put_number (builder, "centre_ev", fitted ? sum->centre_ev : NAN);
      put_number (builder, "centre_u_ev", fitted ? sum->centre_u_ev : NAN);
      put_number (builder, "fwhm_ev", fitted ? sum->fwhm_ev : NAN);
      put_number (builder, "fwhm_u_ev", fitted ? sum->fwhm_u_ev : NAN);
      json_builder_end_object (builder);
    }
  json_builder_end_object (builder);
}

/* The tails of one model; weights are among them. */
static void
put_tails_of (JsonBuilder *builder, const BtTally *tally, const BtTailTally *tails)
{
  begin_array (builder, "tails");
  for (guint i = 0; i < tally->n_tails; i++)
    {
      const BtTailTally *tail = &tails[i];

      json_builder_begin_object (builder);
      put_string (builder, "name", bt_tail_name (tail->kind));
      put_number (builder, "weight", tail->weight);
      put_number (builder, "aic", tail->aic);
      put_number (builder, "fraction", tail->fraction);
      put_number (builder, "fraction_u", tail->fraction_u);
      put_number (builder, "misfit", tail->misfit);
      json_builder_end_object (builder);
    }
  json_builder_end_array (builder);
}

static void
put_models (JsonBuilder *builder, const BtTally *tally)
{
  begin_array (builder, "models");
  for (guint m = 0; m < BT_N_MODELS; m++)
    {
      const BtModelTally *model = &tally->models[m];

      if (!(model->weight > 0) && !isfinite (model->misfit))
        continue;
      json_builder_begin_object (builder);
      put_string (builder, "name", bt_model_name ((BtModelKind) m));
      put_number (builder, "weight", model->weight);
      put_number (builder, "fraction", model->fraction);
      put_number (builder, "fraction_u", model->fraction_u);
      put_number (builder, "misfit", model->misfit);
      put_number (builder, "structure", model->structure);
      put_number (builder, "strain", model->strain);
      put_number (builder, "parameters", model->n_parameters);
      put_number (builder, "diameter_mean_nm", model->diameter.mean_nm);
      put_number (builder, "diameter_mean_u_nm", model->diameter_u_nm);
      put_number (builder, "diameter_spread_nm", model->diameter.spread_nm);
      put_tails_of (builder, tally, m == BT_MODEL_GROUPS ? tally->tails : tally->ensembles);
      json_builder_end_object (builder);
    }
  json_builder_end_array (builder);
}

static void
put_tails (JsonBuilder *builder, const BtTally *tally)
{
  put_tails_of (builder, tally, tally->tails);
  put_number (builder, "tail_share_at_s22", tally->tail_share_at_s22);
  put_models (builder, tally);
}

typedef enum
{
  COLUMN_SHEET,
  COLUMN_ALPHA,
  COLUMN_ABSORBANCE,
  COLUMN_ABSORPTANCE
} Column;

/* What each source gives to an absorption coefficient's standard uncertainty, 1/cm. */
static void
put_alpha_parts (JsonBuilder *builder, const BtAlpha *alpha)
{
  begin_object (builder, "parts_per_cm");
  for (guint k = 0; k < BT_N_PARTS; k++)
    put_number (builder, bt_part_name ((BtPart) k), isnan (alpha->value) ? NAN : alpha->parts[k]);
  json_builder_end_object (builder);
}

static void
put_conductor (JsonBuilder *builder, const BtConductor *conductor)
{
  begin_object (builder, "transparent_conductor");
  put_number (builder, "wavelength_nm", BT_CONDUCTOR_NM);
  put_number (builder, "substrate_index", conductor->substrate_index);
  put_number (builder, "transmittance", conductor->transmittance);
  put_number (builder, "transmittance_u", conductor->transmittance_u);
  put_number (builder, "dc_to_optical", conductor->ratio);
  put_number (builder, "dc_to_optical_u", conductor->ratio_u);
  put_number (builder, "haacke_siemens", conductor->haacke_s);
  put_number (builder, "haacke_u_siemens", conductor->haacke_u_s);
  json_builder_end_object (builder);
}

static void
put_readings (JsonBuilder *builder, const char *name, const BtTally *tally, Column column)
{
  begin_array (builder, name);
  for (guint i = 0; i < tally->readings->len; i++)
    {
      const BtReading *reading = &g_array_index (tally->readings, BtReading, i);

      json_builder_begin_object (builder);
      put_number (builder, "wavelength_nm", reading->wavelength_nm);
      switch (column)
        {
        case COLUMN_ALPHA:
          put_number (builder, "per_cm", reading->alpha.value);
          put_number (builder, "u_per_cm", reading->alpha.u);
          put_alpha_parts (builder, &reading->alpha);
          put_number (builder, "monte_carlo_mean_per_cm", reading->alpha.mean);
          put_number (builder, "monte_carlo_u_per_cm", reading->alpha.spread);
          put_number (builder, "low_per_cm", reading->alpha.low);
          put_number (builder, "high_per_cm", reading->alpha.high);
          break;
        case COLUMN_SHEET:
          put_number (builder, "siemens", reading->sheet_conductance_s);
          put_number (builder, "u_siemens", reading->sheet_conductance_u_s);
          put_number (builder, "universal", reading->sheet_conductance_s / BT_UNIVERSAL_CONDUCTANCE_S);
          put_number (builder, "u_universal", reading->sheet_conductance_u_s / BT_UNIVERSAL_CONDUCTANCE_S);
          break;
        case COLUMN_ABSORBANCE:
          put_number (builder, "value", reading->absorbance);
          put_number (builder, "u", reading->absorbance_u);
          break;
        case COLUMN_ABSORPTANCE:
          put_number (builder, "value", reading->absorptance);
          put_number (builder, "u", reading->absorptance_u);
          break;
        default:
          g_return_if_reached ();
        }
      json_builder_end_object (builder);
    }
  json_builder_end_array (builder);
}

static void
put_budget (JsonBuilder *builder, const BtTally *tally)
{
  begin_array (builder, "budget");
  for (guint i = 0; i < tally->budget->len; i++)
    {
      const BtBudgetLine *line = &g_array_index (tally->budget, BtBudgetLine, i);

      json_builder_begin_object (builder);
      put_string (builder, "source", line->source);
      put_number (builder, "u", line->u);
      json_builder_end_object (builder);
    }
  json_builder_end_array (builder);
}

static void
put_flags (JsonBuilder *builder, const BtTally *tally)
{
  begin_array (builder, "flags");
  for (guint i = 0; i < tally->flags->len; i++)
    {
      const BtFlag *flag = g_ptr_array_index (tally->flags, i);

      json_builder_begin_object (builder);
      put_string (builder, "code", flag->code);
      put_string (builder, "text", flag->text);
      json_builder_end_object (builder);
    }
  json_builder_end_array (builder);
}

static void
put_judgement (JsonBuilder *builder, const BtTally *tally)
{
  put_string (builder, "verdict", bt_verdict_name (tally->verdict));
  begin_object (builder, "decision");
  put_number (builder, "limit", tally->recipe->limit);
  put_number (builder, "probability_at_least_limit", tally->conformance);
  put_number (builder, "acceptance_limit", tally->acceptance_limit);
  put_number (builder, "refusal_limit", tally->refusal_limit);
  put_string (builder, "rule", tally->decision_rule);
  json_builder_end_object (builder);
}

/* The recipe's own writer and reader are the only place that knows its members. */
static void
put_recipe (JsonBuilder *builder, const BtTally *tally)
{
  char *text = bt_recipe_to_json (tally->recipe);
  JsonNode *node = json_from_string (text, NULL);

  json_builder_set_member_name (builder, "recipe");
  if (node != NULL)
    json_builder_add_value (builder, node);
  else
    json_builder_add_null_value (builder);
  g_free (text);
}

static void
put_film (JsonBuilder *builder, BtFilm *film, const BtTally *tally)
{
  json_builder_begin_object (builder);
  put_reading (builder, film);
  put_string (builder, "light_path", tally->curve != NULL ? tally->curve->path : NULL);
  put_string (builder, "absorption_coefficient_meaning", tally->curve != NULL ? tally->curve->alpha : NULL);
  put_pair (builder, "fitted_range_ev", tally->range.low_ev, tally->range.high_ev);
  put_fraction (builder, &tally->fraction);
  put_bands (builder, tally);
  put_groups (builder, tally);
  put_tails (builder, tally);
  put_readings (builder, "absorption_coefficient", tally, COLUMN_ALPHA);
  begin_object (builder, "mean_absorption_coefficient");
  json_builder_set_member_name (builder, "range_nm");
  json_builder_begin_array (builder);
  json_builder_add_double_value (builder, tally->recipe->mean_low_nm);
  json_builder_add_double_value (builder, tally->recipe->mean_high_nm);
  json_builder_end_array (builder);
  put_number (builder, "per_cm", tally->mean_alpha.value);
  put_number (builder, "u_per_cm", tally->mean_alpha.u);
  put_alpha_parts (builder, &tally->mean_alpha);
  json_builder_end_object (builder);
  put_readings (builder, "absorbance", tally, COLUMN_ABSORBANCE);
  put_readings (builder, "absorptance", tally, COLUMN_ABSORPTANCE);
  put_readings (builder, "sheet_conductance", tally, COLUMN_SHEET);
  put_conductor (builder, &tally->conductor);
  begin_object (builder, "diameter_nm");
  put_number (builder, "mean", tally->diameter.mean_nm);
  put_number (builder, "spread", tally->diameter.spread_nm);
  put_number (builder, "mean_u", tally->diameter_u_nm);
  json_builder_end_object (builder);
  begin_object (builder, "diameter_window_nm");
  put_number (builder, "mean", tally->plan.window.mean_nm);
  put_number (builder, "spread", tally->plan.window.spread_nm);
  json_builder_set_member_name (builder, "proposed");
  json_builder_add_boolean_value (builder, tally->window_proposed);
  json_builder_end_object (builder);
  put_budget (builder, tally);
  put_flags (builder, tally);
  put_judgement (builder, tally);
  put_recipe (builder, tally);
  json_builder_end_object (builder);
}

static void
put_failures (JsonBuilder *builder, GPtrArray *failures)
{
  begin_array (builder, "failed");
  for (guint i = 0; failures != NULL && i < failures->len; i++)
    {
      const BtFailure *failure = g_ptr_array_index (failures, i);

      json_builder_begin_object (builder);
      put_file (builder, failure->file);
      put_string (builder, "reason", failure->reason);
      json_builder_end_object (builder);
    }
  json_builder_end_array (builder);
}

char *
bt_tallies_to_json_with_failures (GPtrArray *films, GPtrArray *tallies, GPtrArray *failures)
{
  JsonBuilder *builder = json_builder_new ();
  JsonNode *root;
  char *text, *lines;

  g_return_val_if_fail (films->len == tallies->len, NULL);
  json_builder_begin_object (builder);
  put_string (builder, "bandtally", bt_version ());
  begin_array (builder, "films");
  for (guint i = 0; i < films->len; i++)
    put_film (builder, g_ptr_array_index (films, i), g_ptr_array_index (tallies, i));
  json_builder_end_array (builder);
  put_failures (builder, failures);
  json_builder_end_object (builder);

  root = json_builder_get_root (builder);
  text = bt_json_shorten_numbers (json_to_string (root, TRUE));
  lines = g_strconcat (text, "\n", NULL);
  g_free (text);
  json_node_unref (root);
  g_object_unref (builder);
  return lines;
}

char *
bt_tallies_to_json (GPtrArray *films, GPtrArray *tallies)
{
  return bt_tallies_to_json_with_failures (films, tallies, NULL);
}
