/* A diameter window proposed from a spectrum's own bands.
 *
 * Bands show as minima of the second derivative, which a smooth tail hardly touches. A diameter is good when S11, S22 and M11 of that
 * diameter all fall on such minima: one alone could be any of them. */
#include <bandtally/band_plan.h>

#include <math.h>
#include <string.h>

#define STEP_EV 0.005
/* Local quadratic over +-60 meV: about the half width of a film's narrowest group. */
#define HALF_WINDOW 12
#define FILM_SHIFT_EV 0.04
/* Reading the reference energies of a film to better than this is luck. */
#define TOLERANCE_EV 0.05

typedef struct {
  gsize n;
  double low_ev;
  double *bend; /* minus the second derivative where that is above 0, over its largest value */
  double *raw;  /* minus the second derivative */
} Curvature;

static double
energy_of (const Curvature *curvature, gsize i)
{
  return curvature->low_ev + STEP_EV * (double) i;
}

/* Mean of the readings in each step (linear between readings where the axis is coarser). */
static double *
resample (const double *energy_ev, const double *absorbance, gsize n, double low, gsize m)
{
  double *out = g_new (double, m);
  gsize a = 0;

  for (gsize i = 0; i < m; i++)
    {
      double e = low + STEP_EV * (double) i, sum = 0;
      gsize count = 0, b;

      while (a + 1 < n && energy_ev[a + 1] < e - STEP_EV / 2)
        a++;
      for (b = a; b < n && energy_ev[b] < e + STEP_EV / 2; b++)
        if (energy_ev[b] >= e - STEP_EV / 2)
          {
            sum += absorbance[b];
            count++;
          }
      if (count > 0)
        out[i] = sum / (double) count;
      else
        {
          gsize k = MIN (a, n - 2);
          double t = (e - energy_ev[k]) / (energy_ev[k + 1] - energy_ev[k]);

          out[i] = absorbance[k] + t * (absorbance[k + 1] - absorbance[k]);
        }
    }
  return out;
}

/* Second derivative by a least-squares quadratic over 2 HALF_WINDOW + 1 points (Savitzky and Golay, Anal. Chem. 36, 1627 (1964)). */
static void
bend_of (const double *y, gsize n, double *raw)
{
  const double h = HALF_WINDOW, mean_square = h * (h + 1) / 3;
  double norm = 0;

  for (int k = -HALF_WINDOW; k <= HALF_WINDOW; k++)
    norm += (k * k - mean_square) * (k * k - mean_square);
  for (gsize i = 0; i < n; i++)
    {
      raw[i] = 0;
      if (i < HALF_WINDOW || i + HALF_WINDOW >= n)
        continue;
      for (int k = -HALF_WINDOW; k <= HALF_WINDOW; k++)
        raw[i] -= 2 * (k * k - mean_square) / norm * y[(gsize) ((gssize) i + k)] / (STEP_EV * STEP_EV);
    }
}

static gboolean
curvature_init (Curvature *curvature, const double *energy_ev, const double *absorbance, gsize n)
{
  double low = fmax (energy_ev[0], 0.4), high = fmin (energy_ev[n - 1], 3.0), largest = 0;
  g_autofree double *y = NULL;

  curvature->n = high > low ? (gsize) ((high - low) / STEP_EV) + 1 : 0;
  curvature->low_ev = low;
  if (curvature->n < 4 * HALF_WINDOW)
    return FALSE;
  y = resample (energy_ev, absorbance, n, low, curvature->n);
  curvature->raw = g_new0 (double, curvature->n);
  curvature->bend = g_new0 (double, curvature->n);
  bend_of (y, curvature->n, curvature->raw);
  for (gsize i = 0; i < curvature->n; i++)
    largest = fmax (largest, curvature->raw[i]);
  for (gsize i = 0; i < curvature->n; i++)
    curvature->bend[i] = largest > 0 ? fmax (0, curvature->raw[i] / largest) : 0;
  return largest > 0;
}

/* The largest bend near an energy, less the further away it lies; -1 where the data do not reach. */
static double
bend_near (const Curvature *curvature, double energy_ev, double tolerance_ev)
{
  double first = energy_of (curvature, HALF_WINDOW), last = energy_of (curvature, curvature->n - 1 - HALF_WINDOW), best = 0;

  if (energy_ev < first || energy_ev > last)
    return -1;
  for (gsize i = HALF_WINDOW; i + HALF_WINDOW < curvature->n; i++)
    {
      double z = (energy_of (curvature, i) - energy_ev) / tolerance_ev;

      if (fabs (z) < 3)
        best = fmax (best, curvature->bend[i] * exp (-z * z / 2));
    }
  return best;
}

static double
score_of (const Curvature *curvature, double diameter_nm)
{
  /* M11's reference is the least certain of the three (only the scaling law gives it). */
  static const struct { BtGroup group; double weight, tolerance, floor; } parts[] = {
    { BT_S11, 1, TOLERANCE_EV, 0.02 }, { BT_S22, 1, TOLERANCE_EV, 0.01 }, { BT_M11, 0.5, 2 * TOLERANCE_EV, 0.01 } };
  double score = 0;
  guint seen = 0;

  for (guint p = 0; p < G_N_ELEMENTS (parts); p++)
    {
      double e = bt_group_energy_ev (diameter_nm, parts[p].group, BT_REFERENCE_EMPIRICAL) - FILM_SHIFT_EV;
      double bend = bend_near (curvature, e, parts[p].tolerance);

      /* A group that the data do not reach says nothing; it costs what a poor match would, so that hiding bands never pays. */
      if (bend < 0)
        score += parts[p].weight * log (0.05);
      else
        {
          score += parts[p].weight * log (parts[p].floor + bend);
          seen++;
        }
    }
  return seen > 0 ? score : -INFINITY;
}

/* Standard deviation of the group whose crown is near an energy, from where its curvature changes sign; 0 where it does not. */
static double
sigma_near (const Curvature *curvature, double energy_ev)
{
  gsize top = 0, a, b;
  double best = 0, smoothing;

  for (gsize i = HALF_WINDOW; i + HALF_WINDOW < curvature->n; i++)
    if (fabs (energy_of (curvature, i) - energy_ev) < 2 * TOLERANCE_EV && curvature->bend[i] > best)
      {
        best = curvature->bend[i];
        top = i;
      }
  if (!(best > 0))
    return 0;
  for (a = top; a > HALF_WINDOW && curvature->raw[a] > 0; a--)
    ;
  for (b = top; b + HALF_WINDOW < curvature->n && curvature->raw[b] > 0; b++)
    ;
  /* The local quadratic smooths like a box of its own length. */
  smoothing = (2 * HALF_WINDOW + 1) * STEP_EV / sqrt (28);
  best = (energy_of (curvature, b) - energy_of (curvature, a)) / 2;
  return sqrt (fmax (0, best * best - smoothing * smoothing));
}

static double
propose_spread (const Curvature *curvature, double diameter_nm)
{
  /* Half widths of single lines in films, eV (common practice). */
  static const struct { BtGroup group; double line_sigma; } parts[] = { { BT_S11, 0.034 }, { BT_S22, 0.049 } };
  double sum = 0;
  guint count = 0;

  for (guint p = 0; p < G_N_ELEMENTS (parts); p++)
    {
      double e = bt_group_energy_ev (diameter_nm, parts[p].group, BT_REFERENCE_EMPIRICAL);
      double slope = (bt_group_energy_ev (diameter_nm + 0.01, parts[p].group, BT_REFERENCE_EMPIRICAL) - e) / 0.01;
      double sigma = sigma_near (curvature, e - FILM_SHIFT_EV);

      if (!(sigma > 0))
        continue;
      sum += sqrt (fmax (0, sigma * sigma - parts[p].line_sigma * parts[p].line_sigma)) / fabs (slope);
      count++;
    }
  return CLAMP (count > 0 ? sum / count : 0.08 * diameter_nm, 0.05, 0.25);
}

gboolean
bt_diameter_window_propose (const double *energy_ev, const double *absorbance, gsize n, BtDiameterWindow *window)
{
  Curvature curvature = { 0 };
  double best = -INFINITY, empty;

  *window = (BtDiameterWindow){ 1.4, 0.1 };
  if (n < 8 || !curvature_init (&curvature, energy_ev, absorbance, n))
    {
      g_free (curvature.raw);
      g_free (curvature.bend);
      return FALSE;
    }
  for (double d = 0.7; d < 2.4; d += 0.005)
    {
      double score = score_of (&curvature, d);

      if (score > best)
        {
          best = score;
          window->mean_nm = d;
        }
    }
  /* What a spectrum without any band would score. */
  empty = log (0.05) + log (0.05) + 0.5 * log (0.05);
  if (best > empty)
    window->spread_nm = propose_spread (&curvature, window->mean_nm);
  else
    *window = (BtDiameterWindow){ 1.4, 0.1 };
  g_free (curvature.raw);
  g_free (curvature.bend);
  return best > empty;
}
