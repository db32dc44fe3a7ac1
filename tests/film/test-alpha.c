/* Absorption coefficients and what their uncertainty is made of. */
#include <bandtally/film.h>

#include <math.h>

#define N 401

/* A film whose spectrum holds this transmittance, 500 to 900 nm. */
static BtFilm *
make_film (const double *transmittance, const char *title)
{
  g_autoptr (GError) error = NULL;
  g_autoptr (BtSpectrum) spectrum = NULL;
  double x[N];

  for (gsize i = 0; i < N; i++)
    x[i] = 500 + (double) i;
  spectrum = bt_spectrum_new (x, transmittance, N, BT_X_NM, BT_Y_TRANSMITTANCE, title, &error);
  g_assert_no_error (error);
  return bt_film_new (spectrum);
}

static double
depth_at (gsize i)
{
  return 0.4 + 0.2 * sin (0.01 * (double) i);
}

/* Both bounces summed by hand: R = r + r (1 - r)^2 x^2 / (1 - r^2 x^2). */
static void
test_slab_inverse (void)
{
  for (double r = 0; r < 0.6; r += 0.04)
    for (double depth = 0; depth < 8; depth += 0.37)
      {
        double x = exp (-depth), t = bt_slab_transmittance (r, depth), whole, face, found;

        whole = r + r * (1 - r) * (1 - r) * x * x / (1 - r * r * x * x);
        g_assert_true (bt_slab_invert (whole, t, &face, &found));
        g_assert_cmpfloat_with_epsilon (face, r, 1e-12);
        g_assert_cmpfloat_with_epsilon (found, depth, 1e-10);
      }
}

static void
test_slab_impossible (void)
{
  double face, depth;

  g_assert_false (bt_slab_invert (0.3, 0.75, &face, &depth));
  g_assert_false (bt_slab_invert (-0.1, 0.5, &face, &depth));
  g_assert_false (bt_slab_invert (0.1, 0, &face, &depth));
  g_assert_true (bt_slab_invert (0, 0.5, &face, &depth));
  g_assert_cmpfloat_with_epsilon (depth, G_LN2, 1e-14);
}

static void
test_measured_reflectance (void)
{
  const BtLightPath how = { BT_LIGHT_PATH_REFLECTION, NAN, 0, 0.002 };
  double t[N], r[N], x[N];
  g_autoptr (GError) error = NULL;
  g_autoptr (BtSpectrum) reflectance = NULL;
  g_autoptr (BtFilm) film = NULL;
  BtCurve *curve;

  for (gsize i = 0; i < N; i++)
    {
      const double face = 0.06 + 0.02 * cos (0.02 * (double) i), pass = exp (-depth_at (i));

      x[i] = 500 + (double) i;
      t[i] = bt_slab_transmittance (face, depth_at (i));
      r[i] = 100 * face * (1 + t[i] * pass);
    }
  film = make_film (t, "slab");
  reflectance = bt_spectrum_new (x, r, N - 50, BT_X_NM, BT_Y_REFLECTANCE_PERCENT, "its reflectance", &error);
  g_assert_no_error (error);
  bt_film_set_reflectance (film, reflectance);
  curve = bt_film_light_path (film, &how, NULL);
  /* The reflectance ends 50 points before the film does. */
  g_assert_cmpuint (curve->n, ==, N - 50);
  g_assert_nonnull (bt_flags_find (curve->flags, "reflectance-short"));
  g_assert_null (bt_flags_find (curve->flags, "no-substrate-index"));
  for (gsize i = 0; i < curve->n; i++)
    {
      const gsize point = N - 51 - i;

      g_assert_cmpfloat_with_epsilon (curve->absorbance[i], depth_at (point) / BT_LN10, 1e-9);
      /* d(at)/dR is about -1 / (1 - R) - R' terms: between 0.8 and 2 for these. */
      g_assert_cmpfloat (curve->parts[BT_PART_REFLECTANCE][i], >, 0.8 * 0.002 / BT_LN10);
      g_assert_cmpfloat (curve->parts[BT_PART_REFLECTANCE][i], <, 2.5 * 0.002 / BT_LN10);
    }
  bt_curve_free (curve);
}

/* JCGM 100:2008 4.2 worked by hand: mean 364 / 3; deviations -10/3, -1/3, 11/3, their squares' sum 222/9; s^2 = 111/9; u = sqrt (111/27). */
static void
test_thickness_readings (void)
{
  static const double readings[] = { 118, 121, 125 };
  double t[N];
  g_autoptr (BtFilm) film = NULL, copy = NULL;
  gsize n;

  for (gsize i = 0; i < N; i++)
    t[i] = exp (-depth_at (i));
  film = make_film (t, "uneven");
  bt_film_set_thickness_readings (film, readings, G_N_ELEMENTS (readings));
  g_assert_cmpfloat_with_epsilon (bt_film_get_thickness_nm (film), 364.0 / 3, 1e-12);
  g_assert_cmpfloat_with_epsilon (bt_film_get_thickness_u_nm (film), 2.0275875, 1e-6);
  copy = bt_film_copy (film);
  g_assert_nonnull (bt_film_get_thickness_readings (copy, &n));
  g_assert_cmpuint (n, ==, 3);
  bt_film_set_thickness (film, 100, 3);
  g_assert_null (bt_film_get_thickness_readings (film, &n));
  bt_film_set_thickness_readings (film, readings, 1);
  g_assert_cmpfloat_with_epsilon (bt_film_get_thickness_u_nm (film), 0, 1e-15);
}

static void
check_against_draws (BtFilm *film, const BtLightPath *how, const BtAccuracy *accuracy, double agree, BtAlpha *alpha)
{
  BtCurve *curve = bt_film_light_path (film, how, accuracy);
  double squares = 0;

  g_assert_true (bt_film_alpha (film, curve, how, accuracy, bt_ev_from_nm (700.3), 40000, 0.95, alpha));
  for (guint k = 0; k < BT_N_PARTS; k++)
    squares += alpha->parts[k] * alpha->parts[k];
  g_assert_cmpfloat_with_epsilon (alpha->u, sqrt (squares), 1e-9 * alpha->u);
  if (agree > 0)
    {
      g_assert_cmpfloat_with_epsilon (alpha->mean, alpha->value, 4 * alpha->u / sqrt (40000) + agree * alpha->u);
      g_assert_cmpfloat_with_epsilon (alpha->spread, alpha->u, agree * alpha->u);
      g_assert_cmpfloat_with_epsilon (alpha->low, alpha->value - 1.96 * alpha->u, 2 * agree * alpha->u);
      g_assert_cmpfloat_with_epsilon (alpha->high, alpha->value + 1.96 * alpha->u, 2 * agree * alpha->u);
    }
  bt_curve_free (curve);
}

/* Where every uncertainty is small, both ways say the same (JCGM 101:2008 8). */
static void
test_first_order_and_draws_agree (void)
{
  const BtLightPath paths[] = { BT_LIGHT_PATH_INIT, { BT_LIGHT_PATH_REFLECTION, 0.06, 0, 0.003 }, { BT_LIGHT_PATH_THIN_FILM, NAN, 1.46, 0 } };
  const BtAccuracy accuracy = { 0.003, 0.8 };
  double t[N];
  g_autoptr (BtFilm) film = NULL;
  BtAlpha alpha;

  for (gsize i = 0; i < N; i++)
    t[i] = 0.95 * exp (-depth_at (i));
  film = make_film (t, "even");
  bt_film_set_thickness (film, 120, 0.8);
  for (guint p = 0; p < G_N_ELEMENTS (paths); p++)
    {
      check_against_draws (film, &paths[p], &accuracy, 0.03, &alpha);
      g_assert_cmpfloat (alpha.parts[BT_PART_PHOTOMETRIC], >, 0);
      g_assert_cmpfloat (alpha.parts[BT_PART_WAVELENGTH], >, 0);
      g_assert_cmpfloat_with_epsilon (alpha.parts[BT_PART_THICKNESS], alpha.value * 0.8 / 120, 1e-6 * alpha.value);
      g_assert_cmpint (alpha.parts[BT_PART_REFLECTANCE] > 0, ==, paths[p].kind == BT_LIGHT_PATH_REFLECTION);
    }
}

/* With a thickness known to 25 % only, 1/t is skewed: the draws' mean is higher by about (u/t)^2 and the interval is not symmetrical. */
static void
test_large_thickness_uncertainty (void)
{
  double t[N];
  g_autoptr (BtFilm) film = NULL;
  BtAlpha alpha;

  for (gsize i = 0; i < N; i++)
    t[i] = exp (-depth_at (i));
  film = make_film (t, "barely known");
  bt_film_set_thickness (film, 100, 15);
  check_against_draws (film, NULL, NULL, 0, &alpha);
  g_assert_cmpfloat_with_epsilon (alpha.mean / alpha.value, 1 + 0.15 * 0.15 + 3 * pow (0.15, 4), 0.005);
  g_assert_cmpfloat (alpha.high - alpha.value, >, 1.3 * (alpha.value - alpha.low));
  /* The interval's ends are those of the thickness, turned over. */
  g_assert_cmpfloat_with_epsilon (alpha.low / alpha.value, 1 / (1 + 1.96 * 0.15), 0.01);
  g_assert_cmpfloat_with_epsilon (alpha.high / alpha.value, 1 / (1 - 1.96 * 0.15), 0.03);
}

/* Few readings: Student's t, quantile 3.182 for 3 degrees of freedom at 95 % (any table of t). */
static void
test_few_readings (void)
{
  static const double readings[] = { 99, 100, 101, 100.5 };
  double t[N];
  g_autoptr (BtFilm) film = NULL;
  BtAlpha alpha;

  for (gsize i = 0; i < N; i++)
    t[i] = exp (-depth_at (i));
  film = make_film (t, "four readings");
  bt_film_set_thickness_readings (film, readings, 4);
  check_against_draws (film, NULL, NULL, 0, &alpha);
  g_assert_cmpfloat_with_epsilon ((alpha.high - alpha.low) / 2 / alpha.parts[BT_PART_THICKNESS], 3.182, 0.12);
}

/* The film states an absorption coefficient, or has no thickness. */
static void
test_without_thickness (void)
{
  double t[N];
  g_autoptr (BtFilm) film = NULL;
  BtCurve *curve;
  BtAlpha alpha;

  for (gsize i = 0; i < N; i++)
    t[i] = exp (-depth_at (i));
  film = make_film (t, "no thickness");
  curve = bt_film_light_path (film, NULL, NULL);
  g_assert_true (bt_film_alpha (film, curve, NULL, NULL, bt_ev_from_nm (700), 1000, 0.95, &alpha));
  g_assert_true (isnan (alpha.value) && isnan (alpha.mean));
  g_assert_false (bt_film_alpha (film, curve, NULL, NULL, bt_ev_from_nm (1200), 0, 0.95, &alpha));
  bt_curve_free (curve);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/alpha/slab-inverse", test_slab_inverse);
  g_test_add_func ("/alpha/slab-impossible", test_slab_impossible);
  g_test_add_func ("/alpha/measured-reflectance", test_measured_reflectance);
  g_test_add_func ("/alpha/thickness-readings", test_thickness_readings);
  g_test_add_func ("/alpha/first-order-and-draws-agree", test_first_order_and_draws_agree);
  g_test_add_func ("/alpha/large-thickness-uncertainty", test_large_thickness_uncertainty);
  g_test_add_func ("/alpha/few-readings", test_few_readings);
  g_test_add_func ("/alpha/without-thickness", test_without_thickness);
  return g_test_run ();
}
