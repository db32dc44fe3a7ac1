/* The ensemble model: a population of tubes and a tail.
 *
 * Abundances follow a normal distribution of diameters times a scatter of each tube's own, known to about a third; energies follow the reference, shifted by
 * group, and jitter by a few meV a tube. Both are parameters with priors: S11 and S22 share a tube's abundance, so S11's shape helps to fix S22's. */
#include "ensemble.h"

#include <math.h>
#include <string.h>

#include "ensemble-lines.h"
#include "shapes-private.h"

/* What is known beforehand. Standard deviation of a tube's abundance about the distribution (relative), and of its energies about the shifted reference
 * (the empirical relation holds to about 10 meV: Weisman and Bachilo 2003, from memory). */
#define SCATTER 0.4
#define JITTER_EV 0.010
/* Tubes of a kind that get shifts of their own: those nearest to the mean diameter. Farther out they are few, or so many that no single one's place
 * can be told. */
#define MOST_JITTERED 45
/* Tubes of a kind: where a wide population has more, every second or third one stands for its neighbours, whose lines lie within a few meV of its own. */
#define MOST_TUBES 90
/* Tubes within so many spreads, and at least within this share of the mean, are in the population. */
#define REACH 3.0
#define LEAST_REACH 0.2
/* Red shifts of single groups about the film's own: common practice, 20 to 60 meV. */
#define SHIFT_U_EV 0.015

static const struct { double mean, u, low, high, limit; } common[BT_ENSEMBLE_N_COMMON] = {
  [BT_ENSEMBLE_LOG_S] = { 0, INFINITY, -30, 5, 1 },
  [BT_ENSEMBLE_AREA_M] = { 0, INFINITY, -INFINITY, INFINITY, INFINITY },
  [BT_ENSEMBLE_MEAN] = { 0, 0, 0, 0, 0 },       /* from the plan */
  [BT_ENSEMBLE_LOG_SPREAD] = { 0, 0.4, 0, 0, 0.3 }, /* from the plan */
  [BT_ENSEMBLE_SHIFT_S11] = { 0, SHIFT_U_EV, -0.2, 0.2, 0.02 },
  [BT_ENSEMBLE_SHIFT_S22] = { 0, SHIFT_U_EV, -0.2, 0.2, 0.02 },
  [BT_ENSEMBLE_SHIFT_M11] = { 0, 0.02, -0.2, 0.2, 0.02 },
  [BT_ENSEMBLE_SHIFT_HIGH] = { 0, 0.03, -0.3, 0.3, 0.02 },
  [BT_ENSEMBLE_LOG_WIDTH_S11] = { -2.659, 0.35, -4.5, -1.2, 0.3 },  /* 70 meV */
  [BT_ENSEMBLE_LOG_WIDTH_S22] = { -2.303, 0.35, -4.5, -0.9, 0.3 },  /* 100 meV */
  [BT_ENSEMBLE_LOG_WIDTH_M11] = { -1.966, 0.35, -4.5, -0.7, 0.3 },  /* 140 meV */
  [BT_ENSEMBLE_LOG_WIDTH_HIGH] = { -1.715, 0.35, -4.5, -0.5, 0.3 }, /* 180 meV */
  [BT_ENSEMBLE_WINGS] = { 0.2, 0.15, 0, 0.9, 0.1 },
  [BT_ENSEMBLE_SIDEBAND] = { 0.06, 0.04, 0, 0.35, 0.05 },
  [BT_ENSEMBLE_LOG_S11] = { 0.405, 1.5, -4, 3, 0.5 },
  [BT_ENSEMBLE_LOG_S33] = { -0.511, 0.4, -4, 3, 0.5 },
  [BT_ENSEMBLE_LOG_S44] = { -0.693, 0.5, -4, 3, 0.5 },
  [BT_ENSEMBLE_LOG_M22] = { -0.693, 0.5, -4, 3, 0.5 },
};

static gsize
offset_of (const BtEnsembleFit *fit)
{
  return 1 + bt_tail_n_shape (fit->tail);
}

/* Tubes that the distribution may hold, semiconducting first, and their reference energies. */
static void
take_tubes (BtEnsembleFit *fit, const BtDiameterWindow *window)
{
  const double reach = fmax (REACH * window->spread_nm, LEAST_REACH * window->mean_nm);
  g_autoptr (GArray) all = bt_tubes_in_diameter (fmax (0.35, window->mean_nm - reach), window->mean_nm + reach);

  fit->tubes = g_array_new (FALSE, FALSE, sizeof (BtTube));
  for (int metallic = 0; metallic < 2; metallic++)
    {
      guint n = 0, seen = 0, every;

      for (guint i = 0; i < all->len; i++)
        n += (bt_tube_kind (g_array_index (all, BtTube, i)) == BT_TUBE_METALLIC) == (metallic == 1);
      every = (n + MOST_TUBES - 1) / MOST_TUBES;
      for (guint i = 0; i < all->len; i++)
        {
          BtTube tube = g_array_index (all, BtTube, i);

          if ((bt_tube_kind (tube) == BT_TUBE_METALLIC) == (metallic == 1) && seen++ % every == 0)
            g_array_append_val (fit->tubes, tube);
        }
      if (metallic == 0)
        fit->n_semiconducting = fit->tubes->len;
    }
  fit->n_metallic = fit->tubes->len - fit->n_semiconducting;
  fit->energy = g_new (double, 4 * (gsize) MAX (fit->tubes->len, 1));
  for (guint i = 0; i < fit->tubes->len; i++)
    {
      static const BtGroup groups[2][4] = { { BT_S11, BT_S22, BT_S33, BT_S44 }, { BT_M11, BT_M11, BT_M22, BT_M22 } };
      BtTube tube = g_array_index (fit->tubes, BtTube, i);
      const gboolean metallic = i >= fit->n_semiconducting;

      for (guint k = 0; k < 4; k++)
        {
          double *energy = &fit->energy[4 * i + k];

          *energy = bt_tube_energy_ev (tube, groups[metallic][k], metallic && k % 2 == 1 ? 1 : 0, BT_REFERENCE_EMPIRICAL);
          /* Armchair tubes have one branch, which then counts twice. */
          if (metallic && k % 2 == 1 && isnan (*energy))
            *energy = fit->energy[4 * i + k - 1];
        }
    }
}

/* Gives the tubes nearest to the mean diameter shifts of their own; sets the number of parameters. Tubes stand by diameter within their kind. */
static void
place_jitter (BtEnsembleFit *fit, double mean_nm)
{
  const guint first[2] = { 0, fit->n_semiconducting }, last[2] = { fit->n_semiconducting, fit->tubes->len };

  fit->jitter = g_new0 (gsize, MAX (fit->tubes->len, 1));
  fit->p = fit->first_jitter;
  for (guint kind = 0; kind < 2; kind++)
    {
      guint from = first[kind], to = last[kind];

      while (to - from > MOST_JITTERED)
        {
          double below = mean_nm - bt_tube_diameter_nm (g_array_index (fit->tubes, BtTube, from));
          double above = bt_tube_diameter_nm (g_array_index (fit->tubes, BtTube, to - 1)) - mean_nm;

          if (below > above)
            from++;
          else
            to--;
        }
      for (guint i = from; i < to; i++)
        {
          fit->jitter[i] = fit->p;
          fit->p += kind == 0 ? 2 : 1;
        }
    }
}

static void
set_parameter (BtEnsembleFit *fit, gsize j, double start, double mean, double u, double low, double high, double limit)
{
  fit->x[j] = CLAMP (start, low, high);
  fit->prior_mean[j] = mean;
  fit->prior_u[j] = u;
  fit->low[j] = low;
  fit->high[j] = high;
  fit->step_limit[j] = limit;
}

static void
set_common (BtEnsembleFit *fit, const BtBandPlan *plan, const BtFilmFit *start, double level)
{
  const double mean = plan->window.mean_nm, spread = fmax (plan->window.spread_nm, 0.02);
  double area_s = bt_film_fit_group_area (start, BT_S22, NULL), area_m = bt_film_fit_group_area (start, BT_M11, NULL);
  double area_s11 = bt_film_fit_group_area (start, BT_S11, NULL);

  for (guint k = 0; k < BT_ENSEMBLE_N_COMMON; k++)
    {
      double shift = k >= BT_ENSEMBLE_SHIFT_S11 && k <= BT_ENSEMBLE_SHIFT_HIGH ? -plan->shift_ev : 0;

      set_parameter (fit, fit->first_common + k, common[k].mean + shift, common[k].mean + shift, common[k].u, common[k].low, common[k].high,
                     common[k].limit);
    }
  set_parameter (fit, fit->first_common + BT_ENSEMBLE_LOG_S, log (fmax (area_s, 1e-3 * level)), 0, INFINITY, log (level) - 20, log (level) + 5, 1);
  set_parameter (fit, fit->first_common + BT_ENSEMBLE_AREA_M, fmax (area_m, 0.15 * area_s), 0, INFINITY, -INFINITY, INFINITY, INFINITY);
  /* A doped film's S11 is far weaker than the prior has it: the fit must not begin there. */
  if (area_s11 > 0 && area_s > 0)
    fit->x[fit->first_common + BT_ENSEMBLE_LOG_S11] = CLAMP (log (area_s11 / area_s), -3, 1.5);
  set_parameter (fit, fit->first_common + BT_ENSEMBLE_MEAN, mean, mean, 0.06 * mean, 0.75 * mean, 1.25 * mean, 0.05 * mean);
  set_parameter (fit, fit->first_common + BT_ENSEMBLE_LOG_SPREAD, log (spread), log (spread), 0.4, log (0.015), log (0.3 * mean), 0.3);
}

BtEnsembleFit *
bt_ensemble_fit_new (const BtBandPlan *plan, const BtFilmFit *start, const BtFilmData *data)
{
  BtEnsembleFit *fit = g_new0 (BtEnsembleFit, 1);
  double level = 0, **arrays[] = { &fit->x, &fit->low, &fit->high, &fit->step_limit, &fit->prior_mean, &fit->prior_u };
  gsize offset;

  fit->tail = start->tail;
  fit->n_steps = start->n_steps;
  fit->n_fringe = start->n_fringe;
  take_tubes (fit, &plan->window);
  offset = offset_of (fit);
  fit->first_common = offset + 1 + fit->n_steps + fit->n_fringe;
  fit->first_scatter = fit->first_common + BT_ENSEMBLE_N_COMMON;
  fit->first_jitter = fit->first_scatter + fit->tubes->len;
  place_jitter (fit, plan->window.mean_nm);
  for (guint a = 0; a < G_N_ELEMENTS (arrays); a++)
    *arrays[a] = g_new0 (double, fit->p);
  fit->covariance = g_new0 (double, fit->p * fit->p);
  fit->at_bound = g_new0 (gboolean, fit->p);
  for (gsize i = 0; i < data->n; i++)
    level += fabs (data->absorbance[i]) / (double) data->n;
  /* Tail, offset, steps and fringe as the groups have them: same numbers, same limits, same priors. */
  for (gsize j = 0; j < fit->first_common; j++)
    set_parameter (fit, j, j > 0 && isfinite (start->prior_u[j]) ? start->prior_mean[j] : start->x[j], start->prior_mean[j], start->prior_u[j], start->low[j], start->high[j], start->step_limit[j]);
  set_common (fit, plan, start, level > 0 ? level : 1);
  for (gsize j = fit->first_scatter; j < fit->first_jitter; j++)
    set_parameter (fit, j, 0, 0, SCATTER, -5, 5, 2);
  for (gsize j = fit->first_jitter; j < fit->p; j++)
    set_parameter (fit, j, 0, 0, JITTER_EV, -0.2, 0.2, INFINITY);
  return fit;
}

void
bt_ensemble_fit_start_from (BtEnsembleFit *fit, const BtEnsembleFit *other)
{
  g_return_if_fail (fit->p - fit->first_common == other->p - other->first_common);
  memcpy (fit->x + fit->first_common, other->x + other->first_common, sizeof (double) * (fit->p - fit->first_common));
}

void
bt_ensemble_fit_free (BtEnsembleFit *fit)
{
  if (fit == NULL)
    return;
  g_array_unref (fit->tubes);
  g_free (fit->energy);
  g_free (fit->jitter);
  g_free (fit->x);
  g_free (fit->low);
  g_free (fit->high);
  g_free (fit->step_limit);
  g_free (fit->prior_mean);
  g_free (fit->prior_u);
  g_free (fit->covariance);
  g_free (fit->at_bound);
  g_free (fit);
}

/* Abundance of every tube (area of its S22 or M11), and the derivatives of its logarithm by mean and log spread. */
static void
abundances (const BtEnsembleFit *fit, const double *x, double *area, double *by_mean, double *by_spread)
{
  const double *c = x + fit->first_common, mean = c[BT_ENSEMBLE_MEAN], spread = exp (c[BT_ENSEMBLE_LOG_SPREAD]);
  const guint first[2] = { 0, fit->n_semiconducting }, last[2] = { fit->n_semiconducting, fit->tubes->len };

  for (guint kind = 0; kind < 2; kind++)
    {
      const double scale = kind == 0 ? exp (c[BT_ENSEMBLE_LOG_S]) : c[BT_ENSEMBLE_AREA_M];
      double sum = 0, sum_mean = 0, sum_spread = 0;

      for (guint i = first[kind]; i < last[kind]; i++)
        {
          double z = (bt_tube_diameter_nm (g_array_index (fit->tubes, BtTube, i)) - mean) / spread, p = exp (-z * z / 2);

          area[i] = p;
          by_mean[i] = z / spread;
          by_spread[i] = z * z;
          sum += p;
          sum_mean += p * by_mean[i];
          sum_spread += p * by_spread[i];
        }
      for (guint i = first[kind]; i < last[kind] && sum > 0; i++)
        {
          area[i] *= scale / sum * exp (x[fit->first_scatter + i]);
          by_mean[i] -= sum_mean / sum;
          by_spread[i] -= sum_spread / sum;
        }
    }
}

/* Scratch columns over the axis, one allocation a fit. */
typedef struct {
  const BtEnsembleFit *fit;
  const BtFilmData *data;
  double *columns;   /* p columns of n: the Jacobian by columns, not yet over sigma */
  double *line;      /* 8 columns of n */
  double *model, *area, *by_mean, *by_spread;
  gboolean values_only; /* a trial that may be thrown away: the model alone */
} Work;

static void
work_init (Work *work, const BtEnsembleFit *fit, const BtFilmData *data)
{
  const gsize n = data->n;

  work->fit = fit;
  work->data = data;
  work->columns = g_new (double, fit->p * n);
  work->line = g_new (double, 8 * n);
  work->model = g_new (double, n);
  work->area = g_new (double, 3 * (gsize) MAX (fit->tubes->len, 1));
  work->by_mean = work->area + fit->tubes->len;
  work->by_spread = work->by_mean + fit->tubes->len;
}

static void
work_clear (Work *work)
{
  g_free (work->columns);
  g_free (work->line);
  g_free (work->model);
  g_free (work->area);
}

static double *
column (Work *work, gsize j)
{
  return work->columns + j * work->data->n;
}

static double *
common_column (Work *work, BtEnsembleParameter k)
{
  return column (work, work->fit->first_common + k);
}

static void
add_scaled (double *restrict to, const double *restrict from, double factor, gsize n)
{
  for (gsize i = 0; i < n; i++)
    to[i] += factor * from[i];
}

/* One transition of a tube of this abundance: @strength times its area at @centre, with a sideband's share where it has one. Adds to the columns of width,
 * wings, sideband and strength; leaves value and derivative by centre of a unit of abundance in the first two line columns. */
typedef struct {
  double centre, fwhm, strength, sideband;
  int by_shift, by_width, by_strength; /* columns; -1: none */
  gboolean has_sideband;
} Transition;

static void
add_transition (Work *work, const Transition *t, double wings, double abundance, double *value, double *by_centre)
{
  const gsize n = work->data->n;
  const double *e = work->data->energy_ev;
  BtLineColumns own = { work->line, work->line + n, work->line + 2 * n, work->line + 3 * n };
  BtLineColumns side = { work->line + 4 * n, work->line + 5 * n, work->line + 6 * n, work->line + 7 * n };
  const double s = t->has_sideband ? t->sideband : 0;

  if (work->values_only)
    {
      bt_ensemble_add_value (e, n, t->centre, t->fwhm, wings, (1 - s) * t->strength * abundance, work->model);
      if (s > 0)
        bt_ensemble_add_value (e, n, t->centre + BT_SIDEBAND_EV, BT_SIDEBAND_WIDTH * t->fwhm, wings, s * t->strength * abundance, work->model);
      return;
    }
  memset (work->line, 0, sizeof (double) * (t->has_sideband ? 8 : 4) * n);
  bt_ensemble_add_line (e, n, t->centre, t->fwhm, wings, t->strength, &own);
  if (t->has_sideband)
    {
      double *by_sideband = common_column (work, BT_ENSEMBLE_SIDEBAND);

      bt_ensemble_add_line (e, n, t->centre + BT_SIDEBAND_EV, BT_SIDEBAND_WIDTH * t->fwhm, wings, t->strength, &side);
      for (gsize i = 0; i < n; i++)
        {
          by_sideband[i] += abundance * (side.value[i] - own.value[i]);
          own.value[i] = (1 - s) * own.value[i] + s * side.value[i];
          own.centre[i] = (1 - s) * own.centre[i] + s * side.centre[i];
          own.width[i] = (1 - s) * own.width[i] + s * side.width[i];
          own.wings[i] = (1 - s) * own.wings[i] + s * side.wings[i];
        }
    }
  add_scaled (common_column (work, BT_ENSEMBLE_WINGS), own.wings, abundance, n);
  add_scaled (common_column (work, (BtEnsembleParameter) t->by_width), own.width, abundance, n);
  add_scaled (common_column (work, (BtEnsembleParameter) t->by_shift), own.centre, abundance, n);
  if (t->by_strength >= 0)
    add_scaled (common_column (work, (BtEnsembleParameter) t->by_strength), own.value, abundance, n);
  add_scaled (value, own.value, 1, n);
  if (by_centre != NULL)
    add_scaled (by_centre, own.centre, abundance, n);
}

static void
add_semiconducting (Work *work, const double *x, guint i)
{
  const BtEnsembleFit *fit = work->fit;
  const double *c = x + fit->first_common, *energy = fit->energy + 4 * (gsize) i, area = work->area[i], wings = c[BT_ENSEMBLE_WINGS];
  const gsize jitter = fit->jitter[i];
  const double own11 = jitter > 0 ? x[jitter] : 0, own22 = jitter > 0 ? x[jitter + 1] : 0;
  double *value = column (work, fit->first_scatter + i);
  const Transition transitions[4] = {
    { energy[0] + c[BT_ENSEMBLE_SHIFT_S11] + own11, exp (c[BT_ENSEMBLE_LOG_WIDTH_S11]), exp (c[BT_ENSEMBLE_LOG_S11]), c[BT_ENSEMBLE_SIDEBAND],
      BT_ENSEMBLE_SHIFT_S11, BT_ENSEMBLE_LOG_WIDTH_S11, BT_ENSEMBLE_LOG_S11, TRUE },
    { energy[1] + c[BT_ENSEMBLE_SHIFT_S22] + own22, exp (c[BT_ENSEMBLE_LOG_WIDTH_S22]), 1, c[BT_ENSEMBLE_SIDEBAND], BT_ENSEMBLE_SHIFT_S22,
      BT_ENSEMBLE_LOG_WIDTH_S22, -1, TRUE },
    { energy[2] + c[BT_ENSEMBLE_SHIFT_HIGH], exp (c[BT_ENSEMBLE_LOG_WIDTH_HIGH]), exp (c[BT_ENSEMBLE_LOG_S33]), 0, BT_ENSEMBLE_SHIFT_HIGH,
      BT_ENSEMBLE_LOG_WIDTH_HIGH, BT_ENSEMBLE_LOG_S33, FALSE },
    { energy[3] + c[BT_ENSEMBLE_SHIFT_HIGH], 1.1 * exp (c[BT_ENSEMBLE_LOG_WIDTH_HIGH]), exp (c[BT_ENSEMBLE_LOG_S44]), 0, BT_ENSEMBLE_SHIFT_HIGH,
      BT_ENSEMBLE_LOG_WIDTH_HIGH, BT_ENSEMBLE_LOG_S44, FALSE },
  };

  add_transition (work, &transitions[0], wings, area, value, jitter > 0 ? column (work, jitter) : NULL);
  add_transition (work, &transitions[1], wings, area, value, jitter > 0 ? column (work, jitter + 1) : NULL);
  add_transition (work, &transitions[2], wings, area, value, NULL);
  add_transition (work, &transitions[3], wings, area, value, NULL);
}

static void
add_metallic (Work *work, const double *x, guint i)
{
  const BtEnsembleFit *fit = work->fit;
  const double *c = x + fit->first_common, *energy = fit->energy + 4 * (gsize) i, area = work->area[i], wings = c[BT_ENSEMBLE_WINGS];
  const gsize jitter = fit->jitter[i];
  double *value = column (work, fit->first_scatter + i);

  for (guint branch = 0; branch < 2; branch++)
    {
      const Transition first = { energy[branch] + c[BT_ENSEMBLE_SHIFT_M11] + (jitter > 0 ? x[jitter] : 0), exp (c[BT_ENSEMBLE_LOG_WIDTH_M11]), 0.5, 0,
                                 BT_ENSEMBLE_SHIFT_M11, BT_ENSEMBLE_LOG_WIDTH_M11, -1, FALSE };
      const Transition second = { energy[2 + branch] + c[BT_ENSEMBLE_SHIFT_HIGH], 1.1 * exp (c[BT_ENSEMBLE_LOG_WIDTH_HIGH]),
                                  0.5 * exp (c[BT_ENSEMBLE_LOG_M22]), 0, BT_ENSEMBLE_SHIFT_HIGH, BT_ENSEMBLE_LOG_WIDTH_HIGH, BT_ENSEMBLE_LOG_M22, FALSE };

      add_transition (work, &first, wings, area, value, jitter > 0 ? column (work, jitter) : NULL);
      add_transition (work, &second, wings, area, value, NULL);
    }
}

/* Tail, offset, steps and fringe: their columns, and the model so far. */
static void
add_smooth (Work *work, const double *x)
{
  const BtEnsembleFit *fit = work->fit;
  const BtFilmData *data = work->data;
  const gsize n = data->n, offset = offset_of (fit);
  double *height = column (work, 0), *d0 = column (work, 1), *d1 = bt_tail_n_shape (fit->tail) == 2 ? column (work, 2) : NULL;

  bt_tail_shape_eval (fit->tail, x + 1, data->energy_ev, n, height, d0, d1);
  for (gsize i = 0; i < n; i++)
    {
      d0[i] *= x[0];
      if (d1 != NULL)
        d1[i] *= x[0];
      column (work, offset)[i] = 1;
      work->model[i] = x[0] * height[i] + x[offset];
    }
  for (guint k = 0; k < fit->n_steps; k++)
    for (gsize i = 0; i < n; i++)
      column (work, offset + 1 + k)[i] = data->energy_ev[i] > data->step_ev[k] ? 1 : 0;
  for (guint k = 0; k < fit->n_fringe; k++)
    for (gsize i = 0; i < n; i++)
      {
        double phase = 2 * G_PI * data->fringe_cycles * data->energy_ev[i];

        column (work, offset + 1 + fit->n_steps + k)[i] = k == 0 ? cos (phase) : sin (phase);
      }
  for (gsize j = offset + 1; j < fit->first_common; j++)
    add_scaled (work->model, column (work, j), x[j], n);
}

/* Fills the model and every column of its derivatives at @x. */
static void
evaluate (Work *work, const double *x)
{
  const BtEnsembleFit *fit = work->fit;
  const gsize n = work->data->n;
  const double unit_m = x[fit->first_common + BT_ENSEMBLE_AREA_M];

  memset (work->columns, 0, sizeof (double) * (work->values_only ? fit->first_common : fit->p) * n);
  add_smooth (work, x);
  abundances (fit, x, work->area, work->by_mean, work->by_spread);
  for (guint i = 0; i < fit->tubes->len; i++)
    {
      double *value = column (work, fit->first_scatter + i), area = work->area[i];

      if (i < fit->n_semiconducting)
        add_semiconducting (work, x, i);
      else
        add_metallic (work, x, i);
      if (work->values_only)
        continue;
      /* By the abundance's logarithm: value times abundance. M11's scale may be 0 and has its own column. */
      if (i < fit->n_semiconducting)
        add_scaled (common_column (work, BT_ENSEMBLE_LOG_S), value, area, n);
      else if (fabs (unit_m) > 0)
        add_scaled (common_column (work, BT_ENSEMBLE_AREA_M), value, area / unit_m, n);
      add_scaled (common_column (work, BT_ENSEMBLE_MEAN), value, area * work->by_mean[i], n);
      add_scaled (common_column (work, BT_ENSEMBLE_LOG_SPREAD), value, area * work->by_spread[i], n);
      for (gsize k = 0; k < n; k++)
        value[k] *= area;
      add_scaled (work->model, value, 1, n);
    }
}

static void
model_function (const double *x, double *residual, double *jacobian, gpointer user_data)
{
  Work *work = user_data;
  const BtFilmData *data = work->data;
  const gsize n = data->n, p = work->fit->p;

  work->values_only = jacobian == NULL;
  evaluate (work, x);
  for (gsize i = 0; i < n; i++)
    residual[i] = (work->model[i] - data->absorbance[i]) / data->sigma[i];
  for (gsize j = 0; j < p && jacobian != NULL; j++)
    for (gsize i = 0; i < n; i++)
      jacobian[i * p + j] = work->columns[j * n + i] / data->sigma[i];
}

BtSolveState
bt_ensemble_fit_run (BtEnsembleFit *fit, const BtFilmData *data, GCancellable *cancellable)
{
  Work work;
  BtSolution solution = { .x = fit->x, .covariance = fit->covariance, .at_bound = fit->at_bound };
  BtProblem problem = { .n_points = data->n, .n_parameters = fit->p, .model = model_function, .data = &work, .low = fit->low, .high = fit->high,
                        .step_limit = fit->step_limit, .prior_mean = fit->prior_mean, .prior_u = fit->prior_u, .max_iterations = 100,
                        .tolerance = 1e-5, .cancellable = cancellable };

  /* A metallic part of exactly 0 has no shape to learn from. */
  if (!(fabs (fit->x[fit->first_common + BT_ENSEMBLE_AREA_M]) > 1e-9))
    fit->x[fit->first_common + BT_ENSEMBLE_AREA_M] = 1e-9;
  work_init (&work, fit, data);
  fit->state = bt_least_squares (&problem, &solution);
  work_clear (&work);
  fit->chi2 = solution.chi2;
  fit->iterations = solution.iterations;
  fit->prior_chi2 = 0;
  for (gsize j = 0; j < fit->p; j++)
    if (isfinite (fit->prior_u[j]) && fit->prior_u[j] > 0)
      {
        double z = (fit->x[j] - fit->prior_mean[j]) / fit->prior_u[j];

        fit->prior_chi2 += z * z;
      }
  return fit->state;
}

void
bt_ensemble_fit_residual (const BtEnsembleFit *fit, const BtFilmData *data, double *residual, double *jacobian)
{
  Work work;

  work_init (&work, fit, data);
  model_function (fit->x, residual, jacobian, &work);
  work_clear (&work);
  for (gsize i = 0; i < data->n; i++)
    residual[i] *= -data->sigma[i];
}

double
bt_ensemble_fit_area (const BtEnsembleFit *fit, BtGroup group, double *gradient)
{
  const gboolean metallic = bt_group_is_metallic (group);
  const guint first = metallic ? fit->n_semiconducting : 0, last = metallic ? fit->tubes->len : fit->n_semiconducting;
  g_autofree double *numbers = g_new (double, 3 * (gsize) MAX (fit->tubes->len, 1));
  double *area = numbers, *by_mean = numbers + fit->tubes->len, *by_spread = by_mean + fit->tubes->len, sum = 0;
  const gsize c = fit->first_common;

  abundances (fit, fit->x, area, by_mean, by_spread);
  for (guint i = first; i < last; i++)
    sum += area[i];
  if (gradient == NULL)
    return sum;
  memset (gradient, 0, sizeof (double) * fit->p);
  for (guint i = first; i < last; i++)
    {
      gradient[fit->first_scatter + i] = area[i];
      gradient[c + BT_ENSEMBLE_MEAN] += area[i] * by_mean[i];
      gradient[c + BT_ENSEMBLE_LOG_SPREAD] += area[i] * by_spread[i];
    }
  if (metallic)
    gradient[c + BT_ENSEMBLE_AREA_M] = fabs (fit->x[c + BT_ENSEMBLE_AREA_M]) > 0 ? sum / fit->x[c + BT_ENSEMBLE_AREA_M] : 1;
  else
    gradient[c + BT_ENSEMBLE_LOG_S] = sum;
  return sum;
}

double
bt_ensemble_fit_parameters (const BtEnsembleFit *fit)
{
  double k = 0;

  for (gsize j = 0; j < fit->p; j++)
    {
      if (fit->low[j] >= fit->high[j] || fit->at_bound[j])
        continue;
      k += 1;
      if (isfinite (fit->prior_u[j]) && fit->prior_u[j] > 0)
        k -= fmin (1, fit->covariance[j * fit->p + j] / (fit->prior_u[j] * fit->prior_u[j]));
    }
  return k;
}

double
bt_ensemble_fit_covariance_of (const BtEnsembleFit *fit, const double *g, const double *h)
{
  double sum = 0;

  for (gsize a = 0; a < fit->p; a++)
    for (gsize b = 0; b < fit->p && fabs (g[a]) > 0; b++)
      sum += g[a] * fit->covariance[a * fit->p + b] * h[b];
  return sum;
}
