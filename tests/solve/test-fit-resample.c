/* After a fit: covariance against Monte Carlo truth, resamples, profile intervals. */
#include <bandtally/fit.h>

#include <math.h>
#include <string.h>

#define N 256
#define P 7

static const double truth[P] = { 1, 0.8, 0.3, 0.7, 1.25, 0.35, 0.2 };

static double
normal (GRand *random)
{
  return sqrt (-2 * log (1 - g_rand_double (random))) * cos (2 * G_PI * g_rand_double (random));
}

static void
curve (double *x, double *y)
{
  for (int i = 0; i < N; i++)
    {
      x[i] = 2.0 * i / N;
      y[i] = truth[6];
      for (int b = 0; b < 6; b += 3)
        y[i] += truth[b] * exp (-4 * M_LN2 * pow ((x[i] - truth[b + 1]) / truth[b + 2], 2));
    }
}

static BtFit *
two_bands (const double *x, const double *y, const double *sigma)
{
  BtFit *fit = bt_fit_new (x, y, sigma, N);

  bt_fit_add_shape (fit, BT_SHAPE_GAUSSIAN, NULL, 0);
  bt_fit_add_shape (fit, BT_SHAPE_GAUSSIAN, NULL, 0);
  bt_fit_add_shape (fit, BT_SHAPE_CONSTANT, NULL, 0);
  for (guint j = 0; j < P; j++)
    bt_fit_set_start (fit, j, truth[j]);
  return fit;
}

static BtFitResult *
solve (BtFit *fit, gboolean sigma_known)
{
  const BtFitOptions options = { .sigma_known = sigma_known };
  g_autoptr (GError) error = NULL;
  BtFitResult *result = bt_fit_solve (fit, &options, NULL, &error);

  g_assert_no_error (error);
  g_assert_cmpint (result->state, ==, BT_SOLVE_CONVERGED);
  return result;
}

/* Covariance of the columns of @draws (n x P). */
static void
scatter (const double *draws, guint n, double *covariance)
{
  double mean[P] = { 0 };

  for (guint i = 0; i < n; i++)
    for (int j = 0; j < P; j++)
      mean[j] += draws[i * P + j] / n;
  for (int a = 0; a < P; a++)
    for (int b = 0; b < P; b++)
      {
        covariance[a * P + b] = 0;
        for (guint i = 0; i < n; i++)
          covariance[a * P + b] += (draws[i * P + a] - mean[a]) * (draws[i * P + b] - mean[b]) / (n - 1);
      }
}

/* Standard deviations within 7 %, correlations within 0.1: three to four times what 2,000 draws leave to chance (1.6 % and
 * 0.02). */
static void
assert_covariance (const double *drawn, const double *stated)
{
  for (int a = 0; a < P; a++)
    {
      g_assert_cmpfloat (fabs (sqrt (drawn[a * P + a] / stated[a * P + a]) - 1), <, 0.07);
      for (int b = 0; b < P; b++)
        {
          const double is = drawn[a * P + b] / sqrt (drawn[a * P + a] * drawn[b * P + b]);
          const double said = stated[a * P + b] / sqrt (stated[a * P + a] * stated[b * P + b]);

          g_assert_cmpfloat_with_epsilon (is, said, 0.1);
        }
    }
}

/* What the fit says of its uncertainties is how fits to new measurements scatter. */
static void
test_covariance (void)
{
  double x[N], clean[N], y[N], sigma[N], drawn[P * P];
  g_autofree double *draws = g_new (double, 2000 * P);
  g_autoptr (GRand) random = g_rand_new_with_seed (1);
  g_autoptr (BtFit) fit = NULL;
  g_autoptr (BtFitResult) clean_result = NULL;
  double chi2 = 0;

  curve (x, clean);
  for (int i = 0; i < N; i++)
    sigma[i] = i < N / 2 ? 0.005 : 0.01;
  fit = two_bands (x, clean, sigma);
  clean_result = solve (fit, TRUE);
  for (guint k = 0; k < 2000; k++)
    {
      g_autoptr (BtFitResult) result = NULL;

      for (int i = 0; i < N; i++)
        y[i] = clean[i] + sigma[i] * normal (random);
      bt_fit_set_data (fit, y, N);
      result = solve (fit, TRUE);
      memcpy (draws + k * P, result->x, sizeof (double) * P);
      chi2 += result->chi2 / 2000;
    }
  scatter (draws, 2000, drawn);
  assert_covariance (drawn, clean_result->covariance);
  /* The mean of chi2 is the degrees of freedom, its scatter sqrt (2 (N - P) / 2000) = 0.5. */
  g_assert_cmpfloat_with_epsilon (chi2, N - P, 2);
}

static void
test_resample (void)
{
  double x[N], y[N], sigma[N], drawn[P * P], worst = 0;
  g_autofree double *whole = g_new (double, 2000 * P), *few = g_new (double, 2000 * P), *other = g_new (double, 2000 * P);
  g_autoptr (GRand) random = g_rand_new_with_seed (2);
  g_autoptr (BtFit) fit = NULL;
  g_autoptr (BtFitResult) best = NULL;

  curve (x, y);
  for (int i = 0; i < N; i++)
    {
      sigma[i] = 0.005;
      y[i] += sigma[i] * normal (random);
    }
  fit = two_bands (x, y, sigma);
  best = solve (fit, TRUE);
  g_assert_true (bt_fit_resample (fit, best, BT_RESAMPLE_NOISE, 0, 2000, TRUE, 3, 1, whole, NULL, NULL));
  g_assert_true (bt_fit_resample (fit, best, BT_RESAMPLE_NOISE, 0, 2000, FALSE, 3, 1, few, NULL, NULL));
  scatter (whole, 2000, drawn);
  assert_covariance (drawn, best->covariance);
  for (guint i = 0; i < 2000 * P; i++)
    worst = MAX (worst, fabs (whole[i] - few[i]) / best->u[i % P]);
  /* The steps end where the next promises less than 1e-4 of chi2, a hundredth of an uncertainty. */
  g_assert_cmpfloat (worst, <, 0.03);
  /* The same bits from any number of threads; others from another seed. */
  for (guint threads = 2; threads <= 5; threads += 3)
    {
      g_assert_true (bt_fit_resample (fit, best, BT_RESAMPLE_NOISE, 0, 2000, TRUE, 3, threads, other, NULL, NULL));
      g_assert_cmpmem (whole, sizeof (double) * 2000 * P, other, sizeof (double) * 2000 * P);
      g_assert_true (bt_fit_resample (fit, best, BT_RESAMPLE_NOISE, 0, 2000, FALSE, 3, threads, other, NULL, NULL));
      g_assert_cmpmem (few, sizeof (double) * 2000 * P, other, sizeof (double) * 2000 * P);
    }
  g_assert_true (bt_fit_resample (fit, best, BT_RESAMPLE_NOISE, 0, 10, TRUE, 4, 2, other, NULL, NULL));
  g_assert_cmpfloat (other[0], !=, whole[0]);
}

/* A bound that the draws meet: none leaves it, and those of the few steps agree with the whole fits. */
static void
test_resample_bound (void)
{
  double x[N], y[N], sigma[N];
  double whole[200 * P], few[200 * P];
  guint met = 0;
  g_autoptr (GRand) random = g_rand_new_with_seed (5);
  g_autoptr (BtFit) fit = NULL;
  g_autoptr (BtFitResult) best = NULL;

  curve (x, y);
  for (int i = 0; i < N; i++)
    {
      sigma[i] = 0.005;
      y[i] += sigma[i] * normal (random);
    }
  fit = two_bands (x, y, sigma);
  best = solve (fit, TRUE);
  bt_fit_set_bounds (fit, 2, 0, best->x[2] + 0.5 * best->u[2]);
  g_assert_true (bt_fit_resample (fit, best, BT_RESAMPLE_NOISE, 0, 200, TRUE, 3, 1, whole, NULL, NULL));
  g_assert_true (bt_fit_resample (fit, best, BT_RESAMPLE_NOISE, 0, 200, FALSE, 3, 1, few, NULL, NULL));
  for (guint i = 0; i < 200 * P; i++)
    {
      g_assert_cmpfloat_with_epsilon (whole[i], few[i], 0.03 * best->u[i % P]);
      if (i % P == 2)
        {
          g_assert_cmpfloat (whole[i], <=, best->x[2] + 0.5 * best->u[2]);
          met += whole[i] == best->x[2] + 0.5 * best->u[2];
        }
    }
  /* 31 % of a normal distribution lie beyond half a standard deviation. */
  g_assert_cmpuint (met, >, 40);
  g_assert_cmpuint (met, <, 85);
}

/* The mean of a series whose neighbours correlate by r scatters sqrt ((1 + r) / (1 - r)) times as much as of an independent
 * one. */
static void
test_correlated (void)
{
  const double r = 0.7, factor = sqrt ((1 + r) / (1 - r));
  double noise = 0, blocks = 0, effective = 0;
  g_autoptr (GRand) random = g_rand_new_with_seed (6);
  enum
  {
    n = 2000,
    draws = 300,
    rounds = 8
  };
  g_autofree double *x = g_new (double, n), *y = g_new (double, n), *out = g_new (double, draws);

  for (int round = 0; round < rounds; round++)
    {
      g_autoptr (BtFit) fit = NULL;
      g_autoptr (BtFitResult) best = NULL;
      double last = normal (random);

      for (int i = 0; i < n; i++)
        {
          x[i] = i;
          y[i] = last;
          last = r * last + sqrt (1 - r * r) * normal (random);
        }
      fit = bt_fit_new (x, y, NULL, n);
      bt_fit_add_shape (fit, BT_SHAPE_CONSTANT, NULL, 0);
      best = solve (fit, FALSE);
      effective += best->effective_points / rounds;
      for (int kind = 0; kind < 2; kind++)
        {
          double mean = 0, square = 0;

          g_assert_true (bt_fit_resample (fit, best, kind == 0 ? BT_RESAMPLE_NOISE : BT_RESAMPLE_BLOCKS, 0, draws, FALSE, 1, 1,
                                          out, NULL, NULL));
          for (int i = 0; i < draws; i++)
            mean += out[i] / draws;
          for (int i = 0; i < draws; i++)
            square += (out[i] - mean) * (out[i] - mean) / (draws - 1);
          *(kind == 0 ? &noise : &blocks) += sqrt (square) / rounds;
        }
    }
  g_assert_cmpfloat_with_epsilon (effective / n, 1 / (factor * factor), 0.02);
  g_assert_cmpfloat_with_epsilon (noise * sqrt (n), 1, 0.1);
  /* Blocks of finite length miss a part of the correlation; most of it they must show. */
  g_assert_cmpfloat (blocks / noise, >, 0.8 * factor);
  g_assert_cmpfloat (blocks / noise, <, 1.1 * factor);
}

/* Of a straight line a profile interval is the symmetric one; of a curved problem chi2 at its ends has risen by the quantile.
 */
static void
test_profile (void)
{
  /* Quantile of chi2 with one degree of freedom at 95 %: NIST/SEMATECH e-Handbook of Statistical Methods, 1.3.6.7.4 (3.841). */
  const double quantile = 3.841458820694124;
  double x[N], y[N], sigma[N], low, high;
  g_autoptr (GRand) random = g_rand_new_with_seed (7);

  curve (x, y);
  for (int i = 0; i < N; i++)
    {
      sigma[i] = 0.05;
      y[i] += sigma[i] * normal (random);
    }
  {
    g_autoptr (BtFit) line = bt_fit_new (x, y, sigma, N);
    guint slope = bt_fit_add_shape (line, BT_SHAPE_LINE, NULL, 0);
    g_autoptr (BtFitResult) best = NULL;

    bt_fit_add_shape (line, BT_SHAPE_CONSTANT, NULL, 0);
    best = solve (line, TRUE);
    g_assert_true (bt_fit_profile (line, best, slope, 0.95, &low, &high));
    g_assert_cmpfloat_with_epsilon (low, best->x[slope] - sqrt (quantile) * best->u[slope], 1e-4 * best->u[slope]);
    g_assert_cmpfloat_with_epsilon (high, best->x[slope] + sqrt (quantile) * best->u[slope], 1e-4 * best->u[slope]);
    bt_fit_set_bounds (line, slope, best->x[slope] - best->u[slope], INFINITY);
    g_assert_false (bt_fit_profile (line, best, slope, 0.95, &low, &high));
    g_assert_cmpfloat (low, ==, best->x[slope] - best->u[slope]);
    g_assert_cmpfloat_with_epsilon (high, best->x[slope] + sqrt (quantile) * best->u[slope], 1e-4 * best->u[slope]);
  }
  {
    g_autoptr (BtFit) bands = two_bands (x, y, sigma);
    g_autoptr (BtFitResult) best = solve (bands, TRUE);

    g_assert_true (bt_fit_profile (bands, best, 2, 0.95, &low, &high));
    g_assert_cmpfloat (low, <, best->x[2] - best->u[2]);
    g_assert_cmpfloat (high, >, best->x[2] + best->u[2]);
    for (int end = 0; end < 2; end++)
      {
        g_autoptr (BtFitResult) there = NULL;

        bt_fit_set_start (bands, 2, end == 0 ? low : high);
        bt_fit_set_fixed (bands, 2, TRUE);
        there = solve (bands, TRUE);
        g_assert_cmpfloat_with_epsilon (there->chi2 - best->chi2, quantile, 1e-3);
        bt_fit_set_fixed (bands, 2, FALSE);
      }
  }
}

/* Noise that repeats itself (AR(1), r = 0.8): the covariance that knows of it holds against the scatter of many fits, the plain one is too small by about
 * sqrt ((1 + r) / (1 - r)) = 3. */
static void
test_correlated_covariance (void)
{
  const BtFitOptions plain = { .starts = 1 }, aware = { .starts = 1, .correlated = TRUE };
  const double r = 0.8, u = 0.01;
  double x[N], clean[N], y[N], told[2][P] = { { 0 } }, mean[P] = { 0 }, square[P] = { 0 };
  GRand *random = g_rand_new_with_seed (4711);
  const int runs = 300;

  curve (x, clean);
  for (int k = 0; k < runs; k++)
    {
      double error = u * normal (random);
      g_autoptr (BtFit) fit = NULL;

      for (int i = 0; i < N; i++)
        {
          y[i] = clean[i] + error;
          error = r * error + sqrt (1 - r * r) * u * normal (random);
        }
      fit = two_bands (x, y, NULL);
      for (int way = 0; way < 2; way++)
        {
          g_autoptr (BtFitResult) result = bt_fit_solve (fit, way == 0 ? &plain : &aware, NULL, NULL);

          for (guint j = 0; j < P; j++)
            {
              told[way][j] += result->u[j] / runs;
              if (way == 0)
                {
                  mean[j] += result->x[j] / runs;
                  square[j] += result->x[j] * result->x[j] / runs;
                }
            }
        }
    }
  for (guint j = 0; j < P; j++)
    {
      const double seen = sqrt (square[j] - mean[j] * mean[j]);

      g_assert_cmpfloat (told[1][j] / seen, >, 0.75);
      g_assert_cmpfloat (told[1][j] / seen, <, 1.5);
      g_assert_cmpfloat (told[0][j] / seen, <, 0.55);
    }
  g_rand_free (random);
}

/* Area of the first band over that of both: by hand from the truth, and the same uncertainty by the delta method and by draws. */
static double
area_share (const double *p, gpointer data)
{
  return p[0] * p[2] / (p[0] * p[2] + p[3] * p[5]);
}

static void
test_derived (void)
{
  const guint n = 4000;
  double x[N], y[N], sigma[N], value, u, mean, drawn_u, low, high;
  g_autofree double *draws = g_new (double, (gsize) n * P);
  g_autoptr (BtFit) fit = NULL;
  g_autoptr (BtFitResult) result = NULL;

  curve (x, y);
  for (int i = 0; i < N; i++)
    sigma[i] = 5e-3;
  fit = two_bands (x, y, sigma);
  result = solve (fit, TRUE);
  value = bt_fit_result_derive (result, area_share, NULL, &u);
  g_assert_cmpfloat_with_epsilon (value, 1 * 0.3 / (1 * 0.3 + 0.7 * 0.35), 1e-6);
  g_assert_true (bt_fit_resample (fit, result, BT_RESAMPLE_NOISE, 0, n, TRUE, 11, 1, draws, NULL, NULL));
  bt_fit_derive_from_draws (draws, n, P, area_share, NULL, 0.95, &mean, &drawn_u, &low, &high);
  g_assert_cmpfloat_with_epsilon (mean, value, 5 * u / sqrt (n) + 0.01 * u);
  g_assert_cmpfloat_with_epsilon (drawn_u / u, 1, 0.06);
  g_assert_cmpfloat_with_epsilon ((high - low) / (2 * 1.96 * u), 1, 0.08);
  g_assert_cmpfloat_with_epsilon (bt_fit_result_correlation (result, 0, 0), 1, 1e-9);
  /* A taller band is a narrower one. */
  g_assert_cmpfloat (bt_fit_result_correlation (result, 0, 2), <, -0.3);
  g_assert_cmpfloat_with_epsilon (bt_fit_result_correlation (result, 0, 2), bt_fit_result_correlation (result, 2, 0), 1e-12);
}

typedef struct { guint calls; double last; gboolean forwards; } Told;

static void
tell (double share, gpointer data)
{
  Told *told = data;

  told->forwards = told->forwards && share >= told->last && share <= 1;
  told->last = share;
  told->calls++;
}

static void
test_progress (void)
{
  double x[N], y[N], out[40 * P];
  g_autoptr (BtFit) fit = NULL;
  g_autoptr (BtFitResult) result = NULL;
  const BtFitOptions options = { .starts = 6, .seed = 3 };
  Told told = { 0, 0, TRUE };

  curve (x, y);
  for (int i = 0; i < N; i++)
    y[i] += 1e-3 * sin (91.0 * i);
  fit = two_bands (x, y, NULL);
  bt_fit_set_progress (fit, tell, &told, NULL);
  result = bt_fit_solve (fit, &options, NULL, NULL);
  g_assert_cmpuint (told.calls, ==, 6);
  g_assert_true (told.forwards);
  g_assert_cmpfloat_with_epsilon (told.last, 1, 1e-12);
  told = (Told){ 0, 0, TRUE };
  g_assert_true (bt_fit_resample (fit, result, BT_RESAMPLE_NOISE, 0, 40, TRUE, 1, 1, out, NULL, NULL));
  g_assert_cmpuint (told.calls, ==, 40);
  g_assert_true (told.forwards);
  g_assert_cmpfloat_with_epsilon (told.last, 1, 1e-12);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/fit/covariance", test_covariance);
  g_test_add_func ("/fit/resample", test_resample);
  g_test_add_func ("/fit/resample/bound", test_resample_bound);
  g_test_add_func ("/fit/correlated", test_correlated);
  g_test_add_func ("/fit/profile", test_profile);
  g_test_add_func ("/fit/correlated-covariance", test_correlated_covariance);
  g_test_add_func ("/fit/progress", test_progress);
  g_test_add_func ("/fit/derived", test_derived);
  return g_test_run ();
}
