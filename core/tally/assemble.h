/* The parts of a tally beyond the fraction. Private to core/tally. */
#ifndef BANDTALLY_ASSEMBLE_H
#define BANDTALLY_ASSEMBLE_H

#include "fraction.h"

/* Absorbance, absorptance and alpha at the recipe's wavelengths (drawn where the effort is full), the mean alpha over its range, and the figures of a
 * transparent conductor. */
void bt_tally_fill_readings (BtTally *tally, BtFilm *film, BtEffort effort);
/* Bands, curves and tail share of the best fit. */
void bt_tally_fill_best (BtTally *tally, const BtCandidate *best, const BtPrepared *prepared);
/* Group sums averaged over the candidates, and the diameter that the groups' centres mean. */
void bt_tally_fill_groups (BtTally *tally, const BtCandidate *candidates, gsize n);
/* Whether the ensemble of one window follows the film so much better that the other window is none. */
gboolean bt_tally_refutes (const BtTally *tally, const BtTally *other);
/* Widens the fraction to what another window, as likely, says of the same film. */
void bt_tally_admit_alternative (BtTally *tally, const BtTally *other);
/* Flags of the reading, the light path and the fit. */
void bt_tally_fill_flags (BtTally *tally, BtFilm *film, const BtPrepared *prepared);

#endif
