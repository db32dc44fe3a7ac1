/* What people type: numbers, units, uncertainties, ranges; and what the fields make of it. */
#include <math.h>

#include "desk-field.h"

typedef struct { const char *text; DeskUnit unit; double value, u; } Good;

static const Good good[] = {
  { "120", DESK_UNIT_NM, 120, NAN },
  { "120 nm", DESK_UNIT_NM, 120, NAN },
  { "0.12 µm", DESK_UNIT_NM, 120, NAN },
  { "0,12um", DESK_UNIT_NM, 120, NAN },
  { "120(6) nm", DESK_UNIT_NM, 120, 6 },
  { "120.0(60)", DESK_UNIT_NM, 120, 6 },
  { "120(6.5) nm", DESK_UNIT_NM, 120, 6.5 },
  { "120 ± 6 nm", DESK_UNIT_NM, 120, 6 },
  { "120+-6", DESK_UNIT_NM, 120, 6 },
  { "120 +/- 6 nm", DESK_UNIT_NM, 120, 6 },
  { "0.8 eV", DESK_UNIT_EV, 0.8, NAN },
  { "0,8", DESK_UNIT_EV, 0.8, NAN },
  { "800 meV", DESK_UNIT_EV, 0.8, NAN },
  /* h c / e = 1239.841984 eV nm: SI Brochure, 9th edition */
  { "1550 nm", DESK_UNIT_EV, 0.79989805440779, NAN },
  { "10000 1/cm", DESK_UNIT_EV, 1.23984198433200, NAN },
  { "1550", DESK_UNIT_WAVELENGTH, 1550, NAN },
  { "1.55 um", DESK_UNIT_WAVELENGTH, 1550, NAN },
  { "1 eV", DESK_UNIT_WAVELENGTH, 1239.84198433200, NAN },
  { "85 %", DESK_UNIT_SHARE, 0.85, NAN },
  { "0.85", DESK_UNIT_SHARE, 0.85, NAN },
  { "1.2e2", DESK_UNIT_NM, 120, NAN },
  { "\342\210\2220.04", DESK_UNIT_EV_WIDTH, -0.04, NAN },
  { "40 meV", DESK_UNIT_EV_WIDTH, 0.04, NAN },
  { "  7  ", DESK_UNIT_NONE, 7, NAN },
};

static const struct { const char *text; DeskUnit unit; } bad[] = {
  { "", DESK_UNIT_NM },          { "thick", DESK_UNIT_NM },      { "1,234.5", DESK_UNIT_NM },  { "1,2,3", DESK_UNIT_NM },
  { "120 kg", DESK_UNIT_NM },    { "120(x) nm", DESK_UNIT_NM },  { "120(6", DESK_UNIT_NM },    { "120 ± ", DESK_UNIT_NM },
  { "0 nm", DESK_UNIT_EV },      { "5 nm", DESK_UNIT_EV_WIDTH }, { "3 eV", DESK_UNIT_NONE },   { "nan", DESK_UNIT_NM },
  { "inf", DESK_UNIT_NM },       { "0x10", DESK_UNIT_NM },       { "120(-6)", DESK_UNIT_NM },  { "1e999", DESK_UNIT_NM },
};

static void
test_good (gconstpointer data)
{
  const Good *row = data;
  double value, u;
  GError *error = NULL;
  g_assert_true (desk_parse_quantity (row->text, row->unit, &value, &u, &error));
  g_assert_no_error (error);
  g_assert_cmpfloat_with_epsilon (value, row->value, 1e-9 * fabs (row->value));
  if (isnan (row->u))
    g_assert_true (isnan (u));
  else
    g_assert_cmpfloat_with_epsilon (u, row->u, 1e-9);
}

static void
test_bad (void)
{
  for (guint i = 0; i < G_N_ELEMENTS (bad); i++)
    {
      double value;
      GError *error = NULL;
      if (desk_parse_quantity (bad[i].text, bad[i].unit, &value, NULL, &error))
        g_error ("“%s” was read as %g", bad[i].text, value);
      g_assert_nonnull (error);
      g_assert_true (g_str_has_suffix (error->message, "."));
      g_error_free (error);
    }
}

static void
test_lists (void)
{
  static const struct { const char *text; guint n; double first, last; } lists[] = {
    { "550, 650, 980, 1550", 4, 550, 1550 }, { "550,650,980", 3, 550, 980 },     { "550; 650,5", 2, 550, 650.5 },
    { "550 650", 2, 550, 650 },              { "550; 650; 1550 nm", 3, 550, 1550 }, { "550 nm; 0.8 eV", 2, 550, 1549.80248 },
    { "550;", 1, 550, 550 },
  };
  for (guint i = 0; i < G_N_ELEMENTS (lists); i++)
    {
      GError *error = NULL;
      GArray *values = desk_parse_quantities (lists[i].text, DESK_UNIT_WAVELENGTH, &error);
      g_assert_no_error (error);
      g_assert_cmpuint (values->len, ==, lists[i].n);
      g_assert_cmpfloat_with_epsilon (g_array_index (values, double, 0), lists[i].first, 1e-4);
      g_assert_cmpfloat_with_epsilon (g_array_index (values, double, values->len - 1), lists[i].last, 1e-4);
      g_array_unref (values);
    }
  g_assert_null (desk_parse_quantities ("550; wide", DESK_UNIT_WAVELENGTH, NULL));
}

/* A film of ten points: fields need a film, not a fit. */
static BtFilm *
new_film (void)
{
  double x[10], y[10];
  GError *error = NULL;
  for (int i = 0; i < 10; i++)
    {
      x[i] = 500 + 100 * i;
      y[i] = 0.1 * i;
    }
  BtSpectrum *spectrum = bt_spectrum_new (x, y, 10, BT_X_NM, BT_Y_ABSORBANCE, "test", &error);
  g_assert_no_error (error);
  BtFilm *film = bt_film_new (spectrum);
  g_object_unref (spectrum);
  return film;
}

typedef struct { BtFilm *film; BtRecipe *recipe; } Fixture;

static void
set_up (Fixture *fixture, gconstpointer data)
{
  fixture->film = new_film ();
  fixture->recipe = bt_recipe_new ();
}

static void
tear_down (Fixture *fixture, gconstpointer data)
{
  g_object_unref (fixture->film);
  bt_recipe_free (fixture->recipe);
}

static gboolean
type (Fixture *fixture, DeskField field, const char *text)
{
  /* As the window does it: on copies, which are thrown away where the text is refused. */
  DeskSubject subject = { bt_film_copy (fixture->film), bt_recipe_copy (fixture->recipe), NULL };
  GError *error = NULL;
  gboolean taken = desk_field_apply (&field, text, &subject, &error);
  g_assert_true (taken == (error == NULL));
  g_clear_error (&error);
  g_object_unref (taken ? fixture->film : subject.film);
  bt_recipe_free (taken ? fixture->recipe : subject.recipe);
  if (taken)
    {
      fixture->film = subject.film;
      fixture->recipe = subject.recipe;
    }
  return taken;
}

static void
test_film_fields (Fixture *fixture, gconstpointer data)
{
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_THICKNESS }, "120(6) nm"));
  g_assert_cmpfloat (bt_film_get_thickness_nm (fixture->film), ==, 120);
  g_assert_cmpfloat (bt_film_get_thickness_u_nm (fixture->film), ==, 6);
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_THICKNESS }, "130"));
  g_assert_cmpfloat (bt_film_get_thickness_u_nm (fixture->film), ==, 6);
  g_assert_false (type (fixture, (DeskField){ .id = DESK_FIELD_THICKNESS }, "-1"));
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_THICKNESS }, ""));
  g_assert_cmpfloat (bt_film_get_thickness_nm (fixture->film), ==, 0);
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_LABEL }, "  Film, with a comma "));
  g_assert_cmpstr (bt_film_get_label (fixture->film), ==, "Film, with a comma");
}

static void
test_recipe_fields (Fixture *fixture, gconstpointer data)
{
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_LIMIT }, "95 %"));
  g_assert_cmpfloat (fixture->recipe->limit, ==, 0.95);
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_LIMIT }, "90"));
  g_assert_cmpfloat (fixture->recipe->limit, ==, 0.9);
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_LIMIT }, ""));
  g_assert_true (isnan (fixture->recipe->limit));
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_DIAMETER_MEAN }, "1,4 nm"));
  g_assert_cmpfloat (fixture->recipe->window.mean_nm, ==, 1.4);
  g_assert_cmpfloat (fixture->recipe->window.spread_nm, >, 0);
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_DIAMETER_MEAN }, ""));
  g_assert_cmpfloat (fixture->recipe->window.mean_nm, ==, 0);
  g_assert_false (type (fixture, (DeskField){ .id = DESK_FIELD_DIAMETER_SPREAD }, "0.1"));
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_RATIO }, "1.1(2)"));
  g_assert_cmpfloat (fixture->recipe->strength_ratio, ==, 1.1);
  g_assert_cmpfloat_with_epsilon (fixture->recipe->strength_ratio_u, 0.2, 1e-12);
  g_assert_false (type (fixture, (DeskField){ .id = DESK_FIELD_RATIO }, "-1"));
  g_assert_false (type (fixture, (DeskField){ .id = DESK_FIELD_MAX_BANDS, .group = BT_S22 }, "2.5"));
  g_assert_false (type (fixture, (DeskField){ .id = DESK_FIELD_MAX_BANDS, .group = BT_S22 }, "9"));
  g_assert_true (type (fixture, (DeskField){ .id = DESK_FIELD_MAX_BANDS, .group = BT_S22 }, "2"));
  g_assert_cmpuint (fixture->recipe->max_bands[BT_S22], ==, 2);
}

static void
test_held (Fixture *fixture, gconstpointer data)
{
  DeskField centre = { DESK_FIELD_BAND, BT_S22, 0, BT_BAND_CENTRE };
  g_assert_true (type (fixture, centre, "1033 nm"));
  const BtHeld *held = bt_recipe_get_held (fixture->recipe, BT_S22, 0, BT_BAND_CENTRE);
  g_assert_nonnull (held);
  g_assert_cmpfloat_with_epsilon (held->value, 1.200234, 1e-6);
  g_assert_true (type (fixture, centre, ""));
  g_assert_null (bt_recipe_get_held (fixture->recipe, BT_S22, 0, BT_BAND_CENTRE));
  g_assert_false (type (fixture, (DeskField){ DESK_FIELD_BAND, BT_S22, 0, BT_BAND_FWHM }, "-0.1"));
  g_assert_false (type (fixture, (DeskField){ DESK_FIELD_BAND, BT_S22, 0, BT_BAND_HEIGHT }, "-0.1"));
  g_assert_true (type (fixture, (DeskField){ DESK_FIELD_BAND, BT_M11, 0, BT_BAND_HEIGHT }, "-0.1"));
}

static void
test_excluded (Fixture *fixture, gconstpointer data)
{
  DeskField field = { .id = DESK_FIELD_EXCLUDED };
  g_assert_true (type (fixture, field, "0.95 to 1.05 eV"));
  g_assert_true (type (fixture, field, "1,00 - 1,10"));
  g_assert_cmpuint (fixture->recipe->excluded->len, ==, 1);
  g_assert_cmpfloat_with_epsilon (g_array_index (fixture->recipe->excluded, BtRange, 0).low_ev, 0.95, 1e-12);
  g_assert_cmpfloat_with_epsilon (g_array_index (fixture->recipe->excluded, BtRange, 0).high_ev, 1.10, 1e-12);
  g_assert_true (type (fixture, field, "600 nm to 620 nm"));
  g_assert_cmpuint (fixture->recipe->excluded->len, ==, 2);
  g_assert_cmpfloat_with_epsilon (g_array_index (fixture->recipe->excluded, BtRange, 1).low_ev, BT_HC_EV_NM / 620, 1e-9);
  g_assert_cmpfloat_with_epsilon (g_array_index (fixture->recipe->excluded, BtRange, 1).high_ev, BT_HC_EV_NM / 600, 1e-9);
  g_assert_false (type (fixture, field, "0.95"));
  g_assert_false (type (fixture, field, "0.95 to 0.95"));
  g_assert_false (type (fixture, field, "here to there"));
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  for (guint i = 0; i < G_N_ELEMENTS (good); i++)
    {
      char *path = g_strdup_printf ("/desk/parse/%02u", i);
      g_test_add_data_func (path, &good[i], test_good);
      g_free (path);
    }
  g_test_add_func ("/desk/parse/bad", test_bad);
  g_test_add_func ("/desk/parse/lists", test_lists);
  g_test_add ("/desk/field/film", Fixture, NULL, set_up, test_film_fields, tear_down);
  g_test_add ("/desk/field/recipe", Fixture, NULL, set_up, test_recipe_fields, tear_down);
  g_test_add ("/desk/field/held", Fixture, NULL, set_up, test_held, tear_down);
  g_test_add ("/desk/field/excluded", Fixture, NULL, set_up, test_excluded, tear_down);
  return g_test_run ();
}
