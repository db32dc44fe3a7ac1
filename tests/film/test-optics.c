/* Film optics against numbers from outside: published dispersions and formulas worked by hand. */
#include <bandtally/bandtally.h>

#include <math.h>

/* Indices from the published Sellmeier coefficients: Malitson 1965 (fused silica), the Schott catalogue (N-BK7), Malitson and Dodge 1972 (sapphire,
 * ordinary ray), Malitson 1963 (CaF2); values computed from the coefficients, rounded n_d of handbooks from memory. */
static void
test_dispersion (void)
{
  static const struct { const char *name; double um, n, tolerance; } rows[] = {
    { "fused silica", 0.4, 1.4701161, 1e-6 }, { "fused silica", 0.5893, 1.4584027, 1e-6 }, { "fused silica", 0.55, 1.4599109, 1e-6 },
    { "fused silica", 1.55, 1.4440236, 1e-6 }, { "fused silica", 2.0, 1.4380854, 1e-6 }, { "N-BK7", 0.4, 1.5308485, 1e-6 },
    { "N-BK7", 1.0, 1.5075022, 1e-6 }, { "N-BK7", 2.0, 1.4945016, 1e-6 }, { "sapphire", 0.4, 1.7865212, 1e-6 }, { "sapphire", 1.55, 1.7461816, 1e-6 },
    { "CaF2", 0.4, 1.4418537, 1e-6 }, { "CaF2", 2.0, 1.4238552, 1e-6 },
    { "fused silica", 0.58756, 1.45846, 1e-5 }, { "N-BK7", 0.58756, 1.51680, 1e-5 }, { "CaF2", 0.58756, 1.43384, 1e-5 }, /* n_d, from memory */
  };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    g_assert_cmpfloat_with_epsilon (bt_substrate_index (rows[i].name, 1000 * rows[i].um), rows[i].n, rows[i].tolerance);
  g_assert_true (isnan (bt_substrate_index ("fused silica", 150)));
  g_assert_true (isnan (bt_substrate_index ("cardboard", 550)));
  g_assert_cmpfloat (bt_substrate_index ("Fused Silica", 550), ==, bt_substrate_index ("fused silica", 550));
  g_assert_nonnull (bt_substrate_source ("sapphire"));
}

/* A bare plate transmits 2 n / (n^2 + 1): fused silica 0.932451, N-BK7 0.918671, CaF2 0.938185 at 550 nm (worked out by hand). */
static void
test_bare_plate (void)
{
  static const struct { const char *name; double t; } rows[] = { { "fused silica", 0.932451 }, { "N-BK7", 0.918671 }, { "CaF2", 0.938185 } };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    g_assert_cmpfloat_with_epsilon (bt_slab_transmittance (bt_face_reflectance (bt_substrate_index (rows[i].name, 550)), 0), rows[i].t, 1e-6);
}

/* Slab formula and its inverse (worked out by hand). */
static void
test_slab (void)
{
  g_assert_cmpfloat_with_epsilon (bt_slab_transmittance (0.1, 0.5), 0.493104, 1e-6);
  g_assert_cmpfloat_with_epsilon (bt_slab_depth (0.1, 0.493103862), 0.5, 1e-6);
  g_assert_cmpfloat_with_epsilon (bt_slab_depth (0.2, 0.3), 0.766361, 1e-6);
  for (double r = 0; r < 0.6; r += 0.07)
    for (double depth = 0.01; depth < 8; depth *= 1.7)
      g_assert_cmpfloat_with_epsilon (bt_slab_depth (r, bt_slab_transmittance (r, depth)) / depth, 1, 1e-9);
  g_assert_true (isnan (bt_slab_depth (0.1, 0)));
}

/* Thin conducting film (Tinkham): numbers worked out by hand; graphene's e^2 / (4 hbar) absorbs pi times the fine-structure constant and lets
 * 97.7 % pass (Nair et al., Science 320, 1308 (2008)). */
static void
test_sheet (void)
{
  g_assert_cmpfloat_with_epsilon (bt_sheet_transmittance (1e-3, 1.46), 0.752028, 1e-6);
  g_assert_cmpfloat_with_epsilon (bt_sheet_conductance (0.9, 1.46), 0.000353217, 1e-9);
  g_assert_cmpfloat_with_epsilon (bt_sheet_conductance (0.9, 1), 0.000287169, 1e-9);
  g_assert_cmpfloat_with_epsilon (bt_sheet_transmittance (BT_UNIVERSAL_CONDUCTANCE_S, 1), 0.977463, 1e-6);
  g_assert_cmpfloat_with_epsilon (bt_sheet_transmittance (BT_UNIVERSAL_CONDUCTANCE_S, 1), 0.977, 5e-4);
  g_assert_cmpfloat_with_epsilon (bt_sheet_transmittance (BT_UNIVERSAL_CONDUCTANCE_S, 1.46), 0.981619, 1e-6);
  g_assert_cmpfloat_with_epsilon (BT_Z0_OHM * BT_UNIVERSAL_CONDUCTANCE_S, 0.0229253, 1e-7);
}

/* Ratio of dc to optical conductivity, free-standing form (Dressel and Gruner; De and Coleman 2011), worked out by hand. */
static void
test_conductivity_ratio (void)
{
  static const struct { double t, r, ratio; } rows[] = { { 0.9, 100, 34.8228 }, { 0.9, 10, 348.228 }, { 0.85, 60, 37.0861 }, { 0.97, 1000, 12.2744 },
                                                         { 0.8, 50, 31.9171 } };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    g_assert_cmpfloat_with_epsilon (bt_conductivity_ratio (rows[i].r, rows[i].t, 1) / rows[i].ratio, 1, 1e-4);
}

static BtFilm *
film_of (double (*absorbance) (double nm), const char *substrate)
{
  double x[101], y[101];
  g_autoptr (BtSpectrum) spectrum = NULL;
  g_autoptr (GError) error = NULL;
  BtFilm *film;

  for (int i = 0; i <= 100; i++)
    {
      x[i] = 400 + 10 * i;
      y[i] = absorbance (x[i]);
    }
  spectrum = bt_spectrum_new (x, y, 101, BT_X_NM, BT_Y_ABSORBANCE, "film", &error);
  g_assert_no_error (error);
  film = bt_film_new (spectrum);
  bt_film_set_substrate (film, substrate);
  return film;
}

static double
depth_at (double nm)
{
  return 0.4 + 0.2 * sin (nm / 90);
}

/* A reading made by the slab formula comes back as its optical depth, whatever the index does with wavelength. */
static double
slab_reading (double nm)
{
  return -log10 (bt_slab_transmittance (bt_face_reflectance (bt_substrate_index ("N-BK7", nm)), depth_at (nm)));
}

static double
sheet_reading (double nm)
{
  return -log10 (bt_sheet_transmittance (1e-4 * (1 + depth_at (nm)), bt_substrate_index ("fused silica", nm)));
}

static double
blank_reading (double nm)
{
  return 0.03 + 1e-5 * nm + 1e-4 * (((int) nm / 10) % 2);
}

static void
test_paths (void)
{
  g_autoptr (BtFilm) slab = film_of (slab_reading, "N-BK7"), sheet = film_of (sheet_reading, "fused silica");
  g_autoptr (BtFilm) blank = film_of (blank_reading, "");
  BtLightPath how = BT_LIGHT_PATH_INIT;
  BtCurve *curve;

  how.kind = BT_LIGHT_PATH_REFLECTION;
  curve = bt_film_light_path (slab, &how, NULL);
  g_assert_cmpuint (curve->n, ==, 101);
  for (gsize i = 0; i < curve->n; i++)
    g_assert_cmpfloat_with_epsilon (curve->absorbance[i] * BT_LN10, depth_at (bt_nm_from_ev (curve->energy_ev[i])), 1e-9);
  bt_curve_free (curve);

  how.kind = BT_LIGHT_PATH_THIN_FILM;
  curve = bt_film_light_path (sheet, &how, NULL);
  for (gsize i = 0; i < curve->n; i++)
    {
      double nm = bt_nm_from_ev (curve->energy_ev[i]), index = bt_substrate_index ("fused silica", nm);
      double s = curve->absorbance[i] * BT_LN10 * (1 + index) / (2 * BT_Z0_OHM);

      g_assert_cmpfloat_with_epsilon (s / (1e-4 * (1 + depth_at (nm))), 1, 1e-9);
    }
  g_assert_nonnull (bt_flags_find (curve->flags, "no-blank"));
  bt_curve_free (curve);

  /* Without an index nothing is invented: the blank ratio stands, and the flag says why. */
  bt_film_set_substrate (sheet, "oilcloth");
  curve = bt_film_light_path (sheet, &how, NULL);
  g_assert_nonnull (bt_flags_find (curve->flags, "no-substrate-index"));
  g_assert_cmpfloat_with_epsilon (curve->absorbance[50], bt_spectrum_get_absorbance (bt_film_get_spectrum (sheet), NULL)[50], 1e-15);
  bt_curve_free (curve);

  /* Blank ratio: A less the blank's A, their noises in quadrature. */
  bt_film_set_blank (slab, bt_film_get_spectrum (blank));
  curve = bt_film_light_path (slab, NULL, NULL);
  for (gsize i = 0; i < curve->n; i++)
    {
      double nm = bt_nm_from_ev (curve->energy_ev[i]);

      g_assert_cmpfloat_with_epsilon (curve->absorbance[i], slab_reading (nm) - blank_reading (round (nm)), 1e-9);
      g_assert_cmpfloat (curve->absorbance_u[i], >=, bt_spectrum_get_noise (bt_film_get_spectrum (blank), NULL)[i]);
    }
  g_assert_null (bt_flags_find (curve->flags, "no-blank"));
  bt_curve_free (curve);
}

/* For a film much thinner than the wavelength blank-ratio and bulk coefficients differ by 2 n / (1 + n_s): sigma 1e4 S/m, 50 nm, n = 1.5 on n_s = 1.46
 * gives 25115 and 29512 per cm (worked out by hand). */
static void
test_which_alpha (void)
{
  const double sigma = 1e4, t_m = 50e-9, bulk = BT_Z0_OHM * sigma / 1.5 / 100;
  const double apparent = -log (bt_sheet_transmittance (sigma * t_m, 1.46)) / (t_m * 100);

  g_assert_cmpfloat_with_epsilon (bulk, 25115.4, 0.1);
  g_assert_cmpfloat_with_epsilon (apparent, 29512.5, 0.1);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/optics/dispersion", test_dispersion);
  g_test_add_func ("/optics/bare-plate", test_bare_plate);
  g_test_add_func ("/optics/slab", test_slab);
  g_test_add_func ("/optics/sheet", test_sheet);
  g_test_add_func ("/optics/conductivity-ratio", test_conductivity_ratio);
  g_test_add_func ("/optics/paths", test_paths);
  g_test_add_func ("/optics/which-alpha", test_which_alpha);
  return g_test_run ();
}
