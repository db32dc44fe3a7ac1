/* Levenberg and Marquardt's method in a box: what bt_least_squares() and BtFit have in common. */
#ifndef BANDTALLY_LM_PRIVATE_H
#define BANDTALLY_LM_PRIVATE_H

#include <bandtally/solve.h>

#include <math.h>

#include "kernel-private.h"

/**
 * BtLmSystem:
 * @a: (p + 1) rows of stride: the upper triangle of (J, r)'(J, r), so that column p holds J'r; or, @orthogonal, the triangular
 * factor of (J, r), so that column p holds Q'r
 * @cost: r'r with priors
 * @chi2: r'r of the points alone
 */
typedef struct
{
  double *a;
  double cost, chi2;
} BtLmSystem;

typedef struct _BtLm BtLm;
struct _BtLm
{
  /* The problem. */
  gsize p, stride;
  gpointer data;
  /* Fills @system at @x. Where the cost is not below @above only the costs are looked at. */
  void (*evaluate) (gpointer data, const double *x, gboolean orthogonal, double above, BtLmSystem *system);
  /* Largest steps down and up at @x; both start at INFINITY. (nullable) */
  void (*limits) (gpointer data, const double *x, double *down, double *up);
  /* J'r'' with r'' the second derivative of the residual along @v. (nullable) */
  void (*curvature) (gpointer data, const double *x, const double *v, double *out);
  const double *low, *high; /* (nullable) */
  GCancellable *cancellable;
  int max_iterations;
  double tolerance, damping;
  /* A try is given up once it can hardly get below this. 0: never. */
  double hopeless_above;
  gboolean abandoned;

  /* What came out. */
  BtLmSystem now;
  gboolean orthogonal;
  int iterations;
  BtSolveState state;
  double condition;

  /* Room for the work: allocated once. */
  BtLmSystem trial_system;
  double *diagonal, *step, *trial, *down, *up, *work, *right, *rows, *bend;
  gsize *free_index, n_moving;
  int *pinned;
  gboolean *released;
  const BtKernel *kernel;
};

void bt_lm_init (BtLm *lm, gsize p);
void bt_lm_clear (BtLm *lm);
/* Minimises from @x, which is overwritten by the best found. */
BtSolveState bt_lm_run (BtLm *lm, double *x);
/* (J'J)^-1 of what is neither held nor on a bound, p x p; @covariance and @at_bound (nullable). May change the state to
 * singular. */
void bt_lm_covariance (BtLm *lm, const double *x, double *covariance, gboolean *at_bound);

/* Parts of it, in lm-step.c and lm-covariance.c. */

/* The step with every component inside its box. FALSE where the damping does not suffice. */
gboolean bt_lm_solve_step (BtLm *lm, const double *x, double damping);
/* What the quadratic model promises for the step: cost(x) - cost(x + step). */
double bt_lm_promised (const BtLm *lm);
/* Bends the step along the valley: half the geodesic acceleration (Transtrum and Sethna 2012), where it is small against the
 * step. FALSE where the valley is straight. */
gboolean bt_lm_accelerate (BtLm *lm, const double *x);
/* The diagonal of J'J, whichever form the system has. */
double bt_lm_squared_column (const BtLm *lm, gsize j);
/* Smallest share of a column that the free ones before it do not tell already; squared, as in the normal matrix. 0 where
 * singular. */
double bt_lm_smallest_share (BtLm *lm, const double *x);

static inline double
bt_lm_low (const BtLm *lm, gsize j)
{
  return lm->low != NULL ? lm->low[j] : -INFINITY;
}

static inline double
bt_lm_high (const BtLm *lm, gsize j)
{
  return lm->high != NULL ? lm->high[j] : INFINITY;
}

#endif
