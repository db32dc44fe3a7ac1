/* Properties of the solver that hold for any problem, and the statistics beside it. */
#include <bandtally/solve.h>

#include <math.h>

typedef struct { gsize n; double x[200], y[200]; } Line;

static void
line_model (const double *b, double *residual, double *jacobian, gpointer data)
{
  const Line *line = data;

  for (gsize i = 0; i < line->n; i++)
    {
      residual[i] = b[0] + b[1] * line->x[i] - line->y[i];
      if (jacobian != NULL)
        {
          jacobian[2 * i] = 1;
          jacobian[2 * i + 1] = line->x[i];
        }
    }
}

/* JCGM 100:2008, H.3: calibration line of a thermometer, b_k = y1 + y2 (t_k - 20); data and results from memory. */
static void
test_gum_h3 (void)
{
  static const double t[] = { 21.521, 22.012, 22.512, 23.003, 23.507, 23.999, 24.513, 25.002, 25.503, 26.010, 26.511 };
  static const double b[] = { -0.171, -0.169, -0.166, -0.159, -0.164, -0.165, -0.156, -0.157, -0.159, -0.161, -0.160 };
  Line line = { .n = G_N_ELEMENTS (t) };
  double x[2] = { 0, 0 }, covariance[4], s2;
  BtProblem problem = { .n_points = line.n, .n_parameters = 2, .model = line_model, .data = &line };
  BtSolution solution = { .x = x, .covariance = covariance };

  for (gsize i = 0; i < line.n; i++)
    {
      line.x[i] = t[i] - 20;
      line.y[i] = b[i];
    }
  g_assert_cmpint (bt_least_squares (&problem, &solution), ==, BT_SOLVE_CONVERGED);
  s2 = solution.chi2 / (double) (line.n - 2);
  g_assert_cmpfloat_with_epsilon (x[0], -0.1712, 5e-5);
  g_assert_cmpfloat_with_epsilon (x[1], 0.00218, 5e-6);
  g_assert_cmpfloat_with_epsilon (sqrt (s2 * covariance[0]), 0.0029, 5e-5);
  g_assert_cmpfloat_with_epsilon (sqrt (s2 * covariance[3]), 0.00067, 5e-6);
  g_assert_cmpfloat_with_epsilon (covariance[1] / sqrt (covariance[0] * covariance[3]), -0.930, 5e-4);
}

/* With a bound across the minimum the solution lies on it and the rest is at its minimum given that. */
static void
test_bounds (void)
{
  Line line = { .n = 100 };
  double x[2] = { 0, 0 }, low[2] = { -INFINITY, -INFINITY }, high[2] = { INFINITY, 1.5 }, mean_x = 0, mean_y = 0;
  gboolean at_bound[2];
  double covariance[4];
  BtProblem problem = { .n_points = 100, .n_parameters = 2, .model = line_model, .data = &line, .low = low, .high = high };
  BtSolution solution = { .x = x, .covariance = covariance, .at_bound = at_bound };

  for (gsize i = 0; i < line.n; i++)
    {
      line.x[i] = (double) i / 10;
      line.y[i] = 3 + 2 * line.x[i];
      mean_x += line.x[i] / 100;
      mean_y += line.y[i] / 100;
    }
  g_assert_cmpint (bt_least_squares (&problem, &solution), ==, BT_SOLVE_CONVERGED);
  g_assert_cmpfloat_with_epsilon (x[1], 1.5, 1e-12);
  g_assert_cmpfloat_with_epsilon (x[0], mean_y - 1.5 * mean_x, 1e-8);
  g_assert_true (at_bound[1]);
  g_assert_false (at_bound[0]);
  g_assert_cmpfloat_with_epsilon (covariance[0], 0.01, 1e-12);
  g_assert_cmpfloat (covariance[3], ==, 0);
}

/* A prior pulls by its weight: the mean of one reading y with u 1 and a prior with u 1 lies half way. */
static void
mean_model (const double *b, double *residual, double *jacobian, gpointer data)
{
  residual[0] = b[0] - *(double *) data;
  if (jacobian != NULL)
    jacobian[0] = 1;
}

static void
test_prior (void)
{
  double y = 4, x = 0, mean = 2, u = 1, covariance;
  BtProblem problem = { .n_points = 1, .n_parameters = 1, .model = mean_model, .data = &y, .prior_mean = &mean, .prior_u = &u };
  BtSolution solution = { .x = &x, .covariance = &covariance };

  g_assert_cmpint (bt_least_squares (&problem, &solution), ==, BT_SOLVE_CONVERGED);
  g_assert_cmpfloat_with_epsilon (x, 3, 1e-9);
  g_assert_cmpfloat_with_epsilon (covariance, 0.5, 1e-12);
}

static void
test_cancel (void)
{
  g_autoptr (GCancellable) cancellable = g_cancellable_new ();
  double y = 4, x = 0;
  BtProblem problem = { .n_points = 1, .n_parameters = 1, .model = mean_model, .data = &y, .cancellable = cancellable };
  BtSolution solution = { .x = &x };

  g_cancellable_cancel (cancellable);
  g_assert_cmpint (bt_least_squares (&problem, &solution), ==, BT_SOLVE_CANCELLED);
}

/* Two parameters that the data see only as a sum: said, not hidden. */
static void
sum_model (const double *b, double *residual, double *jacobian, gpointer data)
{
  for (gsize i = 0; i < 3; i++)
    {
      residual[i] = b[0] + b[1] - 1;
      if (jacobian != NULL)
        jacobian[2 * i] = jacobian[2 * i + 1] = 1;
    }
}

static void
test_singular (void)
{
  double x[2] = { 0, 0 }, covariance[4];
  BtProblem problem = { .n_points = 3, .n_parameters = 2, .model = sum_model };
  BtSolution solution = { .x = x, .covariance = covariance };

  g_assert_cmpint (bt_least_squares (&problem, &solution), ==, BT_SOLVE_SINGULAR);
  g_assert_cmpfloat_with_epsilon (x[0] + x[1], 1, 1e-6);
}

/* Worked numbers: weights for differences 0, 2, 7 (Burnham and Anderson 2002 give the formula; computed by hand), and an AR(1)
 * series of 500 points with r = 0.8 worth 55.6 independent ones. */
static void
test_statistics (void)
{
  const double aic[3] = { 10, 12, 17 }, residual[4] = { 1, 1, -1, -1 };
  double weight[3];

  bt_akaike_weights (aic, 3, weight);
  g_assert_cmpfloat_with_epsilon (weight[0], 0.7153, 5e-5);
  g_assert_cmpfloat_with_epsilon (weight[1], 0.2631, 5e-5);
  g_assert_cmpfloat_with_epsilon (weight[2], 0.0216, 5e-5);
  g_assert_cmpfloat_with_epsilon (bt_effective_points (500, 0.8), 55.5556, 1e-4);
  g_assert_cmpfloat_with_epsilon (bt_lag1_correlation (residual, 4), 0.25, 1e-12);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_add_func ("/solve/gum-h3", test_gum_h3);
  g_test_add_func ("/solve/bounds", test_bounds);
  g_test_add_func ("/solve/prior", test_prior);
  g_test_add_func ("/solve/cancel", test_cancel);
  g_test_add_func ("/solve/singular", test_singular);
  g_test_add_func ("/solve/statistics", test_statistics);
  return g_test_run ();
}
