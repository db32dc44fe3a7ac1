/* Colours of figures and reports, by theme. Private to core/report. */
#ifndef BANDTALLY_PALETTE_H
#define BANDTALLY_PALETTE_H

#include <bandtally/figure.h>

typedef struct { double r, g, b; } BtColour;

/* ground: behind everything; ink: text and frames; soft: grid and minor marks; data: the measured curve; fit: the fitted sum; tail; beam:
 * the diameter window; veil: over what is not fitted. */
typedef struct { BtColour ground, ink, soft, data, fit, tail, beam, veil; BtColour group[BT_N_GROUPS]; } BtPalette;

const BtPalette *bt_palette_get (BtTheme theme);
void bt_colour_set (cairo_t *cr, BtColour colour, double alpha);

#endif
