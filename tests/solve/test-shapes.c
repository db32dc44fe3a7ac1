/* Shapes against references in long double that share nothing with the kernels: exp(), log() of the C library, and for the Voigt function the trapezoidal rule
 * with its pole's correction (Matta and Reichl, Math. Comp. 25, 339 (1971), from memory), itself checked against 30-digit values. Derivatives against differences of
 * these, and coarsely against differences of the kernels. Everything for each instruction set that the processor has. Errors are counted as shares of the largest
 * value on the grid. */
#include <bandtally/shape.h>

#include <complex.h>
#include <float.h>
#include <math.h>

#include "exponential.h"
#include "shape-private.h"

#define LN2L 0.693147180559945309417232121458176568L
#define PIL 3.141592653589793238462643383279502884L

/* w(z) for Im z >= 0 by the trapezoidal rule with step 0.4: error about exp(-(pi / 0.4)^2) = 2e-27. The grid is the one whose points stay away from z. */
static long double complex
faddeeva (long double complex z)
{
  const long double h = 0.4L, share = creall (z) / h - floorl (creall (z) / h), shift = share >= 0.25L && share <= 0.75L ? 0 : 0.5L;
  long double complex sum = 0;

  for (int k = -20; k < 20; k++)
    {
      long double t = (k + shift) * h;

      sum += expl (-t * t) / (z - t);
    }
  sum *= I * h / PIL;
  if (cimagl (z) < PIL / h)
    sum += 2 * cexpl (-z * z) / (1 - (shift > 0 ? -1 : 1) * cexpl (-2 * PIL * I * z / h));
  return sum;
}

static long double
reference (BtShape shape, const long double *q, long double x)
{
  const long double u = shape == BT_SHAPE_CONSTANT || shape == BT_SHAPE_LINE ? 0 : (x - q[0]) / q[1];

  switch (shape)
    {
    case BT_SHAPE_CONSTANT:
      return 1;
    case BT_SHAPE_LINE:
      return x - q[0];
    case BT_SHAPE_GAUSSIAN:
      return expl (-4 * LN2L * u * u);
    case BT_SHAPE_LORENTZIAN:
      return 1 / (1 + 4 * u * u);
    case BT_SHAPE_PLASMON:
      return 1 / (1 + u * u);
    case BT_SHAPE_PSEUDO_VOIGT:
      return (1 - q[2]) * expl (-4 * LN2L * u * u) + q[2] / (1 + 4 * u * u);
    case BT_SHAPE_FANO:
      return (q[2] + 2 * u) * (q[2] + 2 * u) / ((1 + q[2] * q[2]) * (1 + 4 * u * u));
    case BT_SHAPE_EXPONENTIAL:
      return expl (-q[0] * (x - q[1]));
    case BT_SHAPE_RECIPROCAL_EXPONENTIAL:
      return expl (-q[0] * (1 / x - 1 / q[1]));
    case BT_SHAPE_POWER:
      return powl (x / q[1], -q[0]);
    case BT_SHAPE_VOIGT:
      {
        long double a = sqrtl (LN2L), y = a * q[2] / q[1];

        return creall (faddeeva (2 * a * u + I * y)) / creall (faddeeva (I * y));
      }
    case BT_N_SHAPES:
    default:
      return NAN;
    }
}

/* By parameter @k: central differences of sixth order. @step: of the parameter. */
static long double
reference_slope (BtShape shape, const long double *q, guint k, long double x, long double step)
{
  static const long double weight[3] = { 0.75L, -0.15L, 1 / 60.0L };
  long double sum = 0, moved[BT_SHAPE_MAX_PARAMETERS];

  for (int j = 1; j <= 3; j++)
    for (int sign = -1; sign <= 1; sign += 2)
      {
        for (guint i = 0; i < BT_SHAPE_MAX_PARAMETERS; i++)
          moved[i] = q[i] + (i == k ? sign * j * step : 0);
        sum += sign * weight[j - 1] * reference (shape, moved, x);
      }
  return sum / step;
}

/* @step: for the differences of the reference, as a share of a width or of 1. @value, @slope: tolerated errors as shares of the largest. */
typedef struct { BtShape shape; double q[BT_SHAPE_MAX_PARAMETERS], low, high; double value, slope; } Case;
static const Case cases[] = {
  { BT_SHAPE_CONSTANT, { 0 }, 0, 5, 0, 0 },
  { BT_SHAPE_LINE, { 1.5 }, 0, 5, 2e-16, 0 },
  { BT_SHAPE_GAUSSIAN, { 1.7, 0.15 }, 0.5, 3.5, 3e-16, 6e-15 },
  { BT_SHAPE_GAUSSIAN, { 1.7, 4 }, 0.5, 3.5, 3e-16, 6e-15 },
  { BT_SHAPE_GAUSSIAN, { 980, 33 }, 300, 2500, 3e-16, 6e-15 },
  { BT_SHAPE_LORENTZIAN, { 1.7, 0.15 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_LORENTZIAN, { 980, 33 }, 300, 2500, 1e-15, 6e-15 },
  { BT_SHAPE_PLASMON, { 4.6, 1.1 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_PSEUDO_VOIGT, { 1.7, 0.15, 0.3 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_PSEUDO_VOIGT, { 1.7, 0.15, 1 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_FANO, { 1.7, 0.15, 3 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_FANO, { 1.7, 0.15, -0.4 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_FANO, { 1.7, 0.15, 0 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_EXPONENTIAL, { 1.3, 0 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_EXPONENTIAL, { 0.0015, 500 }, 300, 2500, 1e-15, 6e-15 },
  { BT_SHAPE_EXPONENTIAL, { -1.3, 2 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_RECIPROCAL_EXPONENTIAL, { 2.1, 2.5 }, 0.5, 3.5, 2e-15, 6e-15 },
  { BT_SHAPE_POWER, { 1.4, 500 }, 300, 2500, 2e-15, 6e-15 },
  { BT_SHAPE_POWER, { -3.2, 2.5 }, 0.5, 3.5, 3e-15, 6e-15 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 1.5e-5 }, 0.5, 3.5, 1e-13, 3e-11 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 1e-3 }, 0.5, 3.5, 1e-13, 3e-11 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 0.05 }, 0.5, 3.5, 1e-13, 3e-11 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 0.15 }, 0.5, 3.5, 1e-13, 3e-11 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 0.5 }, 0.5, 3.5, 1e-13, 3e-11 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 0.8 }, 0.5, 3.5, 1e-13, 3e-11 },
  { BT_SHAPE_VOIGT, { 1.7, 0.1, 0.545 }, 0.5, 3.5, 1e-13, 3e-11 },
  { BT_SHAPE_VOIGT, { 1.7, 0.1, 1.5 }, 0.5, 3.5, 1e-13, 3e-11 },
  { BT_SHAPE_VOIGT, { 1.7, 0.001, 0.5 }, 0.5, 3.5, 1e-13, 3e-11 },
  { BT_SHAPE_VOIGT, { 980, 33, 11 }, 300, 2500, 1e-13, 3e-11 },
};

enum { POINTS = 1301 };

/* How far a parameter moves for differences: a share of what its scale is. */
static double
scale_of (const Case *row, guint k)
{
  switch (bt_shape_parameter_role (row->shape, k))
    {
    case BT_SHAPE_ROLE_CENTRE:
      return row->shape == BT_SHAPE_VOIGT ? fmax (row->q[1], row->q[2]) : row->q[1];
    case BT_SHAPE_ROLE_WIDTH:
      /* A Voigt is even in its Gaussian width and smooth over the larger of the two; the Lorentzian width may not become negative. */
      return row->shape != BT_SHAPE_VOIGT ? row->q[k] : k == 1 ? fmax (row->q[1], 0.3 * row->q[2]) : fmin (row->q[2] * 300, row->q[1]);
    case BT_SHAPE_ROLE_SHARE:
      return 1;
    case BT_SHAPE_ROLE_OTHER:
    default:
      return fmax (fabs (row->q[k]), row->shape == BT_SHAPE_FANO ? 1 : 0);
    }
}

static void
check_case (const BtShapeKernels *kernels, BtPath path, const Case *row)
{
  const guint m = bt_shape_n_parameters (row->shape);
  g_autofree double *x = g_new (double, POINTS), *f = g_new (double, POINTS), *slopes = g_new (double, 3 * POINTS),
                    *near = g_new (double, 2 * POINTS);
  double *df[3] = { slopes, slopes + POINTS, slopes + 2 * POINTS };
  long double q[BT_SHAPE_MAX_PARAMETERS], worst = 0, largest = 0;

  for (guint i = 0; i < BT_SHAPE_MAX_PARAMETERS; i++)
    q[i] = row->q[i];
  for (int i = 0; i < POINTS; i++)
    x[i] = row->low + (row->high - row->low) * i / (POINTS - 1);
  kernels->eval[row->shape](row->q, x, POINTS, f, df);
  for (int i = 0; i < POINTS; i++)
    {
      long double exact = reference (row->shape, q, x[i]);

      worst = fmaxl (worst, fabsl (f[i] - exact));
      largest = fmaxl (largest, fabsl (exact));
    }
  g_test_message ("%s %s: value %.1Le", bt_path_name (path), bt_shape_name (row->shape), worst / largest);
  g_assert_cmpfloat ((double) (worst / largest), <=, row->value);
  for (guint k = 0; k < m; k++)
    {
      const double scale = scale_of (row, k), step = 1e-5 * scale;
      double moved[BT_SHAPE_MAX_PARAMETERS] = { row->q[0], row->q[1], row->q[2] };
      long double coarse = 0;

      for (int sign = 0; sign < 2; sign++)
        {
          moved[k] = row->q[k] + (sign ? step : -step);
          kernels->eval[row->shape](moved, x, POINTS, near + sign * POINTS, NULL);
        }
      worst = largest = 0;
      for (int i = 0; i < POINTS; i++)
        {
          long double exact = reference_slope (row->shape, q, k, x[i], 3e-4L * scale);

          worst = fmaxl (worst, fabsl (df[k][i] - exact));
          largest = fmaxl (largest, fabsl (exact));
          coarse = fmaxl (coarse, fabsl (df[k][i] - (near[POINTS + i] - near[i]) / (2 * step)));
        }
      g_test_message ("  by %s: %.1Le (differences of the kernel: %.1Le)", bt_shape_parameter_name (row->shape, k), worst / largest,
                      coarse / largest);
      g_assert_cmpfloat ((double) (worst / largest), <=, row->slope);
      /* Rounding of two values over the step, and the curvature. */
      g_assert_cmpfloat ((double) (coarse / largest), <=, 1e-9 + (row->value + 1e-15) / (double) (step * largest));
    }
}

static void
test_cases (void)
{
  for (BtPath path = 0; path < BT_N_PATHS; path++)
    if (bt_shape_kernels (path) != NULL)
      for (gsize i = 0; i < G_N_ELEMENTS (cases); i++)
        check_case (bt_shape_kernels (path), path, &cases[i]);
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  g_test_add_func ("/shapes/values-and-derivatives", test_cases);
  return g_test_run ();
}
