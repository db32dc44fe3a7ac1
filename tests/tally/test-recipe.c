/* Recipes: defaults, JSON there and back, and messages that name the member. */
#include <bandtally/bandtally.h>

#include <math.h>
#include <string.h>

static void
test_round_trip (void)
{
  BtRecipe *recipe = bt_recipe_new (), *back;
  BtRange range = { 1.05, 1.125 };
  g_autofree char *text = NULL;
  g_autoptr (GError) error = NULL;

  recipe->light_path = (BtLightPath){ BT_LIGHT_PATH_REFLECTION, 0.042, 1.5 };
  recipe->tails = 1u << BT_TAIL_POWER;
  recipe->window = (BtDiameterWindow){ 1.37, 0.09 };
  recipe->limit = 0.98;
  recipe->strength_ratio = 1.24;
  recipe->range.high_ev = 2.7;
  recipe->max_bands[BT_S33] = 0;
  g_array_append_val (recipe->excluded, range);
  bt_recipe_hold (recipe, BT_S22, 1, BT_BAND_CENTRE, 1.2345678901234567);
  bt_recipe_hold (recipe, BT_M11, 0, BT_BAND_HEIGHT, -0.001);
  text = bt_recipe_to_json (recipe);
  back = bt_recipe_new_from_json (text, -1, &error);
  g_assert_no_error (error);
  g_assert_true (bt_recipe_equal (recipe, back));
  bt_recipe_release (back, BT_S22, 1, BT_BAND_CENTRE);
  g_assert_false (bt_recipe_equal (recipe, back));
  g_assert_null (bt_recipe_get_held (back, BT_S22, 1, BT_BAND_CENTRE));
  bt_recipe_free (recipe);
  bt_recipe_free (back);
}

/* Numbers are written as a person would and read back as the same double. */
static void
test_digits (void)
{
  BtRecipe *recipe = bt_recipe_new (), *back;
  g_autofree char *text = NULL;

  recipe->limit = 0.95;
  recipe->strength_ratio = 1.0 / 3;
  recipe->strength_ratio_u = 1e-9;
  g_free (recipe->name);
  recipe->name = g_strdup ("a \"0.94999999999999996\" 12e3 name");
  text = bt_recipe_to_json (recipe);
  g_assert_nonnull (strstr (text, "0.95,"));
  g_assert_nonnull (strstr (text, "\\\"0.94999999999999996\\\" 12e3"));
  back = bt_recipe_new_from_json (text, -1, NULL);
  g_assert_nonnull (back);
  g_assert_true (bt_recipe_equal (recipe, back));
  bt_recipe_free (recipe);
  bt_recipe_free (back);
}

static void
test_copy (void)
{
  BtRecipe *recipe = bt_recipe_new (), *copy = bt_recipe_copy (recipe);

  g_assert_true (bt_recipe_equal (recipe, copy));
  bt_recipe_hold (copy, BT_S11, 0, BT_BAND_FWHM, 0.1);
  g_assert_false (bt_recipe_equal (recipe, copy));
  g_assert_cmpuint (recipe->held->len, ==, 0);
  g_assert_true (isnan (recipe->limit));
  bt_recipe_free (recipe);
  bt_recipe_free (copy);
}

/* What is wrong, and the member that it is wrong in. */
static void
test_refused (void)
{
  static const struct { const char *json, *word; } rows[] = {
    { "", "JSON" },
    { "[]", "object" },
    { "{", "JSON" },
    { "{\"tail\": [\"plasmon\"]}", "tail is no member" },
    { "{\"tails\": []}", "tails" },
    { "{\"tails\": [\"straight\"]}", "tails" },
    { "{\"tails\": \"plasmon\"}", "tails" },
    { "{\"limit\": 1.5}", "limit" },
    { "{\"limit\": \"high\"}", "limit" },
    { "{\"diameter_nm\": 14}", "diameter_nm" },
    { "{\"diameter_spread_nm\": -1}", "diameter_spread_nm" },
    { "{\"strength_ratio\": 0}", "strength_ratio" },
    { "{\"strength_ratio_u\": 2}", "strength_ratio_u" },
    { "{\"level\": 95}", "level" },
    { "{\"range_ev\": [2, 1]}", "range_ev" },
    { "{\"range_ev\": [2]}", "range_ev" },
    { "{\"excluded_ev\": [[1.2, 1.1]]}", "excluded_ev" },
    { "{\"max_bands\": {\"S22\": 9}}", "max_bands" },
    { "{\"max_bands\": {\"S99\": 1}}", "max_bands" },
    { "{\"wavelengths_nm\": [-5]}", "wavelengths_nm" },
    { "{\"held\": [{\"group\": \"S22\", \"band\": 7, \"centre_ev\": 1}]}", "held" },
    { "{\"held\": [{\"group\": \"S22\", \"band\": 1, \"fwhm_ev\": -1}]}", "held" },
    { "{\"shift_ev\": 3}", "shift_ev" },
    { "{\"light_path\": \"mirror\"}", "light_path" },
    { "{\"reflectance\": 1.2}", "reflectance" },
    { "{\"substrate_index\": 0.5}", "substrate_index" },
    { "{\"mean_range_nm\": [1100, 600]}", "mean_range_nm" },
  };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      g_autoptr (GError) error = NULL;

      g_assert_null (bt_recipe_new_from_json (rows[i].json, -1, &error));
      g_assert_nonnull (error);
      g_test_message ("%s -> %s", rows[i].json, error->message);
      g_assert_nonnull (strstr (error->message, rows[i].word));
    }
}

static void
test_defaults_left_out (void)
{
  g_autoptr (GError) error = NULL;
  BtRecipe *recipe = bt_recipe_new_from_json ("{\"limit\": null, \"strength_ratio\": 1}", -1, &error), *plain = bt_recipe_new ();

  g_assert_no_error (error);
  g_assert_true (bt_recipe_equal (recipe, plain));
  bt_recipe_free (recipe);
  bt_recipe_free (plain);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/recipe/round-trip", test_round_trip);
  g_test_add_func ("/recipe/digits", test_digits);
  g_test_add_func ("/recipe/copy", test_copy);
  g_test_add_func ("/recipe/refused", test_refused);
  g_test_add_func ("/recipe/defaults-left-out", test_defaults_left_out);
  return g_test_run ();
}
