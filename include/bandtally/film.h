/* A film: a spectrum, a thickness with its uncertainty, a substrate, a blank, notes; and its light path. */
#ifndef BANDTALLY_FILM_H
#define BANDTALLY_FILM_H

#include <bandtally/spectrum.h>

G_BEGIN_DECLS

#define BT_TYPE_FILM (bt_film_get_type ())
G_DECLARE_FINAL_TYPE (BtFilm, bt_film, BT, FILM, GObject)

/* Properties (all with notify): "label", "lot", "substrate", "notes" (strings), "thickness-nm", "thickness-u-nm" (0 = unknown),
 * "blank" (BtSpectrum, nullable). Taken from the file's preamble where it states them ("lot", "film", "thickness nm",
 * "thickness u nm", "substrate"). */
BtFilm *bt_film_new (BtSpectrum *spectrum);
/* (transfer full): with the same spectrum and blank. */
BtFilm *bt_film_copy (BtFilm *self);
BtSpectrum *bt_film_get_spectrum (BtFilm *self);
const char *bt_film_get_label (BtFilm *self);
void bt_film_set_label (BtFilm *self, const char *label);
const char *bt_film_get_lot (BtFilm *self);
void bt_film_set_lot (BtFilm *self, const char *lot);
const char *bt_film_get_substrate (BtFilm *self);
void bt_film_set_substrate (BtFilm *self, const char *substrate);
const char *bt_film_get_notes (BtFilm *self);
void bt_film_set_notes (BtFilm *self, const char *notes);
double bt_film_get_thickness_nm (BtFilm *self);
double bt_film_get_thickness_u_nm (BtFilm *self);
void bt_film_set_thickness (BtFilm *self, double thickness_nm, double thickness_u_nm);
BtSpectrum *bt_film_get_blank (BtFilm *self);
void bt_film_set_blank (BtFilm *self, BtSpectrum *blank);

/**
 * BtCurve:
 * @n: number of points
 * @energy_ev: (array length=n): ascending
 * @absorbance: (array length=n): of the film alone, decadic
 * @absorbance_u: (array length=n): standard uncertainty from noise (film and blank)
 * @path: one translated sentence naming the light path taken
 * @flags: (element-type BtFlag): what the light path had to leave out
 *
 * A film's own absorbance after its light path.
 */
typedef struct {
  gsize n;
  double *energy_ev, *absorbance, *absorbance_u;
  char *path;
  GPtrArray *flags;
} BtCurve;

/* (transfer full): A = A_film - A_blank, the blank interpolated onto the film's axis with its noise; without a blank A = A_film,
 * flagged "no-blank". Points that the blank does not cover are dropped and flagged. */
BtCurve *bt_film_light_path (BtFilm *self);
void bt_curve_free (BtCurve *curve);

/* alpha = ln(10) A / t, base e, in 1/cm; t in nm. NAN where @thickness_nm is not above 0. */
double bt_alpha_per_cm (double absorbance, double thickness_nm);
/* Its standard uncertainty by first-order propagation (JCGM 100:2008 eq. 10); 0 for an unknown part. */
double bt_alpha_u_per_cm (double absorbance, double absorbance_u, double thickness_nm, double thickness_u_nm);
/* 1 - 10^-A: the share of light taken up, reflection left out. */
double bt_absorptance (double absorbance);

G_END_DECLS

#endif
