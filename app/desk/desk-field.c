#include "desk-field.h"

#include <glib/gi18n.h>
#include <math.h>
#include <string.h>

#include "desk-recipe.h"

typedef struct {
  DeskFieldId id;
  DeskUnit unit;
  const char *title;
  const char *command;
  const char *empty; /* what an empty entry means; NULL: not allowed */
} FieldInfo;

static const FieldInfo infos[] = {
  { DESK_FIELD_LABEL, DESK_UNIT_NONE, N_ ("Label"), N_ ("Rename film"), N_ ("the file's name is shown") },
  { DESK_FIELD_LOT, DESK_UNIT_NONE, N_ ("Lot"), N_ ("Set lot"), N_ ("no lot") },
  { DESK_FIELD_SUBSTRATE, DESK_UNIT_NONE, N_ ("Substrate"), N_ ("Set substrate"), N_ ("not stated") },
  { DESK_FIELD_NOTES, DESK_UNIT_NONE, N_ ("Notes"), N_ ("Change notes"), N_ ("none") },
  { DESK_FIELD_THICKNESS, DESK_UNIT_NM, N_ ("Thickness"), N_ ("Set thickness"), N_ ("unknown") },
  { DESK_FIELD_THICKNESS_U, DESK_UNIT_NM, N_ ("Thickness, uncertainty"), N_ ("Set uncertainty of thickness"),
    N_ ("unknown") },
  { DESK_FIELD_DIAMETER_MEAN, DESK_UNIT_NM, N_ ("Mean diameter expected"), N_ ("Set mean diameter"),
    N_ ("proposed from the data") },
  { DESK_FIELD_DIAMETER_SPREAD, DESK_UNIT_NM, N_ ("Spread expected"), N_ ("Set diameter spread"),
    N_ ("proposed from the data") },
  { DESK_FIELD_SHIFT, DESK_UNIT_EV_WIDTH, N_ ("Red shift of the film"), N_ ("Set red shift"), NULL },
  { DESK_FIELD_RANGE_LOW, DESK_UNIT_EV, N_ ("Fitted from"), N_ ("Set lower end of fit"), N_ ("as far as the data go") },
  { DESK_FIELD_RANGE_HIGH, DESK_UNIT_EV, N_ ("Fitted to"), N_ ("Set upper end of fit"), N_ ("as far as the data go") },
  { DESK_FIELD_MEAN_LOW, DESK_UNIT_WAVELENGTH, N_ ("Mean from"), N_ ("Set range of the mean"), NULL },
  { DESK_FIELD_MEAN_HIGH, DESK_UNIT_WAVELENGTH, N_ ("Mean to"), N_ ("Set range of the mean"), NULL },
  { DESK_FIELD_MAX_ABSORBANCE, DESK_UNIT_NONE, N_ ("Highest absorbance trusted"), N_ ("Set photometric limit"), NULL },
  { DESK_FIELD_REFLECTANCE, DESK_UNIT_SHARE, N_ ("Reflectance of a face"), N_ ("Set reflectance"),
    N_ ("from the substrate's index") },
  { DESK_FIELD_SUBSTRATE_INDEX, DESK_UNIT_NONE, N_ ("Index of the substrate"), N_ ("Set index of the substrate"),
    N_ ("from the substrate's name") },
  { DESK_FIELD_RATIO, DESK_UNIT_NONE, N_ ("Strength ratio S22 : M11"), N_ ("Set strength ratio"), NULL },
  { DESK_FIELD_RATIO_U, DESK_UNIT_NONE, N_ ("Strength ratio, uncertainty"), N_ ("Set uncertainty of strength ratio"), NULL },
  { DESK_FIELD_RATIO_SOURCE, DESK_UNIT_NONE, N_ ("Source of the ratio"), N_ ("Set source of strength ratio"),
    N_ ("not stated") },
  { DESK_FIELD_LEVEL, DESK_UNIT_SHARE, N_ ("Confidence level"), N_ ("Set confidence level"), NULL },
  { DESK_FIELD_LIMIT, DESK_UNIT_SHARE, N_ ("Limit, at least"), N_ ("Set limit"), N_ ("not judged") },
  { DESK_FIELD_WAVELENGTHS, DESK_UNIT_WAVELENGTH, N_ ("Wavelengths"), N_ ("Set wavelengths"), N_ ("none") },
  { DESK_FIELD_EXCLUDED, DESK_UNIT_EV, N_ ("Leave out"), N_ ("Leave a range out"), N_ ("0.95 to 1.05 eV") },
};

static const FieldInfo max_bands_info = { DESK_FIELD_MAX_BANDS, DESK_UNIT_NONE, NULL, NULL, NULL };
static const FieldInfo band_infos[] = {
  [BT_BAND_CENTRE] = { DESK_FIELD_BAND, DESK_UNIT_EV, N_ ("Centre"), N_ ("Hold centre of %s"), N_ ("free") },
  [BT_BAND_FWHM] = { DESK_FIELD_BAND, DESK_UNIT_EV_WIDTH, N_ ("FWHM"), N_ ("Hold width of %s"), N_ ("free") },
  [BT_BAND_HEIGHT] = { DESK_FIELD_BAND, DESK_UNIT_NONE, N_ ("Height"), N_ ("Hold height of %s"), N_ ("free") },
};

static const FieldInfo *
info_of (const DeskField *field)
{
  if (field->id == DESK_FIELD_BAND)
    return &band_infos[field->band];
  for (guint i = 0; i < G_N_ELEMENTS (infos); i++)
    if (infos[i].id == field->id)
      return &infos[i];
  return &max_bands_info;
}

const BtBand *
desk_tally_find_band (const BtTally *tally, BtGroup group, guint index)
{
  for (guint i = 0; tally && i < tally->bands->len; i++)
    {
      const BtBand *band = &g_array_index (tally->bands, BtBand, i);
      if (band->group == group && band->index == index)
        return band;
    }
  return NULL;
}

char *
desk_field_title (const DeskField *field)
{
  if (field->id == DESK_FIELD_MAX_BANDS)
    return g_strdup_printf (_("%s, most bands"), bt_group_name (field->group));
  return g_strdup (_(info_of (field)->title));
}

char *
desk_field_command_name (const DeskField *field)
{
  const char *group = bt_group_name (field->group);
  switch (field->id)
    {
    case DESK_FIELD_MAX_BANDS:
      return g_strdup_printf (_("Set number of %s bands"), group);
    case DESK_FIELD_BAND:
      switch (field->band)
        {
        case BT_BAND_CENTRE:
          return g_strdup_printf (_("Set centre of %s"), group);
        case BT_BAND_FWHM:
          return g_strdup_printf (_("Set width of %s"), group);
        case BT_BAND_HEIGHT:
          return g_strdup_printf (_("Set height of %s"), group);
        }
      return NULL;
    default:
      return g_strdup (_(info_of (field)->command));
    }
}

const char *
desk_field_empty_hint (const DeskField *field)
{
  const char *empty = info_of (field)->empty;
  return empty ? _(empty) : NULL;
}

gboolean
desk_field_is_text (const DeskField *field)
{
  return field->id == DESK_FIELD_LABEL || field->id == DESK_FIELD_LOT || field->id == DESK_FIELD_SUBSTRATE
         || field->id == DESK_FIELD_NOTES || field->id == DESK_FIELD_RATIO_SOURCE;
}

/* What the field holds now: NAN where it is left open. */
static double
number_of (const DeskField *field, const DeskSubject *subject)
{
  const BtRecipe *recipe = subject->recipe;
  const BtTally *tally = subject->tally;
  const BtBand *band;
  switch (field->id)
    {
    case DESK_FIELD_THICKNESS:
      return bt_film_get_thickness_nm (subject->film) > 0 ? bt_film_get_thickness_nm (subject->film) : NAN;
    case DESK_FIELD_THICKNESS_U:
      return bt_film_get_thickness_u_nm (subject->film) > 0 ? bt_film_get_thickness_u_nm (subject->film) : NAN;
    case DESK_FIELD_DIAMETER_MEAN:
      return recipe->window.mean_nm > 0 ? recipe->window.mean_nm : tally ? tally->plan.window.mean_nm : NAN;
    case DESK_FIELD_DIAMETER_SPREAD:
      return recipe->window.mean_nm > 0 ? recipe->window.spread_nm : tally ? tally->plan.window.spread_nm : NAN;
    case DESK_FIELD_SHIFT:
      return recipe->shift_ev;
    case DESK_FIELD_RANGE_LOW:
      return recipe->range.low_ev > 0 ? recipe->range.low_ev : tally ? tally->range.low_ev : NAN;
    case DESK_FIELD_RANGE_HIGH:
      return recipe->range.high_ev > 0 ? recipe->range.high_ev : tally ? tally->range.high_ev : NAN;
    case DESK_FIELD_MEAN_LOW:
      return recipe->mean_low_nm;
    case DESK_FIELD_MEAN_HIGH:
      return recipe->mean_high_nm;
    case DESK_FIELD_MAX_ABSORBANCE:
      return recipe->max_absorbance;
    case DESK_FIELD_REFLECTANCE:
      return recipe->light_path.reflectance;
    case DESK_FIELD_SUBSTRATE_INDEX:
      return recipe->light_path.substrate_index > 0 ? recipe->light_path.substrate_index : NAN;
    case DESK_FIELD_RATIO:
      return recipe->strength_ratio;
    case DESK_FIELD_RATIO_U:
      return recipe->strength_ratio_u;
    case DESK_FIELD_LEVEL:
      return recipe->level;
    case DESK_FIELD_LIMIT:
      return recipe->limit;
    case DESK_FIELD_MAX_BANDS:
      return recipe->max_bands[field->group];
    case DESK_FIELD_BAND:
      band = desk_tally_find_band (tally, field->group, field->index);
      if (!band)
        return NAN;
      return field->band == BT_BAND_CENTRE ? band->centre_ev : field->band == BT_BAND_FWHM ? band->fwhm_ev : band->height;
    default:
      return NAN;
    }
}

static char *
wavelengths_text (const BtRecipe *recipe)
{
  GString *text = g_string_new (NULL);
  for (guint i = 0; i < recipe->wavelengths_nm->len; i++)
    {
      g_string_append_printf (text, "%s%.6g", i ? "; " : "", g_array_index (recipe->wavelengths_nm, double, i));
    }
  if (text->len)
    g_string_append (text, " nm");
  return g_string_free (text, FALSE);
}

char *
desk_field_text (const DeskField *field, const DeskSubject *subject)
{
  const char *text = NULL;
  switch (field->id)
    {
    case DESK_FIELD_LABEL:
      text = bt_film_get_label (subject->film);
      break;
    case DESK_FIELD_LOT:
      text = bt_film_get_lot (subject->film);
      break;
    case DESK_FIELD_SUBSTRATE:
      text = bt_film_get_substrate (subject->film);
      break;
    case DESK_FIELD_NOTES:
      text = bt_film_get_notes (subject->film);
      break;
    case DESK_FIELD_RATIO_SOURCE:
      text = subject->recipe->strength_ratio_source;
      break;
    case DESK_FIELD_WAVELENGTHS:
      return wavelengths_text (subject->recipe);
    default:
      break;
    }
  if (desk_field_is_text (field))
    return g_strdup (text ? text : "");
  double value = number_of (field, subject);
  if (isnan (value))
    return g_strdup ("");
  const char *unit = desk_unit_name (info_of (field)->unit);
  return g_strdup_printf ("%.6g%s%s", value, *unit ? " " : "", unit);
}

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
  if (field->id == DESK_FIELD_THICKNESS_U)
    {
      if (value < 0)
        return refuse (error, _("An uncertainty cannot be below zero."));
      bt_film_set_thickness (film, thickness, value);
      return TRUE;
    }
  if (value <= 0)
    return refuse (error, _("A thickness is above zero; leave the line empty where it is unknown."));
  bt_film_set_thickness (film, value, isnan (u) ? thickness_u : u);
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
      return apply_film (field, value, u, subject, error);
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
  if (field->id == DESK_FIELD_WAVELENGTHS)
    {
      GArray *values = desk_parse_quantities (trimmed, DESK_UNIT_WAVELENGTH, error);
      if (!values)
        return FALSE;
      g_array_unref (subject->recipe->wavelengths_nm);
      subject->recipe->wavelengths_nm = values;
      return bt_recipe_check (subject->recipe, error);
    }
  return desk_parse_quantity (trimmed, info_of (field)->unit, &value, &u, error)
         && apply_number (field, value, u, subject, error) && bt_recipe_check (subject->recipe, error);
}
