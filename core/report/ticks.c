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
bt_ticks_wavelengths (double low_nm, double high_nm, BtRoundNm *out, gsize max)
{
  /* Multiples of each, unless a rounder one has them already. No twenties nor twos: between fifties they would stand unevenly. */
  static const int rounds[] = { 1000, 500, 200, 100, 50, 10, 5, 1 };
  gint64 scale = 1;
  int decimals = 0;
  gsize n = 0;

  if (!(low_nm > 0) || !(high_nm > low_nm))
    return 0;
  for (; (high_nm - low_nm) * (double) scale < 5 && decimals < 6; decimals++)
    scale *= 10;
  for (gsize r = 0; r < G_N_ELEMENTS (rounds) && (high_nm - low_nm) * (double) scale / rounds[r] <= 400; r++)
    for (gint64 k = (gint64) ceil (low_nm * (double) scale / rounds[r]); (double) (k * rounds[r]) <= high_nm * (double) scale && n < max; k++)
      {
        gboolean had = FALSE;

        for (gsize q = 0; q < r; q++)
          had = had || k * rounds[r] % rounds[q] == 0;
        if (!had)
          out[n++] = (BtRoundNm){ (double) (k * rounds[r]) / (double) scale, rounds[r] / (double) scale, decimals };
      }
  return n;
}
