/* Fields: what they are called and what they hold. What an entry does is in desk-field-apply.c. */
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
  { DESK_FIELD_SHEET_RESISTANCE, DESK_UNIT_OHM, N_ ("Sheet resistance"), N_ ("Set sheet resistance"), N_ ("unknown") },
  { DESK_FIELD_SHEET_RESISTANCE_U, DESK_UNIT_OHM, N_ ("Sheet resistance, uncertainty"), N_ ("Set uncertainty of sheet resistance"),
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
  { DESK_FIELD_REFLECTANCE_U, DESK_UNIT_SHARE, N_ ("Reflectance, uncertainty"), N_ ("Set uncertainty of reflectance"), N_ ("unknown") },
  { DESK_FIELD_SUBSTRATE_INDEX, DESK_UNIT_NONE, N_ ("Index of the substrate"), N_ ("Set index of the substrate"),
    N_ ("from the substrate's name") },
  { DESK_FIELD_RATIO, DESK_UNIT_NONE, N_ ("Strength ratio S22 : M11"), N_ ("Set strength ratio"), NULL },
  { DESK_FIELD_RATIO_U, DESK_UNIT_NONE, N_ ("Strength ratio, uncertainty"), N_ ("Set uncertainty of strength ratio"), NULL },
  { DESK_FIELD_RATIO_SOURCE, DESK_UNIT_NONE, N_ ("Source of the ratio"), N_ ("Set source of strength ratio"),
    N_ ("not stated") },
  { DESK_FIELD_LEVEL, DESK_UNIT_SHARE, N_ ("Confidence level"), N_ ("Set confidence level"), NULL },
  { DESK_FIELD_LIMIT, DESK_UNIT_SHARE, N_ ("Limit, at least"), N_ ("Set limit"), N_ ("not judged") },
  { DESK_FIELD_WAVELENGTHS, DESK_UNIT_WAVELENGTH, N_ ("Wavelengths"), N_ ("Set wavelengths"), N_ ("none") },
  { DESK_FIELD_STEPS, DESK_UNIT_WAVELENGTH, N_ ("Detector changes at"), N_ ("Set detector changes"), N_ ("as the data show") },
  { DESK_FIELD_PHOTOMETRIC_U, DESK_UNIT_NONE, N_ ("Photometric uncertainty"), N_ ("Set photometric uncertainty"), N_ ("unknown") },
  { DESK_FIELD_WAVELENGTH_U, DESK_UNIT_NM, N_ ("Wavelength uncertainty"), N_ ("Set wavelength uncertainty"), N_ ("unknown") },
  { DESK_FIELD_STRAY_LIGHT, DESK_UNIT_SHARE, N_ ("Stray light"), N_ ("Set stray light"), N_ ("unknown") },
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
desk_field_is_of_film (const DeskField *field)
{
  return field->id <= DESK_FIELD_SHEET_RESISTANCE_U;
}

DeskUnit
desk_field_unit (const DeskField *field)
{
  return info_of (field)->unit;
}

gboolean
desk_field_is_text (const DeskField *field)
{
  return field->id == DESK_FIELD_LABEL || field->id == DESK_FIELD_LOT || field->id == DESK_FIELD_SUBSTRATE
         || field->id == DESK_FIELD_NOTES || field->id == DESK_FIELD_RATIO_SOURCE;
}

/* Numbers whose 0 stands for what is not known. */
static double
open_number (double value)
{
  return value > 0 ? value : NAN;
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
      return open_number (bt_film_get_thickness_nm (subject->film));
    case DESK_FIELD_THICKNESS_U:
      return open_number (bt_film_get_thickness_u_nm (subject->film));
    case DESK_FIELD_SHEET_RESISTANCE:
      return open_number (bt_film_get_sheet_resistance_ohm (subject->film));
    case DESK_FIELD_SHEET_RESISTANCE_U:
      return open_number (bt_film_get_sheet_resistance_u_ohm (subject->film));
    case DESK_FIELD_REFLECTANCE_U:
      return open_number (recipe->light_path.reflectance_u);
    case DESK_FIELD_PHOTOMETRIC_U:
      return open_number (recipe->photometric_u);
    case DESK_FIELD_WAVELENGTH_U:
      return open_number (recipe->wavelength_u_nm);
    case DESK_FIELD_STRAY_LIGHT:
      return open_number (recipe->stray_light);
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
      return open_number (recipe->light_path.substrate_index);
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

/* "118; 121; 125 nm"; "" of none. */
static char *
list_text (const double *values, gsize n)
{
  GString *text = g_string_new (NULL);
  for (gsize i = 0; i < n; i++)
    g_string_append_printf (text, "%s%.6g", i ? "; " : "", values[i]);
  if (text->len)
    g_string_append (text, " nm");
  return g_string_free (text, FALSE);
}

char *
desk_field_text (const DeskField *field, const DeskSubject *subject)
{
  const char *text = NULL;
  const double *readings;
  gsize n;
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
      return list_text ((const double *) (void *) subject->recipe->wavelengths_nm->data, subject->recipe->wavelengths_nm->len);
    case DESK_FIELD_STEPS:
      return list_text ((const double *) (void *) subject->recipe->steps_nm->data, subject->recipe->steps_nm->len);
    case DESK_FIELD_THICKNESS:
      readings = bt_film_get_thickness_readings (subject->film, &n);
      if (n > 1)
        return list_text (readings, n);
      break;
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
