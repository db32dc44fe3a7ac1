/* The forecast: what must hold for the spectrum of any invented film, and what it refuses. */
#include <bandtally/bandtally.h>

#include <math.h>
#include <string.h>

/* No noise, no faults, no tail, no wings, no sideband: nothing but bands. */
static BtForecast
bare (void)
{
  BtForecast forecast;

  bt_forecast_init (&forecast);
  forecast.noise = 0;
  forecast.lorentzian = 0;
  forecast.sideband = 0;
  forecast.tail.height = 0;
  forecast.tail.offset = 0;
  return forecast;
}

/* (transfer full): the absorbance; its wavelengths in @wavelength_nm. */
static double *
compute (const BtForecast *forecast, double **wavelength_nm)
{
  const gsize n = bt_forecast_n_points (forecast);
  double *x = g_new (double, n), *y = g_new (double, n);
  g_autoptr (GError) error = NULL;

  g_assert_true (bt_forecast_compute (forecast, x, y, &error));
  g_assert_no_error (error);
  if (wavelength_nm != NULL)
    *wavelength_nm = x;
  else
    g_free (x);
  return y;
}

static char *
text_of (const BtForecast *forecast, const char *film)
{
  g_autoptr (GError) error = NULL;
  char *text = bt_forecast_to_text (forecast, film, "Some Lot", &error);

  g_assert_no_error (error);
  return text;
}

/* Area over energy between two energies, by trapezia on the (descending) energies of the wavelength axis. */
static double
area (const double *wavelength_nm, const double *absorbance, gsize n, double low_ev, double high_ev)
{
  double sum = 0;

  for (gsize i = 1; i < n; i++)
    {
      double a = BT_HC_EV_NM / wavelength_nm[i], b = BT_HC_EV_NM / wavelength_nm[i - 1];

      if (a >= low_ev && b <= high_ev)
        sum += (absorbance[i] + absorbance[i - 1]) / 2 * (b - a);
    }
  return sum;
}

/* With lines so narrow that the groups of 1.4 nm tubes stand apart, integrating the curve itself gives back the fraction,
 * whatever the strength ratio, the scatter and the jitter. */
static void
test_fraction (void)
{
  static const struct
  {
    double fraction, ratio;
  } rows[] = { { 2.0 / 3, 1 }, { 0.9, 0.8 }, { 0.99, 1.3 }, { 0.05, 1 }, { 0, 1 }, { 1, 1 } };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      BtForecast forecast = bare ();
      g_autofree double *x = NULL, *y = NULL;
      double s22, m11;

      forecast.window = (BtDiameterWindow){ 1.4, 0.03 };
      forecast.fraction = rows[i].fraction;
      forecast.strength_ratio = rows[i].ratio;
      forecast.abundance_scatter = 0.4;
      forecast.jitter_ev = 0.005;
      forecast.fwhm_ev[BT_S22] = 0.04;
      forecast.fwhm_ev[BT_M11] = 0.04;
      forecast.fwhm_ev[BT_S33] = 0.04;
      forecast.step_nm = 0.5;
      y = compute (&forecast, &x);
      s22 = area (x, y, bt_forecast_n_points (&forecast), 1.0, 1.48) / rows[i].ratio;
      m11 = area (x, y, bt_forecast_n_points (&forecast), 1.48, 2.05);
      g_test_message ("%.4f made, %.5f by area", rows[i].fraction, s22 / (s22 + m11));
      g_assert_cmpfloat_with_epsilon (s22 / (s22 + m11), rows[i].fraction, 1e-3);
    }
}

/* The whole area is linear in the fraction: films of metallic and of semiconducting tubes alone mix by their carbon. */
static void
test_mixes (void)
{
  double areas[3];

  for (int i = 0; i < 3; i++)
    {
      BtForecast forecast = bare ();
      g_autofree double *x = NULL, *y = NULL;

      forecast.fraction = i / 2.0;
      forecast.low_nm = 200;
      forecast.high_nm = 6000;
      y = compute (&forecast, &x);
      areas[i] = area (x, y, bt_forecast_n_points (&forecast), 0, 10);
    }
  g_assert_cmpfloat (areas[0], >, 0);
  g_assert_cmpfloat_with_epsilon (areas[1], (areas[0] + areas[2]) / 2, 1e-9 * areas[1]);
}

/* Areas by group for unit strength of M11, all groups apart: the stated strengths per carbon. */
static void
test_strengths (void)
{
  BtForecast forecast = bare ();
  g_autofree double *x = NULL, *y = NULL, *z = NULL;
  gsize n;
  double s11, s22, bleached;

  forecast.window = (BtDiameterWindow){ 1.4, 0.03 };
  forecast.fraction = 1;
  forecast.fwhm_ev[BT_S11] = forecast.fwhm_ev[BT_S22] = 0.04;
  n = bt_forecast_n_points (&forecast);
  y = compute (&forecast, &x);
  s11 = area (x, y, n, 0.55, 0.95);
  s22 = area (x, y, n, 1.0, 1.48);
  g_assert_cmpfloat_with_epsilon (s11 / s22, 1.6, 5e-3);
  /* Doping takes its share of S11 and a tenth of that of S22. */
  forecast.bleach = 0.75;
  z = compute (&forecast, NULL);
  bleached = area (x, z, n, 0.55, 0.95);
  g_assert_cmpfloat_with_epsilon (bleached / s11, 0.25, 1e-6);
  bleached = area (x, z, n, 1.0, 1.48);
  g_assert_cmpfloat_with_epsilon (bleached / s22, 0.925, 1e-6);
}

/* The crown of S22 stands at the stated height for 100 nm; all of the film goes with the thickness. */
static void
test_scale (void)
{
  BtForecast forecast = bare ();
  g_autofree double *x = NULL, *thin = NULL, *thick = NULL;
  double crown = 0;

  forecast.fraction = 1;
  forecast.s22_absorbance = 0.4;
  thin = compute (&forecast, &x);
  for (gsize i = 0; i < bt_forecast_n_points (&forecast); i++)
    if (BT_HC_EV_NM / x[i] > 1.0 && BT_HC_EV_NM / x[i] < 1.45)
      crown = fmax (crown, thin[i]);
  g_assert_cmpfloat_with_epsilon (crown, 0.4, 2e-3);
  g_free (thin);
  bt_forecast_init (&forecast);
  forecast.noise = 0;
  thin = compute (&forecast, NULL);
  forecast.thickness_nm = 250;
  thick = compute (&forecast, NULL);
  for (gsize i = 0; i < bt_forecast_n_points (&forecast); i++)
    g_assert_cmpfloat_with_epsilon (thick[i], 2.5 * thin[i], 1e-12);
}

/* The same seed gives the same bytes; another seed other noise, and seeds of any size come back from the preamble whole. */
static void
test_seed (void)
{
  BtForecast forecast;
  g_autofree char *a = NULL, *b = NULL, *c = NULL;

  bt_forecast_init (&forecast);
  forecast.abundance_scatter = 0.3;
  forecast.jitter_ev = 0.006;
  forecast.seed = 123456789;
  a = text_of (&forecast, "A");
  b = text_of (&forecast, "A");
  g_assert_cmpstr (a, ==, b);
  g_assert_nonnull (strstr (a, "\n# made with seed = 123456789\n"));
  forecast.seed++;
  c = text_of (&forecast, "A");
  g_assert_cmpstr (strstr (a, "\nwavelength_nm"), !=, strstr (c, "\nwavelength_nm"));
}

/* Noise of the stated size where the film is clear, and (1 + 10^A) / 2 times as large at A = 1. */
static void
test_noise (void)
{
  static const struct
  {
    double offset, factor;
  } rows[] = { { 0, 1 }, { 1, 5.5 } };

  for (gsize r = 0; r < G_N_ELEMENTS (rows); r++)
    {
      BtForecast forecast = bare ();
      g_autofree double *clean = NULL, *noisy = NULL;
      double squares = 0;
      gsize n;

      forecast.s22_absorbance = 1e-9;
      forecast.tail.offset = rows[r].offset;
      n = bt_forecast_n_points (&forecast);
      clean = compute (&forecast, NULL);
      forecast.noise = 1e-3;
      noisy = compute (&forecast, NULL);
      for (gsize i = 0; i < n; i++)
        squares += (noisy[i] - clean[i]) * (noisy[i] - clean[i]);
      /* 2201 draws: a relative standard deviation of 1.5 %; four of them. */
      g_assert_cmpfloat_with_epsilon (sqrt (squares / (double)n) / (1e-3 * rows[r].factor), 1, 0.06);
    }
}

/* The step lifts what lies above its wavelength; stray light of 1e-3 reads 1, 2 and 3 as 0.99611, 1.95904 and 2.69940 (worked
 * out by hand). */
static void
test_instrument (void)
{
  static const struct
  {
    double a, read;
  } rows[] = { { 1, 0.99611 }, { 2, 1.95904 }, { 3, 2.69940 } };
  BtForecast forecast;
  g_autofree double *x = NULL, *plain = NULL, *stepped = NULL;

  bt_forecast_init (&forecast);
  forecast.noise = 0;
  plain = compute (&forecast, &x);
  forecast.step_at_nm = 860;
  forecast.step_size = -0.02;
  stepped = compute (&forecast, NULL);
  for (gsize i = 0; i < bt_forecast_n_points (&forecast); i++)
    g_assert_cmpfloat_with_epsilon (stepped[i] - plain[i], x[i] > 860 ? -0.02 : 0, 1e-12);
  for (gsize r = 0; r < G_N_ELEMENTS (rows); r++)
    {
      BtForecast flat = bare ();
      g_autofree double *y = NULL;

      flat.s22_absorbance = 1e-9;
      flat.tail.offset = rows[r].a;
      flat.ceiling = 3;
      y = compute (&flat, NULL);
      g_assert_cmpfloat_with_epsilon (y[0], rows[r].read, 1e-5);
    }
}

/* The file reads back through the program's own reader: same points, same values to the last printed place, the film's name, lot
 * and thickness; and no name breaks out of its line of the preamble. */
static void
test_text (void)
{
  BtForecast forecast;
  g_autofree char *text = NULL;
  g_autofree double *y = NULL;
  g_autoptr (GError) error = NULL;
  g_autoptr (GBytes) bytes = NULL;
  g_autoptr (GPtrArray) spectra = NULL;
  g_autoptr (BtFilm) film = NULL;
  const double *read;

  bt_forecast_init (&forecast);
  forecast.thickness_nm = 200;
  text = text_of (&forecast, "Film\n300,9.9");
  g_assert_true (g_str_has_prefix (text, "# Invented data"));
  bytes = g_bytes_new (text, strlen (text));
  spectra = bt_spectrum_read_bytes (bytes, "forecast", NULL, &error);
  g_assert_no_error (error);
  g_assert_cmpuint (spectra->len, ==, 1);
  film = bt_film_new (g_ptr_array_index (spectra, 0));
  g_assert_cmpstr (bt_film_get_label (film), ==, "Film 300,9.9");
  g_assert_cmpstr (bt_film_get_lot (film), ==, "Some Lot");
  g_assert_cmpfloat (bt_film_get_thickness_nm (film), ==, 200);
  y = compute (&forecast, NULL);
  read = bt_spectrum_get_raw_y (g_ptr_array_index (spectra, 0), NULL);
  g_assert_cmpuint (bt_spectrum_get_n_points (g_ptr_array_index (spectra, 0)), ==, bt_forecast_n_points (&forecast));
  for (gsize i = 0; i < bt_forecast_n_points (&forecast); i++)
    g_assert_cmpfloat_with_epsilon (read[i], y[i], 5.1e-6);
}

/* Every number that makes no film is refused with a sentence that names it; nothing is computed, nothing crashes. */
static void
test_refusals (void)
{
#define ROW(field, value, word)                                                                                                \
  {                                                                                                                            \
    offsetof (BtForecast, field), value, word                                                                                  \
  }
  static const struct
  {
    gsize offset;
    double value;
    const char *word;
  } rows[] = { ROW (window.mean_nm, 0.1, "mean diameter"),
               ROW (window.mean_nm, NAN, "mean diameter"),
               ROW (window.spread_nm, 0, "spread"),
               ROW (fraction, 1.01, "fraction"),
               ROW (fraction, NAN, "fraction"),
               ROW (strength_ratio, 0, "strength ratio"),
               ROW (shift_ev, 1, "red shift"),
               ROW (abundance_scatter, -0.1, "abundances"),
               ROW (jitter_ev, 0.5, "jitter"),
               ROW (fwhm_ev[BT_M11], 0, "width of M11"),
               ROW (fwhm_ev[BT_S44], NAN, "width of S44"),
               ROW (lorentzian, 2, "Lorentzian"),
               ROW (sideband, 0.9, "sideband"),
               ROW (s22_absorbance, 0, "S22"),
               ROW (tail.height, -1, "tail's height"),
               ROW (tail.shape[0], NAN, "pi-plasmon"),
               ROW (tail.shape[1], 0, "pi-plasmon"),
               ROW (tail.offset, INFINITY, "tail's offset"),
               ROW (low_nm, 0, "range"),
               ROW (low_nm, 2600, "range"),
               ROW (high_nm, NAN, "range"),
               ROW (step_nm, 0, "step"),
               ROW (step_nm, -1, "step"),
               ROW (step_nm, 1e-9, "step"),
               ROW (step_nm, 2000, "8 points"),
               ROW (noise, -1, "noise"),
               ROW (step_at_nm, NAN, "detector step"),
               ROW (step_size, INFINITY, "detector step"),
               ROW (bleach, 1.5, "bleached"),
               ROW (ceiling, -1, "ceiling"),
               ROW (thickness_nm, 0, "thickness"),
               ROW (thickness_u_nm, -1, "uncertainty of the thickness") };
#undef ROW

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      BtForecast forecast;
      g_autoptr (GError) error = NULL;

      bt_forecast_init (&forecast);
      memcpy ((char *)&forecast + rows[i].offset, &rows[i].value, sizeof (double));
      g_assert_null (bt_forecast_to_text (&forecast, "A", "B", &error));
      g_assert_nonnull (error);
      g_test_message ("%s", error->message);
      g_assert_nonnull (strstr (error->message, rows[i].word));
    }
}

/* The stated fraction holds for every window that is not refused: even the narrowest one has tubes of both kinds. */
static void
test_both_kinds (void)
{
  for (double mean_nm = 0.5; mean_nm <= 4; mean_nm += 0.005)
    {
      g_autoptr (GArray) tubes = bt_tubes_in_diameter (mean_nm - 0.04, mean_nm + 0.04);
      guint metallic = 0;

      for (guint i = 0; i < tubes->len; i++)
        metallic += bt_tube_kind (g_array_index (tubes, BtTube, i)) == BT_TUBE_METALLIC ? 1 : 0;
      g_assert_cmpuint (metallic, >, 0);
      g_assert_cmpuint (metallic, <, tubes->len);
    }
}

/* Whatever the order of changes, the tail is as high at 500 nm as the first one. */
static void
test_other_tails (void)
{
  const double at_ev = bt_ev_from_nm (500);
  BtForecast forecast;
  double first, other;

  bt_forecast_init (&forecast);
  bt_tail_eval (&forecast.tail, &at_ev, 1, &first);
  for (int round = 0; round < 2; round++)
    for (BtTailKind kind = 0; kind < BT_N_TAILS; kind++)
      {
        bt_forecast_set_tail (&forecast, kind);
        g_assert_cmpint (forecast.tail.kind, ==, kind);
        bt_tail_eval (&forecast.tail, &at_ev, 1, &other);
        g_assert_cmpfloat_with_epsilon (other, first, 1e-12);
      }
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/forecast/fraction", test_fraction);
  g_test_add_func ("/forecast/mixes", test_mixes);
  g_test_add_func ("/forecast/strengths", test_strengths);
  g_test_add_func ("/forecast/scale", test_scale);
  g_test_add_func ("/forecast/seed", test_seed);
  g_test_add_func ("/forecast/noise", test_noise);
  g_test_add_func ("/forecast/instrument", test_instrument);
  g_test_add_func ("/forecast/text", test_text);
  g_test_add_func ("/forecast/refusals", test_refusals);
  g_test_add_func ("/forecast/other-tails", test_other_tails);
  g_test_add_func ("/forecast/both-kinds", test_both_kinds);
  return g_test_run ();
}
