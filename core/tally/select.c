/* Numbers of bands by information criterion. */
#include "select.h"

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

/* What a fit leaves is less than what it missed: bands and tail bend to hide part of it. Calibrated once on forecast films whose tubes scatter
 * in abundance and energy, with sidebands and wings (tests/tally/test-recovery.c measures what intervals then hold). */
#define STRUCTURE_FACTOR 1.5

double
bt_fit_parameters (const BtFilmFit *fit)
{
  double k = 0;

  for (gsize j = 0; j < fit->p; j++)
    {
      if (fit->low[j] >= fit->high[j])
        continue;
      k += 1;
      if (isfinite (fit->prior_u[j]))
        k -= fmin (1, fit->covariance[j * fit->p + j] / (fit->prior_u[j] * fit->prior_u[j]));
    }
  return k;
}

double
bt_fit_aicc (const BtFilmFit *fit, double n_effective)
{
  double k = bt_fit_parameters (fit) + 1, room = n_effective - k - 1;

  /* Where there are hardly more independent points than parameters the correction has no meaning but "far too many". */
  if (room < 1)
    return n_effective * log (fit->chi2 / n_effective) + 2 * k + 2 * k * (k + 1) * (2 - room);
  return n_effective * log (fit->chi2 / n_effective) + 2 * k + 2 * k * (k + 1) / room;
}

double
bt_fit_structure (const BtFilmFit *fit, const BtPrepared *prepared)
{
  const BtFilmData *data = &prepared->data;
  g_autofree double *residual = g_new (double, data->n);
  double sum = 0, cells = 0, k = bt_fit_parameters (fit), room;

  bt_film_fit_residual (fit, data, residual, NULL);
  /* Cell by cell of the correlation length, so that every stretch of the axis counts alike however densely it was sampled, and noise in one
   * stretch hides no structure in another. */
  for (gsize i = 0; i < data->n;)
    {
      double squares = 0, noise = 0;
      gsize first = i;

      for (; i < data->n && data->energy_ev[i] < data->energy_ev[first] + BT_STRUCTURE_LENGTH_EV; i++)
        {
          squares += residual[i] * residual[i];
          noise += prepared->noise[i] * prepared->noise[i];
        }
      sum += fmax (0, squares - noise) / (double) (i - first);
      cells += 1;
    }
  if (!(cells > 0))
    return 0;
  room = fmax (cells - k, cells / 6);
  return STRUCTURE_FACTOR * sqrt (sum / room);
}

static void
hold_bands (BtFilmFit *fit, const BtRecipe *recipe)
{
  guint first = 0;

  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      for (guint b = 0; b < fit->n_in_group[g]; b++)
        for (guint field = 0; field < 3; field++)
          {
            const BtHeld *held = bt_recipe_get_held (recipe, (BtGroup) g, b, (BtBandField) field);

            if (held != NULL)
              bt_film_fit_hold (fit, first + b, field, held->value);
          }
      first += fit->n_in_group[g];
    }
}

BtFilmFit *
bt_fit_bands (const BtPrepared *prepared, const BtRecipe *recipe, BtTailKind tail, const guint n_in_group[BT_N_GROUPS],
              const BtFilmFit *start, GCancellable *cancellable)
{
  BtFilmFit *fit = bt_film_fit_new (tail, &prepared->plan, n_in_group, &prepared->data);

  hold_bands (fit, recipe);
  if (start != NULL)
    bt_film_fit_start_from (fit, start);
  bt_film_fit_run (fit, &prepared->data, cancellable);
  fit->aic = bt_fit_aicc (fit, prepared->n_effective);
  return fit;
}

/* Fewest bands: one in each group that is in range, more where the user holds a number of a later one. */
static void
fewest_bands (const BtPrepared *prepared, const BtRecipe *recipe, guint n_in_group[BT_N_GROUPS])
{
  for (guint g = 0; g < BT_N_GROUPS; g++)
    n_in_group[g] = MIN (1, prepared->n_in_group[g]);
  for (guint i = 0; i < recipe->held->len; i++)
    {
      const BtHeld *held = &g_array_index (recipe->held, BtHeld, i);

      if (prepared->n_in_group[held->group] > 0)
        n_in_group[held->group] = MAX (n_in_group[held->group], held->index + 1);
    }
}

static int
compare_aic (gconstpointer a, gconstpointer b)
{
  const BtFilmFit *left = *(const BtFilmFit *const *) a, *right = *(const BtFilmFit *const *) b;

  return left->aic < right->aic ? -1 : left->aic > right->aic;
}

GPtrArray *
bt_select_bands (const BtPrepared *prepared, const BtRecipe *recipe, BtTailKind tail, GCancellable *cancellable, GError **error)
{
  g_autoptr (GPtrArray) fits = g_ptr_array_new_with_free_func ((GDestroyNotify) bt_film_fit_free);
  guint n_in_group[BT_N_GROUPS];
  const BtFilmFit *current;

  fewest_bands (prepared, recipe, n_in_group);
  current = bt_fit_bands (prepared, recipe, tail, n_in_group, NULL, cancellable);
  g_ptr_array_add (fits, (gpointer) current);
  while (current->state != BT_SOLVE_CANCELLED)
    {
      const BtFilmFit *best = NULL;

      for (guint g = 0; g < BT_N_GROUPS; g++)
        {
          BtFilmFit *trial;

          if (n_in_group[g] == 0 || n_in_group[g] >= prepared->n_in_group[g])
            continue;
          n_in_group[g]++;
          trial = bt_fit_bands (prepared, recipe, tail, n_in_group, current, cancellable);
          n_in_group[g]--;
          g_ptr_array_add (fits, trial);
          if (trial->state == BT_SOLVE_CANCELLED)
            break;
          if (best == NULL || trial->aic < best->aic)
            best = trial;
        }
      if (g_cancellable_is_cancelled (cancellable))
        break;
      if (best == NULL || best->aic >= current->aic)
        break;
      current = best;
      memcpy (n_in_group, current->n_in_group, sizeof n_in_group);
    }
  if (g_cancellable_is_cancelled (cancellable))
    {
      g_set_error_literal (error, BT_TALLY_ERROR, BT_TALLY_ERROR_CANCELLED, _ ("The fit was cancelled."));
      return NULL;
    }
  g_ptr_array_sort (fits, compare_aic);
  return g_steal_pointer (&fits);
}
