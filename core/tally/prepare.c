/* From a film and a recipe to the points that are fitted. */
#include "prepare.h"

#include <math.h>
#include <string.h>

#include <glib/gi18n-lib.h>

/* More points than this say nothing more about bands of 50 meV and more: they are averaged. */
#define MAX_POINTS 700
/* Fewer than this cannot carry a tail and a band. */
#define MIN_POINTS 20
/* Readings of which stray light hides more than this share are left out. */
#define MOST_HIDDEN 0.02

void
bt_prepared_free (BtPrepared *prepared)
{
  if (prepared == NULL)
    return;
  bt_curve_free (prepared->curve);
  g_free (prepared->energy_ev);
  g_free (prepared->absorbance);
  g_free (prepared->noise);
  g_free (prepared->sigma);
  g_free (prepared->per_length);
  g_free (prepared);
}

/* The ends that the recipe leaves open: from below S11 to above the last band that stands alone against the tail. */
static BtRange
choose_range (const BtRecipe *recipe, const BtBandPlan *plan, const BtCurve *curve)
{
  const double first = curve->energy_ev[0], last = curve->energy_ev[curve->n - 1];
  const BtBandWindow *s11 = &plan->bands[BT_S11], *s33 = &plan->bands[BT_S33];
  BtRange range;

  range.low_ev = recipe->range.low_ev > 0 ? recipe->range.low_ev : s11->low_ev - 1.2 * s11->fwhm_ev;
  range.high_ev = recipe->range.high_ev > 0 ? recipe->range.high_ev : s33->centre_ev + 0.25 * s33->fwhm_ev;
  range.low_ev = fmax (range.low_ev, first);
  range.high_ev = fmin (range.high_ev, last);
  return range;
}

static gboolean
in_any (const BtRange *ranges, gsize n, double energy_ev)
{
  for (gsize i = 0; i < n; i++)
    if (energy_ev >= ranges[i].low_ev && energy_ev <= ranges[i].high_ev)
      return TRUE;
  return FALSE;
}

/* The share of the absorbance that stray light hides where the reading stands, A_read = -log10 ((T + s) / (1 + s)). */
static double
hidden_share (BtFilm *film, double stray, double energy_ev)
{
  double a, t;

  if (!(stray > 0))
    return 0;
  a = bt_spectrum_absorbance_at (bt_film_get_spectrum (film), energy_ev);
  t = pow (10, -a) * (1 + stray) - stray;
  return t > 0 ? (a > 0 ? (-log10 (t) - a) / a : 0) : 1;
}

/* Copies the points to be fitted; counts those left out for being too dark. */
static void
take_points (BtPrepared *prepared, BtFilm *film, const BtRecipe *recipe)
{
  const BtCurve *curve = prepared->curve;
  gsize n_saturated, n = 0;
  const BtRange *saturated = bt_spectrum_get_saturated (bt_film_get_spectrum (film), &n_saturated);
  gboolean is_alpha = bt_spectrum_get_y_unit (bt_film_get_spectrum (film)) == BT_Y_ALPHA_PER_CM;

  prepared->energy_ev = g_new (double, curve->n);
  prepared->absorbance = g_new (double, curve->n);
  prepared->noise = g_new (double, curve->n);
  prepared->sigma = g_new (double, curve->n);
  prepared->per_length = g_new (double, curve->n);
  for (gsize i = 0; i < curve->n; i++)
    {
      double e = curve->energy_ev[i];

      if (e < prepared->range.low_ev || e > prepared->range.high_ev
          || in_any ((const BtRange *) (void *) recipe->excluded->data, recipe->excluded->len, e))
        continue;
      if (in_any (saturated, n_saturated, e) || (!is_alpha && hidden_share (film, recipe->stray_light, e) > MOST_HIDDEN))
        {
          prepared->n_saturated++;
          continue;
        }
      if (!is_alpha && curve->absorbance[i] > recipe->max_absorbance)
        {
          prepared->n_over_limit++;
          continue;
        }
      prepared->energy_ev[n] = e;
      prepared->absorbance[n] = curve->absorbance[i];
      prepared->noise[n] = curve->absorbance_u[i];
      n++;
    }
  prepared->data.n = n;
}

/* Averages neighbours into at most MAX_POINTS bins of equal energy. */
static void
thin_points (BtPrepared *prepared)
{
  const gsize n = prepared->data.n;
  double low, width;
  gsize out = 0, i = 0;

  if (n <= MAX_POINTS)
    return;
  low = prepared->energy_ev[0];
  width = (prepared->energy_ev[n - 1] - low) / MAX_POINTS;
  while (i < n)
    {
      double bin = floor ((prepared->energy_ev[i] - low) / width), e = 0, a = 0, v = 0;
      gsize count = 0;

      for (; i < n && floor ((prepared->energy_ev[i] - low) / width) <= bin; i++, count++)
        {
          e += prepared->energy_ev[i];
          a += prepared->absorbance[i];
          v += prepared->noise[i] * prepared->noise[i];
        }
      prepared->energy_ev[out] = e / (double) count;
      prepared->absorbance[out] = a / (double) count;
      prepared->noise[out] = sqrt (v) / (double) count;
      out++;
    }
  prepared->data.n = out;
}

static void
count_neighbours (BtPrepared *prepared)
{
  const gsize n = prepared->data.n;
  gsize a = 0, b = 0;

  for (gsize i = 0; i < n; i++)
    {
      while (prepared->energy_ev[i] - prepared->energy_ev[a] > BT_STRUCTURE_LENGTH_EV / 2)
        a++;
      while (b + 1 < n && prepared->energy_ev[b + 1] - prepared->energy_ev[i] <= BT_STRUCTURE_LENGTH_EV / 2)
        b++;
      prepared->per_length[i] = (double) (b - a + 1);
    }
}

void
bt_prepared_set_structure (BtPrepared *prepared, double structure)
{
  double effective = 0;

  prepared->structure = structure;
  for (gsize i = 0; i < prepared->data.n; i++)
    {
      double noise2 = prepared->noise[i] * prepared->noise[i], structure2 = structure * structure;
      double variance = noise2 + prepared->per_length[i] * structure2;

      prepared->sigma[i] = sqrt (variance);
      effective += (noise2 + structure2) / variance;
    }
  prepared->n_effective = effective;
}

/* Steps to be fitted: those that the reading shows, and those that the user states, each measured on the film's own curve. */
static GArray *
find_steps (BtFilm *film, const BtRecipe *recipe, const BtCurve *curve)
{
  GArray *steps = g_array_new (FALSE, FALSE, sizeof (BtStep));
  gsize n;
  const BtStep *found = bt_spectrum_get_steps (bt_film_get_spectrum (film), &n);

  for (guint k = 0; k < recipe->steps_nm->len; k++)
    {
      BtStep step;

      if (bt_curve_measure_step (curve, bt_ev_from_nm (g_array_index (recipe->steps_nm, double, k)), &step))
        g_array_append_val (steps, step);
    }
  for (gsize i = 0; i < n; i++)
    {
      BtStep step = found[i];
      gboolean stated = FALSE;

      /* One that is stated within a few points is that one. */
      for (guint k = 0; k < steps->len; k++)
        stated = stated || fabs (bt_nm_from_ev (g_array_index (steps, BtStep, k).energy_ev) - bt_nm_from_ev (step.energy_ev)) < 6;
      if (!stated && (bt_film_get_blank (film) == NULL || bt_curve_measure_step (curve, found[i].energy_ev, &step)))
        g_array_append_val (steps, step);
    }
  return steps;
}

/* Steps that lie inside the fitted range with data on both sides. One that was taken off already is fitted about 0. */
static void
take_steps (BtPrepared *prepared, const GArray *steps, gboolean corrected)
{
  guint left_out = 0;

  for (guint i = 0; i < steps->len; i++)
    {
      const BtStep *step = &g_array_index (steps, BtStep, i);

      if (!(step->energy_ev > prepared->range.low_ev + 0.02 && step->energy_ev < prepared->range.high_ev - 0.02))
        continue;
      if (prepared->data.n_steps == BT_MODEL_MAX_STEPS)
        {
          left_out++;
          continue;
        }
      prepared->data.step_ev[prepared->data.n_steps] = step->energy_ev;
      prepared->data.step_size[prepared->data.n_steps] = corrected ? 0 : step->size;
      prepared->data.step_u[prepared->data.n_steps] = step->size_u;
      prepared->data.n_steps++;
    }
  if (left_out > 0)
    g_ptr_array_add (prepared->curve->flags, bt_flag_new ("steps-too-many", _ ("Only %u detector steps are fitted; the others are left in the reading. State fewer "
                                                                               "detector changes, or leave a range out."),
                                                          BT_MODEL_MAX_STEPS));
}

/* A fringe is fitted as a wave of its own period, unless that is so short that averaging into bins has taken it away already. */
static void
take_fringe (BtPrepared *prepared, BtFilm *film)
{
  double period_ev;

  prepared->has_fringe = bt_spectrum_find_fringe (bt_film_get_spectrum (film), &prepared->fringe);
  if (!prepared->has_fringe)
    return;
  period_ev = bt_energy_ev_from_x (prepared->fringe.spacing_per_cm, BT_X_PER_CM);
  if (period_ev < 2.5 * (prepared->range.high_ev - prepared->range.low_ev) / (double) MAX (prepared->data.n, 1))
    return;
  prepared->data.fringe_cycles = 1 / period_ev;
  prepared->data.fringe_amplitude = prepared->fringe.amplitude;
}

/* Points of the fit within a group's expected body. */
static gsize
points_near (const BtPrepared *prepared, const BtBandWindow *window)
{
  gsize count = 0;

  for (gsize i = 0; i < prepared->data.n; i++)
    if (fabs (prepared->energy_ev[i] - window->centre_ev) < window->fwhm_ev / 2)
      count++;
  return count;
}

/* The recipe's window, or what the data propose for the parts of it that are 0. */
static void
choose_window (BtPrepared *prepared, const BtTally *previous, BtDiameterWindow *window)
{
  const BtCurve *curve = prepared->curve;
  BtDiameterWindow proposal;

  prepared->window_found = TRUE;
  if (!(window->mean_nm > 0))
    {
      prepared->window_proposed = TRUE;
      if (previous != NULL)
        proposal = previous->plan.window;
      else
        prepared->window_found = bt_diameter_window_propose (curve->energy_ev, curve->absorbance, curve->n, &proposal, &prepared->alternative);
      window->mean_nm = proposal.mean_nm;
      if (!(window->spread_nm > 0))
        window->spread_nm = proposal.spread_nm;
    }
  if (!(window->spread_nm > 0))
    window->spread_nm = 0.08 * window->mean_nm;
}

BtPrepared *
bt_prepare (BtFilm *film, const BtRecipe *recipe, const BtTally *previous, GError **error)
{
  g_autoptr (BtPrepared) prepared = g_new0 (BtPrepared, 1);
  const BtAccuracy accuracy = { recipe->photometric_u, recipe->wavelength_u_nm };
  BtDiameterWindow window = recipe->window;
  g_autoptr (GArray) steps = NULL;
  BtRange all;
  double level = 0;

  prepared->curve = bt_film_light_path (film, &recipe->light_path, &accuracy);
  if (prepared->curve == NULL || prepared->curve->n < BT_SPECTRUM_MIN_POINTS)
    {
      g_set_error (error, BT_TALLY_ERROR, BT_TALLY_ERROR_DATA,
                   _ ("%s: the film and its blank have fewer than %d points in common; choose a blank measured over the same range."),
                   bt_film_get_label (film), BT_SPECTRUM_MIN_POINTS);
      return NULL;
    }
  steps = find_steps (film, recipe, prepared->curve);
  if (recipe->step_correction != BT_STEP_LEFT)
    bt_curve_correct_steps (prepared->curve, (const BtStep *) (void *) steps->data, steps->len, recipe->step_correction == BT_STEP_TO_VISIBLE);
  all = (BtRange){ prepared->curve->energy_ev[0], prepared->curve->energy_ev[prepared->curve->n - 1] };
  choose_window (prepared, previous, &window);
  bt_band_plan_init (&prepared->plan, window, recipe->shift_ev, all);
  prepared->range = choose_range (recipe, &prepared->plan, prepared->curve);
  bt_band_plan_init (&prepared->plan, window, recipe->shift_ev, prepared->range);

  take_points (prepared, film, recipe);
  thin_points (prepared);
  count_neighbours (prepared);
  take_steps (prepared, steps, recipe->step_correction != BT_STEP_LEFT);
  bt_film_judge_path (film, &recipe->light_path, recipe->stray_light, prepared->range, prepared->curve);
  take_fringe (prepared, film);
  if (prepared->data.n >= MIN_POINTS)
    for (guint g = 0; g < BT_N_GROUPS; g++)
      if (prepared->plan.bands[g].in_range && points_near (prepared, &prepared->plan.bands[g]) >= 5)
        prepared->n_in_group[g] = recipe->max_bands[g];
  prepared->data.energy_ev = prepared->energy_ev;
  prepared->data.absorbance = prepared->absorbance;
  prepared->data.sigma = prepared->sigma;
  for (gsize i = 0; i < prepared->data.n; i++)
    level += fabs (prepared->absorbance[i]) / (double) prepared->data.n;
  prepared->least_structure = 0.004 * level;
  bt_prepared_set_structure (prepared, prepared->least_structure);
  return g_steal_pointer (&prepared);
}
