/* exp of whole arrays. */
#ifndef BANDTALLY_EXPONENTIAL_H
#define BANDTALLY_EXPONENTIAL_H

#include <glib.h>

/* out[i] = exp (x[i]); @out may be @x. Error under 1 unit in the last place over the whole range, subnormal results included;
 * infinities and NaN as exp() has them. A value depends on its x only, not on @n, alignment or place; it may differ in the last
 * bit between machines with and without fused multiply-add. */
void bt_exp_eval (const double *x, gsize n, double *out);

#endif
