/* A film's properties, its blank, and the absorption coefficient with its uncertainty. */
#include <bandtally/bandtally.h>

#include <math.h>
#include <string.h>

#define N 101

static BtSpectrum *
make (double low_nm, double step_nm, double offset, BtYUnit unit)
{
  double x[N], y[N];
  g_autoptr (GError) error = NULL;
  BtSpectrum *spectrum;

  for (guint i = 0; i < N; i++)
    {
      x[i] = low_nm + step_nm * i;
      /* A straight line in energy, which interpolation follows exactly; the hump is in the film alone. */
      y[i] = offset + 0.1 * bt_ev_from_nm (x[i]) + (offset > 0 ? 0.2 * exp (-pow ((i - 50.0) / 10, 2)) : 0);
      if (unit == BT_Y_ALPHA_PER_CM)
        y[i] *= 1e5;
    }
  spectrum = bt_spectrum_new (x, y, N, BT_X_NM, unit, "made up", &error);
  g_assert_no_error (error);
  return spectrum;
}

static void
test_blank (void)
{
  g_autoptr (BtSpectrum) spectrum = make (600, 5, 0.3, BT_Y_ABSORBANCE), blank = make (598.7, 5.3, 0, BT_Y_ABSORBANCE);
  g_autoptr (BtFilm) film = bt_film_new (spectrum);
  BtCurve *curve;
  gsize n;
  const double *noise = bt_spectrum_get_noise (spectrum, &n);

  bt_film_set_blank (film, blank);
  curve = bt_film_light_path (film, NULL, NULL);
  g_assert_cmpuint (curve->n, ==, N);
  g_assert_cmpuint (curve->flags->len, ==, 0);
  for (guint i = 0; i < N; i++)
    {
      const double place = (bt_nm_from_ev (curve->energy_ev[i]) - 600) / 5;

      g_assert_cmpfloat_with_epsilon (curve->absorbance[i], 0.3 + 0.2 * exp (-pow ((place - 50) / 10, 2)), 1e-12);
      /* The blank's noise comes on top of the film's. */
      g_assert_cmpfloat (curve->absorbance_u[i], >, noise[i]);
    }
  bt_curve_free (curve);
}

static void
test_blank_too_short (void)
{
  g_autoptr (BtSpectrum) spectrum = make (600, 5, 0.3, BT_Y_ABSORBANCE), blank = make (702, 3.99, 0, BT_Y_ABSORBANCE);
  g_autoptr (BtFilm) film = bt_film_new (spectrum);
  BtCurve *curve;

  bt_film_set_blank (film, blank);
  curve = bt_film_light_path (film, NULL, NULL);
  /* 705 to 1100 nm of 600 to 1100 nm: the blank goes from 702 to 1101 nm. */
  g_assert_cmpuint (curve->n, ==, 80);
  g_assert_nonnull (bt_flags_find (curve->flags, "blank-short"));
  g_assert_cmpfloat_with_epsilon (bt_nm_from_ev (curve->energy_ev[curve->n - 1]), 705, 1e-9);
  bt_curve_free (curve);
}

static void
test_without_blank (void)
{
  g_autoptr (BtSpectrum) spectrum = make (600, 5, 0.3, BT_Y_ABSORBANCE);
  g_autoptr (BtFilm) film = bt_film_new (spectrum);
  BtCurve *curve = bt_film_light_path (film, NULL, NULL);

  g_assert_nonnull (bt_flags_find (curve->flags, "no-blank"));
  g_assert_cmpmem (curve->absorbance, sizeof (double) * N, bt_spectrum_get_absorbance (spectrum, NULL), sizeof (double) * N);
  bt_curve_free (curve);
}

/* A file of absorption coefficients is one already: "absorbance" is alpha / ln 10, and a thickness of 1 cm gives alpha back. */
static void
test_alpha_file (void)
{
  g_autoptr (BtSpectrum) spectrum = make (600, 5, 0.3, BT_Y_ALPHA_PER_CM);
  g_autoptr (BtFilm) film = bt_film_new (spectrum);
  BtCurve *curve = bt_film_light_path (film, NULL, NULL);
  const double *raw = bt_spectrum_get_raw_y (spectrum, NULL);

  for (guint i = 0; i < N; i++)
    g_assert_cmpfloat_with_epsilon (bt_alpha_per_cm (curve->absorbance[i], 1e7), raw[N - 1 - i], 1e-9 * raw[N - 1 - i]);
  g_assert_nonnull (strstr (curve->path, "absorption coefficient"));
  g_assert_null (bt_flags_find (curve->flags, "no-blank"));
  bt_curve_free (curve);
}

/* alpha = ln 10 A / t by definition; its uncertainty by JCGM 100:2008 eq. 10 and 12; worked out by hand. */
static void
test_alpha (void)
{
  g_assert_cmpfloat_with_epsilon (bt_alpha_per_cm (0.5, 50), 230259, 0.5);
  g_assert_cmpfloat_with_epsilon (bt_alpha_per_cm (0.123, 25), 113287, 0.5);
  g_assert_cmpfloat_with_epsilon (bt_alpha_per_cm (0.05, 12), 95941, 0.5);
  g_assert_cmpfloat_with_epsilon (bt_alpha_u_per_cm (0.5, 0.002, 50, 2.5), 11549.7, 0.1);
  g_assert_cmpfloat_with_epsilon (bt_alpha_u_per_cm (0.5, 0.002, 50, 2.5) / bt_alpha_per_cm (0.5, 50), 0.0501597, 1e-6);
  /* A = 0 has an uncertainty too. */
  g_assert_cmpfloat_with_epsilon (bt_alpha_u_per_cm (0, 0.002, 50, 2.5), BT_LN10 * 0.002 / 50e-7, 1e-6);
  g_assert_true (isnan (bt_alpha_per_cm (0.5, 0)));
  g_assert_true (isnan (bt_alpha_u_per_cm (0.5, 0.1, 0, 0)));
  g_assert_cmpfloat_with_epsilon (bt_absorptance (1), 0.9, 1e-15);
  g_assert_cmpfloat_with_epsilon (bt_absorptance (0.301029995663981), 0.5, 1e-12);
  g_assert_cmpfloat (bt_absorptance (0), ==, 0);
}

static void
count (GObject *object, GParamSpec *property, gpointer data)
{
  ++*(guint *) data;
}

static void
test_properties (void)
{
  static const char text[] = "# Film = F 12\n# LOT: L 3\n# thickness_nm = 55,5\n# Thickness u nm = 3\n# substrate = fused silica\nnm,A\n"
                             "900,0.9\n901,0.8\n902,0.7\n903,0.6\n904,0.5\n905,0.4\n906,0.3\n907,0.2\n";
  g_autoptr (GBytes) bytes = g_bytes_new_static (text, sizeof text - 1);
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, "folder/f12.csv", NULL, NULL);
  g_autoptr (BtFilm) film = bt_film_new (g_ptr_array_index (spectra, 0)), copy = NULL;
  g_autofree char *label = NULL;
  guint n_label = 0, n_thickness = 0, n_u = 0;

  g_assert_cmpstr (bt_film_get_label (film), ==, "F 12");
  g_assert_cmpstr (bt_film_get_lot (film), ==, "L 3");
  g_assert_cmpstr (bt_film_get_substrate (film), ==, "fused silica");
  g_assert_cmpfloat (bt_film_get_thickness_nm (film), ==, 55.5);
  g_assert_cmpfloat (bt_film_get_thickness_u_nm (film), ==, 3);
  g_signal_connect (film, "notify::label", G_CALLBACK (count), &n_label);
  g_signal_connect (film, "notify::thickness-nm", G_CALLBACK (count), &n_thickness);
  g_signal_connect (film, "notify::thickness-u-nm", G_CALLBACK (count), &n_u);
  bt_film_set_label (film, "F 12");
  g_assert_cmpuint (n_label, ==, 0);
  g_object_set (film, "label", "F 13", "thickness-nm", 60.0, NULL);
  bt_film_set_thickness (film, 60, 2);
  g_assert_cmpuint (n_label, ==, 1);
  g_assert_cmpuint (n_thickness, ==, 1);
  g_assert_cmpuint (n_u, ==, 1);
  copy = bt_film_copy (film);
  g_object_get (copy, "label", &label, NULL);
  g_assert_cmpstr (label, ==, "F 13");
  g_assert_cmpfloat (bt_film_get_thickness_nm (copy), ==, 60);
  g_assert_true (bt_film_get_spectrum (copy) == bt_film_get_spectrum (film));
}

/* Without a name in it a film is called after its file. */
static void
test_label (void)
{
  static const char text[] = "nm,A\n900,0.9\n901,0.8\n902,0.7\n903,0.6\n904,0.5\n905,0.4\n906,0.3\n907,0.2\n";
  g_autoptr (GBytes) bytes = g_bytes_new_static (text, sizeof text - 1);
  g_autoptr (GPtrArray) spectra = bt_spectrum_read_bytes (bytes, "folder/f12.csv", NULL, NULL);
  g_autoptr (BtFilm) film = bt_film_new (g_ptr_array_index (spectra, 0));

  g_assert_cmpstr (bt_film_get_label (film), ==, "f12.csv");
  g_assert_cmpfloat (bt_film_get_thickness_nm (film), ==, 0);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/film/blank", test_blank);
  g_test_add_func ("/film/blank-too-short", test_blank_too_short);
  g_test_add_func ("/film/without-blank", test_without_blank);
  g_test_add_func ("/film/alpha-file", test_alpha_file);
  g_test_add_func ("/film/alpha", test_alpha);
  g_test_add_func ("/film/properties", test_properties);
  g_test_add_func ("/film/label", test_label);
  return g_test_run ();
}
