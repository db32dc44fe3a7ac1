/* Band plan: which bands are expected where, from the reference energies and a diameter window. */
#ifndef BANDTALLY_BAND_PLAN_H
#define BANDTALLY_BAND_PLAN_H

#include <bandtally/tube.h>

G_BEGIN_DECLS

/**
 * BtDiameterWindow:
 * @mean_nm: mean diameter
 * @spread_nm: standard deviation of the diameters
 */
typedef struct { double mean_nm, spread_nm; } BtDiameterWindow;

/**
 * BtBandWindow:
 * @centre_ev: where the group is expected in a film, eV
 * @low_ev: lowest centre allowed
 * @high_ev: highest centre allowed
 * @fwhm_ev: expected width of the whole group
 * @fwhm_low_ev: narrowest single band allowed
 * @fwhm_high_ev: widest single band allowed
 * @in_range: whether the centre lies in the fitted range
 */
typedef struct {
  BtGroup group;
  double centre_ev, low_ev, high_ev;
  double fwhm_ev, fwhm_low_ev, fwhm_high_ev;
  gboolean in_range;
} BtBandWindow;

/**
 * BtBandPlan:
 * @window: the diameters
 * @shift_ev: red shift of films against single tubes in suspension, eV (taken off the reference energies)
 * @bands: one window a group, indexed by #BtGroup
 */
typedef struct {
  BtDiameterWindow window;
  double shift_ev;
  BtBandWindow bands[BT_N_GROUPS];
} BtBandPlan;

/* Fills @plan for films of tubes in @window measured over @range. Windows of neighbouring groups may overlap: see
 * bt_band_plan_overlap(). */
void bt_band_plan_init (BtBandPlan *plan, BtDiameterWindow window, double shift_ev, BtRange range);
/* Share (0 to 1) of M11's window that S22's window covers. */
double bt_band_plan_overlap (const BtBandPlan *plan);

/**
 * bt_diameter_window_propose:
 * @energy_ev: (array length=n): ascending
 * @absorbance: (array length=n)
 * @window: (out): the proposal
 * @alternative: (out) (optional): another window that explains the spectrum nearly as well; mean 0 where there is none
 *
 * Proposes the diameter window that best explains the spectrum's own second-derivative minima.
 *
 * Returns: %FALSE where the data show no band to go by; @window is then 1.4 nm, 0.1 nm
 */
gboolean bt_diameter_window_propose (const double *energy_ev, const double *absorbance, gsize n, BtDiameterWindow *window,
                                     BtDiameterWindow *alternative);

G_END_DECLS

#endif
