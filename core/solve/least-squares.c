/* Bounded least squares by Levenberg and Marquardt on scaled normal equations.
 *
 * Bounds and step limits are one mechanism: each iteration solves for the step inside a box; what would leave the box is put on
 * its face and the rest is solved again. Knows nothing of what the parameters mean. */
#include <bandtally/solve.h>

#include <float.h>
#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "cholesky-private.h"

typedef struct {
  const BtProblem *problem;
  gsize n, p;
  double *residual, *jacobian;   /* n, n x p */
  double *normal, *gradient;     /* p x p, p */
  double *diagonal;              /* running maximum of the normal matrix's diagonal */
  double *step, *trial;
  double *work, *right;          /* p x p, p */
  gsize *free_index;
  gboolean *pinned;
} Workspace;

static void
workspace_init (Workspace *ws, const BtProblem *problem)
{
  gsize n = problem->n_points, p = problem->n_parameters;

  ws->problem = problem;
  ws->n = n;
  ws->p = p;
  ws->residual = g_new (double, n);
  ws->jacobian = g_new (double, n * p);
  ws->normal = g_new (double, p * p);
  ws->gradient = g_new (double, p);
  ws->diagonal = g_new0 (double, p);
  ws->step = g_new (double, p);
  ws->trial = g_new (double, p);
  ws->work = g_new (double, p * p);
  ws->right = g_new (double, p);
  ws->free_index = g_new (gsize, p);
  ws->pinned = g_new (gboolean, p);
}

static void
workspace_clear (Workspace *ws)
{
  g_free (ws->residual);
  g_free (ws->jacobian);
  g_free (ws->normal);
  g_free (ws->gradient);
  g_free (ws->diagonal);
  g_free (ws->step);
  g_free (ws->trial);
  g_free (ws->work);
  g_free (ws->right);
  g_free (ws->free_index);
  g_free (ws->pinned);
}

static double
low_of (const BtProblem *problem, gsize j)
{
  return problem->low != NULL ? problem->low[j] : -INFINITY;
}

static double
high_of (const BtProblem *problem, gsize j)
{
  return problem->high != NULL ? problem->high[j] : INFINITY;
}

static gboolean
has_prior (const BtProblem *problem, gsize j)
{
  return problem->prior_mean != NULL && problem->prior_u != NULL && isfinite (problem->prior_u[j]) && problem->prior_u[j] > 0;
}

static double
prior_cost (const BtProblem *problem, const double *x)
{
  double sum = 0;

  for (gsize j = 0; j < problem->n_parameters; j++)
    if (has_prior (problem, j))
      {
        double z = (x[j] - problem->prior_mean[j]) / problem->prior_u[j];

        sum += z * z;
      }
  return sum;
}

static double
sum_of_squares (const double *r, gsize n)
{
  double sum = 0;

  for (gsize i = 0; i < n; i++)
    sum += r[i] * r[i];
  return sum;
}

/* Lower triangle of J'J and J'r, four rows at a time so that each element of the sum is loaded once for four products. */
static void
accumulate_normal (Workspace *ws, const double *x)
{
  const gsize n = ws->n, p = ws->p;
  gsize i = 0;

  memset (ws->normal, 0, sizeof (double) * p * p);
  memset (ws->gradient, 0, sizeof (double) * p);
  for (; i + 4 <= n; i += 4)
    {
      const double *r = ws->residual + i;
      const double *j0 = ws->jacobian + i * p, *j1 = j0 + p, *j2 = j1 + p, *j3 = j2 + p;

      for (gsize a = 0; a < p; a++)
        {
          double *restrict row = ws->normal + a * p;
          const double c0 = j0[a], c1 = j1[a], c2 = j2[a], c3 = j3[a];

          for (gsize b = 0; b <= a; b++)
            row[b] += c0 * j0[b] + c1 * j1[b] + c2 * j2[b] + c3 * j3[b];
          ws->gradient[a] += c0 * r[0] + c1 * r[1] + c2 * r[2] + c3 * r[3];
        }
    }
  for (; i < n; i++)
    {
      const double *row_j = ws->jacobian + i * p;

      for (gsize a = 0; a < p; a++)
        {
          for (gsize b = 0; b <= a; b++)
            ws->normal[a * p + b] += row_j[a] * row_j[b];
          ws->gradient[a] += row_j[a] * ws->residual[i];
        }
    }
  for (gsize j = 0; j < p; j++)
    if (has_prior (ws->problem, j))
      {
        double w = 1 / (ws->problem->prior_u[j] * ws->problem->prior_u[j]);

        ws->normal[j * p + j] += w;
        ws->gradient[j] += w * (x[j] - ws->problem->prior_mean[j]);
      }
}

/* Solves (N + damping D) step = -gradient with every component inside its box. FALSE where no damping helps. */
static gboolean
solve_step (Workspace *ws, const double *x, double damping)
{
  const gsize p = ws->p;
  const BtProblem *problem = ws->problem;

  for (gsize j = 0; j < p; j++)
    ws->pinned[j] = low_of (problem, j) >= high_of (problem, j);
  memset (ws->step, 0, sizeof (double) * p);

  for (gsize round = 0; round <= p; round++)
    {
      gsize m = 0;
      gboolean left = FALSE;

      for (gsize j = 0; j < p; j++)
        if (!ws->pinned[j])
          ws->free_index[m++] = j;
      if (m == 0)
        return TRUE;
      for (gsize a = 0; a < m; a++)
        {
          gsize ja = ws->free_index[a];
          double g = -ws->gradient[ja];

          for (gsize b = 0; b <= a; b++)
            ws->work[a * m + b] = ws->normal[ja * p + ws->free_index[b]];
          ws->work[a * m + a] += damping * ws->diagonal[ja];
          for (gsize j = 0; j < p; j++)
            if (ws->pinned[j] && ws->step[j] != 0)
              g -= (j <= ja ? ws->normal[ja * p + j] : ws->normal[j * p + ja]) * ws->step[j];
          ws->right[a] = g;
        }
      if (!bt_cholesky_decompose (ws->work, m, NULL))
        return FALSE;
      bt_cholesky_solve (ws->work, m, ws->right);
      for (gsize a = 0; a < m; a++)
        {
          gsize j = ws->free_index[a];
          double limit = problem->step_limit != NULL ? problem->step_limit[j] : INFINITY;
          double low = fmax (low_of (problem, j) - x[j], -limit), high = fmin (high_of (problem, j) - x[j], limit);

          ws->step[j] = ws->right[a];
          if (ws->step[j] < low || ws->step[j] > high)
            {
              ws->step[j] = ws->step[j] < low ? low : high;
              ws->pinned[j] = TRUE;
              left = TRUE;
            }
        }
      if (!left)
        return TRUE;
    }
  return TRUE;
}

/* What the quadratic model promises for a step: cost(x) - cost(x + step). */
static double
promised (const Workspace *ws)
{
  const gsize p = ws->p;
  double linear = 0, quadratic = 0;

  for (gsize a = 0; a < p; a++)
    {
      double row = ws->normal[a * p + a] * ws->step[a] / 2;

      for (gsize b = 0; b < a; b++)
        row += ws->normal[a * p + b] * ws->step[b];
      quadratic += ws->step[a] * row;
      linear += ws->step[a] * ws->gradient[a];
    }
  return -2 * (linear + quadratic);
}

static void
fill_covariance (Workspace *ws, const double *x, BtSolution *solution)
{
  const gsize p = ws->p;
  const BtProblem *problem = ws->problem;
  gsize m = 0;
  double condition = INFINITY;

  for (gsize j = 0; j < p; j++)
    {
      double low = low_of (problem, j), high = high_of (problem, j), room = 1e-9 * (1 + fabs (x[j]));
      gboolean fixed = low >= high, bound = !fixed && (x[j] <= low + room || x[j] >= high - room);

      if (solution->at_bound != NULL)
        solution->at_bound[j] = bound;
      /* A parameter without any effect at the minimum (the width of a band of height 0) has no row either. */
      if (!fixed && !bound && ws->normal[j * p + j] > 0)
        ws->free_index[m++] = j;
    }
  for (gsize a = 0; a < m; a++)
    for (gsize b = 0; b <= a; b++)
      ws->work[a * m + b] = ws->normal[ws->free_index[a] * p + ws->free_index[b]];
  if (solution->covariance != NULL)
    memset (solution->covariance, 0, sizeof (double) * p * p);
  if (m > 0 && bt_cholesky_decompose (ws->work, m, &condition))
    {
      if (solution->covariance != NULL)
        for (gsize a = 0; a < m; a++)
          {
            memset (ws->right, 0, sizeof (double) * m);
            ws->right[a] = 1;
            bt_cholesky_solve (ws->work, m, ws->right);
            for (gsize b = 0; b < m; b++)
              solution->covariance[ws->free_index[a] * p + ws->free_index[b]] = ws->right[b];
          }
    }
  else if (m > 0)
    solution->state = BT_SOLVE_SINGULAR;
  else
    condition = 1;
  solution->condition = condition;
}

static void
clamp_start (const BtProblem *problem, double *x)
{
  for (gsize j = 0; j < problem->n_parameters; j++)
    {
      if (problem->low != NULL && x[j] < problem->low[j])
        x[j] = problem->low[j];
      if (problem->high != NULL && x[j] > problem->high[j])
        x[j] = problem->high[j];
    }
}

BtSolveState
bt_least_squares (const BtProblem *problem, BtSolution *solution)
{
  Workspace ws;
  double *x = solution->x;
  const double tolerance = problem->tolerance > 0 ? problem->tolerance : 1e-10;
  const int max_iterations = problem->max_iterations > 0 ? problem->max_iterations : 200;
  double damping = 0.1, growth = 2, cost;
  int quiet = 0;

  g_return_val_if_fail (problem->n_parameters > 0 && problem->n_points > 0, BT_SOLVE_SINGULAR);

  workspace_init (&ws, problem);
  clamp_start (problem, x);
  problem->model (x, ws.residual, ws.jacobian, problem->data);
  solution->chi2 = sum_of_squares (ws.residual, ws.n);
  cost = solution->chi2 + prior_cost (problem, x);
  accumulate_normal (&ws, x);
  solution->state = BT_SOLVE_STOPPED_EARLY;
  solution->iterations = 0;
  if (!isfinite (cost))
    solution->state = BT_SOLVE_SINGULAR;

  while (isfinite (cost) && solution->iterations < max_iterations)
    {
      double trial_cost, gain, expected, largest = 0;

      if (problem->cancellable != NULL && g_cancellable_is_cancelled (problem->cancellable))
        {
          solution->state = BT_SOLVE_CANCELLED;
          break;
        }
      solution->iterations++;
      for (gsize j = 0; j < ws.p; j++)
        ws.diagonal[j] = fmax (ws.diagonal[j], fmax (ws.normal[j * ws.p + j], DBL_MIN));
      if (!solve_step (&ws, x, damping))
        {
          damping = fmax (damping * growth, 1e-12);
          growth *= 2;
          if (damping > 1e16)
            {
              solution->state = BT_SOLVE_SINGULAR;
              break;
            }
          continue;
        }
      for (gsize j = 0; j < ws.p; j++)
        {
          ws.trial[j] = x[j] + ws.step[j];
          largest = fmax (largest, fabs (ws.step[j]) / (fabs (x[j]) + 1e-8));
        }
      expected = promised (&ws);
      if (expected <= tolerance * 1e-6 * cost || largest < 1e-14)
        {
          solution->state = BT_SOLVE_CONVERGED;
          break;
        }
      problem->model (ws.trial, ws.residual, NULL, problem->data);
      trial_cost = sum_of_squares (ws.residual, ws.n);
      gain = cost - (trial_cost + prior_cost (problem, ws.trial));
      if (isfinite (trial_cost) && gain > 0)
        {
          double ratio = gain / expected, f = 2 * ratio - 1;
          gboolean small = gain <= tolerance * cost && expected <= 10 * tolerance * cost;

          memcpy (x, ws.trial, sizeof (double) * ws.p);
          solution->chi2 = trial_cost;
          cost -= gain;
          damping *= fmax (1.0 / 10, 1 - f * f * f);
          growth = 2;
          problem->model (x, ws.residual, ws.jacobian, problem->data);
          accumulate_normal (&ws, x);
          quiet = small ? quiet + 1 : 0;
          if (quiet >= 2)
            {
              solution->state = BT_SOLVE_CONVERGED;
              break;
            }
        }
      else
        {
          damping *= growth;
          growth *= 2;
          /* The cost no longer changes at the precision of the sum: there is nothing left to win. */
          if (expected <= 1e-13 * cost || damping > 1e14)
            {
              solution->state = expected <= 1e-6 * cost ? BT_SOLVE_CONVERGED : BT_SOLVE_STOPPED_EARLY;
              break;
            }
        }
    }
  fill_covariance (&ws, x, solution);
  workspace_clear (&ws);
  return solution->state;
}

const char *
bt_solve_state_text (BtSolveState state)
{
  switch (state)
    {
    case BT_SOLVE_CONVERGED:
      return _ ("The fit found its minimum.");
    case BT_SOLVE_STOPPED_EARLY:
      return _ ("The fit stopped before its minimum; treat its numbers as provisional.");
    case BT_SOLVE_SINGULAR:
      return _ ("The data cannot tell some of the fit's numbers apart; take a band away or hold one of them.");
    case BT_SOLVE_CANCELLED:
      return _ ("The fit was cancelled.");
    default:
      g_return_val_if_reached ("");
    }
}
