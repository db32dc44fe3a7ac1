/* A film: a spectrum, a thickness with its uncertainty, a substrate, a blank, notes; and its light path. */
#ifndef BANDTALLY_FILM_H
#define BANDTALLY_FILM_H

#include <math.h>

#include <bandtally/spectrum.h>

G_BEGIN_DECLS

#define BT_TYPE_FILM (bt_film_get_type ())
G_DECLARE_FINAL_TYPE (BtFilm, bt_film, BT, FILM, GObject)

/* Properties (all with notify): "label", "lot", "substrate", "notes" (strings), "thickness-nm", "thickness-u-nm" (0 = unknown),
 * "blank", "reflectance" (BtSpectrum, nullable), "sheet-resistance-ohm", "sheet-resistance-u-ohm" (0 = unknown). Taken from the file's preamble where it
 * states them ("lot", "film", "thickness nm", "thickness u nm", "thickness readings nm", "sheet resistance ohm", "sheet resistance u ohm",
 * "substrate"). */
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
/**
 * bt_film_set_thickness_readings:
 * @nm: (array length=n): readings across the film, above 0; none to forget them
 *
 * The thickness becomes their mean and its uncertainty s / sqrt (n) (JCGM 100:2008 4.2; one reading: unknown). bt_film_set_thickness() forgets them.
 */
void bt_film_set_thickness_readings (BtFilm *self, const double *nm, gsize n);
/* (array length=n) (nullable): owned by the film. */
const double *bt_film_get_thickness_readings (BtFilm *self, gsize *n);
/* Of the film, dc, in ohm per square; 0 = unknown. */
double bt_film_get_sheet_resistance_ohm (BtFilm *self);
double bt_film_get_sheet_resistance_u_ohm (BtFilm *self);
void bt_film_set_sheet_resistance (BtFilm *self, double ohm, double u_ohm);
/* Reflectance of film and substrate as measured from the film's side; a spectrum in BT_Y_REFLECTANCE or BT_Y_REFLECTANCE_PERCENT. */
BtSpectrum *bt_film_get_reflectance (BtFilm *self);
void bt_film_set_reflectance (BtFilm *self, BtSpectrum *reflectance);
BtSpectrum *bt_film_get_blank (BtFilm *self);
void bt_film_set_blank (BtFilm *self, BtSpectrum *blank);

/**
 * BtLightPathKind:
 * @BT_LIGHT_PATH_BLANK_RATIO: A = A_film - A_blank; reflection beyond the blank's is left out
 * @BT_LIGHT_PATH_REFLECTION: reflection at both faces taken off exactly, T = (1 - R)^2 e^-at / (1 - R^2 e^-2at) (incoherent bounces in a slab;
 *   textbooks such as Pankove's or Fox's). Valid for a slab much thicker than the coherence length of the light
 * @BT_LIGHT_PATH_THIN_FILM: a conducting film much thinner than the wavelength on a transparent substrate, T / T_blank = |1 + Z0 s / (1 + n_s)|^-2
 *   (Glover and Tinkham 1957; Tinkham's text), s real. The absorbance is 2 Z0 s / ((1 + n_s) ln 10): that of the blank ratio for a weak
 *   film, freed of its flattening
 */
typedef enum { BT_LIGHT_PATH_BLANK_RATIO, BT_LIGHT_PATH_REFLECTION, BT_LIGHT_PATH_THIN_FILM, BT_N_LIGHT_PATHS } BtLightPathKind;

/**
 * BtLightPath:
 * @reflectance: of one face, 0 to 1, the same at all energies; NAN: from the substrate's published index
 * @substrate_index: refractive index of the substrate where its dispersion is not published; 0: from the substrate's name
 * @reflectance_u: its standard uncertainty, or that of a measured reflectance; 0: unknown, left out
 *
 * How a reading becomes the film's own absorbance. Where the film has a measured reflectance, the reflection path uses that instead of
 * @reflectance.
 */
typedef struct { BtLightPathKind kind; double reflectance, substrate_index, reflectance_u; } BtLightPath;
#define BT_LIGHT_PATH_INIT { BT_LIGHT_PATH_BLANK_RATIO, NAN, 0, 0 }

/* "blank ratio", "reflection", "thin film": in files. FALSE where @name is none. */
const char *bt_light_path_name (BtLightPathKind kind);
gboolean bt_light_path_from_name (const char *name, BtLightPathKind *kind);

/* Refractive index of a substrate by its published dispersion; NAN where the name is unknown or the wavelength outside the published range. */
double bt_substrate_index (const char *name, double wavelength_nm);
/* (nullable): where the dispersion was published. */
const char *bt_substrate_source (const char *name);
/* (array zero-terminated=1): names with a published dispersion. */
const char *const *bt_substrate_names (void);

/* Reflectance of one face at normal incidence from air, ((n - 1) / (n + 1))^2 without absorption. */
double bt_face_reflectance (double index);
/* Transmittance of a slab of optical depth alpha t whose faces reflect @reflectance, and its exact inverse: alpha t, NAN where no depth gives
 * that transmittance. */
double bt_slab_transmittance (double reflectance, double depth);
double bt_slab_depth (double reflectance, double transmittance);
/* Impedance of free space, ohm (CODATA 2022), and the universal sheet conductance e^2 / (4 hbar), S. */
#define BT_Z0_OHM 376.730313412
#define BT_UNIVERSAL_CONDUCTANCE_S 6.085337e-5
/* T / T_blank of a thin film of this sheet conductance (S) on a substrate of this index (1: free-standing), and its inverse. */
double bt_sheet_transmittance (double conductance_s, double substrate_index);
double bt_sheet_conductance (double transmittance_ratio, double substrate_index);
/* Ratio of dc to optical conductivity: Z0 / (R (1 + n_s) ((T / T_blank)^-1/2 - 1)) at 550 nm, R the sheet resistance in ohm (Dressel and Gruner;
 * De and Coleman, MRS Bull. 36, 774 (2011), free-standing form for n_s = 1). */
double bt_conductivity_ratio (double sheet_resistance_ohm, double transmittance_ratio, double substrate_index);

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

/**
 * bt_film_light_path:
 * @how: (nullable): blank ratio where %NULL
 *
 * Takes the film's reading along its light path. The blank is interpolated onto the film's axis with its noise; without one A = A_film,
 * flagged "no-blank". Points that the blank does not cover, or that no film could give, are dropped and flagged.
 *
 * Returns: (transfer full): the film's own absorbance
 */
BtCurve *bt_film_light_path (BtFilm *self, const BtLightPath *how);
void bt_curve_free (BtCurve *curve);

/* alpha = ln(10) A / t, base e, in 1/cm; t in nm. NAN where @thickness_nm is not above 0. */
double bt_alpha_per_cm (double absorbance, double thickness_nm);
/* Its standard uncertainty by first-order propagation (JCGM 100:2008 eq. 10); 0 for an unknown part. */
double bt_alpha_u_per_cm (double absorbance, double absorbance_u, double thickness_nm, double thickness_u_nm);
/* 1 - 10^-A: the share of light taken up, reflection left out. */
double bt_absorptance (double absorbance);

G_END_DECLS

#endif
