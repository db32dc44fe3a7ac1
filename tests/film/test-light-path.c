/* From reading to absorption coefficient: the definition and its uncertainty, and the blank ratio with its noise. */
#include <bandtally/bandtally.h>

#include <math.h>

/* alpha = ln(10) A / t, values worked out by hand from the definition. */
static void
test_alpha (void)
{
  static const struct { double absorbance, thickness_nm, alpha_per_cm; } rows[] = { { 0.5, 50, 230259 }, { 0.123, 25, 113287 }, { 0.05, 12, 95941 } };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    g_assert_cmpfloat_with_epsilon (bt_alpha_per_cm (rows[i].absorbance, rows[i].thickness_nm), rows[i].alpha_per_cm, 0.51);
  g_assert_true (isnan (bt_alpha_per_cm (0.5, 0)));
  g_assert_true (isnan (bt_alpha_u_per_cm (0.5, 0.01, 0, 1)));
  g_assert_cmpfloat (bt_alpha_per_cm (-0.01, 50), <, 0);
}

/* JCGM 100:2008 equations 10 and 12: A = 0.500(2), t = 50.0(25) nm gives u = 11549.7 per cm, 5.01597 per cent (worked out by hand). */
static void
test_alpha_u (void)
{
  double u = bt_alpha_u_per_cm (0.5, 0.002, 50, 2.5);

  g_assert_cmpfloat_with_epsilon (u, 11549.7, 0.05);
  g_assert_cmpfloat_with_epsilon (u / bt_alpha_per_cm (0.5, 50), 0.0501597, 5e-8);
  /* Nothing known of the thickness' uncertainty, and nothing absorbed. */
  g_assert_cmpfloat_with_epsilon (bt_alpha_u_per_cm (0.5, 0.002, 50, 0) / bt_alpha_per_cm (0.002, 50), 1, 1e-14);
  g_assert_cmpfloat_with_epsilon (bt_alpha_u_per_cm (0, 0.002, 50, 2.5) / bt_alpha_per_cm (0.002, 50), 1, 1e-14);
}

/* The same by drawing both inputs (JCGM 101): where the thickness is known to 2 per cent, first order is good to a part in a thousand. */
static void
test_alpha_monte_carlo (void)
{
  const int n = 200000;
  g_autoptr (GRand) random = g_rand_new_with_seed (3);
  double sum = 0, squares = 0, first = bt_alpha_per_cm (0.3, 80), u = bt_alpha_u_per_cm (0.3, 0.004, 80, 1.6);

  for (int i = 0; i < n; i++)
    {
      double radius = sqrt (-2 * log (1 - g_rand_double (random))), angle = 2 * G_PI * g_rand_double (random);
      double alpha = bt_alpha_per_cm (0.3 + 0.004 * radius * cos (angle), 80 + 1.6 * radius * sin (angle)) / first - 1;

      sum += alpha;
      squares += alpha * alpha;
    }
  sum /= n;
  /* The standard deviation of n draws is itself uncertain by 1 in sqrt (2 n): 0.0016. */
  g_assert_cmpfloat_with_epsilon (sqrt (squares / n - sum * sum) / (u / first), 1, 0.006);
}

/* 1 - 10^-A by hand. */
static void
test_absorptance (void)
{
  g_assert_cmpfloat_with_epsilon (bt_absorptance (1), 0.9, 1e-15);
  g_assert_cmpfloat_with_epsilon (bt_absorptance (0.3), 0.498812766, 1e-9);
  g_assert_cmpfloat_with_epsilon (bt_absorptance (0), 0, 1e-15);
}

static double
film_absorbance (double nm)
{
  return 0.5 + 0.2 * sin (nm / 150);
}

static double
blank_absorbance (double nm)
{
  return 0.04 + 2e-5 * nm;
}

/* Absorbance of both with normal noise of @u, from @low to @high every @step nm. */
static BtSpectrum *
make (double (*absorbance) (double), double low, double high, double step, double u, guint32 seed)
{
  g_autoptr (GRand) random = g_rand_new_with_seed (seed);
  g_autoptr (GArray) x = g_array_new (FALSE, FALSE, sizeof (double)), y = g_array_new (FALSE, FALSE, sizeof (double));
  g_autoptr (GError) error = NULL;
  BtSpectrum *spectrum;

  for (double nm = low; nm <= high + step / 2; nm += step)
    {
      double a = absorbance (nm) + u * sqrt (-2 * log (1 - g_rand_double (random))) * cos (2 * G_PI * g_rand_double (random));

      g_array_append_val (x, nm);
      g_array_append_val (y, a);
    }
  spectrum = bt_spectrum_new ((double *) (void *) x->data, (double *) (void *) y->data, x->len, BT_X_NM, BT_Y_ABSORBANCE, "made up", &error);
  g_assert_no_error (error);
  return spectrum;
}

/* The stated uncertainty holds the noise of both: the scatter of what the light path gives, divided by it, is near 1. On one axis
 * nothing is averaged by interpolation. */
static void
test_blank_noise (void)
{
  static const struct { double film_u, blank_u; } rows[] = { { 1e-3, 1e-3 }, { 1e-3, 3e-3 }, { 2e-3, 2e-4 } };

  for (guint r = 0; r < G_N_ELEMENTS (rows); r++)
    {
      double squares = 0, stated = 0;
      gsize count = 0;

      for (guint32 seed = 1; seed <= 10; seed++)
        {
          g_autoptr (BtSpectrum) reading = make (film_absorbance, 500, 1500, 1, rows[r].film_u, seed);
          g_autoptr (BtSpectrum) blank = make (blank_absorbance, 500, 1500, 1, rows[r].blank_u, 1000 + seed);
          g_autoptr (BtFilm) film = bt_film_new (reading);
          BtCurve *curve;

          bt_film_set_blank (film, blank);
          curve = bt_film_light_path (film, NULL, NULL);
          g_assert_cmpuint (curve->n, >=, 1000);
          for (gsize i = 0; i < curve->n; i++)
            {
              double nm = bt_nm_from_ev (curve->energy_ev[i]);
              double error = curve->absorbance[i] - (film_absorbance (nm) - blank_absorbance (nm));

              squares += error * error;
              stated += curve->absorbance_u[i] * curve->absorbance_u[i];
              count++;
            }
          g_assert_null (bt_flags_find (curve->flags, "no-blank"));
          bt_curve_free (curve);
        }
      g_test_message ("film %g, blank %g: true over stated %.3f", rows[r].film_u, rows[r].blank_u, sqrt (squares / stated));
      g_assert_cmpfloat_with_epsilon (sqrt (squares / stated), 1, 0.08);
      g_assert_cmpfloat_with_epsilon (sqrt (squares / (double) count) / hypot (rows[r].film_u, rows[r].blank_u), 1, 0.03);
    }
}

/* A blank on another axis is interpolated, which averages some of its noise away: the stated uncertainty may be larger than the scatter, not smaller. */
static void
test_blank_other_axis (void)
{
  g_autoptr (BtSpectrum) reading = make (film_absorbance, 500, 1500, 1, 1e-3, 1), blank = make (blank_absorbance, 495.3, 1510, 2.7, 1e-3, 2);
  g_autoptr (BtFilm) film = bt_film_new (reading);
  double squares = 0, stated = 0;
  BtCurve *curve;

  bt_film_set_blank (film, blank);
  curve = bt_film_light_path (film, NULL, NULL);
  g_assert_cmpuint (curve->n, ==, bt_spectrum_get_n_points (reading));
  g_assert_null (bt_flags_find (curve->flags, "blank-short"));
  for (gsize i = 0; i < curve->n; i++)
    {
      double nm = bt_nm_from_ev (curve->energy_ev[i]), error = curve->absorbance[i] - (film_absorbance (nm) - blank_absorbance (nm));

      squares += error * error;
      stated += curve->absorbance_u[i] * curve->absorbance_u[i];
    }
  g_test_message ("true over stated %.3f", sqrt (squares / stated));
  g_assert_cmpfloat (sqrt (squares / stated), <, 1.08);
  g_assert_cmpfloat (sqrt (squares / stated), >, 0.7);
  bt_curve_free (curve);
}

/* Where the blank does not reach, points are left out, counted and flagged. */
static void
test_blank_short (void)
{
  static const struct { double low, high; gsize left; } rows[] = { { 600, 1500, 901 }, { 500, 1200, 701 }, { 700.5, 800.5, 100 }, { 1600, 1700, 0 } };
  g_autoptr (BtSpectrum) reading = make (film_absorbance, 500, 1500, 1, 1e-4, 1);

  for (guint r = 0; r < G_N_ELEMENTS (rows); r++)
    {
      g_autoptr (BtSpectrum) blank = make (blank_absorbance, rows[r].low, rows[r].high, 1, 1e-4, 2);
      g_autoptr (BtFilm) film = bt_film_new (reading);
      g_autofree char *number = g_strdup_printf ("%u ", (guint) (1001 - rows[r].left));
      const BtFlag *flag;
      BtCurve *curve;

      bt_film_set_blank (film, blank);
      curve = bt_film_light_path (film, NULL, NULL);
      g_assert_cmpuint (curve->n, ==, rows[r].left);
      for (gsize i = 0; i < curve->n; i++)
        {
          double nm = bt_nm_from_ev (curve->energy_ev[i]);

          g_assert_true (nm > rows[r].low - 1e-6 && nm < rows[r].high + 1e-6);
          g_assert_cmpfloat_with_epsilon (curve->absorbance[i], film_absorbance (nm) - blank_absorbance (nm), 1e-3);
        }
      flag = bt_flags_find (curve->flags, "blank-short");
      g_assert_nonnull (flag);
      g_assert_true (flag != NULL && g_str_has_prefix (flag->text, number));
      bt_curve_free (curve);
    }
}

/* Without a blank the reading is passed on untouched, and flagged; a file of alpha needs none. */
static void
test_no_blank (void)
{
  g_autoptr (BtSpectrum) reading = make (film_absorbance, 500, 1500, 5, 1e-3, 1), alpha = NULL;
  g_autoptr (BtFilm) film = bt_film_new (reading), second = NULL;
  g_autoptr (GError) error = NULL;
  double x[20], y[20];
  BtCurve *curve = bt_film_light_path (film, NULL, NULL);

  g_assert_cmpuint (curve->n, ==, bt_spectrum_get_n_points (reading));
  for (gsize i = 0; i < curve->n; i++)
    g_assert_cmpfloat (curve->absorbance[i], ==, bt_spectrum_get_absorbance (reading, NULL)[i]);
  g_assert_nonnull (bt_flags_find (curve->flags, "no-blank"));
  bt_curve_free (curve);

  for (guint i = 0; i < 20; i++)
    {
      x[i] = 500 + 10 * i;
      y[i] = 1e5 + 1e3 * i;
    }
  alpha = bt_spectrum_new (x, y, 20, BT_X_NM, BT_Y_ALPHA_PER_CM, "alpha", &error);
  g_assert_no_error (error);
  second = bt_film_new (alpha);
  curve = bt_film_light_path (second, NULL, NULL);
  g_assert_null (bt_flags_find (curve->flags, "no-blank"));
  g_assert_cmpfloat_with_epsilon (curve->absorbance[19] * BT_LN10, 1e5, 1e-6);
  bt_curve_free (curve);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  g_test_add_func ("/light-path/alpha", test_alpha);
  g_test_add_func ("/light-path/alpha-u", test_alpha_u);
  g_test_add_func ("/light-path/alpha-monte-carlo", test_alpha_monte_carlo);
  g_test_add_func ("/light-path/absorptance", test_absorptance);
  g_test_add_func ("/light-path/blank-noise", test_blank_noise);
  g_test_add_func ("/light-path/blank-other-axis", test_blank_other_axis);
  g_test_add_func ("/light-path/blank-short", test_blank_short);
  g_test_add_func ("/light-path/no-blank", test_no_blank);
  return g_test_run ();
}
