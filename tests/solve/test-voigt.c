/* The Voigt shape over the widths that matter and in its limits. */
#include <bandtally/shape.h>

#include <float.h>

#include "shape-private.h"
#include "voigt-reference.h"

static void
eval_by (const BtShapeKernels *kernels, BtShape shape, const double *q, const double *x, gsize n, double *f, double *const *df)
{
  bt_shape_run (kernels, kernels->eval[shape], bt_shape_n_parameters (shape), q, x, n, f, df);
}

/* Whether the reference itself is right. */
static void
test_reference (void)
{
  /* w (x + i y) to 25 digits: exp(-z^2) erfc(-i z) by the Python library mpmath 1.2.1 with 40 digits. */
  static const struct
  {
    long double x, y, re, im;
  } rows[] = {
    { 0.0L, 0.0L, 1.0L, 0.0L },
    { 0.0L, 1.0L, 0.4275835761558070044107503L, 0.0L },
    { 0.5L, 0.0L, 0.7788007830714048682451703L, 0.4789251729010434725449375L },
    { 1.0L, 0.001L, 0.3679650099410538478355026L, 0.6064224679353173871214157L },
    { 2.5L, 0.5L, 0.05843747264332944627483963L, 0.2324204360851363049982443L },
    { 6.0L, 1e-4L, 0.000001637534053107170710011842L, 0.09539620894055242341546418L },
    { 3.0L, 3.0L, 0.09640250558304454711070917L, 0.09123632600421876111684723L },
    { 0.2L, 7.0L, 0.07973805244809872065732429L, 0.002233976184925588892741341L },
    { 20.0L, 0.1L, 0.0001415760879165214784565305L, 0.02824416353359310415034359L },
    { 1.1L, 12.0L, 0.04647031008689803451163517L, 0.004230929457567868158464667L },
  };

  for (gsize i = 0; i < G_N_ELEMENTS (rows); i++)
    {
      long double complex w = faddeeva (rows[i].x + I * rows[i].y);

      g_assert_cmpfloat ((double)fabsl (creall (w) - rows[i].re), <=, (double)(20 * LDBL_EPSILON));
      g_assert_cmpfloat ((double)fabsl (cimagl (w) - rows[i].im), <=, (double)(20 * LDBL_EPSILON));
    }
}

/* Values over all widths that matter: error as a share of the height, and beyond five Gaussian widths as a share of the value
 * itself. */
static void
test_voigt_grid (void)
{
  enum
  {
    N = 400
  };
  static const double ratios[] = { 1e-4, 3e-4, 1e-3, 1e-2, 0.03, 0.1, 0.3, 1, 2, 3, 4, 5, 5.4, 5.41, 6, 8, 10, 30, 1e3, 1e6 };
  double x[N], f[N];

  for (BtPath path = 0; path < BT_N_PATHS; path++)
    {
      long double worst = 0, worst_wing = 0;

      if (bt_shape_kernels (path) == NULL)
        continue;
      for (gsize r = 0; r < G_N_ELEMENTS (ratios); r++)
        {
          const double q[3] = { 0, 1, ratios[r] };
          const long double exact_q[3] = { 0, 1, q[2] };

          /* From the centre to 10^5 widths. */
          for (int i = 0; i < N; i++)
            x[i] = fmax (1, q[2]) * (i < N / 2 ? 5.0 * i / (N / 2) : 5 * pow (2e4, (i - N / 2.0) / (N / 2.0)));
          eval_by (bt_shape_kernels (path), BT_SHAPE_VOIGT, q, x, N, f, NULL);
          for (int i = 0; i < N; i++)
            {
              const long double exact = voigt_reference (exact_q, x[i]);

              worst = fmaxl (worst, fabsl (f[i] - exact));
              if (x[i] > 5 || q[2] > 5.5)
                worst_wing = fmaxl (worst_wing, fabsl (f[i] / exact - 1));
            }
        }
      g_test_message ("%s: worst %.1Le of the height, in the wings %.1Le of the value", bt_path_name (path), worst, worst_wing);
      g_assert_cmpfloat ((double)worst, <=, 1e-13);
      g_assert_cmpfloat ((double)worst_wing, <=, 1e-13);
    }
}

static void
test_voigt_limits (void)
{
  enum
  {
    N = 301
  };
  double x[N], voigt[N], other[N], slopes[6][N];
  double *df[3] = { slopes[0], slopes[1], slopes[2] }, *other_df[2] = { slopes[3], slopes[4] };

  for (int i = 0; i < N; i++)
    x[i] = -3 + 0.02 * i;
  bt_shape_eval (BT_SHAPE_VOIGT, (double[]){ 0.1, 0.4, 0 }, x, N, voigt, df);
  bt_shape_eval (BT_SHAPE_GAUSSIAN, (double[]){ 0.1, 0.4 }, x, N, other, other_df);
  for (int i = 0; i < N; i++)
    {
      g_assert_cmpfloat_with_epsilon (voigt[i], other[i], 1e-13);
      g_assert_cmpfloat_with_epsilon (slopes[0][i], slopes[3][i], 1e-11);
      g_assert_cmpfloat_with_epsilon (slopes[1][i], slopes[4][i], 1e-11);
    }
  bt_shape_eval (BT_SHAPE_VOIGT, (double[]){ 0.1, 0, 0.4 }, x, N, voigt, df);
  bt_shape_eval (BT_SHAPE_LORENTZIAN, (double[]){ 0.1, 0.4 }, x, N, other, other_df);
  for (int i = 0; i < N; i++)
    {
      g_assert_cmpfloat_with_epsilon (voigt[i], other[i], 1e-15);
      g_assert_cmpfloat_with_epsilon (slopes[0][i], slopes[3][i], 2e-14);
      g_assert_cmpfloat (slopes[1][i], ==, 0);
      g_assert_cmpfloat_with_epsilon (slopes[2][i], slopes[4][i], 2e-14);
    }
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  g_test_add_func ("/voigt/reference", test_reference);
  g_test_add_func ("/voigt/grid", test_voigt_grid);
  g_test_add_func ("/voigt/limits", test_voigt_limits);
  return g_test_run ();
}
