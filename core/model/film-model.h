/* The model of a film's absorbance: a tail with offset, detector steps, and Gaussian bands; its derivatives; its fit.
 * Private to the core. */
#ifndef BANDTALLY_FILM_MODEL_H
#define BANDTALLY_FILM_MODEL_H

#include <bandtally/band_plan.h>
#include <bandtally/model.h>
#include <bandtally/solve.h>

#define BT_MODEL_MAX_BANDS 24
#define BT_MODEL_MAX_STEPS 3
#define BT_MODEL_MAX_PARAMETERS (8 + BT_MODEL_MAX_STEPS + 3 * BT_MODEL_MAX_BANDS)

/**
 * BtFilmData:
 *
 * What is fitted. Arrays of @n, ascending energy, owned by whoever made it. @sigma is the weight's standard uncertainty: noise and
 * structure that no smooth model follows.
 */
typedef struct {
  gsize n;
  const double *energy_ev, *absorbance, *sigma;
  guint n_steps;
  double fringe_cycles, fringe_amplitude; /* cycles per eV, 0: none; absorbance */
  double step_ev[BT_MODEL_MAX_STEPS], step_size[BT_MODEL_MAX_STEPS], step_u[BT_MODEL_MAX_STEPS];
} BtFilmData;

/**
 * BtFilmFit:
 * @n_in_group: bands by group
 * @group: of each band; bands of a group stand together, from low energy at the start
 * @x: parameters: tail height, shape (1 or 2), offset, step sizes, cosine and sine of a fringe (where there is one), share of
 *   Lorentzian wings, share of the phonon sideband, then height, centre (eV) and FWHM (eV) of each band
 * @covariance: of @x, row-major, for residuals in units of sigma
 * @held: (array): one bit a BtBandField for each band
 * @aic: chi2 + 2 K
 */
typedef struct {
  BtTailKind tail;
  guint n_steps, n_fringe, n_bands; /* n_fringe: 0 or 2 */
  guint n_in_group[BT_N_GROUPS];
  BtGroup group[BT_MODEL_MAX_BANDS];
  guint held[BT_MODEL_MAX_BANDS];
  gsize p;
  double x[BT_MODEL_MAX_PARAMETERS];
  double low[BT_MODEL_MAX_PARAMETERS], high[BT_MODEL_MAX_PARAMETERS];
  double step_limit[BT_MODEL_MAX_PARAMETERS];
  double prior_mean[BT_MODEL_MAX_PARAMETERS], prior_u[BT_MODEL_MAX_PARAMETERS];
  gboolean at_bound[BT_MODEL_MAX_PARAMETERS];
  double *covariance;
  double chi2, aic;
  BtSolveState state;
} BtFilmFit;

/* Index of a band's height; centre and FWHM follow. */
gsize bt_film_fit_band (const BtFilmFit *fit, guint band);
/* Index of the offset; of the share of every band's height in Lorentzian wings; of the share of S11's and S22's area in a sideband. */
gsize bt_film_fit_offset (const BtFilmFit *fit);
gsize bt_film_fit_wings (const BtFilmFit *fit);
gsize bt_film_fit_sideband (const BtFilmFit *fit);

/* (transfer full): a fit that stands at its start: bands spread over their windows, heights 0. */
BtFilmFit *bt_film_fit_new (BtTailKind tail, const BtBandPlan *plan, const guint n_in_group[BT_N_GROUPS], const BtFilmData *data);
BtFilmFit *bt_film_fit_copy (const BtFilmFit *fit);
void bt_film_fit_free (BtFilmFit *fit);
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtFilmFit, bt_film_fit_free)
/* Starts from another fit's numbers where bands correspond; a group with one band more gets its widest band split. */
void bt_film_fit_start_from (BtFilmFit *fit, const BtFilmFit *other);
/* Holds a number of a band. */
void bt_film_fit_hold (BtFilmFit *fit, guint band, guint field, double value);

/* Fits: first what is linear with the shapes held, then everything. */
BtSolveState bt_film_fit_run (BtFilmFit *fit, const BtFilmData *data, GCancellable *cancellable);

/* One band of height 1 with wings and sideband at one energy. */
double bt_line_eval (double energy_ev, double centre_ev, double fwhm_ev, double wings, double sideband);
/* The model at energies: out[i]; @tail_out (nullable) without the bands. */
void bt_film_fit_eval (const BtFilmFit *fit, const BtFilmData *data, const double *energy_ev, gsize n, double *out, double *tail_out);
/* Residual (data minus model, absorbance) at the data's points, and (nullable) the derivatives of the model over sigma, n x p. */
void bt_film_fit_residual (const BtFilmFit *fit, const BtFilmData *data, double *residual, double *jacobian);
/* Area of a band and of a group (absorbance eV); @gradient (nullable, p) receives the derivatives by the parameters. */
double bt_film_fit_area (const BtFilmFit *fit, guint band, double *gradient);
double bt_film_fit_group_area (const BtFilmFit *fit, BtGroup group, double *gradient);
/* g' C h */
double bt_film_fit_covariance_of (const BtFilmFit *fit, const double *g, const double *h);

#endif
