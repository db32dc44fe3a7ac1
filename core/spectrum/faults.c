/* Noise, saturation and detector steps from the reading itself. */
#include "faults-private.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Points that a local median of the scatter is taken over, and how far apart it is taken. */
#define NOISE_WINDOW 61
#define NOISE_STRIDE 16

static int
compare_double (const void *a, const void *b)
{
  double x = *(const double *) a, y = *(const double *) b;

  return x < y ? -1 : x > y;
}

static double
median (double *values, gsize n)
{
  qsort (values, n, sizeof *values, compare_double);
  return n % 2 ? values[n / 2] : (values[n / 2 - 1] + values[n / 2]) / 2;
}

/* The digit in which the readings were written, from the smallest difference between neighbours. */
static double
digit_of (const double *y, gsize n)
{
  double smallest = INFINITY;

  for (gsize i = 0; i + 1 < n; i++)
    {
      double d = fabs (y[i + 1] - y[i]);

      if (d > 1e-12 && d < smallest)
        smallest = d;
    }
  return isfinite (smallest) ? smallest : 0;
}

double *
bt_faults_noise (const double *energy_ev, const double *absorbance, gsize n)
{
  /* Fourth differences: what is smooth over five points leaves nothing in them, and of independent noise they hold sqrt (70) u. */
  double *noise = g_new (double, n), largest = 0, floor_u;
  g_autofree double *scatter = g_new0 (double, n);
  double window[NOISE_WINDOW];

  for (gsize i = 0; i < n; i++)
    largest = fmax (largest, fabs (absorbance[i]));
  floor_u = fmax (digit_of (absorbance, n) / sqrt (12), 1e-6 * largest);
  for (gsize i = 2; i + 2 < n; i++)
    scatter[i] = fabs (absorbance[i - 2] - 4 * absorbance[i - 1] + 6 * absorbance[i] - 4 * absorbance[i + 1] + absorbance[i + 2]) / sqrt (70);
  scatter[0] = scatter[1] = scatter[2];
  scatter[n - 1] = scatter[n - 2] = scatter[n - 3];
  for (gsize i = 0; i < n; i += NOISE_STRIDE)
    {
      gsize a = i > NOISE_WINDOW / 2 ? i - NOISE_WINDOW / 2 : 0, b = MIN (a + NOISE_WINDOW, n);
      double u;

      if (b - a < NOISE_WINDOW && n > NOISE_WINDOW)
        a = b - NOISE_WINDOW;
      memcpy (window, scatter + a, sizeof (double) * (b - a));
      /* Median of |normal| is 0.6745 of its standard deviation. */
      u = fmax (median (window, b - a) / 0.6745, floor_u);
      for (gsize k = i; k < MIN (i + NOISE_STRIDE, n); k++)
        noise[k] = u;
    }
  return noise;
}

/* Where light runs out, noise explodes and the absorbance stops at the instrument's ceiling. */
void
bt_faults_find_saturated (const double *energy_ev, const double *absorbance, const double *noise, gsize n, GArray *saturated)
{
  g_autofree double *sorted = g_memdup2 (noise, sizeof (double) * n);
  double usual = median (sorted, n), ceiling = INFINITY;
  gsize i = 0, count = 0;

  for (gsize k = 0; k < n; k++)
    if (absorbance[k] > 1.5 && noise[k] > 0.02 && noise[k] > 10 * usual)
      {
        ceiling = count == 0 ? absorbance[k] : ceiling + (absorbance[k] - ceiling) / (double) (count + 1);
        count++;
      }
  if (count < 8)
    return;
  /* Stray light bends the reading by more than its noise from one decade below the ceiling on (A > -log10 (s) - 1, common practice). */
  while (i < n)
    {
      gsize k = i, bad = 0;

      if (absorbance[i] < ceiling - 1)
        {
          i++;
          continue;
        }
      /* Noise may lift single points over the line and dip others below it: gaps of up to five points do not end a range. */
      for (gsize gap = 0; k < n && gap < 5; k++)
        {
          gap = absorbance[k] < ceiling - 1 ? gap + 1 : 0;
          bad += noise[k] > 0.02 && noise[k] > 10 * usual ? 1 : 0;
        }
      if (bad >= 8)
        {
          BtRange range = { energy_ev[i], energy_ev[k - 1] };

          g_array_append_val (saturated, range);
        }
      i = k;
    }
}

/* Points on each side that a step is judged by: 20 to 40 nm at usual intervals, but never so far in energy that a band's own bend could
 * pass for a step, and never so few that noise could. */
#define SIDE 20
#define SIDE_EV 0.05
#define LEAST_SIDE 8
#define STEPS_MAX_POINTS 100000
#define MAX_STEPS 3

/* Value at @e of the least-squares parabola through @n points, and the factor of their noise in it. */
static double
extrapolate (const double *x, const double *y, gsize n, double e, double *factor)
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
  return (c0 * t[0] + c1 * t[1] + c2 * t[2]) / det;
}

/* Points within reach on both sides of the gap behind point i. */
static gsize
side_at (const double *x, gsize i)
{
  gsize side = SIDE;

  while (side >= LEAST_SIDE && (x[i] - x[i + 1 - side] > SIDE_EV || x[i + side] - x[i + 1] > SIDE_EV))
    side--;
  return side;
}

/* The jump between points i and i + 1, @skip points next to it left out on both sides. */
static double
jump_at (const double *x, const double *y, const double *noise, gsize i, gsize side, gsize skip, double *u)
{
  double e = (x[i] + x[i + 1]) / 2, left_factor, right_factor;
  double left = extrapolate (x + i + 1 - skip - side, y + i + 1 - skip - side, side, e, &left_factor);
  double right = extrapolate (x + i + 1 + skip, y + i + 1 + skip, side, e, &right_factor);

  *u = hypot (left_factor * noise[i], right_factor * noise[i + 1]);
  return right - left;
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
      if (side < LEAST_SIDE || fabs (absorbance[i + 1] - absorbance[i]) < 3 * noise[i] || in_saturated (saturated, energy_ev[i]))
        continue;
      jump = jump_at (energy_ev, absorbance, noise, i, side, 0, &u);
      skipped = jump_at (energy_ev, absorbance, noise, i, side, 1, &u_skip);
      /* What the slopes on either side do not explain of the difference between the two neighbours. */
      local = absorbance[i + 1] - absorbance[i] - (absorbance[i] - absorbance[i - 3] + absorbance[i + 4] - absorbance[i + 1]) / 6;
      if (fabs (jump) > 6 * u && fabs (jump) > least && skipped * jump > 0 && fabs (skipped) > 0.5 * fabs (jump)
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
      step.size = jump_at (energy_ev, absorbance, noise, best, side_at (energy_ev, best), 0, &step.size_u);
      step.energy_ev = (energy_ev[best] + energy_ev[best + 1]) / 2;
      g_array_append_val (steps, step);
      for (gsize i = best > SIDE ? best - SIDE : 0; i < MIN (n, best + SIDE); i++)
        significance[i] = 0;
    }
  g_array_sort (steps, by_energy);
}
