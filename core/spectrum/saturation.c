/* Ranges in which a reading is without light. */
#include "faults-private.h"

#include <math.h>
#include <string.h>

/* Absorbance and scatter from which on a reading can be without light. */
#define DARK_ABSORBANCE 1.5
#define DARK_NOISE 0.02
#define CLIPPED_POINTS 8

/* Length of the longest run of equal readings at @level. */
static gsize
clipped_at (const double *absorbance, gsize n, double level)
{
  gsize longest = 0, run = 0;

  for (gsize i = 0; i < n; i++)
    {
      run = absorbance[i] >= level ? run + 1 : 0;
      longest = MAX (longest, run);
    }
  return longest;
}

/* (transfer full): each reading's median with its four neighbours on either side. */
static double *
smooth (const double *absorbance, gsize n)
{
  double *out = g_new (double, n), nine[9];

  for (gsize i = 0; i < n; i++)
    {
      const gsize reach = MIN (MIN (i, n - 1 - i), 4);

      memcpy (nine, absorbance + i - reach, sizeof *nine * (2 * reach + 1));
      out[i] = bt_faults_median (nine, 2 * reach + 1);
    }
  return out;
}

static gboolean
is_dark (double absorbance, double noise, double usual)
{
  return absorbance > DARK_ABSORBANCE && noise > DARK_NOISE && noise > 10 * usual;
}

/* Where light runs out, noise explodes and the absorbance stops at the instrument's ceiling. */
void
bt_faults_find_saturated (const double *energy_ev, const double *absorbance, const double *noise, gsize n, GArray *saturated)
{
  g_autofree double *sorted = g_memdup2 (noise, sizeof (double) * n);
  const double usual = bt_faults_median (sorted, n);
  g_autofree double *level = NULL;
  double ceiling = -INFINITY;
  gsize i = 0, count = 0;

  for (gsize k = 0; k < n; k++)
    {
      ceiling = fmax (ceiling, absorbance[k]);
      count += is_dark (absorbance[k], noise[k], usual) ? 1 : 0;
    }
  if (ceiling > DARK_ABSORBANCE && clipped_at (absorbance, n, ceiling) >= CLIPPED_POINTS)
    level = g_memdup2 (absorbance, sizeof (double) * n);
  else if (count >= 8)
    {
      /* From what is read in the dark; some instruments write a number of their own where there was no light at all. */
      level = smooth (absorbance, n);
      count = 0;
      for (gsize k = 0; k < n; k++)
        if (is_dark (absorbance[k], noise[k], usual))
          sorted[count++] = level[k];
      /* Dark readings begin well below the ceiling, which the upper ones show better than the middle; but no further up, for the numbers of their own. */
      ceiling = bt_faults_median (sorted, count);
      ceiling = fmin (sorted[count * 9 / 10], ceiling + 0.3);
    }
  else
    return;
  /* One decade below the ceiling (A > -log10 (s) - 1, common practice) stray light takes log10 (1.1) = 0.041 of the absorbance: 1.4 % below a ceiling of
   * 4, 2 % of 3, 2.7 % of 2.5. A share of 1 % would leave out more, not less, and below a ceiling of 2 everything. */
  while (i < n)
    {
      gsize k = i, bad = 0;

      if (level[i] < ceiling - 1)
        {
          i++;
          continue;
        }
      /* Noise may lift points over the line and dip others below it: gaps of up to five points do not end a range. */
      for (gsize gap = 0; k < n && gap < 5; k++)
        {
          gap = level[k] < ceiling - 1 ? gap + 1 : 0;
          bad += (noise[k] > DARK_NOISE && noise[k] > 10 * usual) || level[k] >= ceiling ? 1 : 0;
        }
      if (bad >= 8)
        {
          BtRange range = { energy_ev[i], energy_ev[k - 1] };

          g_array_append_val (saturated, range);
        }
      i = k;
    }
}
