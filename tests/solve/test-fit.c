/* Properties of fits of sums of shapes that hold for any problem, and the statistics after them. */
#include <bandtally/fit.h>

#include <math.h>
#include <string.h>

#define N 300

static double
gaussian (double x, double c, double w)
{
  const double u = (x - c) / w;

  return exp (-4 * M_LN2 * u * u);
}

static double
normal (GRand *random)
{
  return sqrt (-2 * log (1 - g_rand_double (random))) * cos (2 * G_PI * g_rand_double (random));
}

static BtFitResult *
solve (BtFit *fit, gboolean sigma_known)
{
  const BtFitOptions options = { .tolerance = 1e-14, .sigma_known = sigma_known };
  g_autoptr (GError) error = NULL;
  BtFitResult *result = bt_fit_solve (fit, &options, NULL, &error);

  g_assert_no_error (error);
  return result;
}

/* Two Gaussians of one width, a fixed distance apart and in a fixed ratio. */
#define DISTANCE 0.35
#define RATIO 0.6

static void
doublet (const double *q, const double *x, gsize n, double *f, double *const *df, gpointer data)
{
  for (gsize i = 0; i < n; i++)
    {
      f[i] = 0;
      if (df != NULL)
        df[0][i] = df[1][i] = 0;
      for (int k = 0; k < 2; k++)
        {
          const double u = (x[i] - q[0] - k * DISTANCE) / q[1], g = (k == 0 ? 1 : RATIO) * exp (-4 * M_LN2 * u * u);

          f[i] += g;
          if (df != NULL)
            {
              df[0][i] += g * 8 * M_LN2 * u / q[1];
              df[1][i] += g * 8 * M_LN2 * u * u / q[1];
            }
        }
    }
}

/* A problem with ties is the same as one written with fewer parameters, and every tie holds to the last bit. */
static void
test_ties (void)
{
  g_autoptr (GRand) random = g_rand_new_with_seed (1);

  for (int round = 0; round < 40; round++)
    {
      const double c = g_rand_double_range (random, 0.8, 1.2), w = g_rand_double_range (random, 0.2, 0.4),
                   a = g_rand_double_range (random, 0.5, 2);
      const double start[] = { c + 0.05, w * 1.2 };
      double x[N], y[N], sigma[N];
      g_autoptr (BtFit) tied = NULL, plain = NULL;
      BtFitResult *with, *without;
      guint first, second, whole;

      for (int i = 0; i < N; i++)
        {
          sigma[i] = round % 2 == 0 ? 0.01 : g_rand_double_range (random, 0.005, 0.02);
          x[i] = 2.0 * i / N;
          y[i] = a * (gaussian (x[i], c, w) + RATIO * gaussian (x[i], c + DISTANCE, w)) + 0.1 + sigma[i] * normal (random);
        }
      tied = bt_fit_new (x, y, sigma, N);
      /* The dependent one comes first in half of the rounds. */
      first = bt_fit_add_shape (tied, BT_SHAPE_GAUSSIAN, start, 2);
      second = bt_fit_add_shape (tied, BT_SHAPE_GAUSSIAN, start, 2);
      if (round % 4 < 2)
        {
          bt_fit_tie (tied, second, first, RATIO, 0);
          bt_fit_tie (tied, second + 1, first + 1, 1, DISTANCE);
          bt_fit_tie (tied, second + 2, first + 2, 1, 0);
        }
      else
        {
          bt_fit_set_start (tied, second + 1, start[0] + DISTANCE);
          bt_fit_set_start (tied, second, RATIO);
          bt_fit_tie (tied, first, second, 1 / RATIO, 0);
          bt_fit_tie (tied, first + 1, second + 1, 1, -DISTANCE);
          bt_fit_tie (tied, first + 2, second + 2, 1, 0);
        }
      bt_fit_add_shape (tied, BT_SHAPE_CONSTANT, NULL, 0);
      plain = bt_fit_new (x, y, sigma, N);
      whole = bt_fit_add_function (plain, doublet, 2, NULL, NULL);
      bt_fit_set_start (plain, whole + 1, start[0]);
      bt_fit_set_start (plain, whole + 2, start[1]);
      bt_fit_add_shape (plain, BT_SHAPE_CONSTANT, NULL, 0);

      with = solve (tied, TRUE);
      without = solve (plain, TRUE);
      g_assert_cmpint (with->state, ==, BT_SOLVE_CONVERGED);
      g_assert_cmpuint (with->n_free, ==, 4);
      g_assert_cmpfloat_with_epsilon (with->chi2, without->chi2, 1e-9 * without->chi2);
      for (guint k = 0; k < 3; k++)
        {
          g_assert_cmpfloat_with_epsilon (with->x[first + k], without->x[whole + k], 1e-5 * without->u[whole + k]);
          g_assert_cmpfloat_with_epsilon (with->u[first + k], without->u[whole + k], 1e-7 * without->u[whole + k]);
        }
      g_assert_cmpfloat_with_epsilon (with->x[second], RATIO * with->x[first], 1e-15);
      g_assert_cmpfloat_with_epsilon (with->x[second + 1], with->x[first + 1] + DISTANCE, 1e-15);
      g_assert_cmpfloat (with->x[second + 2], ==, with->x[first + 2]);
      g_assert_cmpfloat_with_epsilon (with->u[second], RATIO * with->u[first], 1e-12);
      bt_fit_result_unref (with);
      bt_fit_result_unref (without);
    }
}

static void
test_ring (void)
{
  const double x[] = { 0, 1, 2 };
  g_autoptr (BtFit) fit = bt_fit_new (x, x, NULL, 3);
  guint a = bt_fit_add_shape (fit, BT_SHAPE_CONSTANT, NULL, 0), b = bt_fit_add_shape (fit, BT_SHAPE_CONSTANT, NULL, 0),
        c = bt_fit_add_shape (fit, BT_SHAPE_CONSTANT, NULL, 0);

  bt_fit_tie (fit, a, b, 2, 0);
  bt_fit_tie (fit, b, c, 3, 0);
  g_test_expect_message ("bandtally", G_LOG_LEVEL_WARNING, "*depends on it*");
  bt_fit_tie (fit, c, a, 1, 0);
  g_test_assert_expected_messages ();
  /* The chain is followed: a = 6 c, so that the three constants sum to 10 c = the mean. */
  {
    BtFitResult *result = solve (fit, FALSE);

    g_assert_cmpfloat_with_epsilon (result->x[c], 0.1, 1e-9);
    g_assert_cmpfloat_with_epsilon (result->x[a], 0.6, 1e-9);
    bt_fit_result_unref (result);
  }
}

static double
chi2_at (BtFit *fit, const double *parameters, const double *x, const double *y)
{
  double f[N], sum = 0;

  bt_fit_eval (fit, parameters, x, N, f);
  for (int i = 0; i < N; i++)
    sum += (f[i] - y[i]) * (f[i] - y[i]) / 1e-4;
  return sum;
}

/* Karush, Kuhn and Tucker: inside its bounds a parameter's slope of chi2 is 0; on a bound chi2 would fall only beyond it. */
static void
test_bounds (void)
{
  g_autoptr (GRand) random = g_rand_new_with_seed (2);
  guint on_bound = 0;

  for (int round = 0; round < 60; round++)
    {
      double x[N], y[N], sigma[N], low[7], high[7];
      g_autoptr (BtFit) fit = NULL;
      BtFitResult *result;

      for (int i = 0; i < N; i++)
        {
          x[i] = 2.0 * i / N;
          sigma[i] = 0.01;
          y[i] = gaussian (x[i], 0.8, 0.3) + 0.7 * gaussian (x[i], 1.2, 0.4) + 0.2 + sigma[i] * normal (random);
        }
      fit = bt_fit_new (x, y, sigma, N);
      for (int b = 0; b < 2; b++)
        bt_fit_add_shape (fit, BT_SHAPE_GAUSSIAN, (double[]){ 0.8 + 0.4 * b, 0.35 }, 2);
      bt_fit_add_shape (fit, BT_SHAPE_CONSTANT, NULL, 0);
      for (guint j = 0; j < 7; j++)
        {
          const double centre = (double[]){ 1, 0.8, 0.3, 0.7, 1.2, 0.4, 0.2 }[j];

          low[j] = centre - g_rand_double_range (random, -0.02, 0.2) * (j % 3 == 1 ? 0.2 : 1) * centre;
          high[j] = low[j] + g_rand_double_range (random, 0.05, 0.3) * centre;
          bt_fit_set_bounds (fit, j, low[j], high[j]);
          bt_fit_set_start (fit, j, (low[j] + high[j]) / 2);
        }
      result = solve (fit, TRUE);
      g_assert_cmpint (result->state, ==, BT_SOLVE_CONVERGED);
      for (guint j = 0; j < 7; j++)
        {
          double up[7], down[7], slope, unit;
          const double h = 1e-5;

          memcpy (up, result->x, sizeof up);
          memcpy (down, result->x, sizeof down);
          up[j] += h;
          down[j] -= h;
          slope = (chi2_at (fit, up, x, y) - chi2_at (fit, down, x, y)) / (2 * h);
          unit = (chi2_at (fit, up, x, y) + chi2_at (fit, down, x, y) - 2 * chi2_at (fit, result->x, x, y)) / (h * h);
          /* In uncertainties of the parameter with all others held. */
          slope /= sqrt (fabs (unit));
          g_assert_cmpfloat (result->x[j], >=, low[j]);
          g_assert_cmpfloat (result->x[j], <=, high[j]);
          g_assert_cmpint (result->at_bound[j], ==, result->x[j] <= low[j] + 1e-9 || result->x[j] >= high[j] - 1e-9);
          if (!result->at_bound[j])
            g_assert_cmpfloat_with_epsilon (slope, 0, 2e-3);
          else if (result->x[j] < (low[j] + high[j]) / 2)
            g_assert_cmpfloat (slope, >=, -2e-3);
          else
            g_assert_cmpfloat (slope, <=, 2e-3);
          g_assert_cmpint (result->u[j] == 0, ==, result->at_bound[j]);
          on_bound += result->at_bound[j];
        }
      bt_fit_result_unref (result);
    }
  /* The test means something only if bounds were met, and not always. */
  g_assert_cmpuint (on_bound, >, 30);
  g_assert_cmpuint (on_bound, <, 300);
}

/* The order of the points does not matter, and points left out in any of three ways do not count. */
static void
test_points (void)
{
  double x[N], y[N], sigma[N], mixed_x[N], mixed_y[N], mixed_sigma[N];
  g_autoptr (GRand) random = g_rand_new_with_seed (3);
  g_autoptr (BtFit) plain = NULL, mixed = NULL;
  BtFitResult *a, *b;
  const double start[] = { 1.1, 0.4 };
  const gsize used = 201;

  for (int i = 0; i < N; i++)
    {
      x[i] = 2.0 * i / N;
      sigma[i] = 0.01;
      y[i] = gaussian (x[i], 1, 0.5) + sigma[i] * normal (random);
    }
  for (int i = 0; i < N; i++)
    {
      const gsize from = (gsize)(i * 7 + 5) % N;

      mixed_x[i] = x[from];
      mixed_y[i] = from == used + 20 ? NAN : from > used + 40 ? 1e3 : y[from];
      mixed_sigma[i] = from > used + 40 ? INFINITY : sigma[from];
    }
  plain = bt_fit_new (x, y, sigma, used);
  mixed = bt_fit_new (mixed_x, mixed_y, mixed_sigma, N);
  bt_fit_mask (mixed, x[used], x[used + 40]);
  bt_fit_add_shape (plain, BT_SHAPE_GAUSSIAN, start, 2);
  bt_fit_add_shape (mixed, BT_SHAPE_GAUSSIAN, start, 2);
  a = solve (plain, TRUE);
  b = solve (mixed, TRUE);
  g_assert_cmpuint (a->n_points, ==, used);
  g_assert_cmpuint (b->n_points, ==, used);
  g_assert_cmpmem (a->x, sizeof (double) * 3, b->x, sizeof (double) * 3);
  g_assert_cmpfloat (a->chi2, ==, b->chi2);
  bt_fit_result_unref (b);
  bt_fit_unmask (mixed);
  b = solve (mixed, TRUE);
  g_assert_cmpuint (b->n_points, ==, used + 40);
  bt_fit_result_unref (a);
  bt_fit_result_unref (b);
}

/* What can be said without a fit: a constant with a prior is the weighted mean of the data and of the prior; scatter scales an
 * unknown uncertainty; the criteria are those of their papers. */
static void
test_known (void)
{
  const double x[] = { 1, 2, 3, 4, 5, 6 }, y[] = { 2.1, 1.9, 2.4, 1.8, 2.2, 2.0 };
  const double sigma[] = { 0.1, 0.1, 0.2, 0.2, 0.1, 0.4 };
  double weight = 1 / (0.3 * 0.3), sum = 2.6 * weight, chi2 = 0;
  g_autoptr (BtFit) fit = bt_fit_new (x, y, sigma, 6);
  guint level = bt_fit_add_shape (fit, BT_SHAPE_CONSTANT, NULL, 0);
  BtFitResult *result;

  bt_fit_set_prior (fit, level, 2.6, 0.3);
  result = solve (fit, TRUE);
  for (int i = 0; i < 6; i++)
    {
      weight += 1 / (sigma[i] * sigma[i]);
      sum += y[i] / (sigma[i] * sigma[i]);
    }
  for (int i = 0; i < 6; i++)
    chi2 += pow ((y[i] - sum / weight) / sigma[i], 2);
  g_assert_cmpfloat_with_epsilon (result->x[0], sum / weight, 1e-9);
  g_assert_cmpfloat_with_epsilon (result->u[0], 1 / sqrt (weight), 1e-12);
  g_assert_cmpfloat_with_epsilon (result->chi2, chi2, 1e-7);
  g_assert_cmpfloat_with_epsilon (result->aicc, chi2 + 2 + 4.0 / 4, 1e-7);
  g_assert_cmpfloat_with_epsilon (result->bic, chi2 + log (6), 1e-7);
  bt_fit_result_unref (result);
  result = solve (fit, FALSE);
  g_assert_cmpfloat_with_epsilon (result->u[0], sqrt (chi2 / 5 / weight), 1e-9);
  bt_fit_result_unref (result);
}

/* A parameter held at its start; a shape's reference always is. */
static void
test_fixed (void)
{
  double x[N], y[N];
  g_autoptr (BtFit) fit = NULL;
  BtFitResult *result;
  guint decay;

  for (int i = 0; i < N; i++)
    {
      x[i] = 2.0 * i / N;
      y[i] = 3 * exp (-1.7 * (x[i] - 0.5)) + 1e-3 * cos (40 * x[i]);
    }
  fit = bt_fit_new (x, y, NULL, N);
  decay = bt_fit_add_shape (fit, BT_SHAPE_EXPONENTIAL, (double[]){ 1, 0.5 }, 2);
  g_assert_cmpuint (bt_fit_get_n_parameters (fit), ==, 3);
  result = solve (fit, FALSE);
  g_assert_cmpuint (result->n_free, ==, 2);
  g_assert_cmpfloat_with_epsilon (result->x[decay], 3, 1e-3);
  g_assert_cmpfloat_with_epsilon (result->x[decay + 1], 1.7, 1e-3);
  g_assert_cmpfloat (result->x[decay + 2], ==, 0.5);
  bt_fit_result_unref (result);
  bt_fit_set_start (fit, decay, 2.5);
  bt_fit_set_fixed (fit, decay, TRUE);
  result = solve (fit, FALSE);
  g_assert_cmpuint (result->n_free, ==, 1);
  g_assert_cmpfloat (result->x[decay], ==, 2.5);
  g_assert_cmpfloat (result->u[decay], ==, 0);
  bt_fit_result_unref (result);
  bt_fit_set_fixed (fit, decay + 1, TRUE);
  result = solve (fit, FALSE);
  g_assert_cmpuint (result->n_free, ==, 0);
  g_assert_cmpint (result->state, ==, BT_SOLVE_CONVERGED);
  g_assert_cmpfloat (result->chi2, >, 0);
  bt_fit_result_unref (result);
}

static void
power (const double *q, const double *x, gsize n, double *f, double *const *df, gpointer data)
{
  for (gsize i = 0; i < n; i++)
    f[i] = pow (x[i], GPOINTER_TO_INT (data));
}

/* A polynomial of degree 9 in plain powers: the condition of its normal equations is beyond what they bear. All coefficients
 * are 1; with one of them bounded the others are those of the problem in which it is held there. */
static void
test_ill_conditioned (void)
{
  enum
  {
    degree = 9,
    n = 200
  };
  double x[n], y[n];
  g_autoptr (BtFit) fit = NULL;
  BtFitResult *free_fit, *bounded, *held;

  for (int i = 0; i < n; i++)
    {
      x[i] = (i + 1.0) / n;
      y[i] = 0;
      for (int k = 0; k <= degree; k++)
        y[i] += pow (x[i], k);
    }
  fit = bt_fit_new (x, y, NULL, n);
  for (int k = 0; k <= degree; k++)
    bt_fit_set_start (fit, bt_fit_add_function (fit, power, 0, GINT_TO_POINTER (k), NULL), 0);
  free_fit = solve (fit, FALSE);
  g_assert_true (free_fit->by_qr);
  g_assert_cmpfloat (free_fit->condition, >, 1e9);
  for (guint k = 0; k <= degree; k++)
    g_assert_cmpfloat_with_epsilon (free_fit->x[k], 1, 1e-7);
  bt_fit_set_bounds (fit, 4, -INFINITY, 0.5);
  bounded = solve (fit, FALSE);
  g_assert_true (bounded->by_qr);
  g_assert_true (bounded->at_bound[4]);
  bt_fit_set_start (fit, 4, 0.5);
  bt_fit_set_fixed (fit, 4, TRUE);
  held = solve (fit, FALSE);
  for (guint k = 0; k <= degree; k++)
    g_assert_cmpfloat_with_epsilon (bounded->x[k], held->x[k], 1e-4);
  g_assert_cmpfloat_with_epsilon (bounded->chi2, held->chi2, 1e-6 * held->chi2);
  bt_fit_result_unref (free_fit);
  bt_fit_result_unref (bounded);
  bt_fit_result_unref (held);
}

static void
test_refused (void)
{
  const double x[] = { 1, 2 }, y[] = { NAN, NAN };
  g_autoptr (BtFit) empty = bt_fit_new (x, y, NULL, 2), bare = bt_fit_new (x, x, NULL, 2), nowhere = bt_fit_new (x, x, NULL, 2);
  g_autoptr (GCancellable) cancellable = g_cancellable_new ();
  g_autoptr (GError) error = NULL;
  double out[4];
  BtFitResult *result;
  guint level = bt_fit_add_shape (empty, BT_SHAPE_CONSTANT, NULL, 0);

  g_assert_cmpuint (level, ==, 0);
  g_assert_null (bt_fit_solve (empty, NULL, NULL, &error));
  g_assert_error (error, G_IO_ERROR, G_IO_ERROR_INVALID_DATA);
  g_assert_nonnull (strstr (error->message, "no points"));
  g_clear_error (&error);
  {
    guint decay = bt_fit_add_shape (nowhere, BT_SHAPE_POWER, (double[]){ 1, -1 }, 2);

    g_assert_cmpuint (decay, ==, 0);
    g_assert_null (bt_fit_solve (nowhere, NULL, NULL, &error));
    g_assert_nonnull (strstr (error->message, "cannot begin"));
    g_clear_error (&error);
  }
  g_assert_null (bt_fit_solve (bare, NULL, NULL, &error));
  g_assert_nonnull (strstr (error->message, "no shapes"));
  g_clear_error (&error);
  bt_fit_set_data (empty, x, 2);
  result = bt_fit_solve (empty, NULL, NULL, &error);
  g_assert_no_error (error);
  g_cancellable_cancel (cancellable);
  g_assert_null (bt_fit_solve (empty, NULL, cancellable, &error));
  g_assert_error (error, G_IO_ERROR, G_IO_ERROR_CANCELLED);
  g_clear_error (&error);
  g_assert_false (bt_fit_resample (empty, result, BT_RESAMPLE_NOISE, 0, 4, TRUE, 1, 2, out, cancellable, &error));
  g_assert_error (error, G_IO_ERROR, G_IO_ERROR_CANCELLED);
  bt_fit_result_unref (result);
}

/* What the data cannot tell apart is said in words; so is a number on its bound. */
static void
test_words (void)
{
  double x[N], y[N];
  g_autoptr (BtFit) twins = NULL, bound = NULL;
  g_autofree char *singular = NULL, *on_bound = NULL;
  BtFitResult *result;

  for (int i = 0; i < N; i++)
    {
      x[i] = 2.0 * i / N;
      y[i] = 1 + 0.01 * sin (i);
    }
  twins = bt_fit_new (x, y, NULL, N);
  bt_fit_add_shape (twins, BT_SHAPE_CONSTANT, NULL, 0);
  bt_fit_add_shape (twins, BT_SHAPE_CONSTANT, NULL, 0);
  result = solve (twins, FALSE);
  g_assert_cmpint (result->state, ==, BT_SOLVE_SINGULAR);
  singular = bt_fit_result_to_text (result);
  g_assert_nonnull (strstr (singular, "cannot tell"));
  bt_fit_result_unref (result);
  bound = bt_fit_new (x, y, NULL, N);
  bt_fit_set_bounds (bound, bt_fit_add_shape (bound, BT_SHAPE_CONSTANT, NULL, 0), 0, 0.5);
  result = solve (bound, FALSE);
  on_bound = bt_fit_result_to_text (result);
  g_assert_nonnull (strstr (on_bound, "1 number sits on its bound"));
  bt_fit_result_unref (result);
}

/* From a start that leads astray, other starts find the minimum; the same seed does the same. */
static void
test_starts (void)
{
  double x[N], y[N], sigma[N];
  g_autoptr (GRand) random = g_rand_new_with_seed (4);
  g_autoptr (BtFit) fit = NULL;
  BtFitOptions options = { .starts = 1, .seed = 5, .good_enough = 1.3, .sigma_known = TRUE };
  BtFitResult *one, *many, *again;

  for (int i = 0; i < N; i++)
    {
      x[i] = 2.0 * i / N;
      sigma[i] = 0.005;
      y[i] = gaussian (x[i], 0.4, 0.15) + 0.8 * gaussian (x[i], 1.0, 0.2) + 0.6 * gaussian (x[i], 1.5, 0.15)
             + sigma[i] * normal (random);
    }
  fit = bt_fit_new (x, y, sigma, N);
  for (int b = 0; b < 3; b++)
    {
      guint band = bt_fit_add_shape (fit, BT_SHAPE_GAUSSIAN, (double[]){ 1.45 + 0.02 * b, 0.1 }, 2);

      bt_fit_set_bounds (fit, band, 0, 3);
      bt_fit_set_bounds (fit, band + 1, 0, 2);
      bt_fit_set_bounds (fit, band + 2, 0.02, 0.6);
    }
  one = bt_fit_solve (fit, &options, NULL, NULL);
  options.starts = 60;
  many = bt_fit_solve (fit, &options, NULL, NULL);
  again = bt_fit_solve (fit, &options, NULL, NULL);
  g_assert_cmpfloat (one->chi2, >, 2 * N);
  g_assert_cmpfloat (many->chi2, <, 1.3 * N);
  g_assert_cmpuint (many->n_starts, >, 1);
  g_assert_cmpuint (many->n_starts, <, 60);
  g_assert_cmpuint (many->n_reached, >=, 1);
  g_assert_cmpmem (many->x, sizeof (double) * 9, again->x, sizeof (double) * 9);
  bt_fit_result_unref (one);
  bt_fit_result_unref (many);
  bt_fit_result_unref (again);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/fit/ties", test_ties);
  g_test_add_func ("/fit/ring", test_ring);
  g_test_add_func ("/fit/bounds", test_bounds);
  g_test_add_func ("/fit/points", test_points);
  g_test_add_func ("/fit/known", test_known);
  g_test_add_func ("/fit/fixed", test_fixed);
  g_test_add_func ("/fit/ill-conditioned", test_ill_conditioned);
  g_test_add_func ("/fit/refused", test_refused);
  g_test_add_func ("/fit/words", test_words);
  g_test_add_func ("/fit/starts", test_starts);
  return g_test_run ();
}
