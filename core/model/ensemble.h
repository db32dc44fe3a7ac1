/* The ensemble model of a film: the whole spectrum from a population of tubes over (n,m), each tube's lines placed by the reference energies, and a
 * tail. Private to the core. */
#ifndef BANDTALLY_ENSEMBLE_H
#define BANDTALLY_ENSEMBLE_H

#include "film-model.h"

/**
 * BtEnsembleParameter:
 * @BT_ENSEMBLE_LOG_S: logarithm of the area that S22 would have without scatter, absorbance eV
 * @BT_ENSEMBLE_AREA_M: area that M11 would have without scatter, absorbance eV; may be negative
 * @BT_ENSEMBLE_MEAN, @BT_ENSEMBLE_LOG_SPREAD: diameter distribution, nm
 * @BT_ENSEMBLE_SHIFT_S11: energies off the reference, eV; likewise S22, M11, and all higher ones together
 * @BT_ENSEMBLE_LOG_WIDTH_S11: logarithm of a line's FWHM in eV; likewise S22, M11, and all higher ones
 * @BT_ENSEMBLE_WINGS: share of every line's area in a Lorentzian of the same FWHM
 * @BT_ENSEMBLE_SIDEBAND: share of S11's and S22's area in the phonon sideband
 * @BT_ENSEMBLE_LOG_S11: logarithm of the area over that of S22; likewise S33, S44, and M22 over M11
 *
 * What is common to all tubes.
 */
typedef enum {
  BT_ENSEMBLE_LOG_S,
  BT_ENSEMBLE_AREA_M,
  BT_ENSEMBLE_MEAN,
  BT_ENSEMBLE_LOG_SPREAD,
  BT_ENSEMBLE_SHIFT_S11,
  BT_ENSEMBLE_SHIFT_S22,
  BT_ENSEMBLE_SHIFT_M11,
  BT_ENSEMBLE_SHIFT_HIGH,
  BT_ENSEMBLE_LOG_WIDTH_S11,
  BT_ENSEMBLE_LOG_WIDTH_S22,
  BT_ENSEMBLE_LOG_WIDTH_M11,
  BT_ENSEMBLE_LOG_WIDTH_HIGH,
  BT_ENSEMBLE_WINGS,
  BT_ENSEMBLE_SIDEBAND,
  BT_ENSEMBLE_LOG_S11,
  BT_ENSEMBLE_LOG_S33,
  BT_ENSEMBLE_LOG_S44,
  BT_ENSEMBLE_LOG_M22,
  BT_ENSEMBLE_N_COMMON
} BtEnsembleParameter;

/**
 * BtEnsembleFit:
 * @tubes: (element-type BtTube): the population, semiconducting ones first
 * @first_common: index of the first #BtEnsembleParameter in @x, behind tail, offset, steps and fringe
 * @first_scatter: index of the logarithm of each tube's abundance over the distribution's
 * @jitter: by tube: index of its own shift (S11 and, behind it, S22; or M11); 0 where it has none
 * @first_jitter: index of the first of them
 * @covariance: p x p, for residuals in units of sigma
 * @p: number of parameters; all arrays have as many
 */
typedef struct {
  BtTailKind tail;
  guint n_steps, n_fringe;
  GArray *tubes;
  guint n_semiconducting, n_metallic;
  double *energy; /* tubes x 8: S11, S22, S33, S44 or M11-, M11+, M22-, M22+; eV, single tubes */
  gsize *jitter;
  gsize p, first_common, first_scatter, first_jitter;
  double *x, *low, *high, *step_limit, *prior_mean, *prior_u, *covariance;
  gboolean *at_bound;
  double chi2, prior_chi2;
  int iterations;
  BtSolveState state;
} BtEnsembleFit;

/* (transfer full): a fit that stands at its start: the plan's window and shift, and the areas and the tail of the group model's fit @start. */
BtEnsembleFit *bt_ensemble_fit_new (const BtBandPlan *plan, const BtFilmFit *start, const BtFilmData *data);
/* Starts from another fit's population: all but the tail, offset, steps and fringe. Both are of the same plan. */
void bt_ensemble_fit_start_from (BtEnsembleFit *fit, const BtEnsembleFit *other);
void bt_ensemble_fit_free (BtEnsembleFit *fit);
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtEnsembleFit, bt_ensemble_fit_free)
BtSolveState bt_ensemble_fit_run (BtEnsembleFit *fit, const BtFilmData *data, GCancellable *cancellable);
/* Residual (data minus model, absorbance) at the data's points, and (nullable) the derivatives of the model over sigma, n x p. */
void bt_ensemble_fit_residual (const BtEnsembleFit *fit, const BtFilmData *data, double *residual, double *jacobian);
/* Area of S22 or M11, absorbance eV; @gradient (p) receives the derivatives. */
double bt_ensemble_fit_area (const BtEnsembleFit *fit, BtGroup group, double *gradient);
/* Parameters that the data and not the priors determine. */
double bt_ensemble_fit_parameters (const BtEnsembleFit *fit);
/* g' C h */
double bt_ensemble_fit_covariance_of (const BtEnsembleFit *fit, const double *g, const double *h);

#endif
