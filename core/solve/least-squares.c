/* Bounded least squares for a model that fills residuals and a Jacobian by itself. */
#include <bandtally/solve.h>

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

#include "lm-private.h"

typedef struct
{
  const BtProblem *problem;
  gsize n, p, stride;
  double *residual, *jacobian, *rows, *columns, *work;
  guint *index;
  const BtKernel *kernel;
} Call;

static gboolean
has_prior (const BtProblem *problem, gsize j)
{
  return problem->prior_mean != NULL && problem->prior_u != NULL && isfinite (problem->prior_u[j]) && problem->prior_u[j] > 0;
}

/* Upper triangle of J'J and J'r: blocks of rows turned into columns, whose products the kernel knows. The residual is the last column. */
static void
accumulate_normal (const Call *call, double *a)
{
  const gsize n = call->n, p = call->p;

  for (gsize from = 0; from < n; from += BT_BLOCK)
    {
      const gsize count = MIN (BT_BLOCK, n - from);

      if (count < BT_BLOCK)
        memset (call->columns, 0, sizeof (double) * BT_BLOCK * (p + 1));
      for (gsize i = 0; i < count; i++)
        {
          const double *row = call->jacobian + (from + i) * p;

          for (gsize j = 0; j < p; j++)
            call->columns[j * BT_BLOCK + i] = row[j];
          call->columns[p * BT_BLOCK + i] = call->residual[from + i];
        }
      call->kernel->products (call->columns, (guint)p + 1, call->index, a, call->stride);
    }
}

static void
add_rows (const Call *call, double *a)
{
  for (gsize from = 0; from < call->n; from += BT_BLOCK)
    {
      gsize count = MIN (BT_BLOCK, call->n - from);

      for (gsize i = 0; i < count; i++)
        {
          memcpy (call->rows + i * call->stride, call->jacobian + (from + i) * call->p, sizeof (double) * call->p);
          call->rows[i * call->stride + call->p] = call->residual[from + i];
        }
      call->kernel->append (a, call->rows, count, call->p + 1, call->stride, call->work);
    }
}

static void
add_prior (const Call *call, gsize j, double z, gboolean orthogonal, double *a)
{
  const double w = 1 / call->problem->prior_u[j];

  if (orthogonal)
    {
      memset (call->rows, 0, sizeof (double) * call->stride);
      call->rows[j] = w;
      call->rows[call->p] = z;
      call->kernel->append (a, call->rows, 1, call->p + 1, call->stride, call->work);
      return;
    }
  a[j * call->stride + j] += w * w;
  a[j * call->stride + call->p] += w * z;
}

static void
evaluate (gpointer data, const double *x, gboolean orthogonal, double above, BtLmSystem *system)
{
  Call *call = data;
  const BtProblem *problem = call->problem;
  double prior = 0, sum = 0;

  /* A trial that is thrown away needs no derivatives. */
  problem->model (x, call->residual, isinf (above) ? call->jacobian : NULL, problem->data);
  for (gsize i = 0; i < call->n; i++)
    sum += call->residual[i] * call->residual[i];
  for (gsize j = 0; j < call->p; j++)
    if (has_prior (problem, j))
      prior += pow ((x[j] - problem->prior_mean[j]) / problem->prior_u[j], 2);
  system->chi2 = sum;
  system->cost = sum + prior;
  if (!isfinite (system->cost) || system->cost >= above)
    return;
  if (!isinf (above))
    problem->model (x, call->residual, call->jacobian, problem->data);
  memset (system->a, 0, sizeof (double) * (call->p + 1) * call->stride);
  (orthogonal ? add_rows : accumulate_normal) (call, system->a);
  for (gsize j = 0; j < call->p; j++)
    if (has_prior (problem, j))
      add_prior (call, j, (x[j] - problem->prior_mean[j]) / problem->prior_u[j], orthogonal, system->a);
}

static void
limits (gpointer data, const double *x, double *down, double *up)
{
  const Call *call = data;

  for (gsize j = 0; j < call->p; j++)
    down[j] = up[j] = call->problem->step_limit[j];
}

BtSolveState
bt_least_squares (const BtProblem *problem, BtSolution *solution)
{
  BtLm lm;
  Call call = { .problem = problem, .n = problem->n_points, .p = problem->n_parameters };

  g_return_val_if_fail (problem->n_parameters > 0 && problem->n_points > 0, BT_SOLVE_SINGULAR);

  bt_lm_init (&lm, call.p);
  call.stride = lm.stride;
  call.kernel = lm.kernel;
  call.residual = g_new (double, call.n);
  call.jacobian = g_new (double, call.n *call.p);
  call.rows = g_new (double, BT_BLOCK *call.stride);
  call.work = g_new (double, call.stride);
  /* The kernel pads to a multiple of four columns. */
  call.columns = g_aligned_alloc (BT_BLOCK * (call.p + 4), sizeof (double), 64);
  call.index = g_new (guint, call.p + 4);
  for (gsize j = 0; j < call.p + 4; j++)
    call.index[j] = (guint)j;
  lm.data = &call;
  lm.evaluate = evaluate;
  lm.limits = problem->step_limit != NULL ? limits : NULL;
  lm.low = problem->low;
  lm.high = problem->high;
  lm.cancellable = problem->cancellable;
  if (problem->max_iterations > 0)
    lm.max_iterations = problem->max_iterations;
  if (problem->tolerance > 0)
    lm.tolerance = problem->tolerance;

  bt_lm_run (&lm, solution->x);
  bt_lm_covariance (&lm, solution->x, solution->covariance, solution->at_bound);
  solution->chi2 = lm.now.chi2;
  solution->iterations = lm.iterations;
  solution->state = lm.state;
  solution->condition = lm.condition;
  g_free (call.residual);
  g_free (call.jacobian);
  g_free (call.rows);
  g_free (call.work);
  g_aligned_free (call.columns);
  g_free (call.index);
  bt_lm_clear (&lm);
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
