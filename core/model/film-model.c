/* A tail, steps, a fringe and bands in absorbance over energy: values, derivatives and the fit to a film. */
#include "film-model.h"

#include <math.h>
#include <string.h>

#include "shapes-private.h"

#define LN16 2.772588722239781 /* 4 ln 2 */

/* Areas of higher transitions against S22 or M11 of the same tubes: per carbon S11 > S22 > S33 (published order), values from common practice
 * with a wide uncertainty. */
static const struct { BtGroup group, of; double ratio, u; } strengths[] = {
  { BT_S33, BT_S22, 0.7, 0.35 },
  { BT_S44, BT_S22, 0.5, 0.35 },
  { BT_M22, BT_M11, 0.6, 0.4 },
};

typedef struct { const BtFilmFit *fit; const BtFilmData *data; double scale; } Call;

/* Area of a band of unit height and unit FWHM. */
static inline double
unit_area (double wings)
{
  return (1 - wings) * BT_GAUSSIAN_AREA + wings * (G_PI / 2);
}

/* Rows below the data: what is known of the areas of higher transitions. @scale is the reference area that makes them relative. */
static void
strength_rows (const BtFilmFit *fit, const double *x, double scale, double *residual, double *jacobian)
{
  const gsize wings = bt_film_fit_wings (fit);

  for (gsize k = 0; k < G_N_ELEMENTS (strengths); k++)
    {
      const double weight = fit->n_in_group[strengths[k].group] > 0 && fit->n_in_group[strengths[k].of] > 0 && scale > 0
                              ? 1 / (strengths[k].u * scale) : 0;
      double *row = jacobian != NULL ? jacobian + k * fit->p : NULL;

      residual[k] = 0;
      if (row != NULL)
        memset (row, 0, sizeof (double) * fit->p);
      for (guint b = 0; b < fit->n_bands; b++)
        {
          gsize j = bt_film_fit_band (fit, b);
          double factor = fit->group[b] == strengths[k].group ? weight : fit->group[b] == strengths[k].of ? -weight * strengths[k].ratio : 0;

          residual[k] += factor * unit_area (x[wings]) * x[j] * x[j + 2];
          if (row != NULL)
            {
              row[j] = factor * unit_area (x[wings]) * x[j + 2];
              row[j + 2] = factor * unit_area (x[wings]) * x[j];
              row[wings] += factor * (G_PI / 2 - BT_GAUSSIAN_AREA) * x[j] * x[j + 2];
            }
        }
    }
}

/* A band at one energy: @wings of its height in a Lorentzian, the rest in a Gaussian of the same FWHM; @side of it 0.2 eV higher and wider (S11 and
 * S22), of the same area ratio. Returns the value for height 1; derivatives (nullable together) by centre, FWHM, wings and side. */
typedef struct { double centre, fwhm, wings, side; } BandSlopes;

static inline double
line_at (double e, double centre, double fwhm, double wings, BandSlopes *slopes)
{
  const double u = (e - centre) / fwhm, l = 1 / (1 + 4 * u * u), g = fabs (u) < 3.3 ? exp (-LN16 * u * u) : 0;

  if (slopes != NULL)
    {
      double du = (1 - wings) * 2 * LN16 * u * g + wings * 8 * u * l * l;

      slopes->centre = du / fwhm;
      slopes->fwhm = du * u / fwhm;
      slopes->wings = l - g;
    }
  return (1 - wings) * g + wings * l;
}

static inline double
band_at (double e, const double *band, double wings, double side, BandSlopes *slopes)
{
  double value = line_at (e, band[1], band[2], wings, slopes), above;
  BandSlopes more;

  if (!(side > 0) && slopes == NULL)
    return value;
  above = line_at (e, band[1] + BT_SIDEBAND_EV, BT_SIDEBAND_WIDTH * band[2], wings, slopes != NULL ? &more : NULL) / BT_SIDEBAND_WIDTH;
  if (slopes != NULL)
    {
      slopes->centre = (1 - side) * slopes->centre + side * more.centre / BT_SIDEBAND_WIDTH;
      slopes->fwhm = (1 - side) * slopes->fwhm + side * more.fwhm;
      slopes->wings = (1 - side) * slopes->wings + side * more.wings / BT_SIDEBAND_WIDTH;
      slopes->side = above - value;
    }
  return (1 - side) * value + side * above;
}

double
bt_line_eval (double energy_ev, double centre_ev, double fwhm_ev, double wings, double sideband)
{
  const double band[3] = { 1, centre_ev, fwhm_ev };

  return band_at (energy_ev, band, wings, sideband, NULL);
}

static inline gboolean
has_sideband (BtGroup group)
{
  return group == BT_S11 || group == BT_S22;
}

/* Cosine (0) or sine (1) of the fringe. */
static inline double
fringe_at (const BtFilmData *data, guint k, double e)
{
  double phase = 2 * G_PI * data->fringe_cycles * e;

  return k == 0 ? cos (phase) : sin (phase);
}

/* Residual (model minus data over sigma) and its derivatives for parameters @x. */
static void
model_function (const double *x, double *residual, double *jacobian, gpointer user_data)
{
  const BtFilmFit *fit = ((Call *) user_data)->fit;
  const BtFilmData *data = ((Call *) user_data)->data;
  const gsize p = fit->p, offset = bt_film_fit_offset (fit), wings = bt_film_fit_wings (fit), side = wings + 1;
  const guint n_shape = bt_tail_n_shape (fit->tail);

  for (gsize i = 0; i < data->n; i++)
    {
      const double e = data->energy_ev[i], w = 1 / data->sigma[i];
      double *row = jacobian != NULL ? jacobian + i * p : NULL;
      double q, d0, d1, sum;

      bt_tail_shape_eval (fit->tail, x + 1, &e, 1, &q, &d0, &d1);
      sum = x[0] * q + x[offset];
      if (row != NULL)
        {
          row[0] = q * w;
          row[1] = x[0] * d0 * w;
          if (n_shape == 2)
            row[2] = x[0] * d1 * w;
          row[offset] = w;
          row[wings] = row[side] = 0;
        }
      for (guint k = 0; k < fit->n_steps; k++)
        {
          double on = e > data->step_ev[k] ? 1 : 0;

          sum += on * x[offset + 1 + k];
          if (row != NULL)
            row[offset + 1 + k] = on * w;
        }
      for (guint k = 0; k < fit->n_fringe; k++)
        {
          double wave = fringe_at (data, k, e);

          sum += wave * x[offset + 1 + fit->n_steps + k];
          if (row != NULL)
            row[offset + 1 + fit->n_steps + k] = wave * w;
        }
      for (guint b = 0; b < fit->n_bands; b++)
        {
          gsize j = side + 1 + 3 * (gsize) b;
          gboolean sideband = has_sideband (fit->group[b]);
          BandSlopes slopes;
          double value = band_at (e, x + j, x[wings], sideband ? x[side] : 0, row != NULL ? &slopes : NULL);

          sum += x[j] * value;
          if (row != NULL)
            {
              row[j] = value * w;
              row[j + 1] = x[j] * slopes.centre * w;
              row[j + 2] = x[j] * slopes.fwhm * w;
              row[wings] += x[j] * slopes.wings * w;
              if (sideband)
                row[side] += x[j] * slopes.side * w;
            }
        }
      residual[i] = (sum - data->absorbance[i]) * w;
    }
  strength_rows (fit, x, ((Call *) user_data)->scale, residual + data->n, jacobian != NULL ? jacobian + data->n * p : NULL);
}

static void
problem_init (BtProblem *problem, const BtFilmFit *fit, const BtFilmData *data, double scale, Call *call, GCancellable *cancellable)
{
  call->fit = fit;
  call->data = data;
  call->scale = scale;
  *problem = (BtProblem){ .n_points = data->n + G_N_ELEMENTS (strengths), .n_parameters = fit->p, .model = model_function, .data = call, .low = fit->low,
                          .high = fit->high, .step_limit = fit->step_limit, .prior_mean = fit->prior_mean,
                          .prior_u = fit->prior_u, .max_iterations = 120, .tolerance = 1e-8, .cancellable = cancellable };
}

BtSolveState
bt_film_fit_run (BtFilmFit *fit, const BtFilmData *data, GCancellable *cancellable)
{
  Call call;
  BtProblem problem;
  BtSolution solution = { .x = fit->x };
  double low[BT_MODEL_MAX_PARAMETERS], high[BT_MODEL_MAX_PARAMETERS];
  gsize free_parameters = 0;

  problem_init (&problem, fit, data, 0, &call, cancellable);

  /* What is linear first: heights, offset and steps with every shape held where it stands. */
  memcpy (low, fit->low, sizeof low);
  memcpy (high, fit->high, sizeof high);
  for (guint s = 0; s < bt_tail_n_shape (fit->tail); s++)
    low[1 + s] = high[1 + s] = fit->x[1 + s];
  for (guint b = 0; b < fit->n_bands; b++)
    {
      gsize j = bt_film_fit_band (fit, b);

      low[j + 1] = high[j + 1] = fit->x[j + 1];
      low[j + 2] = high[j + 2] = fit->x[j + 2];
    }
  for (gsize j = bt_film_fit_wings (fit); j <= bt_film_fit_sideband (fit); j++)
    low[j] = high[j] = fit->x[j];
  problem.low = low;
  problem.high = high;
  problem.max_iterations = 12;
  problem.tolerance = 1e-4;
  if (bt_least_squares (&problem, &solution) == BT_SOLVE_CANCELLED)
    return fit->state = BT_SOLVE_CANCELLED;

  /* The strengths are relative to all that S22 and M11 hold after that. */
  problem_init (&problem, fit, data, bt_film_fit_group_area (fit, BT_S22, NULL) + fabs (bt_film_fit_group_area (fit, BT_M11, NULL)), &call,
                cancellable);
  solution.covariance = fit->covariance;
  solution.at_bound = fit->at_bound;
  fit->state = bt_least_squares (&problem, &solution);
  fit->chi2 = solution.chi2;
  for (gsize j = 0; j < fit->p; j++)
    if (fit->low[j] < fit->high[j])
      free_parameters++;
  fit->aic = fit->chi2 + 2 * (double) free_parameters;
  for (gsize j = 0; j < fit->p; j++)
    if (isfinite (fit->prior_u[j]))
      {
        double z = (fit->x[j] - fit->prior_mean[j]) / fit->prior_u[j];

        fit->aic += z * z;
      }
  return fit->state;
}

void
bt_film_fit_eval (const BtFilmFit *fit, const BtFilmData *data, const double *energy_ev, gsize n, double *out, double *tail_out)
{
  const gsize offset = bt_film_fit_offset (fit);

  for (gsize i = 0; i < n; i++)
    {
      double q, d0, d1, sum;

      bt_tail_shape_eval (fit->tail, fit->x + 1, energy_ev + i, 1, &q, &d0, &d1);
      sum = fit->x[0] * q + fit->x[offset];
      for (guint k = 0; k < fit->n_steps; k++)
        if (energy_ev[i] > data->step_ev[k])
          sum += fit->x[offset + 1 + k];
      for (guint k = 0; k < fit->n_fringe; k++)
        sum += fit->x[offset + 1 + fit->n_steps + k] * fringe_at (data, k, energy_ev[i]);
      if (tail_out != NULL)
        tail_out[i] = sum;
      for (guint b = 0; b < fit->n_bands; b++)
        {
          gsize j = bt_film_fit_band (fit, b);

          sum += fit->x[j]
                 * band_at (energy_ev[i], fit->x + j, fit->x[bt_film_fit_wings (fit)],
                            has_sideband (fit->group[b]) ? fit->x[bt_film_fit_sideband (fit)] : 0, NULL);
        }
      out[i] = sum;
    }
}

void
bt_film_fit_residual (const BtFilmFit *fit, const BtFilmData *data, double *residual, double *jacobian)
{
  Call call = { fit, data, 0 };
  const gsize rows = data->n + G_N_ELEMENTS (strengths);
  g_autofree double *r = g_new (double, rows), *j = jacobian != NULL ? g_new (double, rows * fit->p) : NULL;

  model_function (fit->x, r, j, &call);
  for (gsize i = 0; i < data->n; i++)
    residual[i] = -r[i] * data->sigma[i];
  if (jacobian != NULL)
    memcpy (jacobian, j, sizeof (double) * data->n * fit->p);
}

double
bt_film_fit_area (const BtFilmFit *fit, guint band, double *gradient)
{
  gsize j = bt_film_fit_band (fit, band), wings = bt_film_fit_wings (fit);
  double unit = unit_area (fit->x[wings]);

  if (gradient != NULL)
    {
      gradient[j] += unit * fit->x[j + 2];
      gradient[j + 2] += unit * fit->x[j];
      gradient[wings] += (G_PI / 2 - BT_GAUSSIAN_AREA) * fit->x[j] * fit->x[j + 2];
    }
  return unit * fit->x[j] * fit->x[j + 2];
}

double
bt_film_fit_group_area (const BtFilmFit *fit, BtGroup group, double *gradient)
{
  double area = 0;

  for (guint b = 0; b < fit->n_bands; b++)
    if (fit->group[b] == group)
      area += bt_film_fit_area (fit, b, gradient);
  return area;
}

double
bt_film_fit_covariance_of (const BtFilmFit *fit, const double *g, const double *h)
{
  double sum = 0;

  for (gsize a = 0; a < fit->p; a++)
    for (gsize b = 0; b < fit->p && fabs (g[a]) > 0; b++)
      sum += g[a] * fit->covariance[a * fit->p + b] * h[b];
  return sum;
}
