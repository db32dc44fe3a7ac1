/* Lines of single tubes over an axis. */
#include "ensemble-lines.h"

#include <math.h>

#define LN16 2.772588722239781  /* 4 ln 2 */
#define GAUSSIAN_AREA 1.0644670194312262 /* sqrt (pi / (4 ln 2)) */

void
bt_ensemble_add_line (const double *energy_ev, gsize n, double centre_ev, double fwhm_ev, double wings, double factor, const BtLineColumns *out)
{
  const double inverse = 1 / fwhm_ev, gauss = factor * inverse / GAUSSIAN_AREA, lorentz = factor * inverse / (G_PI / 2);
  const double gauss_share = gauss * (1 - wings), lorentz_share = lorentz * wings;

  for (gsize i = 0; i < n; i++)
    {
      const double x = (energy_ev[i] - centre_ev) * inverse, x2 = x * x, l = 1 / (1 + 4 * x2), l2 = l * l;
      const double g = LN16 * x2 < 40 ? exp (-LN16 * x2) : 0;
      const double slope = gauss_share * 2 * LN16 * g + lorentz_share * 8 * l2, value = gauss_share * g + lorentz_share * l;

      out->value[i] += value;
      out->centre[i] += slope * x * inverse;
      out->width[i] += slope * x2 - value;
      out->wings[i] += lorentz * l - gauss * g;
    }
}

void
bt_ensemble_add_value (const double *energy_ev, gsize n, double centre_ev, double fwhm_ev, double wings, double factor, double *out)
{
  const double inverse = 1 / fwhm_ev;
  const double gauss_share = (1 - wings) * factor * inverse / GAUSSIAN_AREA, lorentz_share = wings * factor * inverse / (G_PI / 2);

  for (gsize i = 0; i < n; i++)
    {
      const double x = (energy_ev[i] - centre_ev) * inverse, x2 = x * x;

      out[i] += lorentz_share / (1 + 4 * x2) + (LN16 * x2 < 40 ? gauss_share * exp (-LN16 * x2) : 0);
    }
}
