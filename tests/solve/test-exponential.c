/* exp and log of vectors over the whole range, against long double. */
#include <float.h>
#include <math.h>
#include <string.h>

#include "exponential.h"
#include "shape-private.h"

static void
run_by (BtPath path, BtShapeKernel kernel, const double *x, gsize n, double *out)
{
  bt_shape_run (bt_shape_kernels (path), kernel, 0, NULL, x, n, out, NULL);
}

/* Units in the last place between @value and the exact @reference. */
static double
units_off (double value, long double exact)
{
  return (double)(fabsl (value - exact) / ldexpl (1, MAX (ilogbl (exact) - 52, -1074)));
}

static void
test_exponential (void)
{
  /* exp() of the C library has these exactly right by definition (ISO C annex F) or, for finite results, to its last bit here.
   */
  static const double special[] = { 0,
                                    -0.0,
                                    INFINITY,
                                    -INFINITY,
                                    NAN,
                                    709.782712893384,
                                    709.782712893385,
                                    710,
                                    1e300,
                                    -745.1332191019411,
                                    -745.1332191019412,
                                    -745.2,
                                    -746,
                                    -1000,
                                    -1e300,
                                    0x1p-1074,
                                    -0x1p-1074,
                                    1e-17,
                                    -708.4 };
  enum
  {
    N = 1000,
    ROUNDS = 600,
    M = G_N_ELEMENTS (special)
  };
  g_autoptr (GRand) rand = g_rand_new ();
  double x[N], y[N], z[M];

  for (BtPath path = 0; path < BT_N_PATHS; path++)
    {
      double worst = 0, worst_subnormal = 0;

      if (bt_shape_kernels (path) == NULL)
        continue;
      run_by (path, bt_shape_kernels (path)->exponential, special, M, z);
      for (gsize i = 0; i < M; i++)
        {
          const double expected = exp (special[i]);

          if (!(isnan (z[i]) && isnan (expected)) && z[i] != expected)
            g_test_message ("%s exp (%.17g) = %.17g instead of %.17g", bt_path_name (path), special[i], z[i], expected);
          g_assert_true ((isnan (z[i]) && isnan (expected)) || z[i] == expected);
        }
      g_rand_set_seed (rand, 20);
      for (int round = 0; round < ROUNDS; round++)
        {
          for (int i = 0; i < N; i++)
            x[i] = round % 4 == 0   ? g_rand_double_range (rand, -708, 709.78)
                   : round % 4 == 1 ? g_rand_double_range (rand, -1, 1)
                   : round % 4 == 2 ? g_rand_double_range (rand, -745.1, -708)
                                    : (i % 2 ? 1 : -1) * exp2 (g_rand_double_range (rand, -60, 9));
          run_by (path, bt_shape_kernels (path)->exponential, x, N, y);
          for (int i = 0; i < N; i++)
            {
              double off = units_off (y[i], expl (x[i]));

              if (round % 4 == 2)
                worst_subnormal = fmax (worst_subnormal, off);
              else
                worst = fmax (worst, off);
            }
        }
      g_test_message ("%s: worst %.3f units, subnormal results %.3f", bt_path_name (path), worst, worst_subnormal);
      if (LDBL_MANT_DIG >= 64)
        {
          g_assert_cmpfloat (worst, <=, 1);
          g_assert_cmpfloat (worst_subnormal, <=, 1);
        }
    }
  bt_exp_eval (x, N, x);
  g_assert_true (memcmp (x, y, sizeof x) == 0);
}

static void
test_logarithm (void)
{
  enum
  {
    N = 1000,
    ROUNDS = 300
  };
  g_autoptr (GRand) rand = g_rand_new ();
  double x[N], y[N];

  for (BtPath path = 0; path < BT_N_PATHS; path++)
    {
      double worst = 0;

      if (bt_shape_kernels (path) == NULL)
        continue;
      g_rand_set_seed (rand, 20);
      for (int round = 0; round < ROUNDS; round++)
        {
          for (int i = 0; i < N; i++)
            x[i] = round % 3 == 0   ? exp2 (g_rand_double_range (rand, -1022, 1023.9))
                   : round % 3 == 1 ? g_rand_double_range (rand, 0.5, 2)
                                    : 1 + (i % 2 ? 1 : -1) * exp2 (g_rand_double_range (rand, -52, -1));
          run_by (path, bt_shape_kernels (path)->logarithm, x, N, y);
          for (int i = 0; i < N; i++)
            if (x[i] == 1)
              g_assert_true (y[i] == 0);
            else
              worst = fmax (worst, units_off (y[i], logl (x[i])));
        }
      g_test_message ("%s: worst %.3f units", bt_path_name (path), worst);
      if (LDBL_MANT_DIG >= 64)
        g_assert_cmpfloat (worst, <=, 1);
    }
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  g_test_add_func ("/exponential/exp", test_exponential);
  g_test_add_func ("/exponential/log", test_logarithm);
  return g_test_run ();
}
