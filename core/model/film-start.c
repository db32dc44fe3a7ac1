/* Where a film's fit starts, what it is bound by and what is known beforehand: parameters, priors, and starts taken from another fit. */
#include "film-model.h"

#include <math.h>
#include <string.h>

#include <bandtally/recipe.h>

#include "shapes-private.h"

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

static double
lowest_absorbance (const BtFilmData *data)
{
  double lowest = INFINITY;

  for (gsize i = 0; i < data->n; i++)
    lowest = fmin (lowest, data->absorbance[i]);
  return data->n > 0 ? lowest : 0;
}

/* How far a film's group may lie from where the reference energies put it, eV: published sets differ by this much at large diameters, most
 * for the higher transitions. */
static const double centre_u_ev[BT_N_GROUPS] = { [BT_S11] = 0.05, [BT_S22] = 0.06, [BT_M11] = 0.08, [BT_S33] = 0.12, [BT_S44] = 0.15, [BT_M22] = 0.15 };
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
  const double scale = largest_absorbance (data), lowest = lowest_absorbance (data);
  gsize offset = bt_film_fit_offset (fit);

  init_parameter (fit, 0, scale / 2, 0, INFINITY, INFINITY);
  for (guint s = 0; s < bt_tail_n_shape (fit->tail); s++)
    {
      double low = tail_windows[fit->tail].low[s], high = tail_windows[fit->tail].high[s];

      init_parameter (fit, 1 + s, tail_windows[fit->tail].start[s], low, high, (high - low) / 6);
      fit->prior_mean[1 + s] = tail_windows[fit->tail].mean[s];
      fit->prior_u[1 + s] = tail_windows[fit->tail].u[s];
    }
  /* A film is clear somewhere: an offset that is large against the reading is no offset, and below zero it is the instrument's, as far down as
   * the reading itself goes. */
  init_parameter (fit, offset, fmin (lowest, 0), fmin (1.1 * lowest, 0) - 0.02 * scale, scale, INFINITY);
  fit->prior_mean[offset] = fmin (lowest, 0);
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
