/* A diameter window proposed from a spectrum's own bands.
 *
 * Bands show in the second derivative, which a smooth tail hardly touches. A window is good when the second derivative of its
 * tubes' S11, S22, M11 and S33, each group with an area of its own, explains the spectrum's: one band alone could be any of them,
 * the pattern of all cannot. */
#include <bandtally/band_plan.h>

#include <math.h>
#include <string.h>

#define STEP_EV 0.005
/* Local quadratic over +-60 meV: about the half width of a film's narrowest group. */
#define HALF_WINDOW 12
#define FILM_SHIFT_EV 0.04
/* A spectrum of which even the best window explains less than this shows no nanotube bands. */
#define LEAST_EXPLAINED 0.3
#define WITHOUT_S11 0.7
/* Another window is worth telling when it lies this far off and explains this much of what the best explains. */
#define APART_NM 0.2
#define NEARLY_AS_GOOD 0.85
/* The same where the data hardly show S11: without it patterns are easily taken for each other. */
#define NEARLY_AS_GOOD_BLIND 0.65

/* Groups that are looked for, with the width of one tube's line in a film, eV (common practice). */
enum { PART_S11, PART_S22, PART_M11, PART_S33, N_PARTS };
static const struct { BtGroup group; double fwhm_ev; } parts[N_PARTS] = {
  [PART_S11] = { BT_S11, 0.08 }, [PART_S22] = { BT_S22, 0.115 }, [PART_M11] = { BT_M11, 0.155 }, [PART_S33] = { BT_S33, 0.18 } };

typedef struct {
  gsize n;
  double low_ev;
  double *bend; /* minus the second derivative */
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
bend_of (const double *y, gsize n, double *bend)
{
  const double h = HALF_WINDOW, mean_square = h * (h + 1) / 3;
  double norm = 0;

  for (int k = -HALF_WINDOW; k <= HALF_WINDOW; k++)
    norm += (k * k - mean_square) * (k * k - mean_square);
  for (gsize i = 0; i < n; i++)
    {
      bend[i] = 0;
      if (i < HALF_WINDOW || i + HALF_WINDOW >= n)
        continue;
      for (int k = -HALF_WINDOW; k <= HALF_WINDOW; k++)
        bend[i] -= 2 * (k * k - mean_square) / norm * y[(gsize) ((gssize) i + k)] / (STEP_EV * STEP_EV);
    }
}

static gboolean
curvature_init (Curvature *curvature, const double *energy_ev, const double *absorbance, gsize n)
{
  double low = fmax (energy_ev[0], 0.4), high = fmin (energy_ev[n - 1], 3.0);
  g_autofree double *y = NULL;

  curvature->n = high > low ? (gsize) ((high - low) / STEP_EV) + 1 : 0;
  curvature->low_ev = low;
  if (curvature->n < 4 * HALF_WINDOW)
    return FALSE;
  y = resample (energy_ev, absorbance, n, low, curvature->n);
  curvature->bend = g_new0 (double, curvature->n);
  bend_of (y, curvature->n, curvature->bend);
  return TRUE;
}

/* What each group of a population would look like, one array a group. */
typedef struct { const Curvature *curvature; double *sum[N_PARTS], *bend[N_PARTS]; } Pattern;

static void
pattern_init (Pattern *pattern, const Curvature *curvature)
{
  pattern->curvature = curvature;
  for (guint p = 0; p < N_PARTS; p++)
    {
      pattern->sum[p] = g_new (double, curvature->n);
      pattern->bend[p] = g_new (double, curvature->n);
    }
}

static void
pattern_clear (Pattern *pattern)
{
  for (guint p = 0; p < N_PARTS; p++)
    {
      g_free (pattern->sum[p]);
      g_free (pattern->bend[p]);
    }
}

/* Adds a Gaussian line of unit area out to where it ends. */
static void
add_line (const Curvature *curvature, double *sum, double centre, double fwhm, double area)
{
  const double first = (centre - 1.6 * fwhm - curvature->low_ev) / STEP_EV, last = (centre + 1.6 * fwhm - curvature->low_ev) / STEP_EV;

  for (gssize i = (gssize) fmax (first, 0); i <= (gssize) last && i < (gssize) curvature->n; i++)
    {
      double u = (energy_of (curvature, (gsize) i) - centre) / fwhm;

      sum[i] += area / fwhm * exp (-2.772588722239781 * u * u);
    }
}

/* Fills the pattern for a window; @metal_ev is how far M11 lies above its reference. */
static void
pattern_fill (Pattern *pattern, const GArray *tubes, double mean_nm, double spread_nm, double metal_ev)
{
  for (guint p = 0; p < N_PARTS; p++)
    memset (pattern->sum[p], 0, sizeof (double) * pattern->curvature->n);
  for (guint t = 0; t < tubes->len; t++)
    {
      BtTube tube = g_array_index (tubes, BtTube, t);
      double z = (bt_tube_diameter_nm (tube) - mean_nm) / spread_nm, weight = exp (-z * z / 2);

      if (fabs (z) > 3)
        continue;
      for (guint p = 0; p < N_PARTS; p++)
        for (int branch = 0; branch < 2; branch++)
          {
            double e = bt_tube_energy_ev (tube, parts[p].group, branch, BT_REFERENCE_EMPIRICAL);

            if (!isnan (e))
              add_line (pattern->curvature, pattern->sum[p], e - FILM_SHIFT_EV + (parts[p].group == BT_M11 ? metal_ev : 0),
                        parts[p].fwhm_ev, weight);
          }
    }
  for (guint p = 0; p < N_PARTS; p++)
    bend_of (pattern->sum[p], pattern->curvature->n, pattern->bend[p]);
}

/* Solves the normal equations of the parts in @used; FALSE where they are singular. */
static gboolean
solve_parts (double normal[N_PARTS][N_PARTS], const double *right, const gboolean *used, double *x)
{
  double m[N_PARTS][N_PARTS + 1];
  guint index[N_PARTS], n = 0;

  for (guint p = 0; p < N_PARTS; p++)
    {
      x[p] = 0;
      if (used[p])
        index[n++] = p;
    }
  for (guint r = 0; r < n; r++)
    {
      for (guint c = 0; c < n; c++)
        m[r][c] = normal[index[r]][index[c]];
      m[r][n] = right[index[r]];
    }
  for (guint k = 0; k < n; k++)
    {
      if (!(m[k][k] > 1e-9 * normal[index[k]][index[k]]))
        return FALSE;
      for (guint r = k + 1; r < n; r++)
        for (guint c = n + 1; c-- > k;)
          m[r][c] -= m[r][k] / m[k][k] * m[k][c];
    }
  for (guint k = n; k-- > 0;)
    {
      x[index[k]] = m[k][n];
      for (guint c = k + 1; c < n; c++)
        x[index[k]] -= m[k][c] * x[index[c]];
      x[index[k]] /= m[k][k];
    }
  return TRUE;
}

/* Share of the spectrum's curvature that the groups explain with areas that are not negative; 0 without S22. */
static double
explained (const Pattern *pattern)
{
  const Curvature *curvature = pattern->curvature;
  double normal[N_PARTS][N_PARTS] = { { 0 } }, right[N_PARTS] = { 0 }, x[N_PARTS], total = 0, share = 0;
  gboolean used[N_PARTS];

  for (gsize i = HALF_WINDOW; i + HALF_WINDOW < curvature->n; i++)
    {
      /* Bands widen about as their energy, and curvature falls as the square of the width: without a weight S11 alone would decide. */
      const double e = energy_of (curvature, i), weight = e * e * e;

      total += weight * curvature->bend[i] * curvature->bend[i];
      for (guint p = 0; p < N_PARTS; p++)
        {
          right[p] += weight * pattern->bend[p][i] * curvature->bend[i];
          for (guint q = 0; q <= p; q++)
            normal[p][q] += weight * pattern->bend[p][i] * pattern->bend[q][i];
        }
    }
  for (guint p = 0; p < N_PARTS; p++)
    {
      for (guint q = p + 1; q < N_PARTS; q++)
        normal[p][q] = normal[q][p];
      used[p] = normal[p][p] > 0;
    }
  for (guint round = 0; round < N_PARTS; round++)
    {
      guint worst = N_PARTS;

      if (!solve_parts (normal, right, used, x))
        return 0;
      for (guint p = 0; p < N_PARTS; p++)
        if (used[p] && x[p] < 0 && (worst == N_PARTS || x[p] * sqrt (normal[p][p]) < x[worst] * sqrt (normal[worst][worst])))
          worst = p;
      if (worst == N_PARTS)
        break;
      used[worst] = FALSE;
    }
  for (guint p = 0; p < N_PARTS; p++)
    share += x[p] * right[p];
  if (!(x[PART_S22] > 0 && total > 0))
    return 0;
  /* Doping weakens S11 but seldom takes all of it: a window that needs an S11 of nothing is the less likely one. */
  return share / total * (!used[PART_S11] && normal[PART_S11][PART_S11] > 0 ? WITHOUT_S11 : 1);
}

/* Films are made of tubes from about 0.7 to 2 nm (common practice): where a short range leaves the pattern ambiguous, the usual one is likelier. */
static double
usual (double mean_nm)
{
  double z = (mean_nm - 1.25) / 1.0;

  return exp (-z * z / 2);
}

/* The best of a grid of windows; with @apart (nullable) only those that are clearly others than it. */
static double
search (Pattern *pattern, const GArray *tubes, double low_nm, double high_nm, double step_nm, const double *spreads, guint n_spreads,
        const BtDiameterWindow *apart, BtDiameterWindow *window)
{
  /* The scaling law runs low for M11 of large tubes, by up to about 0.1 eV in published films. */
  static const double metal_ev[] = { 0, 0.08 };
  double best = -1;

  for (double d = low_nm; d <= high_nm; d += step_nm)
    for (guint s = 0; s < n_spreads; s++)
      for (guint k = 0; k < G_N_ELEMENTS (metal_ev); k++)
        {
          double share;

          if (apart != NULL && fabs (d - apart->mean_nm) < APART_NM)
            continue;

          pattern_fill (pattern, tubes, d, spreads[s], metal_ev[k]);
          share = explained (pattern) * usual (d);
          if (share > best)
            {
              best = share;
              *window = (BtDiameterWindow){ d, spreads[s] };
            }
        }
  return best;
}

/* Whether the data reach far enough into the infrared to show S11 of all but the largest tubes; where they do not, S22 can pass for it. */
static gboolean
sees_s11 (const Curvature *curvature)
{
  return curvature->low_ev < 0.85;
}

gboolean
bt_diameter_window_propose (const double *energy_ev, const double *absorbance, gsize n, BtDiameterWindow *window,
                            BtDiameterWindow *alternative)
{
  static const double coarse[] = { 0.06, 0.10, 0.16 };
  Curvature curvature = { 0 };
  gboolean found = FALSE;

  *window = (BtDiameterWindow){ 1.4, 0.1 };
  if (alternative != NULL)
    *alternative = (BtDiameterWindow){ 0, 0 };
  if (n >= 8 && curvature_init (&curvature, energy_ev, absorbance, n))
    {
      g_autoptr (GArray) tubes = bt_tubes_in_diameter (0.5, 2.9);
      BtDiameterWindow near, other;
      Pattern pattern;
      double best;

      pattern_init (&pattern, &curvature);
      best = search (&pattern, tubes, 0.7, 2.3, 0.04, coarse, G_N_ELEMENTS (coarse), NULL, &near);
      if (best > LEAST_EXPLAINED)
        {
          const double fine[] = { 0.7 * near.spread_nm, 0.85 * near.spread_nm, near.spread_nm, 1.15 * near.spread_nm, 1.3 * near.spread_nm };

          search (&pattern, tubes, near.mean_nm - 0.03, near.mean_nm + 0.031, 0.01, fine, G_N_ELEMENTS (fine), NULL, window);
          found = TRUE;
          if (alternative != NULL
              && search (&pattern, tubes, 0.7, 2.3, 0.04, coarse, G_N_ELEMENTS (coarse), window, &other)
                   > (sees_s11 (&curvature) ? NEARLY_AS_GOOD : NEARLY_AS_GOOD_BLIND) * best)
            *alternative = other;
        }
      pattern_clear (&pattern);
    }
  g_free (curvature.bend);
  return found;
}
