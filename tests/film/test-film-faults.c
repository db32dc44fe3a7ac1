/* What a light path leaves out, with its size; and steps of the detector that are stated or taken off. */
#include <bandtally/forecast.h>
#include <bandtally/film.h>

#include <math.h>
#include <string.h>

#define N 1101

typedef double (*Absorbance) (double wavelength_nm);

/* 400 to 1500 nm in steps of 1 nm. */
static BtFilm *
make_film (Absorbance absorbance)
{
  g_autoptr (GError) error = NULL;
  g_autoptr (BtSpectrum) spectrum = NULL;
  double x[N], y[N];

  for (gsize i = 0; i < N; i++)
    {
      x[i] = 400 + (double) i;
      y[i] = absorbance (x[i]) + 2e-4 * sin (7919.0 * (double) i);
    }
  spectrum = bt_spectrum_new (x, y, N, BT_X_NM, BT_Y_ABSORBANCE, "film", &error);
  g_assert_no_error (error);
  return bt_film_new (spectrum);
}

static double
plain (double nm)
{
  return 0.3 * pow (nm / 500, -1.2) + 0.15 * exp (-pow ((nm - 1000) / 90, 2));
}

static double
walled (double nm)
{
  return plain (nm) + exp ((440 - nm) / 8);
}

static double
sunken (double nm)
{
  return plain (nm) - 0.12;
}

static double
dark (double nm)
{
  return 5 * plain (nm);
}

static BtCurve *
judge (BtFilm *film, const BtLightPath *how, double stray_light)
{
  BtCurve *curve = bt_film_light_path (film, how, NULL);

  bt_film_judge_path (film, how, stray_light, (BtRange){ 0.8, 3.2 }, curve);
  return curve;
}

/* (transfer none): the flag's text, or "". */
static const char *
flag_text (const BtCurve *curve, const char *code)
{
  const BtFlag *flag = bt_flags_find (curve->flags, code);

  return flag != NULL ? flag->text : "";
}

static void
test_nothing_to_say (void)
{
  static const char *const codes[] = { "flattening", "stray-light", "substrate-cutoff", "baseline-offset", "not-slab", "reflection-left-out" };
  g_autoptr (BtFilm) film = make_film (plain);
  BtCurve *curve = judge (film, NULL, 0);

  for (gsize c = 0; c < G_N_ELEMENTS (codes); c++)
    g_assert_null (bt_flags_find (curve->flags, codes[c]));
  bt_curve_free (curve);
}

/* ln (10) / 2 A^2 r^2, worked out by hand: A = 0.3 (400/500)^-1.2 = 0.39211 at 400 nm; r = 20 / 100. */
static void
test_uneven (void)
{
  const double uneven[] = { 80, 100, 120 }, even[] = { 99.5, 100, 100.5 };
  g_autoptr (BtFilm) film = make_film (plain);
  BtCurve *curve;

  bt_film_set_thickness_readings (film, uneven, 3);
  curve = judge (film, NULL, 0);
  g_assert_nonnull (strstr (flag_text (curve, "flattening"), "20 %"));
  g_assert_nonnull (strstr (flag_text (curve, "flattening"), "0.0071"));
  bt_curve_free (curve);
  bt_film_set_thickness_readings (film, even, 3);
  curve = judge (film, NULL, 0);
  g_assert_null (bt_flags_find (curve->flags, "flattening"));
  bt_curve_free (curve);
}

/* A_read = -log10 ((T + s) / (1 + s)): a film of A = 2 reads 1.95904 with s = 1e-3 (COMP, from the formula). */
static double
two (double nm)
{
  return 1.95904 - 0.001 * (nm - 400);
}

static void
test_stray_light (void)
{
  g_autoptr (BtFilm) film = make_film (two), clear = make_film (plain);
  BtCurve *curve = judge (film, NULL, 1e-3);

  g_assert_nonnull (strstr (flag_text (curve, "stray-light"), "0.04"));
  g_assert_nonnull (strstr (flag_text (curve, "stray-light"), "400 nm"));
  bt_curve_free (curve);
  curve = judge (film, NULL, 0.02);
  g_assert_nonnull (strstr (flag_text (curve, "stray-light"), "A = 1.7"));
  bt_curve_free (curve);
  curve = judge (clear, NULL, 1e-5);
  g_assert_null (bt_flags_find (curve->flags, "stray-light"));
  bt_curve_free (curve);
}

/* Index 2 on 1.459911 (Malitson 1965 at 550 nm): log10 ((1 - 0.034957) / (1 - 1/9)) = 0.0357. */
static void
test_reflection (void)
{
  const BtLightPath slab = { BT_LIGHT_PATH_REFLECTION, 0.04, 0, 0 };
  g_autoptr (BtFilm) film = make_film (plain);
  BtCurve *curve;

  bt_film_set_substrate (film, "fused silica");
  bt_film_set_thickness (film, 120, 3);
  curve = judge (film, NULL, 0);
  g_assert_nonnull (strstr (flag_text (curve, "reflection-left-out"), "0.002 to 0.036"));
  /* plain (550) = 0.3 1.1^-1.2 = 0.26757; 0.0357 of it is 13.3 %. */
  g_assert_nonnull (strstr (flag_text (curve, "reflection-left-out"), "13.3 % at 550 nm"));
  bt_curve_free (curve);
  /* Much thinner than the wave: 3 / 2.459911 = 1.22 and 4 / 2.459911 = 1.63. */
  bt_film_set_thickness (film, 30, 1);
  curve = judge (film, NULL, 0);
  g_assert_nonnull (strstr (flag_text (curve, "reflection-left-out"), "1.22 to 1.63"));
  bt_curve_free (curve);
  bt_film_set_thickness (film, 120, 3);
  curve = judge (film, &slab, 0);
  g_assert_null (bt_flags_find (curve->flags, "reflection-left-out"));
  g_assert_nonnull (strstr (flag_text (curve, "not-slab"), "120 nm"));
  bt_curve_free (curve);
  bt_film_set_thickness (film, 200000, 0);
  curve = judge (film, &slab, 0);
  g_assert_null (bt_flags_find (curve->flags, "not-slab"));
  bt_curve_free (curve);
}

static void
test_cutoff (void)
{
  g_autoptr (BtFilm) wall = make_film (walled), film = make_film (plain), blank = make_film (walled);
  BtCurve *curve = judge (wall, NULL, 0);

  g_assert_nonnull (strstr (flag_text (curve, "substrate-cutoff"), "From 400 to"));
  bt_curve_free (curve);
  /* The blank shows it even where the difference does not. */
  bt_film_set_blank (film, bt_film_get_spectrum (blank));
  curve = judge (film, NULL, 0);
  g_assert_nonnull (strstr (flag_text (curve, "substrate-cutoff"), "the blank"));
  bt_curve_free (curve);
  bt_film_set_blank (film, NULL);
  bt_film_set_substrate (film, "polyimide");
  curve = judge (film, NULL, 0);
  g_assert_nonnull (strstr (flag_text (curve, "substrate-cutoff"), "From 400 to 500 nm polyimide"));
  bt_curve_free (curve);
}

static void
test_baseline (void)
{
  g_autoptr (BtFilm) film = make_film (sunken);
  BtCurve *curve = judge (film, NULL, 0);

  /* plain () is lowest at 1500 nm, 0.0803; over the lowest tenth of an electronvolt a little more. */
  g_assert_nonnull (strstr (flag_text (curve, "baseline-offset"), "0.03"));
  bt_curve_free (curve);
}

static double
stepped (double nm)
{
  return plain (nm) + (nm > 860.5 ? 0.013 : 0);
}

/* A stated change is measured whether it is there or not; on a band's flank nothing is found where nothing is. */
static void
test_stated_steps (void)
{
  static const double none_nm[] = { 700, 860.5, 920, 945, 1000, 1060, 1300 };
  g_autoptr (BtFilm) film = make_film (plain), broken = make_film (stepped);
  BtCurve *curve = judge (film, NULL, 0);
  BtStep step;

  for (gsize k = 0; k < G_N_ELEMENTS (none_nm); k++)
    {
      g_assert_true (bt_curve_measure_step (curve, bt_ev_from_nm (none_nm[k]), &step));
      g_assert_cmpfloat (fabs (step.size), <, 3.5 * step.size_u);
      g_assert_cmpfloat (step.size_u, <, 0.004);
      g_assert_cmpfloat (fabs (step.slope), <, 5 * step.slope_u + 0.2);
    }
  bt_curve_free (curve);
  curve = judge (broken, NULL, 0);
  g_assert_true (bt_curve_measure_step (curve, bt_ev_from_nm (860.5), &step));
  /* Longer waves read more: below in energy. */
  g_assert_cmpfloat_with_epsilon (step.size, -0.013, 3.5 * step.size_u);
  g_assert_cmpfloat (fabs (step.size), >, 6 * step.size_u);
  g_assert_false (bt_curve_measure_step (curve, bt_ev_from_nm (380), &step));
  g_assert_false (bt_curve_measure_step (curve, bt_ev_from_nm (403), &step));
  bt_curve_free (curve);
}

static void
test_correction (void)
{
  g_autoptr (BtFilm) film = make_film (stepped);

  for (int keep_visible = 0; keep_visible < 2; keep_visible++)
    {
      BtCurve *before = bt_film_light_path (film, NULL, NULL), *after = bt_film_light_path (film, NULL, NULL);
      BtStep step, rest;

      g_assert_true (bt_curve_measure_step (before, bt_ev_from_nm (860.5), &step));
      bt_curve_correct_steps (after, &step, 1, keep_visible == 1);
      g_assert_true (bt_curve_measure_step (after, bt_ev_from_nm (860.5), &rest));
      g_assert_cmpfloat_with_epsilon (rest.size, 0, 1e-12);
      g_assert_nonnull (bt_flags_find (after->flags, "detector-step-corrected"));
      for (gsize i = 0; i < before->n; i++)
        {
          const gboolean moved = (before->energy_ev[i] > step.energy_ev) != (keep_visible == 1);

          g_assert_cmpfloat_with_epsilon (after->absorbance[i] - before->absorbance[i], moved ? (keep_visible ? step.size : -step.size) : 0, 1e-12);
          g_assert_cmpfloat_with_epsilon (after->parts[BT_PART_STEP][i], moved ? step.size_u : 0, 1e-15);
        }
      bt_curve_free (before);
      bt_curve_free (after);
    }
}

static void
test_dark_film (void)
{
  g_autoptr (BtFilm) film = make_film (dark);
  BtCurve *curve = judge (film, NULL, 0);

  /* Dark but read: no wall, no stray light without a ceiling. */
  g_assert_null (bt_flags_find (curve->flags, "substrate-cutoff"));
  g_assert_null (bt_flags_find (curve->flags, "stray-light"));
  bt_curve_free (curve);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/film-faults/nothing-to-say", test_nothing_to_say);
  g_test_add_func ("/film-faults/uneven", test_uneven);
  g_test_add_func ("/film-faults/stray-light", test_stray_light);
  g_test_add_func ("/film-faults/reflection", test_reflection);
  g_test_add_func ("/film-faults/cutoff", test_cutoff);
  g_test_add_func ("/film-faults/baseline", test_baseline);
  g_test_add_func ("/film-faults/dark-film", test_dark_film);
  g_test_add_func ("/film-faults/stated-steps", test_stated_steps);
  g_test_add_func ("/film-faults/correction", test_correction);
  return g_test_run ();
}
