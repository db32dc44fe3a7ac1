/* Changes of detector or grating: jumps between two neighbouring points. */
#include "faults-private.h"

#include <math.h>

/* Points on each side that a step is judged by: 20 to 40 nm at usual intervals, but never so far in energy that a band's own bend could
 * pass for a step, and never so few that noise could. */
#define SIDE 20
#define SIDE_EV 0.05
#define LEAST_SIDE 8
#define LEAST_SIDE_EV 0.1
/* Multiples of its uncertainty that a jump must have, and of the noise that the difference between its two neighbours must have. */
#define STEP_SIGNIFICANCE 6
#define NEIGHBOUR_SIGNIFICANCE 6
#define STEPS_MAX_POINTS 100000
#define MAX_STEPS 3

/* Value at @e of the least-squares parabola through @n points, and the factor of their noise in it; (nullable) the same of its slope. */
static double
extrapolate (const double *x, const double *y, gsize n, double e, double *factor, double *slope, double *slope_factor)
{
  double s[5] = { 0 }, t[3] = { 0 }, scale = fabs (x[n - 1] - x[0]), m[3][4];

  for (gsize i = 0; i < n; i++)
    {
      double u = (x[i] - e) / scale, p = 1;

      for (int k = 0; k < 5; k++, p *= u)
        {
          s[k] += p;
          if (k < 3)
            t[k] += p * y[i];
        }
    }
  for (int r = 0; r < 3; r++)
    {
      for (int c = 0; c < 3; c++)
        m[r][c] = s[r + c];
      m[r][3] = t[r];
    }
  /* With u = 0 at @e the value is the first coefficient: Cramer's rule for it and for its variance. */
  double det = m[0][0] * (m[1][1] * m[2][2] - m[1][2] * m[2][1]) - m[0][1] * (m[1][0] * m[2][2] - m[1][2] * m[2][0])
               + m[0][2] * (m[1][0] * m[2][1] - m[1][1] * m[2][0]);
  double c0 = m[1][1] * m[2][2] - m[1][2] * m[2][1], c1 = m[0][2] * m[2][1] - m[0][1] * m[2][2],
         c2 = m[0][1] * m[1][2] - m[0][2] * m[1][1];

  *factor = sqrt (fmax (0, c0 / det));
  if (slope != NULL)
    {
      const double d1 = m[0][0] * m[2][2] - m[0][2] * m[2][0], d2 = m[0][2] * m[1][0] - m[0][0] * m[1][2];

      *slope = (c1 * t[0] + d1 * t[1] + d2 * t[2]) / det / scale;
      *slope_factor = sqrt (fmax (0, d1 / det)) / scale;
    }
  return (c0 * t[0] + c1 * t[1] + c2 * t[2]) / det;
}

/* Points within reach on both sides of the gap behind point i; 0 where they are too few. */
static gsize
side_at (const double *x, gsize i)
{
  gsize side = SIDE;

  while (side > LEAST_SIDE && (x[i] - x[i + 1 - side] > SIDE_EV || x[i + side] - x[i + 1] > SIDE_EV))
    side--;
  return x[i] - x[i + 1 - side] > LEAST_SIDE_EV || x[i + side] - x[i + 1] > LEAST_SIDE_EV ? 0 : side;
}

/* The jump between points i and i + 1, @skip points next to it left out on both sides. */
static double
jump_at (const double *x, const double *y, const double *noise, gsize i, gsize side, gsize skip, double *u)
{
  double e = (x[i] + x[i + 1]) / 2, left_factor, right_factor;
  double left = extrapolate (x + i + 1 - skip - side, y + i + 1 - skip - side, side, e, &left_factor, NULL, NULL);
  double right = extrapolate (x + i + 1 + skip, y + i + 1 + skip, side, e, &right_factor, NULL, NULL);

  *u = hypot (left_factor * noise[i], right_factor * noise[i + 1]);
  return right - left;
}

/* The same with what bands do to it in the uncertainty: a bend that no parabola follows shows in the difference to the jump by half the
 * points, where it is an eighth. */
static double
jump_in_doubt (const double *x, const double *y, const double *noise, gsize i, gsize side, double *u)
{
  double u_noise, u_near, jump = jump_at (x, y, noise, i, side, 0, &u_noise);
  double near = jump_at (x, y, noise, i, MAX (side / 2, 5), 0, &u_near);

  *u = hypot (u_noise, (jump - near) / 2);
  return jump;
}

static void
measure_at (const double *x, const double *y, const double *noise, gsize i, gsize side, BtStep *step)
{
  double e = (x[i] + x[i + 1]) / 2, factor, left, right, left_factor, right_factor;

  step->energy_ev = e;
  step->size = jump_in_doubt (x, y, noise, i, side, &step->size_u);
  extrapolate (x + i + 1 - side, y + i + 1 - side, side, e, &factor, &left, &left_factor);
  extrapolate (x + i + 1, y + i + 1, side, e, &factor, &right, &right_factor);
  step->slope = right - left;
  step->slope_u = hypot (left_factor * noise[i], right_factor * noise[i + 1]);
}

gboolean
bt_faults_measure_step (const double *energy_ev, const double *absorbance, const double *noise, gsize n, double at_ev, BtStep *step)
{
  gsize low = 0, high = n - 1, side;

  if (n < 4 * LEAST_SIDE || !(at_ev > energy_ev[0] && at_ev < energy_ev[n - 1]))
    return FALSE;
  while (high - low > 1)
    {
      gsize middle = (low + high) / 2;

      *(energy_ev[middle] <= at_ev ? &low : &high) = middle;
    }
  if (low + 1 < LEAST_SIDE || n - high < LEAST_SIDE)
    return FALSE;
  for (side = MIN (SIDE, MIN (low + 1, n - high)); side > LEAST_SIDE; side--)
    if (energy_ev[low] - energy_ev[low + 1 - side] <= SIDE_EV && energy_ev[low + side] - energy_ev[low + 1] <= SIDE_EV)
      break;
  measure_at (energy_ev, absorbance, noise, low, side, step);
  return TRUE;
}

static gboolean
in_saturated (const GArray *saturated, double energy_ev)
{
  for (guint i = 0; i < saturated->len; i++)
    {
      const BtRange *range = &g_array_index (saturated, BtRange, i);

      if (energy_ev > range->low_ev - 0.05 && energy_ev < range->high_ev + 0.05)
        return TRUE;
    }
  return FALSE;
}

static double
largest_of (const double *y, gsize n)
{
  double largest = 0;

  for (gsize i = 0; i < n; i++)
    largest = fmax (largest, fabs (y[i]));
  return largest;
}

static int
by_energy (const void *a, const void *b)
{
  const BtStep *s = a, *t = b;

  return s->energy_ev < t->energy_ev ? -1 : s->energy_ev > t->energy_ev;
}

void
bt_faults_find_steps (const double *energy_ev, const double *absorbance, const double *noise, gsize n, const GArray *saturated, GArray *steps)
{
  g_autofree double *significance = NULL;
  const double least = 1e-3 * largest_of (absorbance, n);

  if (n < 4 * SIDE || n > STEPS_MAX_POINTS)
    return;
  significance = g_new0 (double, n);
  for (gsize i = SIDE + 2; i + SIDE + 4 < n; i++)
    {
      double u, u_skip, jump, skipped, local;
      gsize side = side_at (energy_ev, i);

      /* A step lies between two neighbours; the noise estimate there already tells most places from it. */
      if (side == 0 || fabs (absorbance[i + 1] - absorbance[i]) < 3 * noise[i] || in_saturated (saturated, energy_ev[i]))
        continue;
      /* What the slopes on either side do not explain of the difference between the two neighbours. */
      local = absorbance[i + 1] - absorbance[i] - (absorbance[i] - absorbance[i - 3] + absorbance[i + 4] - absorbance[i + 1]) / 6;
      if (fabs (local) < NEIGHBOUR_SIGNIFICANCE * noise[i])
        continue;
      jump = jump_in_doubt (energy_ev, absorbance, noise, i, side, &u);
      skipped = jump_at (energy_ev, absorbance, noise, i, side, 1, &u_skip);
      if (fabs (jump) > STEP_SIGNIFICANCE * u && fabs (jump) > least && skipped * jump > 0 && fabs (skipped) > 0.5 * fabs (jump)
          && local * jump > 0 && fabs (local) > 0.5 * fabs (jump))
        significance[i] = fabs (jump) / u;
    }
  while (steps->len < MAX_STEPS)
    {
      gsize best = 0;
      BtStep step;

      for (gsize i = 1; i < n; i++)
        if (significance[i] > significance[best])
          best = i;
      if (!(significance[best] > 0))
        break;
      measure_at (energy_ev, absorbance, noise, best, side_at (energy_ev, best), &step);
      g_array_append_val (steps, step);
      for (gsize i = best > SIDE ? best - SIDE : 0; i < MIN (n, best + SIDE); i++)
        significance[i] = 0;
    }
  g_array_sort (steps, by_energy);
}
