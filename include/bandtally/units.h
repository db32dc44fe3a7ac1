/* Units and exact constants.
 *
 * Everything inside the core is in electronvolt (energy axis), decadic absorbance and nanometre (thickness, diameter);
 * other units exist only where a file is read or a number is shown.
 */
#ifndef BANDTALLY_UNITS_H
#define BANDTALLY_UNITS_H

#include <glib-object.h>

G_BEGIN_DECLS

/* h c / e in eV nm from the defining constants of the SI (SI Brochure, 9th edition, 2019):
 * 6.62607015e-34 J s x 299792458 m/s / 1.602176634e-19 C. */
#define BT_HC_EV_NM 1239.8419843320026
/* ln 10: from decadic absorbance to the natural (base e) absorption coefficient. */
#define BT_LN10 2.302585092994046
/* Area of a Gaussian of unit height and unit FWHM: sqrt(pi / (4 ln 2)). */
#define BT_GAUSSIAN_AREA 1.0644670194312262

/**
 * BtXUnit:
 *
 * What the first column of a file counts.
 */
typedef enum { BT_X_NM, BT_X_UM, BT_X_PER_CM, BT_X_EV } BtXUnit;

/**
 * BtYUnit:
 *
 * What the reading is. Absorbance is decadic; transmittance is 0 to 1 or per cent; alpha is base e, per cm.
 */
typedef enum {
  BT_Y_ABSORBANCE,
  BT_Y_TRANSMITTANCE,
  BT_Y_TRANSMITTANCE_PERCENT,
  BT_Y_REFLECTANCE,
  BT_Y_REFLECTANCE_PERCENT,
  BT_Y_ALPHA_PER_CM
} BtYUnit;

/**
 * BtRange:
 * @low_ev: lower end, eV
 * @high_ev: upper end, eV
 *
 * A closed range of energies.
 */
typedef struct { double low_ev, high_ev; } BtRange;

double bt_energy_ev_from_x (double x, BtXUnit unit);
double bt_x_from_energy_ev (double energy_ev, BtXUnit unit);
static inline double bt_nm_from_ev (double energy_ev) { return BT_HC_EV_NM / energy_ev; }
static inline double bt_ev_from_nm (double wavelength_nm) { return BT_HC_EV_NM / wavelength_nm; }

/* "nm", "um", "1/cm", "eV": the spelling in files and on the command line (never translated). */
const char *bt_x_unit_name (BtXUnit unit);
/* "absorbance", "transmittance", "transmittance %", "reflectance", "reflectance %", "alpha 1/cm" */
const char *bt_y_unit_name (BtYUnit unit);

G_END_DECLS

#endif
