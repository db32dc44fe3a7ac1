/* Lines of single tubes and their derivatives over an axis. Private to core/model. */
#ifndef BANDTALLY_ENSEMBLE_LINES_H
#define BANDTALLY_ENSEMBLE_LINES_H

#include <glib.h>

/* Columns over the axis that a line adds to, each (array of n): its value, and its derivatives by centre, by the logarithm of the width, and by the
 * share of Lorentzian wings. */
typedef struct { double *value, *centre, *width, *wings; } BtLineColumns;

/* Adds @factor times a line of area 1 to the columns. Gaussians are left out where they are below e^-40 of their crown. */
void bt_ensemble_add_line (const double *energy_ev, gsize n, double centre_ev, double fwhm_ev, double wings, double factor, const BtLineColumns *out);

/* Adds only the value. */
void bt_ensemble_add_value (const double *energy_ev, gsize n, double centre_ev, double fwhm_ev, double wings, double factor, double *out);

#endif
