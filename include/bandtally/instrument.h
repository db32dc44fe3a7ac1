/* Check of a spectrophotometer against published standards of wavelength and absorbance. */
#ifndef BANDTALLY_INSTRUMENT_H
#define BANDTALLY_INSTRUMENT_H

#include <bandtally/spectrum.h>

G_BEGIN_DECLS

typedef enum { BT_STANDARD_HOLMIUM, BT_STANDARD_DICHROMATE } BtStandard;
typedef enum { BT_CHECK_PASSED, BT_CHECK_FAILED, BT_CHECK_NOT_JUDGED, BT_CHECK_NOT_MEASURED } BtCheckState;

/**
 * BtCheckLine:
 * @wavelength_nm: published position
 * @published: published value: the position itself (nm), or the absorbance
 * @found: what the instrument gave; NAN where it was not measured or no band was found
 * @found_u: its standard uncertainty from noise
 * @low, @high: tolerance, NAN where nothing is judged by this line
 * @source: where the value was published
 *
 * One published value against what was read.
 */
typedef struct {
  double wavelength_nm, published, found, found_u, low, high;
  BtCheckState state;
  const char *source;
} BtCheckLine;

/**
 * BtInstrumentCheck:
 * @lines: (element-type BtCheckLine): by wavelength
 * @deviation: mean of found less published (nm or absorbance)
 * @deviation_u: standard uncertainty that a reading has from it: root mean square of the deviations
 * @state: failed where any judged line failed; passed where at least one was judged and none failed
 */
typedef struct {
  BtStandard standard;
  double concentration_mg_l;
  GArray *lines;
  double deviation, deviation_u;
  BtCheckState state;
} BtInstrumentCheck;

/* Concentrations of dichromate with published values, mg/L; ends with 0. */
const double *bt_instrument_concentrations (void);
/**
 * bt_instrument_check:
 * @spectrum: of the standard, over wavelength or energy, as absorbance or transmittance
 * @concentration_mg_l: of dichromate: 20, 40, 60, 80 or 100; ignored for holmium
 *
 * Finds holmium's bands as local maxima of absorbance near their published positions (parabola through the top), or reads dichromate's
 * absorbances at their wavelengths, and compares.
 *
 * Returns: (transfer full): the outcome, or %NULL with @error set (unknown concentration, or nothing of the standard in the range)
 */
BtInstrumentCheck *bt_instrument_check (BtSpectrum *spectrum, BtStandard standard, double concentration_mg_l, GError **error);
/* (transfer full) */
BtInstrumentCheck *bt_instrument_check_copy (const BtInstrumentCheck *check);
void bt_instrument_check_free (BtInstrumentCheck *check);
/* Translated: a word for a line's state; a sentence for the whole outcome. */
const char *bt_check_state_title (BtCheckState state);
const char *bt_instrument_check_outcome (const BtInstrumentCheck *check);
/* (transfer full): the outcome, and the deviation with what it means, as translated sentences, a line each. */
char *bt_instrument_check_summary (const BtInstrumentCheck *check);
/* Translated: cautions for the standards' solutions. */
const char *bt_instrument_check_caution (void);
/* (transfer full): the result as translated text, one page. @unix_s: the date it bears. */
char *bt_instrument_check_to_text (const BtInstrumentCheck *check, BtSpectrum *spectrum, gint64 unix_s);

G_END_DECLS

#endif
