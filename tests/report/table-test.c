/* Tallies as JSON, CSV and text: what is written is what the tally holds. */
#include <json-glib/json-glib.h>
#include <math.h>
#include <string.h>

#include <bandtally/bandtally.h>

typedef struct
{
  GPtrArray *films, *tallies;
} Fixture;

/* @thickness_nm 0: unknown. */
static void
add_film (Fixture *fixture, double fraction, double thickness_nm, double high_nm, const char *label)
{
  BtForecast forecast;
  BtRecipe *recipe = bt_recipe_new ();
  GError *error = NULL;
  gsize n;
  double *wavelength_nm, *absorbance;
  BtSpectrum *spectrum;
  BtFilm *film;
  BtTally *tally;

  bt_forecast_init (&forecast);
  forecast.fraction = fraction;
  forecast.high_nm = high_nm;
  forecast.step_nm = 4;
  n = bt_forecast_n_points (&forecast);
  wavelength_nm = g_new (double, n);
  absorbance = g_new (double, n);
  g_assert_true (bt_forecast_compute (&forecast, wavelength_nm, absorbance, &error));
  spectrum = bt_spectrum_new (wavelength_nm, absorbance, n, BT_X_NM, BT_Y_ABSORBANCE, label, &error);
  g_assert_no_error (error);
  film = bt_film_new (spectrum);
  bt_film_set_label (film, label);
  bt_film_set_thickness (film, thickness_nm, thickness_nm / 20);
  recipe->window = (BtDiameterWindow){ 1.4, 0.1 };
  recipe->limit = 0.5;
  tally = bt_tally_film (film, recipe, BT_EFFORT_FULL, NULL, NULL, NULL, NULL, &error);
  g_assert_no_error (error);
  g_ptr_array_add (fixture->films, film);
  g_ptr_array_add (fixture->tallies, tally);
  g_object_unref (spectrum);
  bt_recipe_free (recipe);
  g_free (wavelength_nm);
  g_free (absorbance);
}

static void
set_up (Fixture *fixture, gconstpointer data)
{
  fixture->films = g_ptr_array_new_with_free_func (g_object_unref);
  fixture->tallies = g_ptr_array_new_with_free_func ((GDestroyNotify) bt_tally_unref);
  add_film (fixture, 0.667, 100, 2500, "plain");
  add_film (fixture, 0.9, 0, 2500, "größer, \"so\" to say");
  add_film (fixture, 0.667, 100, 750, "short"); /* without S22 */
}

static void
tear_down (Fixture *fixture, gconstpointer data)
{
  g_ptr_array_unref (fixture->films);
  g_ptr_array_unref (fixture->tallies);
}

static void
assert_member (JsonObject *object, const char *name, double expected)
{
  g_assert_true (json_object_has_member (object, name));
  if (isnan (expected))
    g_assert_true (json_object_get_null_member (object, name));
  else
    g_assert_true (json_object_get_double_member (object, name) == expected);
}

static void
check_film (JsonObject *object, const BtTally *tally)
{
  JsonObject *fraction = json_object_get_object_member (object, "semiconducting_fraction");
  JsonArray *bands = json_object_get_array_member (object, "bands");
  JsonArray *alpha = json_object_get_array_member (object, "absorption_coefficient");
  JsonObject *groups = json_object_get_object_member (object, "groups");

  assert_member (fraction, "value", tally->fraction.value);
  assert_member (fraction, "u", tally->fraction.u);
  assert_member (fraction, "low", tally->fraction.low);
  assert_member (fraction, "high", tally->fraction.high);
  assert_member (object, "tail_share_at_s22", tally->tail_share_at_s22);
  g_assert_cmpstr (json_object_get_string_member (object, "verdict"), ==, bt_verdict_name (tally->verdict));
  g_assert_cmpuint (json_array_get_length (bands), ==, tally->bands->len);
  for (guint i = 0; i < tally->bands->len; i++)
    {
      const BtBand *band = &g_array_index (tally->bands, BtBand, i);

      assert_member (json_array_get_object_element (bands, i), "centre_ev", band->centre_ev);
      assert_member (json_array_get_object_element (bands, i), "area", band->area);
    }
  for (guint group = 0; group < BT_N_GROUPS; group++)
    {
      const char *name = bt_group_name ((BtGroup) group);
      gboolean fitted = tally->groups[group].n_bands > 0;

      g_assert_true (json_object_has_member (groups, name) == (fitted || group == BT_S11 || group == BT_S22 || group == BT_M11));
      if (json_object_has_member (groups, name))
        assert_member (json_object_get_object_member (groups, name), "area", fitted ? tally->groups[group].area : NAN);
    }
  g_assert_cmpuint (json_array_get_length (alpha), ==, 4);
  for (guint i = 0; i < 4; i++)
    assert_member (json_array_get_object_element (alpha, i), "per_cm",
                   g_array_index (tally->readings, BtReading, i).alpha.value);
}

static void
test_json (Fixture *fixture, gconstpointer data)
{
  GPtrArray *failures = g_ptr_array_new_with_free_func ((GDestroyNotify) bt_failure_free);
  char *text;
  JsonNode *root;
  JsonArray *films, *failed;
  GError *error = NULL;

  g_ptr_array_add (failures, bt_failure_new ("lost.csv", "lost.csv was lost."));
  text = bt_tallies_to_json_with_failures (fixture->films, fixture->tallies, failures);
  root = json_from_string (text, &error);
  g_assert_no_error (error);
  g_assert_cmpstr (json_object_get_string_member (json_node_get_object (root), "bandtally"), ==, bt_version ());
  films = json_object_get_array_member (json_node_get_object (root), "films");
  g_assert_cmpuint (json_array_get_length (films), ==, 3);
  for (guint i = 0; i < 3; i++)
    check_film (json_array_get_object_element (films, i), g_ptr_array_index (fixture->tallies, i));
  failed = json_object_get_array_member (json_node_get_object (root), "failed");
  g_assert_cmpstr (json_object_get_string_member (json_array_get_object_element (failed, 0), "reason"), ==,
                   "lost.csv was lost.");
  /* What could not be had is null, and there is a flag that says why. */
  g_assert_true (isnan (((BtTally *) g_ptr_array_index (fixture->tallies, 2))->fraction.value));
  g_assert_nonnull (bt_flags_find (((BtTally *) g_ptr_array_index (fixture->tallies, 2))->flags, "no-s22"));
  g_assert_nonnull (bt_flags_find (((BtTally *) g_ptr_array_index (fixture->tallies, 1))->flags, "no-thickness"));
  g_assert_null (strstr (text, "nan"));
  json_node_unref (root);
  g_free (text);
  g_ptr_array_unref (failures);
}

static void
test_json_of_nothing (void)
{
  GPtrArray *none = g_ptr_array_new ();
  char *text = bt_tallies_to_json (none, none);
  JsonNode *root = json_from_string (text, NULL);

  g_assert_nonnull (root);
  g_assert_cmpuint (json_array_get_length (json_object_get_array_member (json_node_get_object (root), "films")), ==, 0);
  json_node_unref (root);
  g_free (text);
  g_ptr_array_unref (none);
}

/* Fields of a record between @p and its end by RFC 4180; counts them. */
static guint
count_fields (const char **p)
{
  guint n = 1;
  gboolean quoted = FALSE;

  for (; **p != '\0' && (quoted || **p != '\r'); (*p)++)
    if (**p == '"')
      quoted = !quoted;
    else if (**p == ',' && !quoted)
      n++;
  g_assert_false (quoted);
  g_assert_true (g_str_has_prefix (*p, "\r\n"));
  *p += 2;
  return n;
}

static void
test_csv (Fixture *fixture, gconstpointer data)
{
  char *text = bt_tallies_to_csv (fixture->films, fixture->tallies);
  const char *p = text;
  guint n = count_fields (&p);

  for (guint i = 0; i < 3; i++)
    g_assert_cmpuint (count_fields (&p), ==, n);
  g_assert_cmpstr (p, ==, "");
  g_assert_nonnull (strstr (text, ",\"größer, \"\"so\"\" to say\","));
  g_assert_nonnull (strstr (text, "alpha_1550nm_per_cm"));
  g_free (text);
}

static void
test_text_keeps_to_its_columns (Fixture *fixture, gconstpointer data)
{
  for (int columns = 80; columns <= 160; columns += 20)
    {
      char *text = bt_tallies_to_text (fixture->films, fixture->tallies, columns);
      char **lines = g_strsplit (text, "\n", -1);

      for (char **line = lines; *line != NULL; line++)
        {
          g_assert_true (g_utf8_validate (*line, -1, NULL));
          g_assert_cmpint (g_utf8_strlen (*line, -1), <=, columns);
          g_assert_false (g_str_has_suffix (*line, " "));
        }
      g_assert_nonnull (strstr (text, bt_verdict_title (BT_VERDICT_NOT_JUDGED)));
      g_strfreev (lines);
      g_free (text);
    }
}

static void
test_text_of_one_film (Fixture *fixture, gconstpointer data)
{
  char *text, *answer;

  g_ptr_array_set_size (fixture->films, 1);
  g_ptr_array_set_size (fixture->tallies, 1);
  text = bt_tallies_to_text (fixture->films, fixture->tallies, 0);
  answer = bt_tally_answer (g_ptr_array_index (fixture->tallies, 0));
  g_assert_nonnull (strstr (text, answer));
  g_assert_nonnull (strstr (text, "M11"));
  g_assert_nonnull (strstr (text, "1550"));
  g_free (answer);
  g_free (text);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add ("/table/json", Fixture, NULL, set_up, test_json, tear_down);
  g_test_add_func ("/table/json-of-nothing", test_json_of_nothing);
  g_test_add ("/table/csv", Fixture, NULL, set_up, test_csv, tear_down);
  g_test_add ("/table/text-keeps-to-its-columns", Fixture, NULL, set_up, test_text_keeps_to_its_columns, tear_down);
  g_test_add ("/table/text-of-one-film", Fixture, NULL, set_up, test_text_of_one_film, tear_down);
  return g_test_run ();
}
