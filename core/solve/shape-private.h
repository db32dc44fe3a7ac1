/* The kernels of the shapes by instruction set. Tests and measurements choose one; everyone else calls bt_shape_eval(). */
#ifndef BANDTALLY_SHAPE_PRIVATE_H
#define BANDTALLY_SHAPE_PRIVATE_H

#include <bandtally/shape.h>

/* BT_PLAIN_ONLY leaves the other paths out of the build. */
#if defined(__x86_64__) && defined(__GNUC__) && !defined(BT_PLAIN_ONLY)
#define BT_HAVE_AVX 1
#endif

G_BEGIN_DECLS

#define BT_MAX_LANES 8

/* @BT_PATH_PLAIN: what the compiler does for the baseline; on x86-64 two doubles at once, without fused multiply-add. */
typedef enum
{
  BT_PATH_PLAIN,
  BT_PATH_AVX2,
  BT_PATH_AVX512,
  BT_N_PATHS
} BtPath;

/* As bt_shape_eval(), but for @n a multiple of the lanes. */
typedef void (*BtShapeKernel) (const double *q, const double *x, gsize n, double *f, double *const *df);

typedef struct
{
  gsize lanes;
  BtShapeKernel eval[BT_N_SHAPES];
  BtShapeKernel exponential, logarithm; /* of x, without q and derivatives; logarithm: positive normal numbers only */
} BtShapeKernels;

const char *bt_path_name (BtPath path);
/* The fastest that this processor has. */
BtPath bt_path_best (void);
/* NULL where this processor or this build has no such path. */
const BtShapeKernels *bt_shape_kernels (BtPath path);

/* Any @n; @n_parameters: how many derivatives @df has. */
void bt_shape_run (const BtShapeKernels *kernels, BtShapeKernel kernel, guint n_parameters, const double *q, const double *x,
                   gsize n, double *f, double *const *df);

extern const BtShapeKernels bt_shape_kernels_plain;
#ifdef BT_HAVE_AVX
extern const BtShapeKernels bt_shape_kernels_avx2;
extern const BtShapeKernels bt_shape_kernels_avx512;
#endif

G_END_DECLS

#endif
