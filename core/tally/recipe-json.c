/* The recipe as JSON: read with messages that name the member, written with every member. */
#include <bandtally/recipe.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>
#include <json-glib/json-glib.h>

#include "json-numbers.h"

static const char *const field_names[] = { "centre_ev", "fwhm_ev", "height" };

static gboolean
refuse (GError **error, const char *member, const char *wanted)
{
  g_set_error (error, BT_RECIPE_ERROR, BT_RECIPE_ERROR_FIELD, _ ("%s: wanted %s."), member, wanted);
  return FALSE;
}

static gboolean
node_number (JsonNode *node, const char *member, double *value, GError **error)
{
  GType type = JSON_NODE_HOLDS_VALUE (node) ? json_node_get_value_type (node) : G_TYPE_INVALID;

  if (type != G_TYPE_DOUBLE && type != G_TYPE_INT64)
    return refuse (error, member, _ ("a number"));
  *value = json_node_get_double (node);
  if (!isfinite (*value))
    return refuse (error, member, _ ("a number that is not so large"));
  return TRUE;
}

static gboolean
read_number (JsonObject *object, const char *member, double *value, GError **error)
{
  return !json_object_has_member (object, member) || node_number (json_object_get_member (object, member), member, value, error);
}

static gboolean
node_text (JsonNode *node, const char *member, const char **value, GError **error)
{
  if (!JSON_NODE_HOLDS_VALUE (node) || json_node_get_value_type (node) != G_TYPE_STRING)
    return refuse (error, member, _ ("a text"));
  *value = json_node_get_string (node);
  return TRUE;
}

static gboolean
read_text (JsonObject *object, const char *member, char **value, GError **error)
{
  const char *text;

  if (!json_object_has_member (object, member))
    return TRUE;
  if (!node_text (json_object_get_member (object, member), member, &text, error))
    return FALSE;
  g_free (*value);
  *value = g_strdup (text);
  return TRUE;
}

/* (nullable): the member's array; *ok tells whether it was one or absent. */
static JsonArray *
member_array (JsonObject *object, const char *member, gboolean *ok, GError **error)
{
  JsonNode *node = json_object_get_member (object, member);

  *ok = TRUE;
  if (node == NULL)
    return NULL;
  if (JSON_NODE_HOLDS_ARRAY (node))
    return json_node_get_array (node);
  *ok = refuse (error, member, _ ("a list in square brackets"));
  return NULL;
}

static gboolean
node_pair (JsonNode *node, const char *member, double *low, double *high, GError **error)
{
  JsonArray *pair = JSON_NODE_HOLDS_ARRAY (node) ? json_node_get_array (node) : NULL;

  if (pair == NULL || json_array_get_length (pair) != 2)
    return refuse (error, member, _ ("two numbers in square brackets"));
  return node_number (json_array_get_element (pair, 0), member, low, error)
         && node_number (json_array_get_element (pair, 1), member, high, error);
}

static gboolean
read_pair (JsonObject *object, const char *member, double *low, double *high, GError **error)
{
  return !json_object_has_member (object, member) || node_pair (json_object_get_member (object, member), member, low, high, error);
}

static gboolean
read_tails (BtRecipe *recipe, JsonObject *object, GError **error)
{
  gboolean ok;
  JsonArray *array = member_array (object, "tails", &ok, error);

  if (array == NULL)
    return ok;
  recipe->tails = 0;
  for (guint i = 0; i < json_array_get_length (array); i++)
    {
      const char *name;
      BtTailKind kind;

      if (!node_text (json_array_get_element (array, i), "tails", &name, error))
        return FALSE;
      if (!bt_tail_from_name (name, &kind))
        return refuse (error, "tails", _ ("plasmon, power or exponential"));
      recipe->tails |= 1u << kind;
    }
  return TRUE;
}

static gboolean
read_max_bands (BtRecipe *recipe, JsonObject *object, GError **error)
{
  JsonNode *node = json_object_get_member (object, "max_bands");
  g_autoptr (GList) members = NULL;

  if (node == NULL)
    return TRUE;
  if (!JSON_NODE_HOLDS_OBJECT (node))
    return refuse (error, "max_bands", _ ("an object with a number by group, such as {\"S22\": 2}"));
  members = json_object_get_members (json_node_get_object (node));
  for (GList *l = members; l != NULL; l = l->next)
    {
      BtGroup group;
      double value;

      if (!bt_group_from_name (l->data, &group))
        return refuse (error, "max_bands", _ ("the groups S11, S22, M11, S33, S44 and M22"));
      if (!node_number (json_object_get_member (json_node_get_object (node), l->data), "max_bands", &value, error))
        return FALSE;
      if (!(value >= 0 && value <= BT_RECIPE_MAX_BANDS) || floor (value) < value)
        return refuse (error, "max_bands", _ ("a whole number from 0 to 4 for each group"));
      recipe->max_bands[group] = (guint) value;
    }
  return TRUE;
}

static gboolean
read_numbers (JsonObject *object, const char *member, GArray *numbers, GError **error)
{
  gboolean ok;
  JsonArray *array = member_array (object, member, &ok, error);

  if (array == NULL)
    return ok;
  g_array_set_size (numbers, 0);
  for (guint i = 0; i < json_array_get_length (array); i++)
    {
      double value;

      if (!node_number (json_array_get_element (array, i), member, &value, error))
        return FALSE;
      g_array_append_val (numbers, value);
    }
  return TRUE;
}

static gboolean
read_accuracy (BtRecipe *recipe, JsonObject *object, GError **error)
{
  const char *name;

  if (json_object_has_member (object, "detector_correction"))
    {
      if (!node_text (json_object_get_member (object, "detector_correction"), "detector_correction", &name, error))
        return FALSE;
      if (!bt_step_correction_from_name (name, &recipe->step_correction))
        return refuse (error, "detector_correction", _ ("none, visible or infrared"));
    }
  return read_numbers (object, "detector_changes_nm", recipe->steps_nm, error) && read_number (object, "photometric_u", &recipe->photometric_u, error)
         && read_number (object, "wavelength_u_nm", &recipe->wavelength_u_nm, error)
         && read_number (object, "stray_light", &recipe->stray_light, error);
}

static gboolean
read_excluded (BtRecipe *recipe, JsonObject *object, GError **error)
{
  gboolean ok;
  JsonArray *array = member_array (object, "excluded_ev", &ok, error);

  if (array == NULL)
    return ok;
  g_array_set_size (recipe->excluded, 0);
  for (guint i = 0; i < json_array_get_length (array); i++)
    {
      BtRange range;

      if (!node_pair (json_array_get_element (array, i), "excluded_ev", &range.low_ev, &range.high_ev, error))
        return FALSE;
      g_array_append_val (recipe->excluded, range);
    }
  return TRUE;
}

static gboolean
read_held (BtRecipe *recipe, JsonObject *object, GError **error)
{
  gboolean ok;
  JsonArray *array = member_array (object, "held", &ok, error);

  if (array == NULL)
    return ok;
  g_array_set_size (recipe->held, 0);
  for (guint i = 0; i < json_array_get_length (array); i++)
    {
      JsonNode *node = json_array_get_element (array, i);
      JsonObject *entry = JSON_NODE_HOLDS_OBJECT (node) ? json_node_get_object (node) : NULL;
      const char *name;
      double number = 1;
      BtGroup group;

      if (entry == NULL || !json_object_has_member (entry, "group"))
        return refuse (error, "held", _ ("objects such as {\"group\": \"S22\", \"band\": 1, \"centre_ev\": 1.2}"));
      if (!node_text (json_object_get_member (entry, "group"), "held", &name, error) || !read_number (entry, "band", &number, error))
        return FALSE;
      if (!bt_group_from_name (name, &group) || !(number >= 1 && number <= BT_RECIPE_MAX_BANDS))
        return refuse (error, "held", _ ("a known group and a band from 1 to 4"));
      for (guint f = 0; f < G_N_ELEMENTS (field_names); f++)
        {
          double value;

          if (!json_object_has_member (entry, field_names[f]))
            continue;
          if (!node_number (json_object_get_member (entry, field_names[f]), "held", &value, error))
            return FALSE;
          bt_recipe_hold (recipe, group, (guint) number - 1, (BtBandField) f, value);
        }
    }
  return TRUE;
}

static gboolean
read_light_path (BtRecipe *recipe, JsonObject *object, GError **error)
{
  const char *name;

  if (json_object_has_member (object, "light_path"))
    {
      if (!node_text (json_object_get_member (object, "light_path"), "light_path", &name, error))
        return FALSE;
      if (!bt_light_path_from_name (name, &recipe->light_path.kind))
        return refuse (error, "light_path", _ ("blank ratio, reflection or thin film"));
    }
  if (json_object_has_member (object, "reflectance") && JSON_NODE_HOLDS_NULL (json_object_get_member (object, "reflectance")))
    recipe->light_path.reflectance = NAN;
  else if (!read_number (object, "reflectance", &recipe->light_path.reflectance, error))
    return FALSE;
  return read_number (object, "reflectance_u", &recipe->light_path.reflectance_u, error) && read_number (object, "substrate_index", &recipe->light_path.substrate_index, error);
}

static gboolean
known_members (JsonObject *object, GError **error)
{
  static const char *const known[] = { "name", "light_path", "reflectance", "reflectance_u", "substrate_index", "range_ev", "tails", "diameter_nm", "diameter_spread_nm", "shift_ev", "max_bands",
                                       "strength_ratio", "strength_ratio_u", "strength_ratio_source", "level", "limit",
                                       "wavelengths_nm", "mean_range_nm", "max_absorbance", "detector_changes_nm",
                                       "detector_correction", "photometric_u", "wavelength_u_nm", "stray_light", "excluded_ev", "held", NULL };
  g_autoptr (GList) members = json_object_get_members (object);

  for (GList *l = members; l != NULL; l = l->next)
    if (!g_strv_contains (known, l->data))
      {
        g_autofree char *list = g_strjoinv (", ", (char **) known);

        g_set_error (error, BT_RECIPE_ERROR, BT_RECIPE_ERROR_FIELD, _ ("%s is no member of a recipe; known are: %s."),
                     (const char *) l->data, list);
        return FALSE;
      }
  return TRUE;
}

static gboolean
read_object (BtRecipe *recipe, JsonObject *object, GError **error)
{
  /* null stands for "not judged" */
  if (json_object_has_member (object, "limit") && JSON_NODE_HOLDS_NULL (json_object_get_member (object, "limit")))
    recipe->limit = NAN;
  else if (!read_number (object, "limit", &recipe->limit, error))
    return FALSE;
  return known_members (object, error) && read_text (object, "name", &recipe->name, error)
         && read_light_path (recipe, object, error)
         && read_pair (object, "range_ev", &recipe->range.low_ev, &recipe->range.high_ev, error)
         && read_tails (recipe, object, error) && read_number (object, "diameter_nm", &recipe->window.mean_nm, error)
         && read_number (object, "diameter_spread_nm", &recipe->window.spread_nm, error)
         && read_number (object, "shift_ev", &recipe->shift_ev, error) && read_max_bands (recipe, object, error)
         && read_number (object, "strength_ratio", &recipe->strength_ratio, error)
         && read_number (object, "strength_ratio_u", &recipe->strength_ratio_u, error)
         && read_text (object, "strength_ratio_source", &recipe->strength_ratio_source, error)
         && read_number (object, "level", &recipe->level, error) && read_numbers (object, "wavelengths_nm", recipe->wavelengths_nm, error)
         && read_pair (object, "mean_range_nm", &recipe->mean_low_nm, &recipe->mean_high_nm, error)
         && read_number (object, "max_absorbance", &recipe->max_absorbance, error) && read_accuracy (recipe, object, error) && read_excluded (recipe, object, error)
         && read_held (recipe, object, error) && bt_recipe_check (recipe, error);
}

BtRecipe *
bt_recipe_new_from_json (const char *text, gssize length, GError **error)
{
  g_autoptr (JsonParser) parser = json_parser_new ();
  g_autoptr (GError) reason = NULL;
  JsonNode *root;
  BtRecipe *recipe;

  if (!json_parser_load_from_data (parser, text, length, &reason))
    {
      g_set_error (error, BT_RECIPE_ERROR, BT_RECIPE_ERROR_READ, _ ("The recipe is not valid JSON: %s"), reason->message);
      return NULL;
    }
  root = json_parser_get_root (parser);
  if (root == NULL || !JSON_NODE_HOLDS_OBJECT (root))
    {
      g_set_error (error, BT_RECIPE_ERROR, BT_RECIPE_ERROR_READ, _ ("The recipe has to be one JSON object in curly brackets."));
      return NULL;
    }
  recipe = bt_recipe_new ();
  if (read_object (recipe, json_node_get_object (root), error))
    return recipe;
  bt_recipe_free (recipe);
  return NULL;
}

BtRecipe *
bt_recipe_new_from_file (const char *path, GError **error)
{
  g_autofree char *text = NULL;
  gsize length;
  BtRecipe *recipe;

  if (!g_file_get_contents (path, &text, &length, error))
    return NULL;
  recipe = bt_recipe_new_from_json (text, (gssize) length, error);
  if (recipe == NULL)
    g_prefix_error (error, "%s: ", path);
  return recipe;
}

static void
add_number (JsonBuilder *builder, const char *member, double value)
{
  json_builder_set_member_name (builder, member);
  if (isnan (value))
    json_builder_add_null_value (builder);
  else
    json_builder_add_double_value (builder, value);
}

static void
add_text (JsonBuilder *builder, const char *member, const char *value)
{
  json_builder_set_member_name (builder, member);
  json_builder_add_string_value (builder, value);
}

static void
add_pair (JsonBuilder *builder, double low, double high)
{
  json_builder_begin_array (builder);
  json_builder_add_double_value (builder, low);
  json_builder_add_double_value (builder, high);
  json_builder_end_array (builder);
}

static void
add_numbers (JsonBuilder *builder, const char *member, const GArray *numbers)
{
  json_builder_set_member_name (builder, member);
  json_builder_begin_array (builder);
  for (guint i = 0; i < numbers->len; i++)
    json_builder_add_double_value (builder, g_array_index (numbers, double, i));
  json_builder_end_array (builder);
}

static void
add_held (JsonBuilder *builder, const BtRecipe *recipe)
{
  json_builder_set_member_name (builder, "held");
  json_builder_begin_array (builder);
  for (guint i = 0; i < recipe->held->len; i++)
    {
      const BtHeld *held = &g_array_index (recipe->held, BtHeld, i);

      json_builder_begin_object (builder);
      add_text (builder, "group", bt_group_name (held->group));
      json_builder_set_member_name (builder, "band");
      json_builder_add_int_value (builder, held->index + 1);
      add_number (builder, field_names[held->field], held->value);
      json_builder_end_object (builder);
    }
  json_builder_end_array (builder);
}

char *
bt_recipe_to_json (const BtRecipe *recipe)
{
  g_autoptr (JsonBuilder) builder = json_builder_new ();
  g_autoptr (JsonGenerator) generator = json_generator_new ();
  g_autoptr (JsonNode) root = NULL;

  json_builder_begin_object (builder);
  add_text (builder, "name", recipe->name);
  add_text (builder, "light_path", bt_light_path_name (recipe->light_path.kind));
  add_number (builder, "reflectance", recipe->light_path.reflectance);
  add_number (builder, "reflectance_u", recipe->light_path.reflectance_u);
  add_number (builder, "substrate_index", recipe->light_path.substrate_index);
  json_builder_set_member_name (builder, "range_ev");
  add_pair (builder, recipe->range.low_ev, recipe->range.high_ev);
  json_builder_set_member_name (builder, "tails");
  json_builder_begin_array (builder);
  for (guint t = 0; t < BT_N_TAILS; t++)
    if (recipe->tails & (1u << t))
      json_builder_add_string_value (builder, bt_tail_name ((BtTailKind) t));
  json_builder_end_array (builder);
  add_number (builder, "diameter_nm", recipe->window.mean_nm);
  add_number (builder, "diameter_spread_nm", recipe->window.spread_nm);
  add_number (builder, "shift_ev", recipe->shift_ev);
  json_builder_set_member_name (builder, "max_bands");
  json_builder_begin_object (builder);
  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      json_builder_set_member_name (builder, bt_group_name ((BtGroup) g));
      json_builder_add_int_value (builder, recipe->max_bands[g]);
    }
  json_builder_end_object (builder);
  add_number (builder, "strength_ratio", recipe->strength_ratio);
  add_number (builder, "strength_ratio_u", recipe->strength_ratio_u);
  add_text (builder, "strength_ratio_source", recipe->strength_ratio_source);
  add_number (builder, "level", recipe->level);
  add_number (builder, "limit", recipe->limit);
  add_numbers (builder, "wavelengths_nm", recipe->wavelengths_nm);
  json_builder_set_member_name (builder, "mean_range_nm");
  add_pair (builder, recipe->mean_low_nm, recipe->mean_high_nm);
  add_number (builder, "max_absorbance", recipe->max_absorbance);
  add_numbers (builder, "detector_changes_nm", recipe->steps_nm);
  add_text (builder, "detector_correction", bt_step_correction_name (recipe->step_correction));
  add_number (builder, "photometric_u", recipe->photometric_u);
  add_number (builder, "wavelength_u_nm", recipe->wavelength_u_nm);
  add_number (builder, "stray_light", recipe->stray_light);
  json_builder_set_member_name (builder, "excluded_ev");
  json_builder_begin_array (builder);
  for (guint i = 0; i < recipe->excluded->len; i++)
    add_pair (builder, g_array_index (recipe->excluded, BtRange, i).low_ev, g_array_index (recipe->excluded, BtRange, i).high_ev);
  json_builder_end_array (builder);
  add_held (builder, recipe);
  json_builder_end_object (builder);
  root = json_builder_get_root (builder);
  json_generator_set_root (generator, root);
  json_generator_set_pretty (generator, TRUE);
  return bt_json_shorten_numbers (json_generator_to_data (generator, NULL));
}
