/* The outcome of a fit: uncertainties, criteria, and what a user must be told. */
#include "fit-private.h"

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

typedef struct
{
  BtFitResult result;
  grefcount count;
} Counted;

G_DEFINE_BOXED_TYPE (BtFitResult, bt_fit_result, bt_fit_result_ref, bt_fit_result_unref)

BtFitResult *
bt_fit_result_ref (BtFitResult *result)
{
  g_ref_count_inc (&((Counted *)result)->count);
  return result;
}

void
bt_fit_result_unref (BtFitResult *result)
{
  if (!g_ref_count_dec (&((Counted *)result)->count))
    return;
  g_free (result->x);
  g_free (result->u);
  g_free (result->covariance);
  g_free (result->at_bound);
  g_free (result);
}

/* Hurvich and Tsai, Biometrika 76, 297 (1989); Schwarz, Ann. Statist. 6, 461 (1978). Without known uncertainties the noise is
 * one more parameter. */
static void
fill_criteria (BtFitResult *result, gboolean sigma_known)
{
  const double n = (double)result->n_points, k = result->n_free + (sigma_known ? 0 : 1);
  const double misfit = sigma_known ? result->chi2 : n * log (result->chi2 / n);

  result->aicc = n > k + 1 ? misfit + 2 * k + 2 * k * (k + 1) / (n - k - 1) : INFINITY;
  result->bic = misfit + k * log (n);
}

/* Points that repeat their neighbours' errors say less: as many independent ones as there are effective points have their variance. */
static double
covariance_scale (const BtFitResult *result, const BtFitOptions *options)
{
  const double points = options->correlated ? fmin (result->effective_points, (double)result->n_points) : (double)result->n_points;

  if (options->sigma_known)
    return (double)result->n_points / fmax (points, 1);
  return points > result->n_free ? result->chi2 / (points - result->n_free) : 1;
}

BtFitResult *
bt_fit_result_new (BtFitWork *work, const BtFitOptions *options, const double *z)
{
  Counted *counted = g_new0 (Counted, 1);
  BtFitResult *result = &counted->result;
  const BtFitMap *map = work->map;
  const guint n = map->n_full, p = map->n_free;
  g_autofree double *covariance = g_new0 (double, (gsize)p *p + 1);
  g_autofree gboolean *at_bound = g_new0 (gboolean, p + 1);
  double scale = 1;

  g_ref_count_init (&counted->count);
  bt_lm_covariance (&work->lm, z, covariance, at_bound);
  result->n_parameters = n;
  result->n_points = work->points->n;
  result->iterations = (guint)work->lm.iterations;
  bt_fit_residuals (work, z, work->residual);
  for (gsize block = 0; block < work->points->n_blocks; block++)
    result->chi2 += work->kernel->dot (work->residual + block * BT_BLOCK, work->residual + block * BT_BLOCK);
  result->condition = work->lm.condition;
  result->by_qr = work->lm.orthogonal;
  result->state = work->lm.state;
  result->sigma_known = options->sigma_known;
  for (guint k = 0; k < p; k++)
    result->n_free += covariance[(gsize)k * p + k] > 0;
  result->effective_points = bt_effective_points (result->n_points, bt_lag1_correlation (work->residual, result->n_points));
  scale = covariance_scale (result, options);
  result->x = g_new (double, n);
  result->u = g_new0 (double, n);
  result->covariance = g_new0 (double, (gsize)n *n);
  result->at_bound = g_new0 (gboolean, n);
  bt_fit_map_expand (map, z, result->x);
  for (guint i = 0; i < n; i++)
    if (map->index[i] >= 0)
      {
        result->at_bound[i] = at_bound[map->index[i]];
        for (guint j = 0; j < n; j++)
          if (map->index[j] >= 0)
            result->covariance[(gsize)i * n + j]
                = scale * map->factor[i] * map->factor[j] * covariance[(gsize)map->index[i] * p + (guint)map->index[j]];
        result->u[i] = sqrt (result->covariance[(gsize)i * n + i]);
      }
  fill_criteria (result, options->sigma_known);
  return result;
}

char *
bt_fit_result_to_text (const BtFitResult *result)
{
  GString *text = g_string_new (bt_solve_state_text (result->state));
  guint bound = 0;

  for (guint i = 0; i < result->n_parameters; i++)
    bound += result->at_bound[i] != 0;
  if (bound > 0)
    {
      g_string_append_c (text, ' ');
      g_string_append_printf (
          text,
          g_dngettext (GETTEXT_PACKAGE, "%u number sits on its bound and has no uncertainty; widen the bound or hold it.",
                       "%u numbers sit on their bounds and have no uncertainty; widen the bounds or hold them.", bound),
          bound);
    }
  if (result->n_starts > 1)
    {
      g_string_append_c (text, ' ');
      g_string_append_printf (text, _ ("%u of %u starts came within 1 %% of the best."), result->n_reached, result->n_starts);
    }
  return g_string_free (text, FALSE);
}
