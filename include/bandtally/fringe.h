/* Interference fringes from a layer or a substrate in a reading. */
#ifndef BANDTALLY_FRINGE_H
#define BANDTALLY_FRINGE_H

#include <bandtally/spectrum.h>

G_BEGIN_DECLS

/**
 * BtFringe:
 * @spacing_per_cm: distance of neighbouring maxima, 1/cm: 1 / (2 n d) for a layer of thickness d and index n
 * @amplitude: of the oscillation, absorbance, over the range where it was found
 * @optical_thickness_um: n d that the spacing means, um
 */
typedef struct { double spacing_per_cm, amplitude, optical_thickness_um; } BtFringe;

/* Widest spacing that is told from bands, 1/cm: a fifth of a film's narrowest band. */
#define BT_FRINGE_MAX_SPACING_PER_CM 260.0

/**
 * bt_spectrum_find_fringe:
 * @fringe: (out): the strongest fringe
 *
 * Looks for an oscillation whose period is constant in wavenumber, which no band is. Wider fringes than %BT_FRINGE_MAX_SPACING_PER_CM
 * (layers thinner than about 20 um) cannot be told from bands and are not looked for.
 *
 * Returns: whether there is one that stands out of the noise
 */
gboolean bt_spectrum_find_fringe (BtSpectrum *self, BtFringe *fringe);

G_END_DECLS

#endif
