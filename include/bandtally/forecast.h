/* Forecast: the spectrum that a given population of tubes, a tail, noise and an instrument's faults would give. For trying
 * recipes, for the demo lots and for testing whether intervals hold what they promise. */
#ifndef BANDTALLY_FORECAST_H
#define BANDTALLY_FORECAST_H

#include <bandtally/model.h>

G_BEGIN_DECLS

/**
 * BtForecast:
 * @window: diameters of the population: abundance means share of the carbon mass, normally distributed over the tubes that
 *   exist within four spreads, metallic and semiconducting tubes each normalised to their part
 * @fraction: semiconducting share of the carbon mass, 0 to 1
 * @strength_ratio: S22 area per carbon over M11 area per carbon
 * @shift_ev: red shift of the film, eV
 * @abundance_scatter: relative standard deviation of each tube's abundance about the distribution
 * @jitter_ev: standard deviation of each tube's transition energies about the reference, eV
 * @fwhm_ev: (array fixed-size=6): width of one tube's line, by #BtGroup, eV
 * @lorentzian: share of each line's area in a Lorentzian of the same width (0 Gaussian, 1 Lorentzian)
 * @sideband: share of S11's and S22's area in a phonon sideband 0.2 eV above
 * @s22_absorbance: height that S22's crown would have in 100 nm of a wholly semiconducting film, were its lines Gaussian and
 *   without sideband, scatter, jitter and doping; sets the scale of all bands
 * @tail: the featureless part
 * @more_tail: added to it; height and offset 0 for none
 * @low_nm, @high_nm, @step_nm: the axis
 * @noise: standard deviation of the absorbance at A = 0; grows as (1 + 10^A) / 2
 * @step_at_nm, @step_size: detector change; 0 for none: added to the absorbance above @step_at_nm
 * @bleach: 0 to 1: share of S11's area lost to doping (S22 loses a tenth of it)
 * @ceiling: the instrument's highest absorbance, by stray light of 10^-ceiling: -log10 ((10^-A + s) / (1 + s)); 0 for none
 * @thickness_nm, @thickness_u_nm: stated in the file; bands and tail scale with thickness / 100 nm
 * @seed: of the random numbers; the same seed gives the same file
 *
 * Areas per carbon against M11: S11 1.6, S22 1, S33 0.6, S44 0.5, each times @strength_ratio; M22 0.5; M11's two branches
 * share its area. Invented, in the published order S11 > S22 > S33. So (A_S22 / k) / (A_S22 / k + A_M11) is @fraction exactly, sidebands
 * counted with their bands, for an undoped film. Energies: #BT_REFERENCE_EMPIRICAL.
 */
typedef struct {
  BtDiameterWindow window;
  double fraction, strength_ratio, shift_ev;
  double abundance_scatter, jitter_ev;
  double fwhm_ev[BT_N_GROUPS];
  double lorentzian, sideband, s22_absorbance;
  BtTail tail, more_tail;
  double low_nm, high_nm, step_nm;
  double noise, step_at_nm, step_size, bleach, ceiling;
  double thickness_nm, thickness_u_nm;
  guint64 seed;
} BtForecast;

/* A plain large-diameter film: 1.4 nm, spread 0.1 nm, two thirds semiconducting, 300-2500 nm, noise 5e-4, no faults. */
void bt_forecast_init (BtForecast *forecast);
/* Gives it a tail of another kind, of common steepness and as high at 500 nm as the one it had; the offset goes. */
void bt_forecast_set_tail (BtForecast *forecast, BtTailKind kind);
/* Number of points on its axis; 0 where the numbers make no axis. */
gsize bt_forecast_n_points (const BtForecast *forecast);
/* Fills wavelength_nm[n] and absorbance[n] (ascending wavelength). FALSE with @error set where the numbers make no film. */
gboolean bt_forecast_compute (const BtForecast *forecast, double *wavelength_nm, double *absorbance, GError **error);
/* (transfer full): the file's text: a preamble of "# key = value" lines that says the data are invented and how, then
 * "wavelength_nm,absorbance" rows. */
char *bt_forecast_to_text (const BtForecast *forecast, const char *film, const char *lot, GError **error);

G_END_DECLS

#endif
