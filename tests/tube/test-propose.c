/* The proposed diameter window: on a measured film, on a short range, on a doped film, and where there is nothing to go by. */
#include <bandtally/bandtally.h>

#include <math.h>

/* (transfer full) */
static BtSpectrum *
spectrum_of (const BtForecast *forecast)
{
  const gsize n = bt_forecast_n_points (forecast);
  g_autofree double *x = g_new (double, n), *y = g_new (double, n);
  g_autoptr (GError) error = NULL;
  BtSpectrum *spectrum;

  bt_forecast_compute (forecast, x, y, &error);
  g_assert_no_error (error);
  spectrum = bt_spectrum_new (x, y, n, BT_X_NM, BT_Y_ABSORBANCE, "", &error);
  g_assert_no_error (error);
  return spectrum;
}

static gboolean
propose (BtSpectrum *spectrum, BtDiameterWindow *window)
{
  gsize n;
  const double *energy_ev = bt_spectrum_get_energy_ev (spectrum, &n);

  return bt_diameter_window_propose (energy_ev, bt_spectrum_get_absorbance (spectrum, NULL), n, window, NULL);
}

/* The measured, unsorted film of Ermolaev et al., Appl. Phys. Lett. 116, 231103 (2020) (CC0 1.0). Its curve's own minima of the
 * second derivative, S11 0.616, S22 1.046 and M11 1.616 eV, have to lie in the windows of the plan that is proposed for it;
 * tubes from floating-catalyst growth are 1.5 to 2.1 nm wide (from memory). */
static void
test_measured_film (void)
{
  static const struct { BtGroup group; double centre_ev; } rows[] = { { BT_S11, 0.616 }, { BT_S22, 1.046 }, { BT_M11, 1.616 } };
  g_autofree char *path = g_test_build_filename (G_TEST_DIST, "films", "unsorted-film-2020.csv", NULL);
  g_autoptr (GError) error = NULL;
  g_autoptr (BtSpectrum) spectrum = bt_spectrum_new_from_file (path, &error);
  BtDiameterWindow window;
  BtBandPlan plan;

  g_assert_no_error (error);
  g_assert_true (propose (spectrum, &window));
  g_test_message ("proposed %.3f nm, spread %.3f nm", window.mean_nm, window.spread_nm);
  g_assert_cmpfloat (window.mean_nm, >, 1.5);
  g_assert_cmpfloat (window.mean_nm, <, 2.1);
  bt_band_plan_init (&plan, window, 0.04, (BtRange){ 0.5, 3 });
  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      g_assert_cmpfloat (plan.bands[rows[i].group].low_ev, <, rows[i].centre_ev);
      g_assert_cmpfloat (plan.bands[rows[i].group].high_ev, >, rows[i].centre_ev);
    }
}

/* Acid can bleach nearly all of S11: still within 0.06 nm, as for an undoped film. Instruments that end at 1100 nm see M11 and
 * at best S22, whose pattern alone tells less: within 0.1 nm. */
static void
test_short_and_doped (void)
{
  for (int i = 0; i < 20; i++)
    {
      BtForecast forecast;
      g_autoptr (BtSpectrum) spectrum = NULL;
      BtDiameterWindow window;
      BtBandPlan truth, plan;

      bt_forecast_init (&forecast);
      forecast.window.mean_nm = 0.9 + 0.05 * (i / 2 * 2);
      forecast.window.spread_nm = 0.07 * forecast.window.mean_nm;
      forecast.fraction = 0.9;
      forecast.abundance_scatter = 0.35;
      forecast.jitter_ev = 0.006;
      forecast.seed = 900 + (guint) i;
      if (i % 2 == 0)
        forecast.high_nm = 1100;
      else
        forecast.bleach = 0.9;
      spectrum = spectrum_of (&forecast);
      g_assert_true (propose (spectrum, &window));
      g_test_message ("%s %.2f nm: proposed %.3f nm", i % 2 == 0 ? "short" : "doped", forecast.window.mean_nm, window.mean_nm);
      if (i % 2 == 0)
        g_assert_cmpfloat_with_epsilon (window.mean_nm, forecast.window.mean_nm, 0.1);
      else
        g_assert_cmpfloat_with_epsilon (window.mean_nm, forecast.window.mean_nm, 0.06);
      /* What it is for: the fit has to be allowed to put the bands where they are. */
      bt_band_plan_init (&truth, forecast.window, forecast.shift_ev, (BtRange){ 0.5, 3 });
      bt_band_plan_init (&plan, window, 0.04, (BtRange){ 0.5, 3 });
      for (BtGroup group = BT_S11; group <= BT_M11; group++)
        {
          g_assert_cmpfloat (plan.bands[group].low_ev, <, truth.bands[group].centre_ev);
          g_assert_cmpfloat (plan.bands[group].high_ev, >, truth.bands[group].centre_ev);
        }
    }
}

/* Tails without any band: nothing is proposed, and the window stays at what is said for that case. */
static void
test_no_bands (void)
{
  static const BtTail tails[] = { { BT_TAIL_PLASMON, 0.9, { 4.6, 1.3 }, 0.01 },
                                  { BT_TAIL_POWER, 0.3, { 1.3, 0 }, 0.01 },
                                  { BT_TAIL_EXPONENTIAL, 0.3, { 0.0015, 0 }, 0.01 } };

  for (gsize i = 0; i < 2 * G_N_ELEMENTS (tails); i++)
    {
      BtForecast forecast;
      g_autoptr (BtSpectrum) spectrum = NULL;
      BtDiameterWindow window;

      bt_forecast_init (&forecast);
      forecast.s22_absorbance = 1e-9;
      forecast.tail = tails[i / 2];
      forecast.noise = i % 2 == 0 ? 0 : 5e-4;
      spectrum = spectrum_of (&forecast);
      g_assert_false (propose (spectrum, &window));
      g_assert_cmpfloat (window.mean_nm, ==, 1.4);
      g_assert_cmpfloat (window.spread_nm, ==, 0.1);
    }
}

/* The absolute height says nothing about diameters: any unit of absorbance or absorption coefficient gives the same window. */
static void
test_any_scale (void)
{
  BtForecast forecast;
  BtDiameterWindow thin, thick;
  g_autoptr (BtSpectrum) a = NULL, b = NULL;

  bt_forecast_init (&forecast);
  forecast.noise = 0;
  a = spectrum_of (&forecast);
  forecast.thickness_nm = 400;
  b = spectrum_of (&forecast);
  g_assert_true (propose (a, &thin));
  g_assert_true (propose (b, &thick));
  g_assert_cmpfloat_with_epsilon (thin.mean_nm, thick.mean_nm, 1e-9);
  g_assert_cmpfloat_with_epsilon (thin.spread_nm, thick.spread_nm, 1e-9);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/propose/measured-film", test_measured_film);
  g_test_add_func ("/propose/short-and-doped", test_short_and_doped);
  g_test_add_func ("/propose/no-bands", test_no_bands);
  g_test_add_func ("/propose/any-scale", test_any_scale);
  return g_test_run ();
}
