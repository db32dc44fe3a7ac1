/* The ensemble model: its derivatives, its areas, and a fit that finds the population behind a forecast. */
#include <bandtally/bandtally.h>

#include <math.h>
#include <string.h>

#include "../../core/model/ensemble.h"

#define N 330

typedef struct { double energy_ev[N], absorbance[N], sigma[N]; BtFilmData data; BtBandPlan plan; } Case;

static void
case_init (Case *c, double diameter_nm)
{
  for (gsize i = 0; i < N; i++)
    {
      c->energy_ev[i] = 0.5 + (diameter_nm < 1.2 ? 2.9 : 2.2) * (double) i / (N - 1);
      c->sigma[i] = 5e-4;
    }
  c->data = (BtFilmData){ .n = N, .energy_ev = c->energy_ev, .absorbance = c->absorbance, .sigma = c->sigma, .n_steps = 1, .fringe_cycles = 4,
                          .fringe_amplitude = 0.002, .step_ev = { 1.44 }, .step_size = { 0.01 }, .step_u = { 0.002 } };
  bt_band_plan_init (&c->plan, (BtDiameterWindow){ diameter_nm, 0.1 }, 0.04, (BtRange){ 0.5, c->energy_ev[N - 1] });
}

/* (transfer full): groups that stand at the start, as the ensemble takes them. */
static BtFilmFit *
start_fit (const Case *c, BtTailKind kind)
{
  static const guint counts[BT_N_GROUPS] = { [BT_S11] = 1, [BT_S22] = 1, [BT_M11] = 1 };
  BtFilmFit *fit = bt_film_fit_new (kind, &c->plan, counts, &c->data);

  for (guint b = 0; b < fit->n_bands; b++)
    fit->x[bt_film_fit_band (fit, b)] = 0.1;
  return fit;
}

/* Numbers away from the start, the same for each call. */
static void
move_away (BtEnsembleFit *fit)
{
  for (gsize j = fit->first_common; j < fit->p; j++)
    {
      double u = isfinite (fit->prior_u[j]) ? fit->prior_u[j] : 0.1 * fabs (fit->x[j]);

      fit->x[j] = CLAMP (fit->x[j] + 0.6 * u * sin (1.7 * (double) j), fit->low[j], fit->high[j]);
    }
}

static void
test_derivatives (gconstpointer user_data)
{
  g_autofree Case *c = g_new0 (Case, 1);
  g_autofree double *residual = g_new (double, N), *up = g_new (double, N), *down = g_new (double, N), *jacobian = NULL;
  g_autoptr (BtFilmFit) start = NULL;
  g_autoptr (BtEnsembleFit) fit = NULL;

  case_init (c, 1.1);
  start = start_fit (c, (BtTailKind) GPOINTER_TO_INT (user_data));
  fit = bt_ensemble_fit_new (&c->plan, start, &c->data);
  move_away (fit);
  jacobian = g_new (double, N * fit->p);
  bt_ensemble_fit_residual (fit, &c->data, residual, jacobian);
  for (gsize j = 0; j < fit->p; j++)
    {
      const double x = fit->x[j], h = 1e-5 * fmax (0.01, fabs (x));
      double largest = 0;

      fit->x[j] = x + h;
      bt_ensemble_fit_residual (fit, &c->data, up, NULL);
      fit->x[j] = x - h;
      bt_ensemble_fit_residual (fit, &c->data, down, NULL);
      fit->x[j] = x;
      for (gsize i = 0; i < N; i++)
        largest = fmax (largest, fabs (jacobian[i * fit->p + j]));
      for (gsize i = 0; i < N; i++)
        {
          /* Residuals are data less model. */
          double numeric = (down[i] - up[i]) / (2 * h) / c->sigma[i];

          g_assert_cmpfloat_with_epsilon (jacobian[i * fit->p + j], numeric, 1e-5 * largest + 1e-6);
        }
    }
}

static void
test_area_gradients (void)
{
  g_autofree Case *c = g_new0 (Case, 1);
  g_autoptr (BtFilmFit) start = NULL;
  g_autoptr (BtEnsembleFit) fit = NULL;

  case_init (c, 1.4);
  start = start_fit (c, BT_TAIL_POWER);
  fit = bt_ensemble_fit_new (&c->plan, start, &c->data);
  move_away (fit);
  for (int k = 0; k < 2; k++)
    {
      const BtGroup group = k == 0 ? BT_S22 : BT_M11;
      g_autofree double *gradient = g_new (double, fit->p);
      double area = bt_ensemble_fit_area (fit, group, gradient);

      g_assert_cmpfloat (area, >, 0);
      for (gsize j = 0; j < fit->p; j++)
        {
          const double x = fit->x[j], h = 1e-6 * fmax (0.01, fabs (x));
          double numeric;

          fit->x[j] = x + h;
          numeric = bt_ensemble_fit_area (fit, group, NULL);
          fit->x[j] = x - h;
          numeric = (numeric - bt_ensemble_fit_area (fit, group, NULL)) / (2 * h);
          fit->x[j] = x;
          g_assert_cmpfloat_with_epsilon (gradient[j], numeric, 1e-6 * (fabs (area) + fabs (numeric)));
        }
    }
}

/* Unlike the fit, the forecast knows the truth; nothing of it but the tail's kind is told. Seeds and the mean differ from those that anything was tuned on. */
static void
test_population_is_found (gconstpointer user_data)
{
  const double diameter_nm = *(const double *) user_data;
  g_autofree Case *c = g_new0 (Case, 1);
  g_autofree double *wavelength_nm = NULL, *absorbance = NULL, *gs = NULL, *gm = NULL, *gf = NULL;
  g_autoptr (BtFilmFit) start = NULL;
  g_autoptr (BtEnsembleFit) fit = NULL;
  BtForecast forecast;
  double s, m, u;
  gsize n;

  case_init (c, diameter_nm * 1.01);
  c->data.n_steps = 0;
  c->data.fringe_cycles = 0;
  bt_forecast_init (&forecast);
  forecast.window = (BtDiameterWindow){ diameter_nm, 0.08 };
  forecast.fraction = 0.85;
  forecast.abundance_scatter = 0.35;
  forecast.jitter_ev = 0.006;
  forecast.seed = 424242;
  n = bt_forecast_n_points (&forecast);
  wavelength_nm = g_new (double, n);
  absorbance = g_new (double, n);
  g_assert_true (bt_forecast_compute (&forecast, wavelength_nm, absorbance, NULL));
  for (gsize i = 0; i < N; i++)
    {
      double at = (bt_nm_from_ev (c->energy_ev[i]) - forecast.low_nm) / forecast.step_nm;
      gsize k = MIN ((gsize) at, n - 2);

      c->absorbance[i] = absorbance[k] + (at - (double) k) * (absorbance[k + 1] - absorbance[k]);
    }
  start = start_fit (c, BT_TAIL_PLASMON);
  bt_film_fit_run (start, &c->data, NULL);
  fit = bt_ensemble_fit_new (&c->plan, start, &c->data);
  g_assert_cmpint (bt_ensemble_fit_run (fit, &c->data, NULL), !=, BT_SOLVE_SINGULAR);
  gs = g_new (double, fit->p);
  gm = g_new (double, fit->p);
  gf = g_new (double, fit->p);
  s = bt_ensemble_fit_area (fit, BT_S22, gs);
  m = bt_ensemble_fit_area (fit, BT_M11, gm);
  for (gsize j = 0; j < fit->p; j++)
    gf[j] = (gs[j] * m - gm[j] * s) / ((s + m) * (s + m));
  u = sqrt (bt_ensemble_fit_covariance_of (fit, gf, gf));
  g_assert_cmpfloat (u, <, 0.03);
  g_assert_cmpfloat_with_epsilon (s / (s + m), 0.85, 3.5 * u);
  g_assert_cmpfloat_with_epsilon (fit->x[fit->first_common + BT_ENSEMBLE_MEAN], diameter_nm, 0.03);
  /* Down to the noise, which no group of Gaussians reaches. */
  g_assert_cmpfloat (fit->chi2, <, 1.5 * N);
  g_assert_cmpfloat (bt_ensemble_fit_parameters (fit), <, 0.5 * (double) fit->p);
}

int
main (int argc, char **argv)
{
  static const double diameters[] = { 0.95, 1.4 };

  g_test_init (&argc, &argv, NULL);
  for (int kind = 0; kind < BT_N_TAILS; kind++)
    {
      g_autofree char *path = g_strdup_printf ("/ensemble/derivatives/%s", bt_tail_name ((BtTailKind) kind));

      g_test_add_data_func (path, GINT_TO_POINTER (kind), test_derivatives);
    }
  g_test_add_func ("/ensemble/area-gradients", test_area_gradients);
  for (gsize d = 0; d < G_N_ELEMENTS (diameters); d++)
    {
      g_autofree char *path = g_strdup_printf ("/ensemble/population-is-found/%g", diameters[d]);

      g_test_add_data_func (path, &diameters[d], test_population_is_found);
    }
  return g_test_run ();
}
