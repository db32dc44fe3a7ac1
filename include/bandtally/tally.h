/* Tally: the outcome for a film. */
#ifndef BANDTALLY_TALLY_H
#define BANDTALLY_TALLY_H

#include <bandtally/film.h>
#include <bandtally/recipe.h>

G_BEGIN_DECLS

#define BT_TYPE_TALLY (bt_tally_get_type ())
#define BT_TALLY_ERROR (bt_tally_error_quark ())
typedef enum { BT_TALLY_ERROR_DATA, BT_TALLY_ERROR_FIT, BT_TALLY_ERROR_CANCELLED } BtTallyError;
GQuark bt_tally_error_quark (void);

/* One band of the best fit: a Gaussian that holds @wings of its height in a Lorentzian of the same width and, for S11 and S22, @sideband of its
 * area 0.2 eV higher (bt_band_eval()). Uncertainties are standard uncertainties; 0 where the number is held. Area in absorbance eV. */
typedef struct {
  BtGroup group;
  guint index;                     /* within its group, from low energy; where the user holds a number of the group: as it was held */
  double centre_ev, centre_u_ev;
  double fwhm_ev, fwhm_u_ev;
  double height, height_u;         /* absorbance */
  double area, area_u;             /* absorbance eV; only M11's may be negative */
  double wings, sideband;          /* 0 to 1; common to all bands of a fit */
  guint held;                      /* one bit a BtBandField */
  gboolean at_bound;
} BtBand;

/* A group, averaged over the tails by their weights. @n_bands 0: not in range or left out; the numbers are then NAN. */
typedef struct {
  guint n_bands;
  double area, area_u;             /* absorbance eV */
  double centre_ev, centre_u_ev;   /* of the crown of the group's sum */
  double mean_ev, mean_u_ev;       /* area-weighted mean energy */
  double fwhm_ev, fwhm_u_ev;       /* full width of the sum at half the crown's height */
} BtGroupTally;

/* What one tail says. */
typedef struct {
  BtTailKind kind;
  BtTail tail;                     /* fitted */
  double aic, weight;
  double fraction, fraction_u;     /* NAN where not to be had */
  double misfit;                   /* rms residual in units of the noise */
  guint n_parameters;
  int state;                       /* BtSolveState */
} BtTailTally;

/**
 * BtModelKind:
 * @BT_MODEL_GROUPS: groups of bands (Gaussians with wings), their areas
 * @BT_MODEL_ENSEMBLE: the whole spectrum from a population of tubes over (n,m), each tube's lines placed by the reference energies
 *
 * How the bands are modelled.
 */
typedef enum { BT_MODEL_GROUPS, BT_MODEL_ENSEMBLE, BT_N_MODELS } BtModelKind;
/* "groups", "ensemble": in files. */
const char *bt_model_name (BtModelKind model);
/* Translated. */
const char *bt_model_title (BtModelKind model);

/* What one model says, averaged over its tails. @weight 0 where it was not fitted; the numbers are then NAN. */
typedef struct {
  double weight;                   /* Akaike weight among the models */
  double fraction, fraction_u;     /* NAN where not to be had */
  double misfit;                   /* rms residual of its best tail in units of the noise */
  double structure;                /* amplitude of what it does not follow, absorbance */
  double strain;                   /* chi2 of its numbers against what was known of them beforehand; NAN of the groups */
  double n_parameters;             /* that the data determine, of its best tail */
  gsize n_points;                  /* that it was fitted to */
  BtDiameterWindow diameter;       /* of the population, by the ensemble of the best tail; NAN of the groups */
  double diameter_u_nm;
} BtModelTally;

typedef enum { BT_BOUND_NONE, BT_BOUND_TWO_SIDED, BT_BOUND_LOWER } BtBound;
/* @bound NONE: the fraction could not be had, all NAN. LOWER: M11 below its detection limit: at least @low at @level. */
typedef struct { double value, u, low, high, level; BtBound bound; } BtFraction;

/* One contribution to u(fraction). @source: stable name ("noise", "residual structure", "tail", "band plan", "model",
 * "strength ratio", "detector step", "doping", "doping"); @title translated. */
typedef struct { const char *source; const char *title; double u; } BtBudgetLine;

/* Reading at a wavelength of interest; NAN where out of range (or, for alpha, without a thickness; for the sheet conductance, on another light path
 * than that of a thin film). Uncertainties hold every source that is known, noise and common ones. */
typedef struct {
  double wavelength_nm;
  double absorbance, absorbance_u;
  double absorptance, absorptance_u;
  BtAlpha alpha;
  double sheet_conductance_s, sheet_conductance_u_s; /* optical; BT_UNIVERSAL_CONDUCTANCE_S is its other unit */
} BtReading;

/* The film as a transparent conductor at BT_CONDUCTOR_NM; NAN where it has no sheet resistance, was not measured there, or its substrate's index is not
 * known. */
#define BT_CONDUCTOR_NM 550
typedef struct {
  double substrate_index;
  double transmittance, transmittance_u;     /* of the film over its blank */
  double ratio, ratio_u;                     /* dc over optical conductivity, bt_conductivity_ratio() */
  double haacke_s, haacke_u_s;               /* bt_haacke_merit() */
} BtConductor;

typedef enum { BT_VERDICT_NOT_JUDGED, BT_VERDICT_ACCEPTED, BT_VERDICT_REFUSED, BT_VERDICT_UNDECIDED } BtVerdict;

/**
 * BtTally:
 * @n: points fitted
 * @energy_ev: (array length=n): ascending; also @absorbance (film alone), @noise (its standard uncertainty), @fit (tail and
 *   bands), @tail_curve (tail and offset, and the detector step where one was fitted); all of the best tail
 * @curve: the whole film after its light path, fitted or not
 * @bands: (element-type BtBand): of the best tail, by energy
 * @best: index into @tails of the tail with the greatest weight
 * @recipe: as used, with the window that was taken
 *
 * Immutable, counted. Everything that is shown, printed and written comes from here.
 */
typedef struct {
  gsize n;
  double *energy_ev, *absorbance, *noise, *fit, *tail_curve;
  BtCurve *curve;
  BtRange range;                   /* fitted */
  GArray *bands;
  BtGroupTally groups[BT_N_GROUPS];
  guint n_tails, best;
  BtTailTally tails[BT_N_TAILS];   /* of the groups; weights among them */
  BtTailTally ensembles[BT_N_TAILS]; /* of the ensemble, in the same order; weight 0 and NAN where it was not fitted */
  BtModelTally models[BT_N_MODELS];
  double tail_share_at_s22;        /* tail over the whole, at S22's centre; NAN without S22 */
  BtFraction fraction;
  GArray *budget;                  /* (element-type BtBudgetLine) */
  double structure;                /* amplitude of what no band or tail follows, absorbance */
  double s22_m11_correlation;      /* of the two areas in the best fit; NAN */
  double m11_decision, m11_detection; /* areas, absorbance eV (Currie 1968); NAN */
  BtDiameterWindow diameter;       /* from the fitted bands; NAN where not to be had */
  double diameter_u_nm;
  GArray *readings;                /* (element-type BtReading) */
  BtAlpha mean_alpha;              /* over the recipe's range, by first order; NAN */
  BtRange mean_range;              /* the part of it that the data cover */
  BtConductor conductor;
  GPtrArray *flags;                /* (element-type BtFlag): reading, light path and fit */
  BtVerdict verdict;
  double conformance;              /* probability that the fraction is at least the limit (JCGM 106); NAN */
  double acceptance_limit, refusal_limit; /* limit + and - 1.645 u; NAN where not judged */
  char *decision_rule;             /* translated sentence */
  BtBandPlan plan;
  BtRecipe *recipe;
  gboolean window_proposed;        /* from the data, not from the user */
} BtTally;

GType bt_tally_get_type (void);
BtTally *bt_tally_ref (BtTally *tally);
void bt_tally_unref (BtTally *tally);

/* FULL: every tail, every plan, the whole budget. QUICK: the previous tally's best tail and band numbers only, from where that
 * fit stood: for following the hand; its budget is empty and its fraction's u is that of the fit alone. */
typedef enum { BT_EFFORT_FULL, BT_EFFORT_QUICK } BtEffort;
/* @share 0 to 1; called from the calling thread. */
typedef void (*BtProgressFunc) (double share, gpointer data);

/**
 * bt_tally_film:
 * @previous: (nullable): needed for QUICK
 *
 * Analyses a film by a recipe. Touches neither; safe to call from any thread with a film that is not changed meanwhile
 * (bt_film_copy()).
 *
 * Returns: (transfer full): a tally, or %NULL with @error set
 */
BtTally *bt_tally_film (BtFilm *film, const BtRecipe *recipe, BtEffort effort, const BtTally *previous,
                        BtProgressFunc progress, gpointer progress_data, GCancellable *cancellable, GError **error);

/* "accepted", "refused", "undecided", "not judged": in files. */
const char *bt_verdict_name (BtVerdict verdict);
/* Translated. */
const char *bt_verdict_title (BtVerdict verdict);
/* (transfer full): one translated line for people: "66.1 % semiconducting, 61.0 to 71.2 % (95 %)", or why there is none. */
char *bt_tally_answer (const BtTally *tally);
/* Values of a band at energies: out[i] in absorbance. */
void bt_band_eval (const BtBand *band, const double *energy_ev, gsize n, double *out);

G_END_DECLS

#endif
