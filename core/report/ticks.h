/* Ticks at round numbers. Private to core/report. */
#ifndef BANDTALLY_TICKS_H
#define BANDTALLY_TICKS_H

#include <glib.h>

/* The smallest of 1, 2, 5 times a power of ten at which ticks from @low to @high over @length stand at least @gap apart; @decimals (nullable): digits
 * behind the point that its multiples need. 0 where there is no range. */
double bt_ticks_step (double low, double high, double length, double gap, int *decimals);

/* A wavelength, the round number that it is a multiple of, and the digits behind the point that such multiples need. */
typedef struct { double nm, round_nm; int decimals; } BtRoundNm;
/* Round wavelengths for the nm axis, the roundest first: fills @out with at most @max between low_nm and high_nm. */
gsize bt_ticks_wavelengths (double low_nm, double high_nm, BtRoundNm *out, gsize max);

#endif
