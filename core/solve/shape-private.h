/* The kernels of the shapes by instruction set. Tests and measurements choose one; everyone else calls bt_shape_eval(). */
#ifndef BANDTALLY_SHAPE_PRIVATE_H
#define BANDTALLY_SHAPE_PRIVATE_H

#include <bandtally/shape.h>

G_BEGIN_DECLS

/* @BT_PATH_PLAIN: what the compiler does for the baseline; on x86-64 two doubles at once, without fused multiply-add. */
typedef enum { BT_PATH_PLAIN, BT_PATH_AVX2, BT_PATH_AVX512, BT_N_PATHS } BtPath;

typedef struct {
  void (*eval[BT_N_SHAPES]) (const double *q, const double *x, gsize n, double *f, double *const *df);
  void (*exponential) (const double *x, gsize n, double *out);
  void (*logarithm) (const double *x, gsize n, double *out); /* positive normal numbers only */
} BtShapeKernels;

const char *bt_path_name (BtPath path);
/* The fastest that this processor has. */
BtPath bt_path_best (void);
/* NULL where this processor or this build has no such path. */
const BtShapeKernels *bt_shape_kernels (BtPath path);

extern const BtShapeKernels bt_shape_kernels_plain;
#if defined(__x86_64__) && defined(__GNUC__)
#define BT_HAVE_AVX 1
extern const BtShapeKernels bt_shape_kernels_avx2;
extern const BtShapeKernels bt_shape_kernels_avx512;
#endif

G_END_DECLS

#endif
