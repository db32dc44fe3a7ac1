/* From competing fits to one fraction with an interval and a budget. Private to core/tally. */
#ifndef BANDTALLY_FRACTION_H
#define BANDTALLY_FRACTION_H

#include "select.h"

/* A group's share of a band that another group could as well have put there. */
#define BT_MAX_AMBIGUOUS 12
typedef struct { BtGroup from, to; double area, probability; } BtAmbiguous;

/**
 * BtCandidate:
 * @weight: Akaike weight among all fits of all tails
 * @scale: factor on the fit's covariance, chi2 over degrees of freedom, at least 1
 * @area_s, @area_m: S22's and M11's area (absorbance eV), the ambiguous bands where the fit put them; @var_ss, @var_mm, @var_sm their
 *   covariance
 * @noise_s, @noise_m, @noise_sm: the part of it that comes from the reading's noise alone
 * @step_share: share (0 to 1) of var(fraction) that comes from not knowing the detector steps
 */
typedef struct {
  const BtFilmFit *fit;
  guint tail;
  double weight, scale;
  double area_s, area_m, var_ss, var_mm, var_sm;
  double noise_ss, noise_mm, noise_sm;
  double step_share;
  guint n_ambiguous;
  BtAmbiguous ambiguous[BT_MAX_AMBIGUOUS];
} BtCandidate;

/* Fills what comes from the fit; @weight and @tail are the caller's. */
void bt_candidate_init (BtCandidate *candidate, const BtFilmFit *fit, const BtPrepared *prepared);
/* Expected areas once ambiguous bands are shared out. */
void bt_candidate_expected (const BtCandidate *candidate, double *area_s, double *area_m);
/* k-weighted fraction of two areas, (A_S / k) / (A_S / k + A_M); not limited to 0 .. 1. */
double bt_area_fraction (double area_s, double area_m, double strength_ratio);

/* Sets tally->fraction, ->budget, ->m11_decision, ->m11_detection, ->verdict and its limits, and each tail's fraction, from candidates whose
 * weights add up to 1. */
void bt_fraction_tally (BtTally *tally, const BtCandidate *candidates, gsize n, const BtPrepared *prepared);

/* Sets the verdict from the probability that the fraction is at least the recipe's limit, and the acceptance limits from u. */
void bt_tally_judge (BtTally *tally, double conformance);

#endif
