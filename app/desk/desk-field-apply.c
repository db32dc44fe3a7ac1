/* Fields: what an entry does to a film or its recipe. */
#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

#include "desk-field.h"
#include "desk-recipe.h"

static gboolean
apply_text (const DeskField *field, const char *text, DeskSubject *subject)
{
  switch (field->id)
    {
    case DESK_FIELD_LABEL:
      bt_film_set_label (subject->film, text);
      return TRUE;
    case DESK_FIELD_LOT:
      bt_film_set_lot (subject->film, text);
      return TRUE;
    case DESK_FIELD_SUBSTRATE:
      bt_film_set_substrate (subject->film, text);
      return TRUE;
    case DESK_FIELD_NOTES:
      bt_film_set_notes (subject->film, text);
      return TRUE;
    default:
      g_free (subject->recipe->strength_ratio_source);
      subject->recipe->strength_ratio_source = g_strdup (text);
      return TRUE;
    }
}

static gboolean
refuse (GError **error, const char *sentence)
{
  g_set_error_literal (error, DESK_PARSE_ERROR, 0, sentence);
  return FALSE;
}

/* A window proposed from the data becomes the user's own as soon as one of its numbers is typed. */
static void
own_window (DeskSubject *subject)
{
  if (!(subject->recipe->window.mean_nm > 0) && subject->tally)
    subject->recipe->window = subject->tally->plan.window;
}

static gboolean
apply_empty (const DeskField *field, DeskSubject *subject, GError **error)
{
  BtRecipe *recipe = subject->recipe;
  switch (field->id)
    {
    case DESK_FIELD_THICKNESS:
      bt_film_set_thickness (subject->film, 0, 0);
      return TRUE;
    case DESK_FIELD_THICKNESS_U:
      bt_film_set_thickness (subject->film, bt_film_get_thickness_nm (subject->film), 0);
      return TRUE;
    case DESK_FIELD_SHEET_RESISTANCE:
      bt_film_set_sheet_resistance (subject->film, 0, 0);
      return TRUE;
    case DESK_FIELD_SHEET_RESISTANCE_U:
      bt_film_set_sheet_resistance (subject->film, bt_film_get_sheet_resistance_ohm (subject->film), 0);
      return TRUE;
    case DESK_FIELD_REFLECTANCE_U:
      recipe->light_path.reflectance_u = 0;
      return TRUE;
    case DESK_FIELD_PHOTOMETRIC_U:
      recipe->photometric_u = 0;
      return TRUE;
    case DESK_FIELD_WAVELENGTH_U:
      recipe->wavelength_u_nm = 0;
      return TRUE;
    case DESK_FIELD_STRAY_LIGHT:
      recipe->stray_light = 0;
      return TRUE;
    case DESK_FIELD_STEPS:
      g_array_set_size (recipe->steps_nm, 0);
      return TRUE;
    case DESK_FIELD_DIAMETER_MEAN:
    case DESK_FIELD_DIAMETER_SPREAD:
      recipe->window.mean_nm = recipe->window.spread_nm = 0;
      return TRUE;
    case DESK_FIELD_RANGE_LOW:
      recipe->range.low_ev = 0;
      return TRUE;
    case DESK_FIELD_RANGE_HIGH:
      recipe->range.high_ev = 0;
      return TRUE;
    case DESK_FIELD_LIMIT:
      recipe->limit = NAN;
      return TRUE;
    case DESK_FIELD_REFLECTANCE:
      recipe->light_path.reflectance = NAN;
      return TRUE;
    case DESK_FIELD_SUBSTRATE_INDEX:
      recipe->light_path.substrate_index = 0;
      return TRUE;
    case DESK_FIELD_WAVELENGTHS:
      g_array_set_size (recipe->wavelengths_nm, 0);
      return TRUE;
    case DESK_FIELD_EXCLUDED:
      return TRUE;
    case DESK_FIELD_BAND:
      bt_recipe_release (recipe, field->group, field->index, field->band);
      return TRUE;
    default:
      return refuse (error, _("This line needs a number."));
    }
}

static gboolean
apply_film (const DeskField *field, double value, double u, DeskSubject *subject, GError **error)
{
  BtFilm *film = subject->film;
  double thickness = bt_film_get_thickness_nm (film), thickness_u = bt_film_get_thickness_u_nm (film);
  double ohm = bt_film_get_sheet_resistance_ohm (film), ohm_u = bt_film_get_sheet_resistance_u_ohm (film);
  gboolean is_u = field->id == DESK_FIELD_THICKNESS_U || field->id == DESK_FIELD_SHEET_RESISTANCE_U;
  if (is_u && value < 0)
    return refuse (error, _("An uncertainty cannot be below zero."));
  if (!is_u && value <= 0)
    return refuse (error, field->id == DESK_FIELD_THICKNESS
                              ? _("A thickness is above zero; leave the line empty where it is unknown.")
                              : _("A sheet resistance is above zero; leave the line empty where it is unknown."));
  if (field->id == DESK_FIELD_THICKNESS_U)
    bt_film_set_thickness (film, thickness, value);
  else if (field->id == DESK_FIELD_SHEET_RESISTANCE_U)
    bt_film_set_sheet_resistance (film, ohm, value);
  else if (field->id == DESK_FIELD_SHEET_RESISTANCE)
    bt_film_set_sheet_resistance (film, value, isnan (u) ? ohm_u : u);
  else
    bt_film_set_thickness (film, value, isnan (u) ? thickness_u : u);
  return TRUE;
}

/* "118; 121; 125 nm": readings across the film. FALSE without an error where it is a single number. */
static gboolean
apply_thicknesses (const char *text, DeskSubject *subject)
{
  double single;
  if (desk_parse_quantity (text, DESK_UNIT_NM, &single, NULL, NULL))
    return FALSE;
  g_autoptr (GArray) values = desk_parse_quantities (text, DESK_UNIT_NM, NULL);
  if (!values || values->len < 2)
    return FALSE;
  for (guint i = 0; i < values->len; i++)
    if (!(g_array_index (values, double, i) > 0))
      return FALSE;
  bt_film_set_thickness_readings (subject->film, (const double *) (void *) values->data, values->len);
  return TRUE;
}

static gboolean
apply_number (const DeskField *field, double value, double u, DeskSubject *subject, GError **error)
{
  BtRecipe *recipe = subject->recipe;
  switch (field->id)
    {
    case DESK_FIELD_THICKNESS:
    case DESK_FIELD_THICKNESS_U:
    case DESK_FIELD_SHEET_RESISTANCE:
    case DESK_FIELD_SHEET_RESISTANCE_U:
      return apply_film (field, value, u, subject, error);
    case DESK_FIELD_REFLECTANCE_U:
      recipe->light_path.reflectance_u = value;
      break;
    case DESK_FIELD_PHOTOMETRIC_U:
      recipe->photometric_u = value;
      break;
    case DESK_FIELD_WAVELENGTH_U:
      recipe->wavelength_u_nm = value;
      break;
    case DESK_FIELD_STRAY_LIGHT:
      recipe->stray_light = value;
      break;
    case DESK_FIELD_DIAMETER_MEAN:
      own_window (subject);
      if (!(recipe->window.spread_nm > 0))
        recipe->window.spread_nm = 0.1;
      recipe->window.mean_nm = value;
      if (!isnan (u))
        recipe->window.spread_nm = u;
      break;
    case DESK_FIELD_DIAMETER_SPREAD:
      own_window (subject);
      if (!(recipe->window.mean_nm > 0))
        return refuse (error, _("State the mean diameter first: there is no proposal for it yet."));
      recipe->window.spread_nm = value;
      break;
    case DESK_FIELD_SHIFT:
      recipe->shift_ev = value;
      break;
    case DESK_FIELD_RANGE_LOW:
      recipe->range.low_ev = value;
      break;
    case DESK_FIELD_RANGE_HIGH:
      recipe->range.high_ev = value;
      break;
    case DESK_FIELD_MEAN_LOW:
      recipe->mean_low_nm = value;
      break;
    case DESK_FIELD_MEAN_HIGH:
      recipe->mean_high_nm = value;
      break;
    case DESK_FIELD_MAX_ABSORBANCE:
      recipe->max_absorbance = value;
      break;
    case DESK_FIELD_REFLECTANCE:
      if (value < 0 || value >= 1)
        return refuse (error, _("A reflectance lies between 0 and 1, or 0 and 100 %."));
      recipe->light_path.reflectance = value;
      if (!isnan (u))
        recipe->light_path.reflectance_u = u;
      break;
    case DESK_FIELD_SUBSTRATE_INDEX:
      if (value < 1)
        return refuse (error, _("A refractive index is at least 1."));
      recipe->light_path.substrate_index = value;
      break;
    case DESK_FIELD_RATIO:
      recipe->strength_ratio = value;
      if (!isnan (u))
        recipe->strength_ratio_u = u;
      break;
    case DESK_FIELD_RATIO_U:
      recipe->strength_ratio_u = value;
      break;
    case DESK_FIELD_LEVEL:
      recipe->level = value > 1 && value < 100 ? value / 100 : value;
      break;
    case DESK_FIELD_LIMIT:
      recipe->limit = value > 1 && value <= 100 ? value / 100 : value;
      break;
    case DESK_FIELD_MAX_BANDS:
      if (value != floor (value) || value < 0 || value > BT_RECIPE_MAX_BANDS)
        {
          g_set_error (error, DESK_PARSE_ERROR, 0, _("A group has 0 to %d bands; 0 leaves it out."), BT_RECIPE_MAX_BANDS);
          return FALSE;
        }
      recipe->max_bands[field->group] = (guint) value;
      break;
    case DESK_FIELD_BAND:
      if (field->band == BT_BAND_FWHM && value <= 0)
        return refuse (error, _("A width is above zero."));
      if (field->band == BT_BAND_HEIGHT && value < 0 && field->group != BT_M11)
        return refuse (error, _("The height of this band cannot be below zero."));
      bt_recipe_hold (recipe, field->group, field->index, field->band, value);
      break;
    default:
      g_return_val_if_reached (FALSE);
    }
  return TRUE;
}

/* "0.95 to 1.05 eV", "1180 to 1300 nm", "0.95 - 1.05". */
static gboolean
apply_excluded (const char *text, DeskSubject *subject, GError **error)
{
  double from, to;
  g_autoptr (GRegex) between = g_regex_new ("^\\s*([0-9.,]+)\\s*([^0-9]*?)\\s*(?:to|-|–|…|;)\\s*([0-9.,]+.*)$", 0, 0, NULL);
  g_autoptr (GMatchInfo) match = NULL;
  if (!g_regex_match (between, text, 0, &match))
    return refuse (error, _("Write the two ends of the range, for example 0.95 to 1.05 eV or 1180 to 1300 nm."));
  g_autofree char *first = g_match_info_fetch (match, 1), *first_unit = g_match_info_fetch (match, 2);
  g_autofree char *second = g_match_info_fetch (match, 3);
  /* The first end is in the unit of the second where it names none. */
  const char *unit = *first_unit ? first_unit : second + strspn (second, "0123456789., ");
  g_autofree char *first_end = g_strconcat (first, " ", unit, NULL);
  if (!desk_parse_quantity (first_end, DESK_UNIT_EV, &from, NULL, error)
      || !desk_parse_quantity (second, DESK_UNIT_EV, &to, NULL, error))
    return FALSE;
  if (!(from > 0) || !(to > 0) || from == to)
    return refuse (error, _("The two ends of the range must differ and lie above zero."));
  desk_recipe_exclude (subject->recipe, from, to);
  return TRUE;
}

gboolean
desk_field_apply (const DeskField *field, const char *text, DeskSubject *subject, GError **error)
{
  g_autofree char *trimmed = g_strstrip (g_strdup (text));
  double value, u;
  if (desk_field_is_text (field))
    return apply_text (field, trimmed, subject);
  if (!*trimmed)
    return apply_empty (field, subject, error) && bt_recipe_check (subject->recipe, error);
  if (field->id == DESK_FIELD_EXCLUDED)
    return apply_excluded (trimmed, subject, error) && bt_recipe_check (subject->recipe, error);
  if (field->id == DESK_FIELD_WAVELENGTHS || field->id == DESK_FIELD_STEPS)
    {
      GArray *values = desk_parse_quantities (trimmed, DESK_UNIT_WAVELENGTH, error);
      GArray **list = field->id == DESK_FIELD_STEPS ? &subject->recipe->steps_nm : &subject->recipe->wavelengths_nm;
      if (!values)
        return FALSE;
      g_array_unref (*list);
      *list = values;
      return bt_recipe_check (subject->recipe, error);
    }
  if (field->id == DESK_FIELD_THICKNESS && apply_thicknesses (trimmed, subject))
    return TRUE;
  return desk_parse_quantity (trimmed, desk_field_unit (field), &value, &u, error)
         && apply_number (field, value, u, subject, error) && bt_recipe_check (subject->recipe, error);
}
