/* Forecasts: what is put in comes out, and the same seed gives the same file. */
#include <bandtally/bandtally.h>

#include <math.h>
#include <string.h>

typedef struct { gsize n; double *x, *y; } Curve;

static Curve
compute (const BtForecast *forecast)
{
  Curve curve = { bt_forecast_n_points (forecast), NULL, NULL };
  g_autoptr (GError) error = NULL;

  curve.x = g_new (double, curve.n);
  curve.y = g_new (double, curve.n);
  bt_forecast_compute (forecast, curve.x, curve.y, &error);
  g_assert_no_error (error);
  return curve;
}

static void
clear (Curve *curve)
{
  g_free (curve->x);
  g_free (curve->y);
}

/* Integral over energy of what is above the tail. */
static double
area_of (const Curve *curve)
{
  double sum = 0;

  for (gsize i = 0; i + 1 < curve->n; i++)
    sum += (bt_ev_from_nm (curve->x[i]) - bt_ev_from_nm (curve->x[i + 1])) * (curve->y[i] + curve->y[i + 1]) / 2;
  return sum;
}

/* The whole area is linear in the fraction: films of metallic and of semiconducting tubes alone mix by their carbon. */
static void
test_mixes (void)
{
  BtForecast forecast;
  double areas[3];

  for (int i = 0; i < 3; i++)
    {
      Curve curve;

      bt_forecast_init (&forecast);
      forecast.noise = 0;
      forecast.tail.height = forecast.tail.offset = 0;
      forecast.fraction = i / 2.0;
      forecast.low_nm = 200;
      forecast.high_nm = 6000;
      curve = compute (&forecast);
      areas[i] = area_of (&curve);
      clear (&curve);
    }
  g_assert_cmpfloat (areas[0], >, 0);
  g_assert_cmpfloat_with_epsilon (areas[1], (areas[0] + areas[2]) / 2, 1e-9 * areas[1]);
}

/* A window about one tube: its S22 alone, integrated between S11 and S33, has the area that the crown's height and width make. */
static void
test_single_line (void)
{
  BtForecast forecast;
  Curve curve;
  double sum = 0, wanted;

  bt_forecast_init (&forecast);
  forecast.window = (BtDiameterWindow){ bt_tube_diameter_nm ((BtTube){ 6, 5 }), 0.01 };
  forecast.fraction = 1;
  forecast.noise = forecast.sideband = forecast.lorentzian = forecast.abundance_scatter = forecast.jitter_ev = 0;
  forecast.tail.height = forecast.tail.offset = 0;
  forecast.step_nm = 0.25;
  curve = compute (&forecast);
  for (gsize i = 0; i + 1 < curve.n; i++)
    if (fabs (bt_ev_from_nm (curve.x[i]) - bt_tube_energy_ev ((BtTube){ 6, 5 }, BT_S22, 0, BT_REFERENCE_EMPIRICAL) + forecast.shift_ev) < 0.25)
      sum += (bt_ev_from_nm (curve.x[i]) - bt_ev_from_nm (curve.x[i + 1])) * (curve.y[i] + curve.y[i + 1]) / 2;
  wanted = BT_GAUSSIAN_AREA * forecast.fwhm_ev[BT_S22] * forecast.s22_absorbance;
  /* (9,1) has the same diameter as (6,5), so the crown belongs to two tubes and only the share of (6,5) lies here. */
  g_assert_cmpfloat (sum, >, 0.3 * wanted);
  g_assert_cmpfloat (sum, <, 1.6 * wanted);
  clear (&curve);
}

static void
test_same_seed (void)
{
  BtForecast forecast;
  g_autofree char *first = NULL, *second = NULL, *other = NULL;

  bt_forecast_init (&forecast);
  forecast.abundance_scatter = 0.3;
  first = bt_forecast_to_text (&forecast, "F", "L", NULL);
  second = bt_forecast_to_text (&forecast, "F", "L", NULL);
  forecast.seed = 2;
  other = bt_forecast_to_text (&forecast, "F", "L", NULL);
  g_assert_cmpstr (first, ==, second);
  g_assert_cmpstr (first, !=, other);
  g_assert_true (g_str_has_prefix (first, "# Invented data"));
}

/* Twice the thickness, twice the absorbance; and the reader gets back what the writer wrote. */
static void
test_thickness_and_text (void)
{
  BtForecast forecast;
  Curve thin, thick;
  g_autofree char *text = NULL;
  g_autoptr (GBytes) bytes = NULL;
  g_autoptr (GPtrArray) spectra = NULL;
  g_autoptr (BtFilm) film = NULL;
  g_autoptr (GError) error = NULL;
  const double *y;

  bt_forecast_init (&forecast);
  forecast.noise = 0;
  thin = compute (&forecast);
  forecast.thickness_nm = 200;
  thick = compute (&forecast);
  for (gsize i = 0; i < thin.n; i += 100)
    g_assert_cmpfloat_with_epsilon (thick.y[i], 2 * thin.y[i], 1e-12);
  text = bt_forecast_to_text (&forecast, "Film A", "Lot B", &error);
  g_assert_no_error (error);
  bytes = g_bytes_new (text, strlen (text));
  spectra = bt_spectrum_read_bytes (bytes, "forecast", NULL, &error);
  g_assert_no_error (error);
  film = bt_film_new (g_ptr_array_index (spectra, 0));
  g_assert_cmpstr (bt_film_get_label (film), ==, "Film A");
  g_assert_cmpstr (bt_film_get_lot (film), ==, "Lot B");
  g_assert_cmpfloat (bt_film_get_thickness_nm (film), ==, 200);
  y = bt_spectrum_get_raw_y (g_ptr_array_index (spectra, 0), NULL);
  for (gsize i = 0; i < thick.n; i += 100)
    g_assert_cmpfloat_with_epsilon (y[i], thick.y[i], 5.1e-6);
  clear (&thin);
  clear (&thick);
}

/* A ceiling of stray light: A_read = -log10 ((T + s) / (1 + s)); s = 1e-3 turns A = 2 into 1.95904 (worked out by hand). */
static void
test_ceiling (void)
{
  BtForecast forecast;
  Curve free_curve, bent;

  bt_forecast_init (&forecast);
  forecast.noise = 0;
  forecast.thickness_nm = 300;
  free_curve = compute (&forecast);
  forecast.ceiling = 3;
  bent = compute (&forecast);
  for (gsize i = 0; i < bent.n; i++)
    {
      g_assert_cmpfloat (bent.y[i], <, 3.0005);
      if (fabs (free_curve.y[i] - 2) < 0.002)
        g_assert_cmpfloat_with_epsilon (bent.y[i] - free_curve.y[i], 1.95904 - 2, 5e-4);
    }
  clear (&free_curve);
  clear (&bent);
}

static void
test_refused (void)
{
  for (int i = 0; i < 6; i++)
    {
      BtForecast forecast;
      double x[4096], y[4096];
      g_autoptr (GError) error = NULL;

      bt_forecast_init (&forecast);
      switch (i)
        {
        case 0: forecast.fraction = 1.2; break;
        case 1: forecast.window.mean_nm = 0; break;
        case 2: forecast.low_nm = 2600; break;
        case 3: forecast.step_nm = 0; break;
        case 4: forecast.thickness_nm = -1; break;
        default: forecast.noise = NAN; break;
        }
      g_assert_false (bt_forecast_compute (&forecast, x, y, &error));
      g_assert_nonnull (error);
      g_assert_nonnull (strstr (error->message, "has to be"));
    }
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/forecast/mixes", test_mixes);
  g_test_add_func ("/forecast/single-line", test_single_line);
  g_test_add_func ("/forecast/same-seed", test_same_seed);
  g_test_add_func ("/forecast/thickness-and-text", test_thickness_and_text);
  g_test_add_func ("/forecast/ceiling", test_ceiling);
  g_test_add_func ("/forecast/refused", test_refused);
  return g_test_run ();
}
