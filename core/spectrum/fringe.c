/* Fringes: an oscillation of constant period in wavenumber. */
#include "faults-private.h"

#include <math.h>
#include <string.h>

#define PER_CM_PER_EV (1 / (BT_HC_EV_NM * 1e-7))
/* A line of the periodogram counts when it holds this many times the mean power of the others: of a few thousand lines of white noise the largest
 * seldom holds more than 10 (exponential distribution: ln of their number). */
#define LEAST_POWER 30.0
/* The stretches that are looked at: most instruments sample evenly in wavelength, so the infrared alone shows the fastest fringes. */
#define LOW_EV 0.45
static const double high_ev[] = { 2.0, 1.0 };
#define MAX_POINTS 4000

/* Takes off what is smooth over 50 meV: a running mean of a running mean, which leaves nothing of a straight line. */
static void
take_smooth_off (double *y, gsize n, gsize half)
{
  g_autofree double *once = g_new (double, n), *twice = g_new (double, n);
  const double *from = y;
  double *to = once;

  for (int pass = 0; pass < 2; pass++)
    {
      double sum = 0;

      for (gsize i = 0; i < n; i++)
        {
          gsize a = i > half ? i - half : 0, b = MIN (i + half, n - 1), reach = MIN (i - a, b - i);

          sum = 0;
          for (gsize k = i - reach; k <= i + reach; k++)
            sum += from[k];
          to[i] = sum / (double) (2 * reach + 1);
        }
      from = once;
      to = twice;
    }
  for (gsize i = 0; i < n; i++)
    y[i] -= twice[i];
}

/* Amplitude^2 of the oscillation of @cycles per eV at uneven places: least squares on sine and cosine (Lomb, Astrophys. Space Sci. 39, 447
 * (1976)). */
static double
power_at (const double *x, const double *y, gsize n, double cycles)
{
  double cc = 0, cs = 0, ss = 0, yc = 0, ys = 0, det;

  for (gsize i = 0; i < n; i++)
    {
      double phase = 2 * G_PI * cycles * x[i], c = cos (phase), s = sin (phase);

      cc += c * c;
      cs += c * s;
      ss += s * s;
      yc += y[i] * c;
      ys += y[i] * s;
    }
  det = cc * ss - cs * cs;
  if (!(det > 0))
    return 0;
  {
    double a = (yc * ss - ys * cs) / det, b = (ys * cc - yc * cs) / det;

    return a * a + b * b;
  }
}

/* The reading between LOW_EV and @high, every k-th point where there are more than MAX_POINTS. */
static gsize
take_stretch (const double *energy, const double *absorbance, const double *u, gsize n, double high, double **x, double **y, double *noise)
{
  gsize out = 0, first, last, stride;

  for (first = 0; first < n && energy[first] < LOW_EV; first++)
    ;
  for (last = n; last > first && energy[last - 1] > high; last--)
    ;
  stride = (last - first) / MAX_POINTS + 1;
  *x = g_new (double, last - first + 1);
  *y = g_new (double, last - first + 1);
  *noise = 0;
  for (gsize i = first; i < last; i += stride)
    {
      (*x)[out] = energy[i];
      (*y)[out++] = absorbance[i];
      *noise += u[i];
    }
  if (out > 0)
    *noise /= (double) out;
  return out;
}

static gboolean
find_in_stretch (const double *energy_ev, const double *absorbance, const double *point_noise, gsize n_points, double high, BtFringe *fringe)
{
  g_autofree double *x = NULL, *y = NULL;
  double noise, span, widest, best = 0, best_cycles = 0, sum = 0, lowest, highest;
  gsize n = take_stretch (energy_ev, absorbance, point_noise, n_points, high, &x, &y, &noise), count = 0;

  if (n < 200)
    return FALSE;
  span = x[n - 1] - x[0];
  take_smooth_off (y, n, (gsize) MAX (3, 0.025 / span * (double) n));
  /* No faster than two points a period at the coarsest place. */
  widest = 0;
  for (gsize i = 1; i < n; i++)
    widest = fmax (widest, x[i] - x[i - 1]);
  lowest = PER_CM_PER_EV / BT_FRINGE_MAX_SPACING_PER_CM;
  highest = fmin (0.5 / widest, lowest + 3000 / span);
  for (double cycles = lowest; cycles < highest; cycles += 0.4 / span)
    {
      double power = power_at (x, y, n, cycles);

      sum += power;
      count++;
      if (power > best)
        {
          best = power;
          best_cycles = cycles;
        }
    }
  if (count < 20 || best < LEAST_POWER * (sum - best) / (double) (count - 1))
    return FALSE;
  /* Refine about the line. */
  for (double step = 0.2 / span; step > 1e-4 / span; step /= 2)
    for (int side = -1; side <= 1; side += 2)
      {
        double power = power_at (x, y, n, best_cycles + side * step);

        if (power > best)
          {
            best = power;
            best_cycles += side * step;
          }
      }
  fringe->amplitude = sqrt (best);
  fringe->spacing_per_cm = PER_CM_PER_EV / best_cycles;
  fringe->optical_thickness_um = 1e4 / (2 * fringe->spacing_per_cm);
  return fringe->amplitude > 0.5 * noise;
}

gboolean
bt_faults_find_fringe (const double *energy_ev, const double *absorbance, const double *noise, gsize n, BtFringe *fringe)
{
  for (gsize i = 0; i < G_N_ELEMENTS (high_ev); i++)
    if (find_in_stretch (energy_ev, absorbance, noise, n, high_ev[i], fringe))
      return TRUE;
  return FALSE;
}

gboolean
bt_spectrum_find_fringe (BtSpectrum *self, BtFringe *fringe)
{
  gsize n;
  const double *energy_ev = bt_spectrum_get_energy_ev (self, &n);

  return bt_faults_find_fringe (energy_ev, bt_spectrum_get_absorbance (self, NULL), bt_spectrum_get_noise (self, NULL), n, fringe);
}
