/* Steps of the detector in a film's own absorbance: measured where they are stated, and taken off. */
#include <bandtally/film.h>

#include <math.h>

#include <glib/gi18n-lib.h>

#include "../spectrum/faults-private.h"

gboolean
bt_curve_measure_step (const BtCurve *curve, double energy_ev, BtStep *step)
{
  return bt_faults_measure_step (curve->energy_ev, curve->absorbance, curve->absorbance_u, curve->n, energy_ev, step);
}

static void
correct (BtCurve *curve, const BtStep *step, gboolean keep_visible)
{
  for (gsize i = 0; i < curve->n; i++)
    {
      const gboolean above = curve->energy_ev[i] > step->energy_ev;

      /* The visible side has the higher energies. */
      if (above == keep_visible)
        continue;
      curve->absorbance[i] += keep_visible ? step->size : -step->size;
      curve->parts[BT_PART_STEP][i] = hypot (curve->parts[BT_PART_STEP][i], step->size_u);
    }
}

void
bt_curve_correct_steps (BtCurve *curve, const BtStep *steps, gsize n_steps, gboolean keep_visible)
{
  if (n_steps > 0 && curve->parts[BT_PART_STEP] == NULL)
    curve->parts[BT_PART_STEP] = g_new0 (double, MAX (curve->n, 1));
  for (gsize k = 0; k < n_steps; k++)
    {
      correct (curve, &steps[k], keep_visible);
      g_ptr_array_add (curve->flags,
                       bt_flag_new ("detector-step-corrected",
                                    keep_visible ? _ ("The step of %+.4f(%.4f) at %.0f nm was taken off: longer wavelengths were moved onto shorter ones. Its "
                                                      "uncertainty is in the readings there.")
                                                 : _ ("The step of %+.4f(%.4f) at %.0f nm was taken off: shorter wavelengths were moved onto longer ones. Its "
                                                      "uncertainty is in the readings there."),
                                    -steps[k].size, steps[k].size_u, bt_nm_from_ev (steps[k].energy_ev)));
    }
}
