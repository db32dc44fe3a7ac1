/* Steps in forecast films: their bands, of any diameter, are never taken for a step, and a step among them is found. */
#include <bandtally/bandtally.h>

#include <math.h>

#define N_FILMS 40

static BtSpectrum *
film (guint i, double step_size, double *step_nm)
{
  BtForecast forecast;
  g_autofree double *x = NULL, *y = NULL;
  g_autoptr (GError) error = NULL;
  BtSpectrum *spectrum;
  gsize n;

  bt_forecast_init (&forecast);
  forecast.window.mean_nm = 0.9 + 0.9 * i / (N_FILMS - 1);
  forecast.window.spread_nm = 0.05 + 0.01 * (i % 8);
  forecast.fraction = 0.3 + 0.1 * (i % 8);
  forecast.noise = 2e-4 * (1 + i % 4);
  forecast.seed = 100 + i;
  forecast.step_at_nm = *step_nm = 800.5 + 10 * (i % 9);
  forecast.step_size = step_size;
  n = bt_forecast_n_points (&forecast);
  x = g_new (double, n);
  y = g_new (double, n);
  bt_forecast_compute (&forecast, x, y, &error);
  g_assert_no_error (error);
  spectrum = bt_spectrum_new (x, y, n, BT_X_NM, BT_Y_ABSORBANCE, "forecast", &error);
  g_assert_no_error (error);
  return spectrum;
}

static void
test_none (void)
{
  for (guint i = 0; i < N_FILMS; i++)
    {
      double step_nm;
      g_autoptr (BtSpectrum) spectrum = film (i, 0, &step_nm);
      gsize n;
      const BtStep *steps = bt_spectrum_get_steps (spectrum, &n);

      if (n > 0)
        g_test_message ("film %u: %+.4f at %.1f nm", i, -steps[0].size, bt_nm_from_ev (steps[0].energy_ev));
      g_assert_cmpuint (n, ==, 0);
      g_assert_null (bt_flags_find (bt_spectrum_get_flags (spectrum), "detector-step"));
      g_assert_null (bt_flags_find (bt_spectrum_get_flags (spectrum), "saturated"));
    }
}

/* All found, where they are; and their stated uncertainties neither too small nor too large: of 40 normal deviates the mean square lies between 0.55
 * and 1.6 in 99 cases of 100 (chi-squared of 40 degrees of freedom, quantiles 0.005 and 0.995: 20.7 and 66.8, from memory). */
static void
test_all (void)
{
  double squares = 0;

  for (guint i = 0; i < N_FILMS; i++)
    {
      double step_nm, off;
      g_autoptr (BtSpectrum) spectrum = film (i, 0.02, &step_nm);
      gsize n;
      const BtStep *steps = bt_spectrum_get_steps (spectrum, &n);

      g_assert_cmpuint (n, ==, 1);
      if (n != 1)
        continue;
      /* What is added at long waves is taken off above the step's energy. */
      off = (-steps[0].size - 0.02) / steps[0].size_u;
      g_assert_cmpfloat_with_epsilon (bt_nm_from_ev (steps[0].energy_ev), step_nm, 1);
      g_assert_cmpfloat (fabs (off), <, 4);
      squares += off * off;
    }
  g_test_message ("mean square of deviation over u: %.2f", squares / N_FILMS);
  g_assert_cmpfloat (squares / N_FILMS, <, 66.8 / 40);
  g_assert_cmpfloat (squares / N_FILMS, >, 20.7 / 40);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  g_test_add_func ("/spectrum/forecast/no-step", test_none);
  g_test_add_func ("/spectrum/forecast/one-step", test_all);
  return g_test_run ();
}
