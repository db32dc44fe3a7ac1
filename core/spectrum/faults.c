/* Noise of a reading from its own scatter, and spikes in it. */
#include "faults-private.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

/* Points that a local median of the scatter is taken over, and how far apart it is taken. */
#define NOISE_WINDOW 61
#define NOISE_STRIDE 16
/* No instrument reads more. */
#define MOST_ABSORBANCE 12

static int
compare_double (const void *a, const void *b)
{
  double x = *(const double *) a, y = *(const double *) b;

  return x < y ? -1 : x > y;
}

double
bt_faults_median (double *values, gsize n)
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

/* The share of light that passes, from five readings: a detector's noise is in that, so the absorbance's goes with its inverse. */
static double
light_at (const double *absorbance, gsize i, gsize n)
{
  const gsize a = i > 2 ? i - 2 : 0, b = MIN (i + 3, n);
  double sum = 0;

  for (gsize k = a; k < b; k++)
    sum += absorbance[k];
  return pow (10, -CLAMP (sum / (double) (b - a), -1, 8));
}

double *
bt_faults_noise (const double *energy_ev, const double *absorbance, gsize n)
{
  double *noise = g_new (double, n), largest = 0, floor_u;
  g_autofree double *scatter = g_new0 (double, n), *light = g_new (double, n);
  double window[NOISE_WINDOW];

  for (gsize i = 0; i < n; i++)
    largest = fmax (largest, fabs (absorbance[i]));
  floor_u = fmax (digit_of (absorbance, n) / sqrt (12), 1e-6 * largest);
  /* Absorption coefficients are no absorbances. */
  for (gsize i = 0; i < n; i++)
    light[i] = largest < MOST_ABSORBANCE ? light_at (absorbance, i, n) : 1;
  /* Fourth differences: what is smooth over five points leaves nothing in them, and of independent noise they hold sqrt (70) u. */
  for (gsize i = 2; i + 2 < n; i++)
    scatter[i] = light[i] / sqrt (70)
                 * fabs (absorbance[i - 2] - 4 * absorbance[i - 1] + 6 * absorbance[i] - 4 * absorbance[i + 1] + absorbance[i + 2]);
  scatter[0] = scatter[1] = scatter[2];
  scatter[n - 1] = scatter[n - 2] = scatter[n - 3];
  for (gsize i = 0; i < n; i += NOISE_STRIDE)
    {
      const gsize middle = i + NOISE_STRIDE / 2;
      gsize a = middle > NOISE_WINDOW / 2 ? middle - NOISE_WINDOW / 2 : 0, b = MIN (a + NOISE_WINDOW, n);
      double u;

      if (b - a < NOISE_WINDOW && n > NOISE_WINDOW)
        a = b - NOISE_WINDOW;
      memcpy (window, scatter + a, sizeof (double) * (b - a));
      /* Median of |normal| is 0.6745 of its standard deviation. */
      u = bt_faults_median (window, b - a) / 0.6745;
      for (gsize k = i; k < MIN (i + NOISE_STRIDE, n); k++)
        noise[k] = fmax (u / light[k], floor_u);
    }
  return noise;
}

/* A spike is this many times its place's noise, and no wider than one point where points lie closer than this. */
#define SPIKE_SIGNIFICANCE 12
#define SPIKE_SPACING_EV 0.02

/* What point i is above the cubic through two points on either side. */
static double
excess_at (const double *y, gsize i)
{
  return y[i] - (4 * (y[i - 1] + y[i + 1]) - (y[i - 2] + y[i + 2])) / 6;
}

guint
bt_faults_find_spikes (const double *energy_ev, const double *absorbance, double *noise, gsize n, double *largest_at_ev, double *largest)
{
  guint count = 0;

  *largest = 0;
  for (gsize i = 4; i + 4 < n; i++)
    {
      const double excess = excess_at (absorbance, i), most = 0.2 * fabs (excess);

      if (fabs (excess) < SPIKE_SIGNIFICANCE * noise[i] || energy_ev[i + 2] - energy_ev[i - 2] > 4 * SPIKE_SPACING_EV)
        continue;
      /* One point alone leaves its shares in its neighbours' excess, and nothing else does: no step, no band. */
      if (fabs (excess_at (absorbance, i - 1) + excess * 4 / 6) > most || fabs (excess_at (absorbance, i + 1) + excess * 4 / 6) > most
          || fabs (excess_at (absorbance, i - 2) - excess / 6) > most || fabs (excess_at (absorbance, i + 2) - excess / 6) > most)
        continue;
      noise[i] = fabs (excess);
      count++;
      if (fabs (excess) > fabs (*largest))
        {
          *largest = excess;
          *largest_at_ev = energy_ev[i];
        }
    }
  return count;
}
