/* Shapes: names, parameters, support, and the choice of the instruction set. */
#include <bandtally/shape.h>

#include <math.h>
#include <string.h>

#include "shape-private.h"

#define LN16 2.772588722239781 /* 4 ln 2 */

typedef struct { const char *name; BtShapeRole role; } Parameter;

/* Parameters, then references. */
static const struct { const char *name; guint n_parameters, n_references; Parameter q[BT_SHAPE_MAX_PARAMETERS]; } shapes[] = {
  [BT_SHAPE_CONSTANT] = { "constant", 0, 0, { { NULL, BT_SHAPE_ROLE_OTHER } } },
  [BT_SHAPE_LINE] = { "line", 0, 1, { { "reference", BT_SHAPE_ROLE_OTHER } } },
  [BT_SHAPE_GAUSSIAN] = { "gaussian", 2, 0, { { "centre", BT_SHAPE_ROLE_CENTRE }, { "width", BT_SHAPE_ROLE_WIDTH } } },
  [BT_SHAPE_LORENTZIAN] = { "lorentzian", 2, 0, { { "centre", BT_SHAPE_ROLE_CENTRE }, { "width", BT_SHAPE_ROLE_WIDTH } } },
  [BT_SHAPE_VOIGT] = { "voigt", 3, 0,
                       { { "centre", BT_SHAPE_ROLE_CENTRE },
                         { "gaussian width", BT_SHAPE_ROLE_WIDTH },
                         { "lorentzian width", BT_SHAPE_ROLE_WIDTH } } },
  [BT_SHAPE_PSEUDO_VOIGT] = { "pseudo-voigt", 3, 0,
                              { { "centre", BT_SHAPE_ROLE_CENTRE },
                                { "width", BT_SHAPE_ROLE_WIDTH },
                                { "share", BT_SHAPE_ROLE_SHARE } } },
  [BT_SHAPE_FANO] = { "fano", 3, 0,
                      { { "centre", BT_SHAPE_ROLE_CENTRE },
                        { "width", BT_SHAPE_ROLE_WIDTH },
                        { "asymmetry", BT_SHAPE_ROLE_OTHER } } },
  [BT_SHAPE_EXPONENTIAL] = { "exponential", 1, 1,
                             { { "decay", BT_SHAPE_ROLE_OTHER }, { "reference", BT_SHAPE_ROLE_OTHER } } },
  [BT_SHAPE_RECIPROCAL_EXPONENTIAL] = { "reciprocal exponential", 1, 1,
                                        { { "decay", BT_SHAPE_ROLE_OTHER }, { "reference", BT_SHAPE_ROLE_OTHER } } },
  [BT_SHAPE_POWER] = { "power", 1, 1, { { "exponent", BT_SHAPE_ROLE_OTHER }, { "reference", BT_SHAPE_ROLE_OTHER } } },
  [BT_SHAPE_PLASMON] = { "plasmon", 2, 0, { { "centre", BT_SHAPE_ROLE_CENTRE }, { "half width", BT_SHAPE_ROLE_WIDTH } } },
};

G_STATIC_ASSERT (G_N_ELEMENTS (shapes) == BT_N_SHAPES);

const char *
bt_shape_name (BtShape shape)
{
  g_return_val_if_fail (shape < BT_N_SHAPES, NULL);
  return shapes[shape].name;
}

gboolean
bt_shape_from_name (const char *name, BtShape *shape)
{
  for (guint i = 0; i < BT_N_SHAPES; i++)
    if (g_ascii_strcasecmp (name, shapes[i].name) == 0)
      {
        *shape = (BtShape)i;
        return TRUE;
      }
  return FALSE;
}

guint
bt_shape_n_parameters (BtShape shape)
{
  g_return_val_if_fail (shape < BT_N_SHAPES, 0);
  return shapes[shape].n_parameters;
}

guint
bt_shape_n_references (BtShape shape)
{
  g_return_val_if_fail (shape < BT_N_SHAPES, 0);
  return shapes[shape].n_references;
}

BtShapeRole
bt_shape_parameter_role (BtShape shape, guint parameter)
{
  g_return_val_if_fail (shape < BT_N_SHAPES && parameter < shapes[shape].n_parameters, BT_SHAPE_ROLE_OTHER);
  return shapes[shape].q[parameter].role;
}

const char *
bt_shape_parameter_name (BtShape shape, guint parameter)
{
  g_return_val_if_fail (shape < BT_N_SHAPES && parameter < shapes[shape].n_parameters + shapes[shape].n_references, NULL);
  return shapes[shape].q[parameter].name;
}

const char *
bt_path_name (BtPath path)
{
  static const char *const names[BT_N_PATHS] = { "plain", "AVX2", "AVX-512" };

  g_return_val_if_fail (path < BT_N_PATHS, NULL);
  return names[path];
}

/* Asked at each call: a few loads from what the compiler's library found at start-up, and no state of ours. */
BtPath
bt_path_best (void)
{
#ifdef BT_HAVE_AVX
  if (__builtin_cpu_supports ("avx512f") && __builtin_cpu_supports ("avx512dq") && __builtin_cpu_supports ("fma"))
    return BT_PATH_AVX512;
  if (__builtin_cpu_supports ("avx2") && __builtin_cpu_supports ("fma"))
    return BT_PATH_AVX2;
#endif
  return BT_PATH_PLAIN;
}

const BtShapeKernels *
bt_shape_kernels (BtPath path)
{
  /* Whoever has a path has those before it. */
  if (path > bt_path_best ())
    return NULL;
  switch (path)
    {
#ifdef BT_HAVE_AVX
    case BT_PATH_AVX512:
      return &bt_shape_kernels_avx512;
    case BT_PATH_AVX2:
      return &bt_shape_kernels_avx2;
#endif
    default:
      return &bt_shape_kernels_plain;
    }
}

/* Whole vectors in place, the rest in one filled up with its last point. */
void
bt_shape_run (const BtShapeKernels *kernels, BtShapeKernel kernel, guint n_parameters, const double *q, const double *x,
              gsize n, double *f, double *const *df)
{
  const gsize rest = n % kernels->lanes, whole = n - rest;

  if (whole > 0)
    kernel (q, x, whole, f, df);
  if (rest > 0)
    {
      double last_x[BT_MAX_LANES], last_f[BT_MAX_LANES], slopes[BT_SHAPE_MAX_PARAMETERS][BT_MAX_LANES];
      double *const last_df[BT_SHAPE_MAX_PARAMETERS] = { slopes[0], slopes[1], slopes[2] };

      for (gsize i = 0; i < kernels->lanes; i++)
        last_x[i] = x[whole + MIN (i, rest - 1)];
      kernel (q, last_x, kernels->lanes, last_f, df == NULL ? NULL : last_df);
      memcpy (f + whole, last_f, rest * sizeof (double));
      for (guint k = 0; k < n_parameters && df != NULL; k++)
        if (df[k] != NULL)
          memcpy (df[k] + whole, slopes[k], rest * sizeof (double));
    }
}

void
bt_shape_eval (BtShape shape, const double *q, const double *x, gsize n, double *f, double *const *df)
{
  const BtShapeKernels *kernels = bt_shape_kernels (bt_path_best ());

  g_return_if_fail (shape < BT_N_SHAPES);
  bt_shape_run (kernels, kernels->eval[shape], shapes[shape].n_parameters, q, x, n, f, df);
}

/* Where a falling exponential of decay @b is under @loss: beyond @distance from the reference, on one side. */
static void
one_side (double b, double distance, double x0, double *low, double *high)
{
  if (b > 0)
    *high = x0 + distance;
  else if (b < 0)
    *low = x0 - distance;
}

static void
both_sides (double centre, double distance, double *low, double *high)
{
  *low = centre - distance;
  *high = centre + distance;
}

void
bt_shape_support (BtShape shape, const double *q, double loss, double *low, double *high)
{
  const double logarithm = -log (loss);

  g_return_if_fail (shape < BT_N_SHAPES);
  *low = -INFINITY;
  *high = INFINITY;
  if (!(loss > 0 && loss < 1))
    return;
  switch (shape)
    {
    case BT_SHAPE_GAUSSIAN:
      both_sides (q[0], q[1] * sqrt (logarithm / LN16), low, high);
      break;
    case BT_SHAPE_LORENTZIAN:
      both_sides (q[0], 0.5 * q[1] * sqrt (1 / loss - 1), low, high);
      break;
    case BT_SHAPE_PLASMON:
      both_sides (q[0], q[1] * sqrt (1 / loss - 1), low, high);
      break;
    case BT_SHAPE_VOIGT:
    case BT_SHAPE_PSEUDO_VOIGT:
      /* With the slightest Lorentzian part the wings reach farther than any data. */
      if (q[2] == 0)
        both_sides (q[0], q[1] * sqrt (logarithm / LN16), low, high);
      break;
    case BT_SHAPE_EXPONENTIAL:
      one_side (q[0], logarithm / fabs (q[0]), q[1], low, high);
      break;
    case BT_SHAPE_POWER:
      /* Over positive x: x / x0 beyond loss^(-1 / p). */
      if (q[1] > 0 && q[0] > 0)
        *high = q[1] * exp (logarithm / q[0]);
      else if (q[1] > 0 && q[0] < 0)
        *low = q[1] * exp (logarithm / q[0]);
      break;
    case BT_SHAPE_CONSTANT:
    case BT_SHAPE_LINE:
    case BT_SHAPE_FANO:
    case BT_SHAPE_RECIPROCAL_EXPONENTIAL:
    default:
      break;
    }
}
