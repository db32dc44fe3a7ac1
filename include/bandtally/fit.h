/* Fits of sums of shapes to measured points: a sum of linear terms times shapes with few nonlinear parameters. Knows nothing of nanotubes. */
#ifndef BANDTALLY_FIT_H
#define BANDTALLY_FIT_H

#include <gio/gio.h>
#include <bandtally/shape.h>
#include <bandtally/solve.h>

G_BEGIN_DECLS

/**
 * BtFit:
 *
 * A problem: points, shapes, and what is known of their parameters. Every shape has an amplitude (its first parameter) and then the
 * nonlinear parameters of bt_shape_eval(), in that order; parameters are numbered through all shapes from 0.
 *
 * Not thread safe while it is changed; bt_fit_solve() leaves it alone, so that one problem may be solved from many threads.
 */
#define BT_TYPE_FIT (bt_fit_get_type ())
G_DECLARE_FINAL_TYPE (BtFit, bt_fit, BT, FIT, GObject)

/**
 * BtFitFunc:
 * @q: its nonlinear parameters
 * @x: (array length=n): abscissae
 * @f: (out) (array length=n): values at amplitude 1
 * @df: (nullable): an array of @n derivatives by each of @q
 *
 * A shape of the user's own. Pure: no allocation, no global state.
 */
typedef void (*BtFitFunc) (const double *q, const double *x, gsize n, double *f, double *const *df, gpointer data);

/**
 * bt_fit_new:
 * @x: (array length=n): abscissae, any unit, any order
 * @y: (array length=n): data
 * @sigma: (array length=n) (nullable): standard uncertainty of each; 1 where %NULL. INFINITY leaves a point out
 *
 * Copies the points.
 *
 * Returns: (transfer full): a problem without shapes
 */
BtFit *bt_fit_new (const double *x, const double *y, const double *sigma, gsize n);
/**
 * bt_fit_add_shape:
 * @start: (array length=n_start) (nullable): the first @n_start of what follows the amplitude; 1 for the rest
 *
 * Amplitudes and nonlinear parameters are free, references (x0) are held.
 *
 * Returns: the index of the shape's amplitude; its nonlinear parameters follow, and after those its references
 */
guint bt_fit_add_shape (BtFit *self, BtShape shape, const double *start, gsize n_start);
/**
 * bt_fit_add_function: (skip)
 *
 * Returns: the index of the amplitude; the nonlinear parameters follow, all starting at 1
 */
guint bt_fit_add_function (BtFit *self, BtFitFunc func, guint n_nonlinear, gpointer data, GDestroyNotify destroy);
guint bt_fit_get_n_parameters (BtFit *self);

void bt_fit_set_start (BtFit *self, guint parameter, double value);
double bt_fit_get_start (BtFit *self, guint parameter);
/* -INFINITY and INFINITY for none. */
void bt_fit_set_bounds (BtFit *self, guint parameter, double low, double high);
/* Holds a parameter at its start. */
void bt_fit_set_fixed (BtFit *self, guint parameter, gboolean fixed);
/* parameter = factor x to + offset, in every step: an equal width (1, 0), a ratio (k, 0), a difference (1, d). Chains are followed; a ring is refused
 * with a warning. */
void bt_fit_tie (BtFit *self, guint parameter, guint to, double factor, double offset);
/* Weak Gaussian knowledge, an extra row. */
void bt_fit_set_prior (BtFit *self, guint parameter, double mean, double u);
/* Largest step in one iteration; shapes come with sensible limits of their own. */
void bt_fit_set_step_limit (BtFit *self, guint parameter, double limit);
/* Leaves out the points of a range of x; bt_fit_unmask() takes all of them back. */
void bt_fit_mask (BtFit *self, double low, double high);
void bt_fit_unmask (BtFit *self);
/**
 * bt_fit_set_data:
 * @y: (array length=n): other data on the same axis: resamples, overlaid films
 */
void bt_fit_set_data (BtFit *self, const double *y, gsize n);

/**
 * BtFitProgressFunc:
 * @share: 0 to 1
 */
typedef void (*BtFitProgressFunc) (double share, gpointer data);
/**
 * bt_fit_set_progress:
 * @func: (nullable) (scope notified): called after each start of bt_fit_solve() and each resample of bt_fit_resample(), from the thread that called them
 *
 * For long calls; a cancellable ends them.
 */
void bt_fit_set_progress (BtFit *self, BtFitProgressFunc func, gpointer data, GDestroyNotify destroy);

/**
 * BtFitOptions:
 * @max_iterations: 0: 200 a start
 * @tolerance: relative change of chi2 and parameters; 0: 1e-10
 * @starts: most starts; 1 (or 0): only the one given. Others are drawn within the bounds from @seed
 * @good_enough: chi2 over the degrees of freedom below which no further start is tried; 0: every start is used
 * @correlated: whether the correlation of the residuals counts: covariances are then scaled by chi2 over the effective points (of an AR(1) series,
 *   n (1 - r) / (1 + r)) less the parameters, or by the points over the effective ones where @sigma_known
 * @sigma_known: whether the points' standard uncertainties are absolute; otherwise covariances are scaled by chi2 over the degrees of freedom
 */
typedef struct {
  guint max_iterations, starts;
  guint64 seed;
  double tolerance, good_enough;
  gboolean sigma_known, correlated;
} BtFitOptions;
#define BT_FIT_OPTIONS_INIT { 0, 1, 1, 0, 0, FALSE, FALSE }

/**
 * BtFitResult:
 * @n_parameters: p; all of the problem's, free or not
 * @x: (array length=n_parameters): the minimum
 * @u: (array length=n_parameters): standard uncertainties; 0 where fixed or on a bound
 * @covariance: (skip): p x p, row-major; bt_fit_result_dup_covariance()
 * @at_bound: (array length=n_parameters)
 * @chi2: weighted sum of squared residuals, without priors
 * @n_free: parameters that the data determined
 * @n_points: points used
 * @effective_points: independent points, from the correlation of the residuals
 * @aicc, @bic: of the fit (Hurvich and Tsai 1989; Schwarz 1978), by @n_points
 * @condition: estimate of the scaled normal matrix
 * @by_qr: whether the condition asked for orthogonal factors
 * @sigma_known: as in the options
 * @n_starts, @n_reached: starts made, and how many of them came within 1 % of the best chi2
 *
 * Immutable, counted.
 */
typedef struct {
  guint n_parameters, n_free, n_starts, n_reached, iterations;
  gsize n_points;
  double *x, *u, *covariance;
  gboolean *at_bound;
  double chi2, effective_points, aicc, bic, condition;
  gboolean by_qr, sigma_known;
  BtSolveState state;
} BtFitResult;

#define BT_TYPE_FIT_RESULT (bt_fit_result_get_type ())
GType bt_fit_result_get_type (void);
BtFitResult *bt_fit_result_ref (BtFitResult *result);
void bt_fit_result_unref (BtFitResult *result);
G_DEFINE_AUTOPTR_CLEANUP_FUNC (BtFitResult, bt_fit_result_unref)
/* (transfer full): what a user must know: stopped early, on a bound, singular; translated. */
char *bt_fit_result_to_text (const BtFitResult *result);

/**
 * bt_fit_solve:
 * @options: (nullable)
 *
 * Minimises the weighted sum of squares by bounded Levenberg-Marquardt (Marquardt 1963; Moré 1978), with orthogonal factors where the
 * normal equations lose too many digits. The same input gives the same bits whatever the number of threads.
 *
 * Returns: (transfer full): the outcome; %NULL with @error set only where nothing could be tried (no points, cancelled)
 */
BtFitResult *bt_fit_solve (BtFit *self, const BtFitOptions *options, GCancellable *cancellable, GError **error);
/**
 * bt_fit_eval: (skip)
 * @out: (array length=n): values of the whole model; of the shape that starts at @parameter by bt_fit_eval_shape()
 */
void bt_fit_eval (BtFit *self, const double *parameters, const double *x, gsize n, double *out);
/**
 * bt_fit_eval_shape: (skip)
 */
void bt_fit_eval_shape (BtFit *self, guint parameter, const double *parameters, const double *x, gsize n, double *out);

/**
 * bt_fit_profile:
 * @low: (out): lower end
 * @high: (out): upper end
 *
 * Interval of a parameter in which chi2 (with priors) rises by no more than the quantile of @level with one degree of freedom, all others
 * fitted again (profile likelihood; Venzon and Moolgavkar 1988). Without known uncertainties chi2 counts in units of its mean per degree of
 * freedom. FALSE where a bound or a failed fit ends it; that end is then the bound, or the last value that could be fitted.
 */
gboolean bt_fit_profile (BtFit *self, const BtFitResult *best, guint parameter, double level, double *low, double *high);

/**
 * BtResampleKind:
 * @BT_RESAMPLE_NOISE: the fitted curve with new noise of the points' uncertainties (parametric)
 * @BT_RESAMPLE_BLOCKS: the fitted curve with blocks of the residuals drawn with replacement (Künsch 1989), for correlated residuals
 */
typedef enum { BT_RESAMPLE_NOISE, BT_RESAMPLE_BLOCKS } BtResampleKind;
/**
 * bt_fit_resample: (skip)
 * @block: points in a block; 0: from the correlation of the residuals
 * @refit: %TRUE: whole fits from where the best one stands; %FALSE: a few steps with the best fit's Jacobian, many times faster, and a whole
 *   fit only where those do not settle or meet a bound
 * @threads: 0: as many as there are processors
 * @out: (array): n_resamples x n_parameters, row-major; the caller's
 *
 * Fits again to resampled data. The draws of a resample depend on @seed and its number alone, and so does its fit: the same bits whatever
 * the number of threads. Noise has the points' uncertainties; where those are not known it is scaled by the best fit's chi2 over its degrees
 * of freedom. Priors keep their means.
 *
 * Returns: %FALSE with @error set where it was cancelled
 */
gboolean bt_fit_resample (BtFit *self, const BtFitResult *best, BtResampleKind kind, guint block, guint n_resamples, gboolean refit, guint64 seed,
                          guint threads, double *out, GCancellable *cancellable, GError **error);

/* Correlation of two parameters, -1 to 1; 0 where one of them has no uncertainty. */
double bt_fit_result_correlation (const BtFitResult *result, guint a, guint b);

/**
 * BtFitDerivedFunc:
 * @parameters: all of the problem's
 *
 * A quantity that follows from the parameters: an area, a ratio. Pure.
 */
typedef double (*BtFitDerivedFunc) (const double *parameters, gpointer data);
/**
 * bt_fit_result_derive: (skip)
 * @u: (out) (nullable): its standard uncertainty by the delta method, sqrt (g'Cg) with the gradient by central differences (JCGM 100:2008 eq. 13)
 *
 * Returns: the quantity at the minimum
 */
double bt_fit_result_derive (const BtFitResult *result, BtFitDerivedFunc func, gpointer data, double *u);
/**
 * bt_fit_derive_from_draws: (skip)
 * @draws: (array): n_draws x n_parameters, of bt_fit_resample()
 * @level: of the interval
 * @mean, @u: (out) (nullable): of the quantity over the draws
 * @low, @high: (out) (nullable): probabilistically symmetric interval (JCGM 101:2008 7.7)
 *
 * The same by resampling, for quantities that bend where the parameters are uncertain.
 */
void bt_fit_derive_from_draws (const double *draws, guint n_draws, guint n_parameters, BtFitDerivedFunc func, gpointer data, double level, double *mean,
                               double *u, double *low, double *high);

/**
 * bt_fit_result_dup_x:
 * @n: (out): number of parameters
 *
 * Returns: (array length=n) (transfer full): the minimum
 */
double *bt_fit_result_dup_x (const BtFitResult *result, gsize *n);
/**
 * bt_fit_result_dup_u:
 * @n: (out): number of parameters
 *
 * Returns: (array length=n) (transfer full): standard uncertainties
 */
double *bt_fit_result_dup_u (const BtFitResult *result, gsize *n);
/**
 * bt_fit_result_dup_covariance:
 * @n: (out): p x p
 *
 * Returns: (array length=n) (transfer full): row-major
 */
double *bt_fit_result_dup_covariance (const BtFitResult *result, gsize *n);
/**
 * bt_fit_dup_curve:
 * @parameters: (array length=n_parameters): all of the problem's
 * @x: (array length=n): abscissae
 * @n_out: (out): @n
 *
 * Returns: (array length=n_out) (transfer full): values of the whole model
 */
double *bt_fit_dup_curve (BtFit *self, const double *parameters, gsize n_parameters, const double *x, gsize n, gsize *n_out);
/**
 * bt_fit_dup_resamples:
 * @n_out: (out): n_resamples x p
 *
 * bt_fit_resample() for languages that want arrays returned.
 *
 * Returns: (array length=n_out) (transfer full): row-major; %NULL with @error set where it was cancelled
 */
double *bt_fit_dup_resamples (BtFit *self, const BtFitResult *best, BtResampleKind kind, guint block, guint n_resamples, gboolean refit, guint64 seed,
                              guint threads, GCancellable *cancellable, gsize *n_out, GError **error);

G_END_DECLS

#endif
