/* The recipe as an object: defaults, copies, what the user holds. Its JSON form is in recipe-json.c. */
#include <bandtally/recipe.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

G_DEFINE_BOXED_TYPE (BtRecipe, bt_recipe, bt_recipe_copy, bt_recipe_free)
G_DEFINE_QUARK (bt-recipe-error-quark, bt_recipe_error)

static const char *const correction_names[BT_N_STEP_CORRECTIONS] = { "none", "visible", "infrared" };

const char *
bt_step_correction_name (BtStepCorrection correction)
{
  g_return_val_if_fail (correction < BT_N_STEP_CORRECTIONS, NULL);
  return correction_names[correction];
}

gboolean
bt_step_correction_from_name (const char *name, BtStepCorrection *correction)
{
  for (guint i = 0; i < BT_N_STEP_CORRECTIONS; i++)
    if (g_ascii_strcasecmp (name, correction_names[i]) == 0)
      {
        *correction = (BtStepCorrection) i;
        return TRUE;
      }
  return FALSE;
}

BtRecipe *
bt_recipe_new (void)
{
  static const double wavelengths_nm[] = { 550, 650, 980, 1550 };
  static const guint max_bands[BT_N_GROUPS] = { [BT_S11] = 3, [BT_S22] = 3, [BT_M11] = 2, [BT_S33] = 2, [BT_S44] = 1, [BT_M22] = 1 };
  BtRecipe *recipe = g_new0 (BtRecipe, 1);

  recipe->name = g_strdup ("standard");
  recipe->light_path = (BtLightPath) BT_LIGHT_PATH_INIT;
  recipe->tails = (1u << BT_N_TAILS) - 1;
  /* The middle of the 20 to 60 meV by which bands of films lie below those of single tubes (common practice). */
  recipe->shift_ev = 0.04;
  memcpy (recipe->max_bands, max_bands, sizeof max_bands);
  recipe->strength_ratio = 1.0;
  recipe->strength_ratio_u = 0.2;
  recipe->strength_ratio_source = g_strdup ("default: equal strength per carbon within 20 % (common practice)");
  recipe->level = 0.95;
  recipe->limit = NAN;
  recipe->wavelengths_nm = g_array_new (FALSE, FALSE, sizeof (double));
  g_array_append_vals (recipe->wavelengths_nm, wavelengths_nm, G_N_ELEMENTS (wavelengths_nm));
  recipe->mean_low_nm = 600;
  recipe->mean_high_nm = 1100;
  recipe->max_absorbance = 3.0;
  recipe->steps_nm = g_array_new (FALSE, FALSE, sizeof (double));
  recipe->excluded = g_array_new (FALSE, FALSE, sizeof (BtRange));
  recipe->held = g_array_new (FALSE, FALSE, sizeof (BtHeld));
  return recipe;
}

BtRecipe *
bt_recipe_copy (const BtRecipe *recipe)
{
  BtRecipe *copy = g_memdup2 (recipe, sizeof *recipe);

  copy->name = g_strdup (recipe->name);
  copy->strength_ratio_source = g_strdup (recipe->strength_ratio_source);
  copy->wavelengths_nm = g_array_copy (recipe->wavelengths_nm);
  copy->steps_nm = g_array_copy (recipe->steps_nm);
  copy->excluded = g_array_copy (recipe->excluded);
  copy->held = g_array_copy (recipe->held);
  return copy;
}

void
bt_recipe_free (BtRecipe *recipe)
{
  if (recipe == NULL)
    return;
  g_free (recipe->name);
  g_free (recipe->strength_ratio_source);
  g_array_unref (recipe->wavelengths_nm);
  g_array_unref (recipe->steps_nm);
  g_array_unref (recipe->excluded);
  g_array_unref (recipe->held);
  g_free (recipe);
}

static gboolean
same_array (const GArray *a, const GArray *b)
{
  return a->len == b->len && (a->len == 0 || memcmp (a->data, b->data, (gsize) a->len * g_array_get_element_size ((GArray *) a)) == 0);
}

static gboolean
same_number (double a, double b)
{
  return (isnan (a) && isnan (b)) || (a <= b && a >= b);
}

static gboolean
same_held (const BtRecipe *a, const BtRecipe *b)
{
  if (a->held->len != b->held->len)
    return FALSE;
  for (guint i = 0; i < a->held->len; i++)
    {
      const BtHeld *held = &g_array_index (a->held, BtHeld, i);
      const BtHeld *other = bt_recipe_get_held (b, held->group, held->index, held->field);

      if (other == NULL || !same_number (other->value, held->value))
        return FALSE;
    }
  return TRUE;
}

gboolean
bt_recipe_equal (const BtRecipe *a, const BtRecipe *b)
{
  return g_strcmp0 (a->name, b->name) == 0 && a->light_path.kind == b->light_path.kind
         && same_number (a->light_path.reflectance, b->light_path.reflectance)
         && same_number (a->light_path.reflectance_u, b->light_path.reflectance_u) && same_array (a->steps_nm, b->steps_nm)
         && a->step_correction == b->step_correction && same_number (a->photometric_u, b->photometric_u)
         && same_number (a->wavelength_u_nm, b->wavelength_u_nm) && same_number (a->stray_light, b->stray_light)
         && same_number (a->light_path.substrate_index, b->light_path.substrate_index) && same_number (a->range.low_ev, b->range.low_ev)
         && same_number (a->range.high_ev, b->range.high_ev) && a->tails == b->tails
         && same_number (a->window.mean_nm, b->window.mean_nm) && same_number (a->window.spread_nm, b->window.spread_nm)
         && same_number (a->shift_ev, b->shift_ev) && memcmp (a->max_bands, b->max_bands, sizeof a->max_bands) == 0
         && same_number (a->strength_ratio, b->strength_ratio) && same_number (a->strength_ratio_u, b->strength_ratio_u)
         && g_strcmp0 (a->strength_ratio_source, b->strength_ratio_source) == 0 && same_number (a->level, b->level)
         && same_number (a->limit, b->limit) && same_number (a->mean_low_nm, b->mean_low_nm)
         && same_number (a->mean_high_nm, b->mean_high_nm) && same_number (a->max_absorbance, b->max_absorbance)
         && same_array (a->wavelengths_nm, b->wavelengths_nm) && same_array (a->excluded, b->excluded) && same_held (a, b);
}

static BtHeld *
find_held (const BtRecipe *recipe, BtGroup group, guint index, BtBandField field, guint *where)
{
  for (guint i = 0; i < recipe->held->len; i++)
    {
      BtHeld *held = &g_array_index (recipe->held, BtHeld, i);

      if (held->group == group && held->index == index && held->field == field)
        {
          if (where != NULL)
            *where = i;
          return held;
        }
    }
  return NULL;
}

void
bt_recipe_hold (BtRecipe *recipe, BtGroup group, guint index, BtBandField field, double value)
{
  BtHeld *held = find_held (recipe, group, index, field, NULL);

  if (held != NULL)
    held->value = value;
  else
    {
      /* Zeroed first: arrays of it are compared and hashed as bytes. */
      BtHeld fresh;

      memset (&fresh, 0, sizeof fresh);
      fresh.group = group;
      fresh.index = index;
      fresh.field = field;
      fresh.value = value;
      g_array_append_val (recipe->held, fresh);
    }
}

void
bt_recipe_release (BtRecipe *recipe, BtGroup group, guint index, BtBandField field)
{
  guint where;

  if (find_held (recipe, group, index, field, &where) != NULL)
    g_array_remove_index (recipe->held, where);
}

const BtHeld *
bt_recipe_get_held (const BtRecipe *recipe, BtGroup group, guint index, BtBandField field)
{
  return find_held (recipe, group, index, field, NULL);
}

#define REFUSE(...)                                                                   \
  G_STMT_START                                                                        \
  {                                                                                   \
    g_set_error (error, BT_RECIPE_ERROR, BT_RECIPE_ERROR_FIELD, __VA_ARGS__);         \
    return FALSE;                                                                     \
  }                                                                                   \
  G_STMT_END

gboolean
bt_recipe_check (const BtRecipe *recipe, GError **error)
{
  if (!isnan (recipe->light_path.reflectance) && !(recipe->light_path.reflectance >= 0 && recipe->light_path.reflectance < 0.9))
    REFUSE (_ ("reflectance: the reflectance of one face has to lie between 0 and 0.9; leave it out to take it from the substrate."));
  if (!(recipe->light_path.substrate_index >= 0) || (recipe->light_path.substrate_index > 0 && recipe->light_path.substrate_index < 1)
      || recipe->light_path.substrate_index > 6)
    REFUSE (_ ("substrate_index: a refractive index has to lie between 1 and 6; 0 takes it from the substrate's name."));
  if (!(recipe->range.low_ev >= 0) || !(recipe->range.high_ev >= 0)
      || (recipe->range.high_ev > 0 && recipe->range.high_ev <= recipe->range.low_ev))
    REFUSE (_ ("range_ev: the fitted range has to go from a lower to a higher energy above 0 eV; 0 leaves an end to the data."));
  if (recipe->tails == 0 || recipe->tails >= (1u << BT_N_TAILS))
    REFUSE (_ ("tails: name at least one of plasmon, power and exponential."));
  if (!(recipe->window.mean_nm >= 0) || (recipe->window.mean_nm > 0 && (recipe->window.mean_nm < 0.4 || recipe->window.mean_nm > 5)))
    REFUSE (_ ("diameter_nm: the mean diameter has to lie between 0.4 and 5 nm; 0 lets it be proposed from the data."));
  if (!(recipe->window.spread_nm >= 0) || recipe->window.spread_nm > 1)
    REFUSE (_ ("diameter_spread_nm: the spread of diameters has to lie between 0 and 1 nm."));
  if (!(recipe->shift_ev >= -0.1 && recipe->shift_ev <= 0.3))
    REFUSE (_ ("shift_ev: the red shift of films has to lie between -0.1 and 0.3 eV; 0.02 to 0.06 eV is usual."));
  if (!(recipe->strength_ratio > 0.05 && recipe->strength_ratio < 20))
    REFUSE (_ ("strength_ratio: the strength ratio of S22 to M11 has to lie between 0.05 and 20; about 1 is usual."));
  if (!(recipe->strength_ratio_u >= 0 && recipe->strength_ratio_u < recipe->strength_ratio))
    REFUSE (_ ("strength_ratio_u: the uncertainty of the strength ratio has to be at least 0 and less than the ratio."));
  if (!(recipe->level > 0.5 && recipe->level < 0.9999))
    REFUSE (_ ("level: the confidence level has to lie between 0.5 and 0.9999; 0.95 is usual."));
  if (!isnan (recipe->limit) && !(recipe->limit > 0 && recipe->limit < 1))
    REFUSE (_ ("limit: the least semiconducting fraction has to lie between 0 and 1, for instance 0.98."));
  if (!(recipe->max_absorbance > 0))
    REFUSE (_ ("max_absorbance: the photometric limit has to be above 0."));
  if (!(recipe->light_path.reflectance_u >= 0 && recipe->light_path.reflectance_u < 0.5))
    REFUSE (_ ("reflectance_u: the uncertainty of the reflectance has to lie between 0 and 0.5; 0 where it is unknown."));
  if (!(recipe->photometric_u >= 0 && recipe->photometric_u < 1))
    REFUSE (_ ("photometric_u: the uncertainty of an absorbance has to lie between 0 and 1; 0 where it is unknown."));
  if (!(recipe->wavelength_u_nm >= 0 && recipe->wavelength_u_nm < 50))
    REFUSE (_ ("wavelength_u_nm: the uncertainty of the wavelength scale has to lie between 0 and 50 nm; 0 where it is unknown."));
  if (!(recipe->stray_light >= 0 && recipe->stray_light < 0.5))
    REFUSE (_ ("stray_light: the share of stray light has to lie between 0 and 0.5, for instance 0.0005; 0 where it is unknown."));
  for (guint i = 0; i < recipe->steps_nm->len; i++)
    if (!(g_array_index (recipe->steps_nm, double, i) > 0))
      REFUSE (_ ("detector_changes_nm: a wavelength has to be above 0 nm."));
  if (!(recipe->mean_low_nm > 0 && recipe->mean_high_nm > recipe->mean_low_nm))
    REFUSE (_ ("mean_range_nm: the range of the mean has to go from a shorter to a longer wavelength above 0 nm."));
  for (guint i = 0; i < recipe->wavelengths_nm->len; i++)
    if (!(g_array_index (recipe->wavelengths_nm, double, i) > 0))
      REFUSE (_ ("wavelengths_nm: a wavelength of interest has to be above 0 nm."));
  for (guint i = 0; i < recipe->excluded->len; i++)
    if (!(g_array_index (recipe->excluded, BtRange, i).low_ev < g_array_index (recipe->excluded, BtRange, i).high_ev))
      REFUSE (_ ("excluded_ev: an excluded range has to go from a lower to a higher energy."));
  for (guint g = 0; g < BT_N_GROUPS; g++)
    if (recipe->max_bands[g] > BT_RECIPE_MAX_BANDS)
      REFUSE (_ ("max_bands: %s may have at most %d bands."), bt_group_name ((BtGroup) g), BT_RECIPE_MAX_BANDS);
  for (guint i = 0; i < recipe->held->len; i++)
    {
      const BtHeld *held = &g_array_index (recipe->held, BtHeld, i);

      if (!isfinite (held->value) || (held->field != BT_BAND_HEIGHT && !(held->value > 0)))
        REFUSE (_ ("held: the number held for band %u of %s has to be above 0."), held->index + 1, bt_group_name (held->group));
    }
  return TRUE;
}

gboolean
bt_recipe_take_check (BtRecipe *recipe, const BtInstrumentCheck *check)
{
  if (!(check->deviation_u >= 0))
    return FALSE;
  if (check->standard == BT_STANDARD_HOLMIUM)
    recipe->wavelength_u_nm = check->deviation_u;
  else
    recipe->photometric_u = check->deviation_u;
  return TRUE;
}
