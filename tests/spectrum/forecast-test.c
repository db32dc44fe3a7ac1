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

/* A stated change on the crowns and flanks of bands, where there is none: 0 within its uncertainty, which is small enough to be of use. Of 520 normal
 * deviates hardly one is beyond 4; the mean square may be less than 1, for what bands might do is counted in. */
static void
test_stated (void)
{
  double squares = 0, largest_u = 0;
  guint n = 0;

  for (guint i = 0; i < N_FILMS; i++)
    {
      double step_nm;
      g_autoptr (BtSpectrum) spectrum = film (i, 0, &step_nm);
      g_autoptr (BtFilm) of = bt_film_new (spectrum);
      BtCurve *curve = bt_film_light_path (of, NULL, NULL);
      BtBandPlan plan;

      bt_band_plan_init (&plan, (BtDiameterWindow){ 0.9 + 0.9 * i / (N_FILMS - 1), 0.05 + 0.01 * (i % 8) }, 0, (BtRange){ 0.55, 4 });
      for (guint g = 0; g < BT_N_GROUPS; g++)
        for (int flank = -2; flank <= 2; flank++)
          {
            const double e = plan.bands[g].centre_ev + flank * 0.25 * plan.bands[g].fwhm_ev;
            BtStep step;

            if (!(e > 0.6 && e < 3.5))
              continue;
            g_assert_true (bt_curve_measure_step (curve, e, &step));
            if (fabs (step.size) > 4 * step.size_u)
              g_test_message ("film %u, group %u, flank %d, %.0f nm: %+.5f +- %.5f", i, g, flank, bt_nm_from_ev (e), step.size, step.size_u);
            g_assert_cmpfloat (fabs (step.size), <, 4.5 * step.size_u);
            largest_u = fmax (largest_u, step.size_u);
            squares += step.size * step.size / (step.size_u * step.size_u);
            n++;
          }
      bt_curve_free (curve);
    }
  g_test_message ("%u places: mean square of size over u %.2f, largest u %.4f", n, squares / n, largest_u);
  g_assert_cmpuint (n, >, 400);
  g_assert_cmpfloat (squares / n, <, 1.3);
  g_assert_cmpfloat (largest_u, <, 0.02);
}

/* Stray light bends a film's absorbance: what is kept next to the ceiling (in the tail; a band elsewhere may be read by another detector) is low by no
 * more than a decade below the ceiling means, log10 (1.1) = 0.041 (exact for T = 10 s), and what stray light takes less than half of that from is kept.
 * Noise tells the dark from a broad crown here: it grows where light runs out. */
static void
test_stray (void)
{
  guint n_found = 0;

  for (guint i = 0; i < 12; i++)
    {
      BtForecast forecast;
      g_autofree double *x = NULL, *bent = NULL, *straight = NULL;
      g_autoptr (BtSpectrum) spectrum = NULL;
      const BtRange *ranges;
      double most_kept = 0, least_out = INFINITY;
      gsize n, n_ranges;

      bt_forecast_init (&forecast);
      forecast.window.mean_nm = 1 + 0.05 * i;
      forecast.thickness_nm = 350;
      forecast.seed = 300 + i;
      n = bt_forecast_n_points (&forecast);
      x = g_new (double, n);
      bent = g_new (double, n);
      straight = g_new (double, n);
      forecast.noise = 0;
      g_assert_true (bt_forecast_compute (&forecast, x, straight, NULL));
      forecast.noise = 1e-3;
      forecast.ceiling = 2.2;
      g_assert_true (bt_forecast_compute (&forecast, x, bent, NULL));
      spectrum = bt_spectrum_new (x, bent, n, BT_X_NM, BT_Y_ABSORBANCE, "bent", NULL);
      ranges = bt_spectrum_get_saturated (spectrum, &n_ranges);
      n_found += n_ranges > 0 ? 1 : 0;
      for (gsize k = 0; k < n && n_ranges > 0; k++)
        {
          const double e = bt_ev_from_nm (x[k]), s = pow (10, -2.2);
          const double missing = straight[k] + log10 ((pow (10, -straight[k]) + s) / (1 + s));
          gboolean out = FALSE;

          for (gsize r = 0; r < n_ranges; r++)
            out = out || (e >= ranges[r].low_ev && e <= ranges[r].high_ev);
          if (!out && e < 2.5)
            continue;
          if (!out)
            most_kept = fmax (most_kept, missing);
          else
            least_out = fmin (least_out, missing);
        }
      g_test_message ("film %u: kept up to %.4f missing, left out from %.4f", i, most_kept, least_out);
      g_assert_cmpfloat (most_kept, <, 0.05);
      g_assert_cmpfloat (least_out, >, 0.02);
    }
  g_test_message ("%u of 12 found bent", n_found);
  g_assert_cmpuint (n_found, ==, 12);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  g_test_add_func ("/spectrum/forecast/no-step", test_none);
  g_test_add_func ("/spectrum/forecast/one-step", test_all);
  g_test_add_func ("/spectrum/forecast/stated-step", test_stated);
  g_test_add_func ("/spectrum/forecast/stray-light", test_stray);
  return g_test_run ();
}
