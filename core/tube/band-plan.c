/* Where the bands of a film are expected. */
#include <bandtally/band_plan.h>

#include <math.h>

#define FWHM_PER_SIGMA 2.3548200450309493

/* Width of one tube's line in a film and the narrowest single band worth fitting, eV (common practice). */
static const double line_fwhm_ev[BT_N_GROUPS] = { [BT_S11] = 0.08, [BT_S22] = 0.115, [BT_M11] = 0.155, [BT_S33] = 0.18, [BT_S44] = 0.20,
                                                  [BT_M22] = 0.20 };
static const double narrowest_ev[BT_N_GROUPS] = { [BT_S11] = 0.055, [BT_S22] = 0.08, [BT_M11] = 0.11, [BT_S33] = 0.12, [BT_S44] = 0.12,
                                                  [BT_M22] = 0.12 };

/* Mean and standard deviation of a group's energies over the tubes of the window, weighted by a normal distribution. */
static void
group_statistics (const GArray *tubes, BtDiameterWindow window, BtGroup group, double *mean, double *sigma)
{
  double weight = 0, sum = 0, squares = 0;

  for (guint i = 0; i < tubes->len; i++)
    {
      BtTube tube = g_array_index (tubes, BtTube, i);
      double z = (bt_tube_diameter_nm (tube) - window.mean_nm) / window.spread_nm, w = exp (-z * z / 2);

      for (int branch = 0; branch < 2; branch++)
        {
          double e = bt_tube_energy_ev (tube, group, branch, BT_REFERENCE_EMPIRICAL);

          if (isnan (e))
            continue;
          weight += w;
          sum += w * e;
          squares += w * e * e;
        }
    }
  /* A window so narrow that no tube of this kind lies in it. */
  *mean = weight > 0 ? sum / weight : bt_group_energy_ev (window.mean_nm, group, BT_REFERENCE_EMPIRICAL);
  *sigma = weight > 0 ? sqrt (fmax (0, squares / weight - *mean * *mean)) : 0;
}

void
bt_band_plan_init (BtBandPlan *plan, BtDiameterWindow window, double shift_ev, BtRange range)
{
  const double reach = fmax (3 * window.spread_nm, 0.05);
  g_autoptr (GArray) tubes = bt_tubes_in_diameter (fmax (window.mean_nm - reach, 0.3), window.mean_nm + reach);

  plan->window = window;
  plan->shift_ev = shift_ev;
  for (guint g = 0; g < BT_N_GROUPS; g++)
    {
      BtBandWindow *band = &plan->bands[g];
      double mean, sigma, low, high;
      /* Published sets disagree by this much at this diameter; none of them is right to better. */
      double doubt = 0.06 + fabs (bt_group_energy_ev (window.mean_nm, (BtGroup) g, BT_REFERENCE_EMPIRICAL)
                                  - bt_group_energy_ev (window.mean_nm, (BtGroup) g, BT_REFERENCE_SCALING));

      group_statistics (tubes, window, (BtGroup) g, &mean, &sigma);
      low = bt_group_energy_ev (window.mean_nm + 2 * window.spread_nm, (BtGroup) g, BT_REFERENCE_EMPIRICAL);
      high = bt_group_energy_ev (fmax (window.mean_nm - 2 * window.spread_nm, 0.3), (BtGroup) g, BT_REFERENCE_EMPIRICAL);
      band->group = (BtGroup) g;
      band->centre_ev = mean - shift_ev;
      band->low_ev = low - shift_ev - doubt;
      band->high_ev = high - shift_ev + doubt;
      band->fwhm_ev = hypot (FWHM_PER_SIGMA * sigma, line_fwhm_ev[g]);
      band->fwhm_low_ev = narrowest_ev[g];
      band->fwhm_high_ev = 1.6 * band->fwhm_ev;
      band->in_range = band->centre_ev > range.low_ev && band->centre_ev < range.high_ev;
    }
}

double
bt_band_plan_overlap (const BtBandPlan *plan)
{
  const BtBandWindow *s22 = &plan->bands[BT_S22], *m11 = &plan->bands[BT_M11];
  double common = fmin (s22->high_ev, m11->high_ev) - fmax (s22->low_ev, m11->low_ev);

  return CLAMP (common / (m11->high_ev - m11->low_ev), 0, 1);
}
