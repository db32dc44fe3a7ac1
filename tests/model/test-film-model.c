/* The film's model: derivatives, areas, and a fit that finds what made the data. */
#include <bandtally/bandtally.h>

#include <math.h>

#include "../../core/model/film-model.h"

#define N 400

typedef struct { double energy_ev[N], absorbance[N], sigma[N]; BtFilmData data; BtBandPlan plan; } Case;

static void
case_init (Case *c)
{
  static const double centre[] = { 0.66, 1.22, 1.78, 2.3, 2.7, 3.1 };

  for (gsize i = 0; i < N; i++)
    {
      c->energy_ev[i] = 0.5 + 2.2 * (double) i / (N - 1);
      c->absorbance[i] = 0;
      c->sigma[i] = 1e-3;
    }
  c->data = (BtFilmData){ .n = N, .energy_ev = c->energy_ev, .absorbance = c->absorbance, .sigma = c->sigma, .n_steps = 1,
                          .step_ev = { 1.44 }, .step_size = { 0.01 }, .step_u = { 0.002 } };
  for (guint g = 0; g < BT_N_GROUPS; g++)
    c->plan.bands[g] = (BtBandWindow){ (BtGroup) g, centre[g], centre[g] - 0.2, centre[g] + 0.2, 0.2, 0.08, 0.4, centre[g] < 2.6 };
}

/* Values that make every term and every derivative count. */
static void
set_truth (BtFilmFit *fit)
{
  static const double height[] = { 0.3, 0.2, 0.12, 0.05 };

  fit->x[bt_film_fit_offset (fit)] = 0.02;
  fit->x[bt_film_fit_offset (fit) + 1] = 0.013;
  fit->x[bt_film_fit_wings (fit)] = 0.2;
  fit->x[bt_film_fit_sideband (fit)] = 0.08;
  for (guint b = 0; b < fit->n_bands; b++)
    {
      gsize j = bt_film_fit_band (fit, b);

      fit->x[j] = height[MIN (b, 3)];
      fit->x[j + 1] += 0.02;
      fit->x[j + 2] *= 0.9;
    }
}

static void
test_derivatives (gconstpointer user_data)
{
  BtTailKind kind = (BtTailKind) GPOINTER_TO_INT (user_data);
  const guint counts[BT_N_GROUPS] = { 1, 2, 1, 1, 0, 0 };
  g_autofree Case *c = g_new0 (Case, 1);
  g_autoptr (BtFilmFit) fit = NULL;
  g_autofree double *residual = g_new (double, N), *up = g_new (double, N), *down = g_new (double, N), *jacobian = NULL;

  case_init (c);
  fit = bt_film_fit_new (kind, &c->plan, counts, &c->data);
  set_truth (fit);
  jacobian = g_new (double, N * fit->p);
  bt_film_fit_residual (fit, &c->data, residual, jacobian);
  for (gsize j = 0; j < fit->p; j++)
    {
      double x = fit->x[j], h = 1e-5 * fmax (fabs (x), 1e-3), worst = 0, largest = 0;

      fit->x[j] = x + h;
      bt_film_fit_residual (fit, &c->data, up, NULL);
      fit->x[j] = x - h;
      bt_film_fit_residual (fit, &c->data, down, NULL);
      fit->x[j] = x;
      for (gsize i = 0; i < N; i++)
        {
          /* The residual is data minus model, the derivative that of the model over sigma. */
          double slope = (down[i] - up[i]) / (2 * h) / c->sigma[i];

          worst = fmax (worst, fabs (slope - jacobian[i * fit->p + j]));
          largest = fmax (largest, fabs (slope));
        }
      g_assert_cmpfloat (largest, >, 0);
      g_assert_cmpfloat (worst / largest, <, 1e-5);
    }
}

/* The stated area is the integral of the band over all energies; wings reach far, so the axis does too. */
static void
test_area (void)
{
  for (int wings = 0; wings <= 2; wings++)
    for (int side = 0; side <= 1; side++)
      {
        const guint counts[BT_N_GROUPS] = { 0, 1, 0, 0, 0, 0 };
        g_autofree Case *c = g_new0 (Case, 1);
        g_autoptr (BtFilmFit) fit = NULL;
        const double w = 0.3 * wings, s = 0.1 * side, step = 1e-3;
        double sum = 0, area;
        gsize j;

        case_init (c);
        fit = bt_film_fit_new (BT_TAIL_POWER, &c->plan, counts, &c->data);
        j = bt_film_fit_band (fit, 0);
        fit->x[j] = 0.7;
        fit->x[j + 2] = 0.12;
        fit->x[bt_film_fit_wings (fit)] = w;
        fit->x[bt_film_fit_sideband (fit)] = s;
        area = bt_film_fit_area (fit, 0, NULL);
        for (double e = fit->x[j + 1] - 400; e < fit->x[j + 1] + 400; e += step)
          sum += step * fit->x[j] * bt_line_eval (e, fit->x[j + 1], fit->x[j + 2], w, s);
        g_assert_cmpfloat_with_epsilon (sum / area, 1, 2e-4);
      }
}

/* A fit of the model to its own noiseless curve comes back to it from the start that the plan gives. */
static void
test_own_curve (gconstpointer user_data)
{
  BtTailKind kind = (BtTailKind) GPOINTER_TO_INT (user_data);
  const guint counts[BT_N_GROUPS] = { 1, 1, 1, 1, 0, 0 };
  g_autofree Case *c = g_new0 (Case, 1);
  g_autoptr (BtFilmFit) truth = NULL, fit = NULL;

  case_init (c);
  truth = bt_film_fit_new (kind, &c->plan, counts, &c->data);
  set_truth (truth);
  bt_film_fit_eval (truth, &c->data, c->energy_ev, N, c->absorbance, NULL);
  fit = bt_film_fit_new (kind, &c->plan, counts, &c->data);
  g_assert_cmpint (bt_film_fit_run (fit, &c->data, NULL), ==, BT_SOLVE_CONVERGED);
  /* Priors pull a little; the data are worth far more than they. */
  for (guint b = 0; b < 3; b++)
    {
      gsize j = bt_film_fit_band (fit, b);

      g_assert_cmpfloat_with_epsilon (fit->x[j + 1], truth->x[j + 1], 0.01);
      g_assert_cmpfloat_with_epsilon (bt_film_fit_area (fit, b, NULL) / bt_film_fit_area (truth, b, NULL), 1, 0.06);
    }
}

/* What the user holds stays to the last bit. */
static void
test_held (void)
{
  const guint counts[BT_N_GROUPS] = { 1, 1, 1, 0, 0, 0 };
  g_autofree Case *c = g_new0 (Case, 1);
  g_autoptr (BtFilmFit) truth = NULL, fit = NULL;
  gsize j;

  case_init (c);
  truth = bt_film_fit_new (BT_TAIL_PLASMON, &c->plan, counts, &c->data);
  set_truth (truth);
  bt_film_fit_eval (truth, &c->data, c->energy_ev, N, c->absorbance, NULL);
  fit = bt_film_fit_new (BT_TAIL_PLASMON, &c->plan, counts, &c->data);
  bt_film_fit_hold (fit, 1, BT_BAND_CENTRE, 1.15);
  bt_film_fit_hold (fit, 2, BT_BAND_HEIGHT, 0.05);
  bt_film_fit_run (fit, &c->data, NULL);
  j = bt_film_fit_band (fit, 1);
  g_assert_cmpfloat (fit->x[j + 1], ==, 1.15);
  j = bt_film_fit_band (fit, 2);
  g_assert_cmpfloat (fit->x[j], ==, 0.05);
}

/* Tails at points where they are known: the plasmon at its maximum and half width, the others at 500 nm and e-fold or power away. */
static void
test_tails (void)
{
  const BtTail plasmon = { BT_TAIL_PLASMON, 2, { 4.6, 1.1 }, 0.1 }, power = { BT_TAIL_POWER, 0.5, { 2, 0 }, 0.1 };
  const BtTail exponential = { BT_TAIL_EXPONENTIAL, 0.5, { 2e-3, 0 }, 0.1 };
  const double at_plasmon[] = { 4.6, 3.5, 5.7 }, at_nm[] = { BT_HC_EV_NM / 500, BT_HC_EV_NM / 1000 };
  double out[3];

  bt_tail_eval (&plasmon, at_plasmon, 3, out);
  g_assert_cmpfloat_with_epsilon (out[0], 2.1, 1e-12);
  g_assert_cmpfloat_with_epsilon (out[1], 1.1, 1e-12);
  g_assert_cmpfloat_with_epsilon (out[2], 1.1, 1e-12);
  bt_tail_eval (&power, at_nm, 2, out);
  g_assert_cmpfloat_with_epsilon (out[0], 0.6, 1e-12);
  g_assert_cmpfloat_with_epsilon (out[1], 0.225, 1e-12);
  bt_tail_eval (&exponential, at_nm, 2, out);
  g_assert_cmpfloat_with_epsilon (out[0], 0.6, 1e-12);
  g_assert_cmpfloat_with_epsilon (out[1], 0.1 + 0.5 * exp (-1), 1e-12);
}

/* Areas of unit shapes: Gaussian sqrt(pi / (4 ln 2)) = 1.0644670, Lorentzian pi / 2 = 1.5707963 times height and FWHM (definitions). */
static void
test_shapes (void)
{
  double e[20001], gaussian[20001], lorentzian[20001], g = 0, l = 0;

  for (int i = 0; i <= 20000; i++)
    e[i] = -1000 + 0.1 * i;
  bt_gaussian_eval (e, 20001, 0.03, 2, gaussian);
  bt_lorentzian_eval (e, 20001, 0.03, 2, lorentzian);
  for (int i = 0; i <= 20000; i++)
    {
      g += 0.1 * gaussian[i];
      l += 0.1 * lorentzian[i];
    }
  g_assert_cmpfloat_with_epsilon (g / 2, 1.0644670, 1e-7);
  g_assert_cmpfloat_with_epsilon (l / 2, 1.5707963, 2e-3);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  for (int t = 0; t < BT_N_TAILS; t++)
    {
      g_autofree char *derivatives = g_strconcat ("/model/derivatives/", bt_tail_name ((BtTailKind) t), NULL);
      g_autofree char *own = g_strconcat ("/model/own-curve/", bt_tail_name ((BtTailKind) t), NULL);

      g_test_add_data_func (derivatives, GINT_TO_POINTER (t), test_derivatives);
      g_test_add_data_func (own, GINT_TO_POINTER (t), test_own_curve);
    }
  g_test_add_func ("/model/area", test_area);
  g_test_add_func ("/model/held", test_held);
  g_test_add_func ("/model/tails", test_tails);
  g_test_add_func ("/model/shapes", test_shapes);
  return g_test_run ();
}
