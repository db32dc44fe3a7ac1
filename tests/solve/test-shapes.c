/* Shapes against references in long double that share nothing with the kernels: exp() and pow() of the C library, and
 * voigt-reference.h. Derivatives against differences of these, and coarsely against differences of the kernels. Everything for
 * each instruction set that the processor has. Errors are shares of the largest value on the grid. */
#include <bandtally/shape.h>

#include <math.h>

#include "shape-private.h"
#include "voigt-reference.h"

static void
eval_by (const BtShapeKernels *kernels, BtShape shape, const double *q, const double *x, gsize n, double *f, double *const *df)
{
  bt_shape_run (kernels, kernels->eval[shape], bt_shape_n_parameters (shape), q, x, n, f, df);
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
      return voigt_reference (q, x);
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

/* @value, @slope: tolerated errors as shares of the largest, as shape.h states them; those of slopes include the rounding of
 * the reference's own differences. */
typedef struct
{
  BtShape shape;
  double q[BT_SHAPE_MAX_PARAMETERS], low, high;
  double value, slope;
} Case;
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
  { BT_SHAPE_EXPONENTIAL, { 190, 0.5 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_RECIPROCAL_EXPONENTIAL, { 400, 2.5 }, 0.8, 2.5, 1e-15, 6e-15 },
  { BT_SHAPE_POWER, { 60, 0.5 }, 0.5, 3.5, 1e-15, 6e-15 },
  { BT_SHAPE_POWER, { 1.4, 500 }, 300, 2500, 2e-15, 6e-15 },
  { BT_SHAPE_POWER, { -3.2, 2.5 }, 0.5, 3.5, 3e-15, 6e-15 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 1.5e-5 }, 0.5, 3.5, 1e-13, 5e-12 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 1e-3 }, 0.5, 3.5, 1e-13, 5e-12 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 0.05 }, 0.5, 3.5, 1e-13, 5e-12 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 0.15 }, 0.5, 3.5, 1e-13, 5e-12 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 0.5 }, 0.5, 3.5, 1e-13, 5e-12 },
  { BT_SHAPE_VOIGT, { 1.7, 0.15, 0.8 }, 0.5, 3.5, 1e-13, 5e-12 },
  { BT_SHAPE_VOIGT, { 1.7, 0.1, 0.545 }, 0.5, 3.5, 1e-13, 5e-12 },
  { BT_SHAPE_VOIGT, { 1.7, 0.1, 1.5 }, 0.5, 3.5, 1e-13, 5e-12 },
  { BT_SHAPE_VOIGT, { 1.7, 0.001, 0.5 }, 0.5, 3.5, 1e-13, 5e-12 },
  { BT_SHAPE_VOIGT, { 980, 33, 11 }, 300, 2500, 1e-13, 5e-12 },
};

enum
{
  POINTS = 403
};

/* How far a parameter moves for differences: a share of what its scale is. */
static double
scale_of (const Case *row, guint k)
{
  switch (bt_shape_parameter_role (row->shape, k))
    {
    case BT_SHAPE_ROLE_CENTRE:
      return row->shape == BT_SHAPE_VOIGT ? fmax (row->q[1], row->q[2]) : row->q[1];
    case BT_SHAPE_ROLE_WIDTH:
      /* A Voigt is even in its Gaussian width and smooth over the larger of the two; the Lorentzian width may not become
       * negative. */
      return row->shape != BT_SHAPE_VOIGT ? row->q[k]
             : k == 1                     ? fmax (row->q[1], 0.3 * row->q[2])
                                          : fmin (row->q[2] * 300, row->q[1]);
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
  eval_by (kernels, row->shape, row->q, x, POINTS, f, df);
  for (int i = 0; i < POINTS; i++)
    {
      long double exact = reference (row->shape, q, x[i]);

      worst = fmaxl (worst, fabsl (f[i] - exact));
      largest = fmaxl (largest, fabsl (exact));
      if (row->shape == BT_SHAPE_EXPONENTIAL || row->shape == BT_SHAPE_RECIPROCAL_EXPONENTIAL || row->shape == BT_SHAPE_POWER)
        {
          const double p = row->shape == BT_SHAPE_POWER ? fabs (row->q[0]) : 0;

          g_assert_cmpfloat ((double) fabsl (f[i] / exact - 1), <=, (1 + p + 2 * (double) fabsl (logl (exact))) * 2.3e-16);
        }
    }
  g_test_message ("%s %s: value %.1Le", bt_path_name (path), bt_shape_name (row->shape), worst / largest);
  g_assert_cmpfloat ((double)(worst / largest), <=, row->value);
  for (guint k = 0; k < m; k++)
    {
      const double scale = scale_of (row, k), step = 1e-5 * scale;
      double moved[BT_SHAPE_MAX_PARAMETERS] = { row->q[0], row->q[1], row->q[2] };
      long double coarse = 0;

      for (int sign = 0; sign < 2; sign++)
        {
          moved[k] = row->q[k] + (sign ? step : -step);
          eval_by (kernels, row->shape, moved, x, POINTS, near + sign * POINTS, NULL);
        }
      worst = largest = 0;
      for (int i = 0; i < POINTS; i++)
        {
          long double exact = reference_slope (row->shape, q, k, x[i], 3e-4L * scale);

          worst = fmaxl (worst, fabsl (df[k][i] - exact));
          largest = fmaxl (largest, fabsl (exact));
          coarse = fmaxl (coarse, fabsl (df[k][i] - (near[POINTS + i] - near[i]) / (2 * step)));
        }
      g_test_message ("  by %s: %.1Le (differences of the kernel: %.1Le)", bt_shape_parameter_name (row->shape, k),
                      worst / largest, coarse / largest);
      g_assert_cmpfloat ((double)(worst / largest), <=, row->slope);
      /* Rounding of two values over the step, and the curvature. */
      g_assert_cmpfloat ((double)(coarse / largest), <=, 1e-9 + (row->value + 1e-15) / (double)(step * largest));
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

/* Bands are even about their centre, to the last bit where the distances are; unit height at the centre. */
static void
test_symmetry (void)
{
  static const BtShape bands[]
      = { BT_SHAPE_GAUSSIAN, BT_SHAPE_LORENTZIAN, BT_SHAPE_VOIGT, BT_SHAPE_PSEUDO_VOIGT, BT_SHAPE_PLASMON };
  enum
  {
    N = 201
  };
  double x[N], f[N], slopes[3][N];
  double *df[3] = { slopes[0], slopes[1], slopes[2] };

  for (int i = 0; i < N; i++)
    x[i] = 2 + (i - N / 2) / 64.0;
  for (gsize b = 0; b < G_N_ELEMENTS (bands); b++)
    for (int wide = 0; wide < 2; wide++)
      {
        bt_shape_eval (bands[b], (double[]){ 2, 0.1, wide ? 0.9 : 0.07 }, x, N, f, df);
        g_assert_cmpfloat_with_epsilon (f[N / 2], 1, 3e-16);
        for (int i = 0; i < N; i++)
          {
            g_assert_cmpfloat (f[i], >=, 0);
            g_assert_cmpfloat_with_epsilon (f[i], f[N - 1 - i], 1e-15);
            g_assert_cmpfloat_with_epsilon (slopes[0][i], -slopes[0][N - 1 - i], 1e-12);
            g_assert_cmpfloat_with_epsilon (slopes[1][i], slopes[1][N - 1 - i], 1e-12);
          }
      }
}

/* The same bits for a point wherever it stands, alone or in company, aligned or not, with derivatives or without. */
static void
check_place (const BtShapeKernels *kernels, const Case *row)
{
  enum
  {
    N = 61
  };
  const guint m = bt_shape_n_parameters (row->shape);
  double whole_x[N], whole[4][N], x[N + 8], part[4][N + 9];
  double *df[3] = { whole[1], whole[2], whole[3] };

  for (int i = 0; i < N; i++)
    whole_x[i] = row->low + (row->high - row->low) * i / (N - 1);
  eval_by (kernels, row->shape, row->q, whole_x, N, whole[0], df);
  for (gsize offset = 0; offset < 8; offset++)
    for (gsize n = 1; n <= 20; n++)
      for (gsize from = 0; from + n <= N; from += 7)
        {
          double *part_df[3] = { part[1] + offset, offset % 3 == 0 ? NULL : part[2] + offset, part[3] + offset };

          memcpy (x + offset, whole_x + from, n * sizeof (double));
          for (int k = 0; k < 4; k++)
            part[k][offset + n] = -77;
          eval_by (kernels, row->shape, row->q, x + offset, n, part[0] + offset, offset == 1 ? NULL : part_df);
          g_assert_true (memcmp (part[0] + offset, whole[0] + from, n * sizeof (double)) == 0);
          for (guint k = 0; k < m && offset != 1; k++)
            if (part_df[k] != NULL)
              g_assert_true (memcmp (part_df[k], whole[1 + k] + from, n * sizeof (double)) == 0);
          for (int k = 0; k < 4; k++)
            g_assert_cmpfloat (part[k][offset + n], ==, -77);
        }
}

static void
test_place (void)
{
  for (BtPath path = 0; path < BT_N_PATHS; path++)
    if (bt_shape_kernels (path) != NULL)
      for (gsize i = 0; i < G_N_ELEMENTS (cases); i++)
        check_place (bt_shape_kernels (path), &cases[i]);
}

/* Paths differ in the last bits only; those with fused multiply-add not at all. */
static void
test_paths (void)
{
  enum
  {
    N = 500
  };
  const BtShapeKernels *plain = bt_shape_kernels (BT_PATH_PLAIN), *avx2 = bt_shape_kernels (BT_PATH_AVX2),
                       *avx512 = bt_shape_kernels (BT_PATH_AVX512);
  double x[N], slow[N], fast[N], widest[N];

  if (avx2 == NULL)
    {
      g_test_skip ("this processor has the plain path only");
      return;
    }
  for (gsize i = 0; i < G_N_ELEMENTS (cases); i++)
    {
      const Case *row = &cases[i];
      double largest = 0, worst = 0;

      for (int k = 0; k < N; k++)
        x[k] = row->low + (row->high - row->low) * k / (N - 1);
      eval_by (plain, row->shape, row->q, x, N, slow, NULL);
      eval_by (avx2, row->shape, row->q, x, N, fast, NULL);
      for (int k = 0; k < N; k++)
        {
          largest = fmax (largest, fabs (slow[k]));
          worst = fmax (worst, fabs (slow[k] - fast[k]));
        }
      g_test_message ("%s: %.1e", bt_shape_name (row->shape), worst / largest);
      g_assert_cmpfloat (worst / largest, <=, 2e-15);
      if (avx512 != NULL)
        {
          double slopes[2][BT_SHAPE_MAX_PARAMETERS][N];

          eval_by (avx2, row->shape, row->q, x, N, fast, (double *const[]){ slopes[0][0], slopes[0][1], slopes[0][2] });
          eval_by (avx512, row->shape, row->q, x, N, widest, (double *const[]){ slopes[1][0], slopes[1][1], slopes[1][2] });
          g_assert_true (memcmp (widest, fast, sizeof fast) == 0);
          for (guint k = 0; k < bt_shape_n_parameters (row->shape); k++)
            g_assert_true (memcmp (slopes[0][k], slopes[1][k], sizeof slopes[0][k]) == 0);
        }
    }
}

/* Not a number in, not a number out; far away nothing but small numbers. */
static void
test_extremes (void)
{
  double f[9], slopes[3][9], *df[3] = { slopes[0], slopes[1], slopes[2] };

  for (BtPath path = 0; path < BT_N_PATHS; path++)
    for (BtShape shape = BT_SHAPE_LINE; shape < BT_N_SHAPES && bt_shape_kernels (path) != NULL; shape++)
      {
        double q[3] = { 1.5, 0.2, 0.3 };
        const double x[9] = { 1.5, NAN, -1e9, 1e9, 1e3, 1.6, 1e-300, 16, 1.4 };

        eval_by (bt_shape_kernels (path), shape, q, x, 9, f, df);
        for (int i = 0; i < 9; i++)
          {
            if (i == 1 || (shape == BT_SHAPE_POWER && x[i] < 0))
              g_assert_true (isnan (f[i]));
            else
              g_assert_false (isnan (f[i]));
            for (guint k = 0; k < bt_shape_n_parameters (shape); k++)
              {
                const double slope = slopes[k][i];

                if (shape != BT_SHAPE_EXPONENTIAL && shape != BT_SHAPE_RECIPROCAL_EXPONENTIAL)
                  g_assert_true (isnan (slope) == isnan (f[i]));
              }
          }
        for (guint k = 0; k < bt_shape_n_parameters (shape) + bt_shape_n_references (shape); k++)
          {
            const double kept = q[k];

            q[k] = NAN;
            eval_by (bt_shape_kernels (path), shape, q, x, 9, f, df);
            for (int i = 0; i < 9; i++)
              g_assert_true (isnan (f[i]));
            q[k] = kept;
          }
      }
}

/* Outside the support |f| < loss, and just inside it is not. */
static void
test_support (void)
{
  static const double losses[] = { 1e-16, 1e-8, 1e-3, 0.5 };

  for (gsize i = 0; i < G_N_ELEMENTS (cases); i++)
    for (gsize k = 0; k < G_N_ELEMENTS (losses); k++)
      {
        const Case *row = &cases[i];
        double ends[2], f;

        bt_shape_support (row->shape, row->q, losses[k], &ends[0], &ends[1]);
        g_assert_cmpfloat (ends[0], <, ends[1]);
        for (int side = 0; side < 2; side++)
          if (isfinite (ends[side]))
            {
              const double span = row->shape == BT_SHAPE_POWER ? ends[side]
                                  : isfinite (ends[!side])     ? ends[1] - ends[0]
                                                               : ends[side] - row->q[1];
              const double outward = (side ? 1e-6 : -1e-6) * fabs (span);

              bt_shape_eval (row->shape, row->q, (double[]){ ends[side] + outward }, 1, &f, NULL);
              g_assert_cmpfloat (f, <, losses[k]);
              bt_shape_eval (row->shape, row->q, (double[]){ ends[side] - outward }, 1, &f, NULL);
              g_assert_cmpfloat (f, >, losses[k]);
            }
      }
  {
    double low, high;

    bt_shape_support (BT_SHAPE_GAUSSIAN, (double[]){ 1, 1 }, 0, &low, &high);
    g_assert_true (isinf (low) && isinf (high));
    bt_shape_support (BT_SHAPE_VOIGT, (double[]){ 1, 1, 1e-9 }, 1e-16, &low, &high);
    g_assert_true (isinf (low) && isinf (high));
    bt_shape_support (BT_SHAPE_VOIGT, (double[]){ 1, 1, 0 }, 1e-16, &low, &high);
    g_assert_true (isfinite (low) && isfinite (high));
  }
}

static void
test_names (void)
{
  for (BtShape shape = 0; shape < BT_N_SHAPES; shape++)
    {
      BtShape back = BT_N_SHAPES;

      g_assert_true (bt_shape_from_name (bt_shape_name (shape), &back));
      g_assert_cmpuint (back, ==, shape);
      g_assert_cmpuint (bt_shape_n_parameters (shape) + bt_shape_n_references (shape), <=, BT_SHAPE_MAX_PARAMETERS);
      for (guint k = 0; k < bt_shape_n_parameters (shape) + bt_shape_n_references (shape); k++)
        g_assert_nonnull (bt_shape_parameter_name (shape, k));
    }
  g_assert_false (bt_shape_from_name ("triangle", &(BtShape){ 0 }));
}

int
main (int argc, char **argv)
{
  g_test_init (&argc, &argv, NULL);
  g_test_set_nonfatal_assertions ();
  g_test_add_func ("/shapes/values-and-derivatives", test_cases);
  g_test_add_func ("/shapes/symmetry", test_symmetry);
  g_test_add_func ("/shapes/place", test_place);
  g_test_add_func ("/shapes/paths", test_paths);
  g_test_add_func ("/shapes/extremes", test_extremes);
  g_test_add_func ("/shapes/support", test_support);
  g_test_add_func ("/shapes/names", test_names);
  return g_test_run ();
}
