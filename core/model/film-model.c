/* A tail, steps and Gaussian bands in absorbance over energy, and their fit to a film. */
#include "film-model.h"

#include <math.h>
#include <string.h>

#include <bandtally/recipe.h>

#include "shapes-private.h"

#define LN16 2.772588722239781 /* 4 ln 2 */

/* Published parameter windows of the tails: a believable range (bounds) and what is usual (a weak prior).
 * Plasmon: centre 4.5 to 5.25 eV (Murakami et al., Phys. Rev. Lett. 94, 087402 (2005)), half width from common practice.
 * Power law and exponential: common practice. */
static const struct { double start[2], low[2], high[2], mean[2], u[2]; } tail_windows[BT_N_TAILS] = {
  [BT_TAIL_PLASMON] = { { 4.6, 1.2 }, { 4.0, 0.4 }, { 5.6, 4.0 }, { 4.7, 1.3 }, { 0.3, 0.6 } },
  [BT_TAIL_POWER] = { { 1.2, 0 }, { 0.2, 0 }, { 4.0, 0 }, { 1.3, 0 }, { 1.0, INFINITY } },
  [BT_TAIL_EXPONENTIAL] = { { 1.5e-3, 0 }, { 2e-4, 0 }, { 8e-3, 0 }, { 1.5e-3, 0 }, { 1.5e-3, INFINITY } },
};

gsize
bt_film_fit_offset (const BtFilmFit *fit)
{
  return 1 + bt_tail_n_shape (fit->tail);
}

static gsize
first_step (const BtFilmFit *fit)
{
  return bt_film_fit_offset (fit) + 1;
}

gsize
bt_film_fit_wings (const BtFilmFit *fit)
{
  return first_step (fit) + fit->n_steps + fit->n_fringe;
}

gsize
bt_film_fit_sideband (const BtFilmFit *fit)
{
  return bt_film_fit_wings (fit) + 1;
}

gsize
bt_film_fit_band (const BtFilmFit *fit, guint band)
{
  return bt_film_fit_sideband (fit) + 1 + 3 * (gsize) band;
}

static double
largest_absorbance (const BtFilmData *data)
{
  double largest = 0;

  for (gsize i = 0; i < data->n; i++)
    largest = fmax (largest, fabs (data->absorbance[i]));
  return largest > 0 ? largest : 1;
}

/* How far a film's group may lie from where the reference energies put it, eV: published sets differ by this much at large diameters, most
 * for the higher transitions. And areas of higher transitions against S22 or M11 of the same tubes: per carbon S11 > S22 > S33 (published
 * order), values from common practice with a wide uncertainty. */
static const double centre_u_ev[BT_N_GROUPS] = { [BT_S11] = 0.05, [BT_S22] = 0.06, [BT_M11] = 0.08, [BT_S33] = 0.12, [BT_S44] = 0.15, [BT_M22] = 0.15 };
static const struct { BtGroup group, of; double ratio, u; } strengths[] = {
  { BT_S33, BT_S22, 0.7, 0.35 },
  { BT_S44, BT_S22, 0.5, 0.35 },
  { BT_M22, BT_M11, 0.6, 0.4 },
};
/* A band's width against what the plan expects. */
#define FWHM_RELATIVE_U 0.25

static void
init_parameter (BtFilmFit *fit, gsize j, double x, double low, double high, double step_limit)
{
  fit->x[j] = x;
  fit->low[j] = low;
  fit->high[j] = high;
  fit->step_limit[j] = step_limit;
  fit->prior_mean[j] = 0;
  fit->prior_u[j] = INFINITY;
}

static void
init_tail (BtFilmFit *fit, const BtFilmData *data)
{
  const double scale = largest_absorbance (data);
  gsize offset = bt_film_fit_offset (fit);

  init_parameter (fit, 0, scale / 2, 0, INFINITY, INFINITY);
  for (guint s = 0; s < bt_tail_n_shape (fit->tail); s++)
    {
      double low = tail_windows[fit->tail].low[s], high = tail_windows[fit->tail].high[s];

      init_parameter (fit, 1 + s, tail_windows[fit->tail].start[s], low, high, (high - low) / 6);
      fit->prior_mean[1 + s] = tail_windows[fit->tail].mean[s];
      fit->prior_u[1 + s] = tail_windows[fit->tail].u[s];
    }
  /* A film is clear somewhere: an offset that is large against the reading is no offset, and below zero it is the instrument's. */
  init_parameter (fit, offset, 0, -0.02 * scale, scale, INFINITY);
  fit->prior_u[offset] = 0.1 * scale;
  for (guint k = 0; k < fit->n_steps; k++)
    {
      gsize j = offset + 1 + k;

      init_parameter (fit, j, data->step_size[k], -INFINITY, INFINITY, INFINITY);
      fit->prior_mean[j] = data->step_size[k];
      fit->prior_u[j] = 2 * data->step_u[k];
    }
  for (guint k = 0; k < fit->n_fringe; k++)
    {
      gsize j = offset + 1 + fit->n_steps + k;

      init_parameter (fit, j, 0, -INFINITY, INFINITY, INFINITY);
      fit->prior_u[j] = 2 * data->fringe_amplitude;
    }
  init_parameter (fit, bt_film_fit_wings (fit), 0.1, 0, 0.6, 0.2);
  fit->prior_mean[bt_film_fit_wings (fit)] = 0.1;
  fit->prior_u[bt_film_fit_wings (fit)] = 0.15;
  init_parameter (fit, bt_film_fit_sideband (fit), 0.06, 0, 0.2, 0.05);
  fit->prior_mean[bt_film_fit_sideband (fit)] = 0.06;
  fit->prior_u[bt_film_fit_sideband (fit)] = 0.03;
}

BtFilmFit *
bt_film_fit_new (BtTailKind tail, const BtBandPlan *plan, const guint n_in_group[BT_N_GROUPS], const BtFilmData *data)
{
  BtFilmFit *fit = g_new0 (BtFilmFit, 1);

  fit->tail = tail;
  fit->n_steps = data->n_steps;
  fit->n_fringe = data->fringe_cycles > 0 ? 2 : 0;
  init_tail (fit, data);
  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      const BtBandWindow *window = &plan->bands[g];
      guint n = n_in_group[g];

      fit->n_in_group[g] = n;
      for (guint b = 0; b < n; b++)
        {
          gsize j = bt_film_fit_band (fit, fit->n_bands);
          /* Spread evenly over the expected width of the group. */
          double place = window->centre_ev + window->fwhm_ev * ((b + 0.5) / n - 0.5);
          double width = CLAMP (window->fwhm_ev / (n > 1 ? 1 + 0.4 * (n - 1) : 1), window->fwhm_low_ev, window->fwhm_high_ev);

          fit->group[fit->n_bands++] = (BtGroup) g;
          init_parameter (fit, j, 0, g == BT_M11 ? -INFINITY : 0, INFINITY, INFINITY);
          init_parameter (fit, j + 1, CLAMP (place, window->low_ev, window->high_ev), window->low_ev, window->high_ev, 0.25 * width);
          init_parameter (fit, j + 2, width, window->fwhm_low_ev, window->fwhm_high_ev, 0.35 * width);
          fit->prior_mean[j + 1] = place;
          fit->prior_u[j + 1] = hypot (centre_u_ev[g], n > 1 ? window->fwhm_ev / 3 : 0);
          fit->prior_mean[j + 2] = width;
          fit->prior_u[j + 2] = FWHM_RELATIVE_U * width;
        }
    }
  fit->p = bt_film_fit_band (fit, fit->n_bands);
  fit->covariance = g_new0 (double, fit->p * fit->p);
  fit->chi2 = fit->aic = INFINITY;
  return fit;
}

BtFilmFit *
bt_film_fit_copy (const BtFilmFit *fit)
{
  BtFilmFit *copy = g_memdup2 (fit, sizeof *fit);

  copy->covariance = g_memdup2 (fit->covariance, sizeof (double) * fit->p * fit->p);
  return copy;
}

void
bt_film_fit_free (BtFilmFit *fit)
{
  if (fit == NULL)
    return;
  g_free (fit->covariance);
  g_free (fit);
}

static guint
first_of_group (const BtFilmFit *fit, BtGroup group)
{
  guint first = 0;

  for (guint g = 0; g < group; g++)
    first += fit->n_in_group[g];
  return first;
}

static void
copy_band_start (BtFilmFit *fit, guint band, const BtFilmFit *other, guint other_band)
{
  gsize to = bt_film_fit_band (fit, band), from = bt_film_fit_band (other, other_band);

  for (gsize k = 0; k < 3; k++)
    fit->x[to + k] = CLAMP (other->x[from + k], fit->low[to + k], fit->high[to + k]);
}

/* Copies a group whose other fit has one band fewer: its widest band becomes two. */
static void
split_widest (BtFilmFit *fit, BtGroup group, const BtFilmFit *other)
{
  guint first = first_of_group (fit, group), other_first = first_of_group (other, group), widest = 0, band = 0;

  for (guint b = 1; b < other->n_in_group[group]; b++)
    if (other->x[bt_film_fit_band (other, other_first + b) + 2] > other->x[bt_film_fit_band (other, other_first + widest) + 2])
      widest = b;
  for (guint b = 0; b < other->n_in_group[group]; b++)
    {
      copy_band_start (fit, first + band, other, other_first + b);
      if (b == widest)
        {
          gsize a = bt_film_fit_band (fit, first + band), c = bt_film_fit_band (fit, first + band + 1);
          double width = fit->x[a + 2], centre = fit->x[a + 1];

          copy_band_start (fit, first + band + 1, other, other_first + b);
          fit->x[a + 1] = CLAMP (centre - 0.3 * width, fit->low[a + 1], fit->high[a + 1]);
          fit->x[c + 1] = CLAMP (centre + 0.3 * width, fit->low[c + 1], fit->high[c + 1]);
          fit->x[a + 2] = fit->x[c + 2] = CLAMP (0.7 * width, fit->low[a + 2], fit->high[a + 2]);
          fit->x[a] = fit->x[c] = 0.7 * fit->x[a];
          band++;
        }
      band++;
    }
}

void
bt_film_fit_start_from (BtFilmFit *fit, const BtFilmFit *other)
{
  if (fit->tail == other->tail)
    for (gsize j = 0; j <= bt_film_fit_offset (fit); j++)
      fit->x[j] = other->x[j];
  for (guint k = 0; k < MIN (fit->n_steps, other->n_steps); k++)
    fit->x[first_step (fit) + k] = other->x[first_step (other) + k];
  fit->x[bt_film_fit_wings (fit)] = other->x[bt_film_fit_wings (other)];
  fit->x[bt_film_fit_sideband (fit)] = other->x[bt_film_fit_sideband (other)];
  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      guint n = fit->n_in_group[g], m = other->n_in_group[g];

      if (n == m)
        for (guint b = 0; b < n; b++)
          copy_band_start (fit, first_of_group (fit, (BtGroup) g) + b, other, first_of_group (other, (BtGroup) g) + b);
      else if (n == m + 1 && m > 0)
        split_widest (fit, (BtGroup) g, other);
    }
  for (guint b = 0; b < fit->n_bands; b++)
    {
      gsize j = bt_film_fit_band (fit, b);

      for (guint field = 0; field < 3; field++)
        if (fit->held[b] & (1u << field))
          {
            gsize k = j + (field == BT_BAND_CENTRE ? 1 : field == BT_BAND_FWHM ? 2 : 0);

            fit->x[k] = fit->low[k];
          }
    }
}

void
bt_film_fit_hold (BtFilmFit *fit, guint band, guint field, double value)
{
  gsize j = bt_film_fit_band (fit, band) + (field == BT_BAND_CENTRE ? 1 : field == BT_BAND_FWHM ? 2 : 0);

  fit->held[band] |= 1u << field;
  fit->x[j] = fit->low[j] = fit->high[j] = value;
}

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
