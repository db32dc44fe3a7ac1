/* From competing fits to one fraction with an interval and a budget. Private to core/tally. */
#ifndef BANDTALLY_FRACTION_H
#define BANDTALLY_FRACTION_H

#include "ensembles.h"

/* A group's share of a band that another group could as well have put there. */
#define BT_MAX_AMBIGUOUS 12
typedef struct { BtGroup from, to; double area, probability; } BtAmbiguous;

/**
 * BtCandidate:
 * @model: what kind of model was fitted
 * @fit: (nullable): the fit, where it is one of groups
 * @criterion: of the fit, chi2 + 2 K, where all candidates have the same weights of points
 * @weight: Akaike weight among all candidates
 * @scale: factor on the fit's covariance, chi2 over degrees of freedom, at least 1
 * @area_s, @area_m: S22's and M11's area (absorbance eV), the ambiguous bands where the fit put them; @var_ss, @var_mm, @var_sm their
 *   covariance
 * @noise_s, @noise_m, @noise_sm: the part of it that comes from the reading's noise alone
 * @doping_u: relative standard uncertainty of S22's area from what doping may have taken of it
 * @step_share: share (0 to 1) of var(fraction) that comes from not knowing the detector steps
 */
typedef struct {
  BtModelKind model;
  const BtFilmFit *fit;
  guint tail, n_steps;
  double criterion, weight, scale;
  double area_s, area_m, var_ss, var_mm, var_sm;
  double noise_ss, noise_mm, noise_sm;
  double doping_u, step_share;
  guint n_ambiguous;
  BtAmbiguous ambiguous[BT_MAX_AMBIGUOUS];
} BtCandidate;

/* A fit at its minimum: @covariance p x p for residuals in units of sigma, @jacobian n x p of the model over sigma. */
typedef struct { gsize n, p; const double *covariance, *jacobian; } BtLinear;
/* What the reading's noise alone gives to the areas whose gradients are @gs and @gm: the fit's answer to an error e of the data is C J' W e. */
void bt_candidate_take_noise (BtCandidate *candidate, const BtLinear *fit, const double *noise, const double *sigma, const double *gs, const double *gm);
/* Share of var(g'x) that would go if the sizes of the steps were known: c' S^-1 c / var, one step at a time. */
double bt_step_share (const double *covariance, gsize p, gsize first_step, guint n_steps, const double *g);

/* Fills what comes from the fit; @weight and @tail are the caller's. */
void bt_candidate_init (BtCandidate *candidate, const BtFilmFit *fit, const BtPrepared *prepared);
/* The same for the ensemble of the tail numbered @tail. */
void bt_candidate_init_ensemble (BtCandidate *candidate, const BtEnsembles *ensembles, guint tail, const BtPrepared *prepared);
/* Expected areas once ambiguous bands are shared out. */
void bt_candidate_expected (const BtCandidate *candidate, double *area_s, double *area_m);
/* What a bleached S11 says of S22: its relative standard uncertainty. Charge empties S11 first and then S22 (common practice); of what S11 has lost S22 is
 * taken to have lost between nothing and a fifth, and an undoped S11 to be at least as strong as S22. */
double bt_doping_u (double area_s11, double area_s22);
/* k-weighted fraction of two areas, (A_S / k) / (A_S / k + A_M); not limited to 0 .. 1. */
double bt_area_fraction (double area_s, double area_m, double strength_ratio);

/* Sets the weights of the candidates of both models by one criterion, those of the tails within each model, and those of the models. @candidates:
 * (element-type BtCandidate): of the groups, weighed among themselves; the ensembles' are added. */
void bt_candidates_weigh_models (BtTally *tally, GArray *candidates, const BtEnsembles *ensembles, const BtPrepared *prepared);

/* Sets tally->fraction, ->budget, ->m11_decision, ->m11_detection, ->verdict and its limits, and each tail's fraction, from candidates whose
 * weights add up to 1. */
void bt_fraction_tally (BtTally *tally, const BtCandidate *candidates, gsize n, const BtPrepared *prepared);

/* Sets the verdict from the probability that the fraction is at least the recipe's limit, and the acceptance limits from u. */
void bt_tally_judge (BtTally *tally, double conformance);

#endif
