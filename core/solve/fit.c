/* The problem: points, shapes, and what is known of their parameters. */
#include "fit-private.h"

#include <math.h>
#include <string.h>

G_DEFINE_FINAL_TYPE (BtFit, bt_fit, G_TYPE_OBJECT)

static void
part_clear (gpointer data)
{
  BtFitPart *part = data;

  if (part->destroy != NULL)
    part->destroy (part->data);
}

static void
bt_fit_init (BtFit *self)
{
  self->parts = g_array_new (FALSE, TRUE, sizeof (BtFitPart));
  g_array_set_clear_func (self->parts, part_clear);
  self->parameters = g_array_new (FALSE, TRUE, sizeof (BtFitParameter));
}

static void
bt_fit_finalize (GObject *object)
{
  BtFit *self = BT_FIT (object);

  g_free (self->x);
  g_free (self->y);
  g_free (self->sigma);
  g_free (self->masked);
  g_array_unref (self->parts);
  g_array_unref (self->parameters);
  if (self->progress_destroy != NULL)
    self->progress_destroy (self->progress_data);
  G_OBJECT_CLASS (bt_fit_parent_class)->finalize (object);
}

static void
bt_fit_class_init (BtFitClass *class)
{
  G_OBJECT_CLASS (class)->finalize = bt_fit_finalize;
}

void
bt_fit_set_progress (BtFit *self, BtFitProgressFunc func, gpointer data, GDestroyNotify destroy)
{
  g_return_if_fail (BT_IS_FIT (self));
  if (self->progress_destroy != NULL)
    self->progress_destroy (self->progress_data);
  self->progress = func;
  self->progress_data = data;
  self->progress_destroy = destroy;
}

BtFit *
bt_fit_new (const double *x, const double *y, const double *sigma, gsize n)
{
  BtFit *self = g_object_new (BT_TYPE_FIT, NULL);

  self->n = n;
  self->x = g_memdup2 (x, sizeof (double) * n);
  self->y = g_memdup2 (y, sizeof (double) * n);
  self->sigma = sigma != NULL ? g_memdup2 (sigma, sizeof (double) * n) : NULL;
  self->masked = g_new0 (gboolean, n);
  return self;
}

static guint
add_part (BtFit *self, BtFitPart part)
{
  part.first = self->parameters->len;
  g_array_append_val (self->parts, part);
  for (guint k = 0; k <= part.n_nonlinear; k++)
    {
      BtFitParameter parameter
          = { .start = 1, .low = -INFINITY, .high = INFINITY, .prior_u = INFINITY, .step_limit = INFINITY, .to = -1 };

      g_array_append_val (self->parameters, parameter);
    }
  return part.first;
}

guint
bt_fit_add_shape (BtFit *self, BtShape shape, const double *start, gsize n_start)
{
  const guint n_parameters = bt_shape_n_parameters (shape), n_references = bt_shape_n_references (shape);
  const guint first = add_part (
      self, (BtFitPart){ .shape = shape, .n_nonlinear = n_parameters + n_references, .n_derivatives = n_parameters });

  g_return_val_if_fail (n_start <= n_parameters + n_references, first);
  for (gsize k = 0; k < n_start; k++)
    bt_fit_set_start (self, first + 1 + (guint)k, start[k]);
  for (guint k = n_parameters; k < n_parameters + n_references; k++)
    bt_fit_set_fixed (self, first + 1 + k, TRUE);
  return first;
}

guint
bt_fit_add_function (BtFit *self, BtFitFunc func, guint n_nonlinear, gpointer data, GDestroyNotify destroy)
{
  g_return_val_if_fail (func != NULL && n_nonlinear <= BT_FIT_MAX_NONLINEAR, 0);
  return add_part (
      self,
      (BtFitPart){ .func = func, .n_nonlinear = n_nonlinear, .n_derivatives = n_nonlinear, .data = data, .destroy = destroy });
}

guint
bt_fit_get_n_parameters (BtFit *self)
{
  return self->parameters->len;
}

void
bt_fit_set_start (BtFit *self, guint parameter, double value)
{
  g_return_if_fail (parameter < self->parameters->len);
  bt_fit_parameter (self, parameter)->start = value;
}

double
bt_fit_get_start (BtFit *self, guint parameter)
{
  g_return_val_if_fail (parameter < self->parameters->len, NAN);
  return bt_fit_parameter (self, parameter)->start;
}

void
bt_fit_set_bounds (BtFit *self, guint parameter, double low, double high)
{
  g_return_if_fail (parameter < self->parameters->len && low <= high);
  bt_fit_parameter (self, parameter)->low = low;
  bt_fit_parameter (self, parameter)->high = high;
}

/* A reference moves nothing that the amplitude does not move: it is always held. */
static gboolean
is_reference (const BtFit *self, guint parameter)
{
  for (guint i = 0; i < self->parts->len; i++)
    {
      const BtFitPart *part = bt_fit_part (self, i);

      if (parameter > part->first + part->n_derivatives && parameter <= part->first + part->n_nonlinear)
        return TRUE;
    }
  return FALSE;
}

void
bt_fit_set_fixed (BtFit *self, guint parameter, gboolean fixed)
{
  g_return_if_fail (parameter < self->parameters->len && (fixed || !is_reference (self, parameter)));
  bt_fit_parameter (self, parameter)->fixed = fixed;
}

void
bt_fit_tie (BtFit *self, guint parameter, guint to, double factor, double offset)
{
  BtFitParameter *tied;

  g_return_if_fail (parameter < self->parameters->len && to < self->parameters->len && isfinite (factor) && isfinite (offset));
  for (int at = (int)to; at >= 0; at = bt_fit_parameter (self, (guint)at)->to)
    if (at == (int)parameter)
      {
        g_warning ("parameter %u is not tied to parameter %u, which depends on it", parameter, to);
        return;
      }
  tied = bt_fit_parameter (self, parameter);
  tied->to = (int)to;
  tied->factor = factor;
  tied->offset = offset;
}

void
bt_fit_set_prior (BtFit *self, guint parameter, double mean, double u)
{
  g_return_if_fail (parameter < self->parameters->len && u > 0);
  bt_fit_parameter (self, parameter)->prior_mean = mean;
  bt_fit_parameter (self, parameter)->prior_u = u;
}

void
bt_fit_set_step_limit (BtFit *self, guint parameter, double limit)
{
  g_return_if_fail (parameter < self->parameters->len && limit > 0);
  bt_fit_parameter (self, parameter)->step_limit = limit;
}

void
bt_fit_mask (BtFit *self, double low, double high)
{
  for (gsize i = 0; i < self->n; i++)
    if (self->x[i] >= low && self->x[i] <= high)
      self->masked[i] = TRUE;
}

void
bt_fit_unmask (BtFit *self)
{
  memset (self->masked, 0, sizeof (gboolean) * self->n);
}

void
bt_fit_set_data (BtFit *self, const double *y, gsize n)
{
  g_return_if_fail (n == self->n);
  memcpy (self->y, y, sizeof (double) * n);
}

void
bt_fit_eval_shape (BtFit *self, guint parameter, const double *parameters, const double *x, gsize n, double *out)
{
  for (guint i = 0; i < self->parts->len; i++)
    {
      const BtFitPart *part = bt_fit_part (self, i);

      if (part->first != parameter)
        continue;
      if (part->func != NULL)
        part->func (parameters + parameter + 1, x, n, out, NULL, part->data);
      else
        bt_shape_eval (part->shape, parameters + parameter + 1, x, n, out, NULL);
      for (gsize k = 0; k < n; k++)
        out[k] *= parameters[parameter];
      return;
    }
  g_return_if_reached ();
}

void
bt_fit_eval (BtFit *self, const double *parameters, const double *x, gsize n, double *out)
{
  double part[256];

  memset (out, 0, sizeof (double) * n);
  for (gsize from = 0; from < n; from += G_N_ELEMENTS (part))
    {
      const gsize count = MIN (G_N_ELEMENTS (part), n - from);

      for (guint i = 0; i < self->parts->len; i++)
        {
          bt_fit_eval_shape (self, bt_fit_part (self, i)->first, parameters, x + from, count, part);
          for (gsize k = 0; k < count; k++)
            out[from + k] += part[k];
        }
    }
}
