/* Cholesky factor of a small symmetric matrix. */
#ifndef BANDTALLY_CHOLESKY_PRIVATE_H
#define BANDTALLY_CHOLESKY_PRIVATE_H

#include <glib.h>

/* Replaces the lower triangle of the row-major m x m matrix @a by its factor for bt_cholesky_solve(); the strict upper triangle is
 * neither read nor written. @condition (nullable): estimate of the scaled matrix's condition.
 * FALSE where it is not positive definite within rounding. */
gboolean bt_cholesky_decompose (double *a, gsize m, double *condition);
/* Solves in place. */
void bt_cholesky_solve (const double *a, gsize m, double *b);

#endif
