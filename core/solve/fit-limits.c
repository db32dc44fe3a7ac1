/* How far one iteration may move a shape: a centre stays within sight of its band, a width neither collapses nor explodes.
 * Without, a fit of overlapping bands from afar throws one of them away in its first steps. */
#include "fit-private.h"

#include <math.h>

static void
limit (double *down, double *up, double most_down, double most_up)
{
  *down = fmin (*down, most_down);
  *up = fmin (*up, most_up);
}

void
bt_fit_shape_limits (BtShape shape, const double *q, double *down, double *up)
{
  double width = 0;

  for (guint k = 0; k < bt_shape_n_parameters (shape); k++)
    if (bt_shape_parameter_role (shape, k) == BT_SHAPE_ROLE_WIDTH)
      width += fabs (q[k]);
  for (guint k = 0; k < bt_shape_n_parameters (shape); k++)
    switch (bt_shape_parameter_role (shape, k))
      {
      case BT_SHAPE_ROLE_CENTRE:
        limit (down + k, up + k, width / 4, width / 4);
        break;
      case BT_SHAPE_ROLE_WIDTH:
        /* One of two widths may vanish; it must be able to come back. */
        limit (down + k, up + k, fabs (q[k]) / 4, fmax (fabs (q[k]), width / 4) / 2);
        break;
      case BT_SHAPE_ROLE_SHARE:
        limit (down + k, up + k, 0.25, 0.25);
        break;
      default:
        break;
      }
}
