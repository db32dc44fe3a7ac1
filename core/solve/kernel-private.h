/* The inner loops of the solver, built once for each instruction set and chosen at run time. */
#ifndef BANDTALLY_KERNEL_PRIVATE_H
#define BANDTALLY_KERNEL_PRIVATE_H

#include <glib.h>

/* Points in a block: 64 points x 70 columns stay in the first-level cache. */
#define BT_BLOCK 64

typedef struct
{
  const char *name;
  /* Adds the products of @m columns (m x BT_BLOCK, aligned to 64 bytes; room for columns up to a multiple of 4) to the upper
   * triangle of
   * @g: column a of the block belongs to row and column index[a]. */
  void (*products) (double *columns, guint m, const guint *index, double *g, gsize stride);
  /* y += a x over a block. */
  void (*add) (double *y, double a, const double *x);
  /* to = x - y over a block. */
  void (*difference) (double *to, const double *x, const double *y);
  /* Sum of x y over a block. */
  double (*dot) (const double *x, const double *y);
  /* x *= w */
  void (*weigh) (double *x, const double *w);
  /* Upper triangle of the row-major m x m matrix by U with U'U = a; @share: smallest share of a diagonal element that its pivot
   * kept. FALSE where it is not positive definite within rounding; the lower triangle is neither read nor written. */
  gboolean (*cholesky) (double *a, gsize m, gsize stride, double *share);
  /* Appends @n rows of @m columns (destroyed) to the triangular factor @r by Householder reflections (Golub and Van Loan, 5.2).
   */
  void (*append) (double *r, double *rows, gsize n, gsize m, gsize stride, double *work);
} BtKernel;

const BtKernel *bt_kernel (void);
extern const BtKernel bt_kernel_portable, bt_kernel_avx2, bt_kernel_avx512;

/* Solves U'U x = b in place. */
void bt_cholesky_solve (const double *u, gsize m, gsize stride, double *b);
/* Solves U x = b in place. */
void bt_upper_solve (const double *u, gsize m, gsize stride, double *b);
/* The rows of U^-1, upper triangle, into @inverse. */
void bt_upper_invert (const double *u, gsize m, gsize stride, double *inverse);

#endif
