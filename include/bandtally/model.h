/* Line shapes, tails, and the model of a film: a tail and bands, in absorbance over energy. */
#ifndef BANDTALLY_MODEL_H
#define BANDTALLY_MODEL_H

#include <bandtally/band_plan.h>

G_BEGIN_DECLS

/**
 * BtTailKind:
 * @BT_TAIL_PLASMON: pi-plasmon Lorentzian in energy, h / (1 + ((E - E0) / g)^2)
 * @BT_TAIL_POWER: power law in wavelength, h lambda^-b
 * @BT_TAIL_EXPONENTIAL: exponential in wavelength, h exp(-b lambda)
 *
 * Each goes with a constant offset.
 */
typedef enum { BT_TAIL_PLASMON, BT_TAIL_POWER, BT_TAIL_EXPONENTIAL, BT_N_TAILS } BtTailKind;

/* "plasmon", "power", "exponential": in files; never translated. */
const char *bt_tail_name (BtTailKind kind);
/* Translated, for people. */
const char *bt_tail_title (BtTailKind kind);
/* In one word. */
const char *bt_tail_short_title (BtTailKind kind);
gboolean bt_tail_from_name (const char *name, BtTailKind *kind);

/* The phonon sideband of S11 and S22: this far above its band, eV, and this much wider (Perebeinos et al., Phys. Rev. Lett. 94, 027402
 * (2005), from memory; width from common practice). */
#define BT_SIDEBAND_EV 0.2
#define BT_SIDEBAND_WIDTH 1.8

/**
 * BtTail:
 * @height: amplitude: the tail's value at its reference point, absorbance (plasmon: at its maximum; others: at 500 nm)
 * @shape: plasmon: E0 (eV) and g (half width, eV); power: b and unused; exponential: b (1/nm) and unused
 * @offset: constant, absorbance
 */
typedef struct { BtTailKind kind; double height; double shape[2]; double offset; } BtTail;
/* out[i] = tail at energy_ev[i], offset included. */
void bt_tail_eval (const BtTail *tail, const double *energy_ev, gsize n, double *out);

/* out[i] = exp (-4 ln 2 ((E - centre) / fwhm)^2) */
void bt_gaussian_eval (const double *energy_ev, gsize n, double centre_ev, double fwhm_ev, double *out);
/* Unit-height Lorentzian of this centre and FWHM. */
void bt_lorentzian_eval (const double *energy_ev, gsize n, double centre_ev, double fwhm_ev, double *out);

G_END_DECLS

#endif
