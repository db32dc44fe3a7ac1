/* Where ticks stand. */
#include "ticks.h"

#include <math.h>

double
bt_ticks_step (double low, double high, double length, double gap, int *decimals)
{
  static const double mantissas[] = { 1, 2, 5 };
  double wanted = (high - low) * gap / length;
  int power;

  if (decimals != NULL)
    *decimals = 0;
  if (!(wanted > 0) || !isfinite (wanted))
    return 0;
  for (power = (int) floor (log10 (wanted)) - 1;; power++)
    for (gsize m = 0; m < G_N_ELEMENTS (mantissas); m++)
      {
        double step = mantissas[m] * pow (10, power);

        if (step >= wanted)
          {
            if (decimals != NULL)
              *decimals = power < 0 ? -power : 0;
            return step;
          }
      }
}

gsize
bt_ticks_wavelengths (double low_nm, double high_nm, double *out, gsize max)
{
  /* Multiples of each, unless a rounder one has them already. */
  static const int rounds[] = { 1000, 500, 200, 100, 50, 20, 10, 5, 2, 1 };
  gsize n = 0;

  for (gsize r = 0; r < G_N_ELEMENTS (rounds); r++)
    {
      if ((high_nm - low_nm) / rounds[r] > 200)
        break;
      for (int k = (int) ceil (low_nm / rounds[r]); k * rounds[r] <= high_nm && n < max; k++)
        {
          gboolean had = k <= 0;

          for (gsize q = 0; q < r; q++)
            had = had || k * rounds[r] % rounds[q] == 0;
          if (!had)
            out[n++] = k * rounds[r];
        }
    }
  return n;
}
