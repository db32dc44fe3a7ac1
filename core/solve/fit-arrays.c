/* Fits for languages that want arrays returned. */
#include <bandtally/fit.h>

double *
bt_fit_result_dup_x (const BtFitResult *result, gsize *n)
{
  *n = result->n_parameters;
  return g_memdup2 (result->x, sizeof (double) * *n);
}

double *
bt_fit_result_dup_u (const BtFitResult *result, gsize *n)
{
  *n = result->n_parameters;
  return g_memdup2 (result->u, sizeof (double) * *n);
}

double *
bt_fit_result_dup_covariance (const BtFitResult *result, gsize *n)
{
  *n = (gsize) result->n_parameters * result->n_parameters;
  return g_memdup2 (result->covariance, sizeof (double) * *n);
}

double *
bt_fit_dup_curve (BtFit *self, const double *parameters, gsize n_parameters, const double *x, gsize n, gsize *n_out)
{
  double *out;

  *n_out = 0;
  g_return_val_if_fail (BT_IS_FIT (self) && n_parameters == bt_fit_get_n_parameters (self), NULL);
  out = g_new (double, MAX (n, 1));
  bt_fit_eval (self, parameters, x, n, out);
  *n_out = n;
  return out;
}

double *
bt_fit_dup_resamples (BtFit *self, const BtFitResult *best, BtResampleKind kind, guint block, guint n_resamples, gboolean refit, guint64 seed,
                      guint threads, GCancellable *cancellable, gsize *n_out, GError **error)
{
  double *out;

  *n_out = 0;
  g_return_val_if_fail (BT_IS_FIT (self), NULL);
  out = g_new (double, MAX ((gsize) n_resamples * best->n_parameters, 1));
  if (!bt_fit_resample (self, best, kind, block, n_resamples, refit, seed, threads, out, cancellable, error))
    {
      g_free (out);
      return NULL;
    }
  *n_out = (gsize) n_resamples * best->n_parameters;
  return out;
}
