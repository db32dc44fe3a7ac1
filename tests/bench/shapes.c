/* Nanoseconds a value of each shape, for each instruction set, beside the C library's exp():
 *
 *   meson test -C BUILD --benchmark shapes --verbose
 *
 * 1,301 points over a usual range, in blocks of 64 as a fit asks for them; best of 25. The last column is the time with all
 * derivatives over that of exp(), for the fastest set. Compare figures of one run only. */
#include <bandtally/shape.h>

#include <math.h>
#include <stdio.h>

#include "shape-private.h"

enum
{
  POINTS = 1301,
  BLOCK = 64,
  PASSES = 40,
  TRIES = 25
};

static const struct
{
  const char *title;
  BtShape shape;
  double q[BT_SHAPE_MAX_PARAMETERS];
} rows[] = {
  { "Gaussian", BT_SHAPE_GAUSSIAN, { 1.7, 0.3 } },
  { "Lorentzian", BT_SHAPE_LORENTZIAN, { 1.7, 0.3 } },
  { "Voigt, wl = 0.3 wg", BT_SHAPE_VOIGT, { 1.7, 0.3, 0.09 } },
  { "Voigt, narrow: wings", BT_SHAPE_VOIGT, { 1.7, 0.1, 0.03 } },
  { "Voigt, wl = 7 wg", BT_SHAPE_VOIGT, { 1.7, 0.1, 0.7 } },
  { "pseudo-Voigt", BT_SHAPE_PSEUDO_VOIGT, { 1.7, 0.3, 0.3 } },
  { "Fano", BT_SHAPE_FANO, { 1.7, 0.3, 3 } },
  { "exponential", BT_SHAPE_EXPONENTIAL, { 1.3, 2 } },
  { "reciprocal exponential", BT_SHAPE_RECIPROCAL_EXPONENTIAL, { 2.1, 2.5 } },
  { "power", BT_SHAPE_POWER, { 1.4, 2.5 } },
  { "plasmon", BT_SHAPE_PLASMON, { 4.6, 1.1 } },
};

static void
eval_by (const BtShapeKernels *kernels, BtShape shape, const double *q, const double *x, gsize n, double *f, double *const *df)
{
  bt_shape_run (kernels, kernels->eval[shape], bt_shape_n_parameters (shape), q, x, n, f, df);
}

static double x[POINTS], f[POINTS], slopes[3][POINTS];
static volatile double sink;

typedef void (*Work) (const BtShapeKernels *kernels, BtShape shape, const double *q, gboolean with_slopes);

static void
by_kernel (const BtShapeKernels *kernels, BtShape shape, const double *q, gboolean with_slopes)
{
  for (gsize i = 0; i < POINTS; i += BLOCK)
    {
      double *df[3] = { slopes[0] + i, slopes[1] + i, slopes[2] + i };

      eval_by (kernels, shape, q, x + i, MIN (BLOCK, POINTS - i), f + i, with_slopes ? df : NULL);
    }
}

static void
exp_by_kernel (const BtShapeKernels *kernels, BtShape shape, const double *q, gboolean with_slopes)
{
  for (gsize i = 0; i < POINTS; i += BLOCK)
    bt_shape_run (kernels, kernels->exponential, 0, NULL, x + i, MIN (BLOCK, POINTS - i), f + i, NULL);
}

static void
exp_by_library (const BtShapeKernels *kernels, BtShape shape, const double *q, gboolean with_slopes)
{
  for (gsize i = 0; i < POINTS; i++)
    f[i] = exp (x[i]);
}

/* ns a value */
static double
measure (Work work, const BtShapeKernels *kernels, BtShape shape, const double *q, gboolean with_slopes)
{
  double best = INFINITY;

  for (int try = 0; try < TRIES; try++)
    {
      gint64 start = g_get_monotonic_time ();

      for (int pass = 0; pass < PASSES; pass++)
        {
          work (kernels, shape, q, with_slopes);
          sink += f[pass];
        }
      best = fmin (best, (double)(g_get_monotonic_time () - start));
    }
  return best * 1e3 / ((double)PASSES * POINTS);
}

int
main (void)
{
  double library, last;

  for (int i = 0; i < POINTS; i++)
    x[i] = 0.75 + 2.7 * i / (POINTS - 1);
  library = measure (exp_by_library, NULL, 0, NULL, FALSE);
  printf ("ns a value: values only / with all derivatives; exp() of the C library %.2f\n%-24s", library, "");
  for (BtPath path = 0; path <= bt_path_best (); path++)
    printf ("%17s", bt_path_name (path));
  printf ("%12s\n%-24s", "to exp()", "exponential alone");
  last = 0;
  for (BtPath path = 0; path <= bt_path_best (); path++)
    printf ("%17.2f", last = measure (exp_by_kernel, bt_shape_kernels (path), 0, NULL, FALSE));
  printf ("%12.2f\n", last / library);
  for (gsize k = 0; k < G_N_ELEMENTS (rows); k++)
    {
      printf ("%-24s", rows[k].title);
      for (BtPath path = 0; path <= bt_path_best (); path++)
        {
          double value = measure (by_kernel, bt_shape_kernels (path), rows[k].shape, rows[k].q, FALSE);

          last = measure (by_kernel, bt_shape_kernels (path), rows[k].shape, rows[k].q, TRUE);
          printf ("%10.2f /%5.2f", value, last);
        }
      printf ("%12.2f\n", last / library);
    }
  return 0;
}
