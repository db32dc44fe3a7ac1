/* Least squares for sums of shapes. Knows nothing of nanotubes. */
#ifndef BANDTALLY_SOLVE_H
#define BANDTALLY_SOLVE_H

#include <gio/gio.h>

G_BEGIN_DECLS

/**
 * BtModelFunc:
 * @x: parameters (n_parameters)
 * @residual: (out): model minus data over its standard uncertainty (n_points)
 * @jacobian: (out) (nullable): derivatives of @residual, row-major n_points x n_parameters; %NULL where not wanted
 *
 * Pure: no allocation, no global state.
 */
typedef void (*BtModelFunc) (const double *x, double *residual, double *jacobian, gpointer data);

/**
 * BtProblem:
 * @low: (nullable): n_parameters lower bounds; -INFINITY for none
 * @high: (nullable): upper bounds
 * @scale: (nullable): largest step of each parameter in one iteration; INFINITY for none
 * @prior_mean: (nullable): with @prior_u, a weak Gaussian knowledge added as extra rows; @prior_u INFINITY for none
 */
typedef struct {
  gsize n_points, n_parameters;
  BtModelFunc model;
  gpointer data;
  const double *low, *high, *step_limit;
  const double *prior_mean, *prior_u;
  int max_iterations;   /* 0: 200 */
  double tolerance;     /* relative change of chi2 and of parameters; 0: 1e-10 */
  GCancellable *cancellable; /* (nullable) */
} BtProblem;

typedef enum { BT_SOLVE_CONVERGED, BT_SOLVE_STOPPED_EARLY, BT_SOLVE_SINGULAR, BT_SOLVE_CANCELLED } BtSolveState;

/**
 * BtSolution:
 * @x: the minimum, n_parameters (in: the start; the caller's array)
 * @covariance: (nullable): caller's array n x n; (J'J)^-1 of the free parameters, unscaled; rows of parameters on a bound are 0
 * @at_bound: (nullable): caller's array of n; TRUE where a parameter sits on a bound
 * @chi2: sum of squared residuals (without priors)
 */
typedef struct {
  double *x;
  double *covariance;
  gboolean *at_bound;
  double chi2;
  int iterations;
  BtSolveState state;
  double condition;  /* of the scaled normal matrix, estimate */
} BtSolution;

/* Levenberg-Marquardt with bounds (Marquardt 1963; parameters that press on a bound are held, the rest solved again). */
BtSolveState bt_least_squares (const BtProblem *problem, BtSolution *solution);

/* A translated sentence for a state. */
const char *bt_solve_state_text (BtSolveState state);

/* Lag-1 correlation of residuals: sum e_i e_(i+1) / sum e^2. */
double bt_lag1_correlation (const double *residual, gsize n);
/* n (1 - r) / (1 + r): effective number of independent points of an AR(1) series. */
double bt_effective_points (gsize n, double lag1);
/* Akaike weights exp(-delta/2) / sum (Burnham and Anderson 2002). */
void bt_akaike_weights (const double *aic, gsize n, double *weight);

G_END_DECLS

#endif
