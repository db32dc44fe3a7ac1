/* What the model needs of the shapes beyond the public header. */
#ifndef BANDTALLY_SHAPES_PRIVATE_H
#define BANDTALLY_SHAPES_PRIVATE_H

#include <bandtally/model.h>

/* Where power and exponential tails have their height. */
#define BT_TAIL_REFERENCE_NM 500.0

/* Number of shape parameters that a tail uses. */
guint bt_tail_n_shape (BtTailKind kind);
/* Unit-height tail without offset, and its derivatives by shape[0] and shape[1] (nullable). */
void bt_tail_shape_eval (BtTailKind kind, const double *shape, const double *energy_ev, gsize n, double *value, double *d0,
                         double *d1);

#endif
