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
/* (transfer full): all that is known of a film, with another reading of it. */
BtFilm *bt_film_copy_with_spectrum (BtFilm *self, BtSpectrum *spectrum);
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
/* Reflectance of one face and optical depth of a slab from its whole reflectance R = r (1 + T e^-at) and transmittance T together, an exact inverse (both
 * bounces summed; the same textbooks). Depths down to -0.03 pass, as
 * noise may lift R + T a little above 1. FALSE where no slab gives both (R + T well above 1, or values below 0). */
gboolean bt_slab_invert (double reflectance, double transmittance, double *face, double *depth);
/* T / T_blank of a thin film of this sheet conductance (S) on a substrate of this index (1: free-standing), and its inverse. */
double bt_sheet_transmittance (double conductance_s, double substrate_index);
double bt_sheet_conductance (double transmittance_ratio, double substrate_index);
/* Ratio of dc to optical conductivity: Z0 / (R (1 + n_s) ((T / T_blank)^-1/2 - 1)) at 550 nm, R the sheet resistance in ohm (Dressel and Gruner;
 * De and Coleman, MRS Bull. 36, 774 (2011), free-standing form for n_s = 1). */
double bt_conductivity_ratio (double sheet_resistance_ohm, double transmittance_ratio, double substrate_index);
/* Figure of merit of a transparent conductor, T^10 / R in siemens (Haacke, J. Appl. Phys. 47, 4086 (1976)), at 550 nm. */
double bt_haacke_merit (double sheet_resistance_ohm, double transmittance);

/**
 * BtAccuracy:
 * @photometric_u: standard uncertainty of an absorbance as read, beyond its noise; 0: unknown, left out
 * @wavelength_u_nm: of the wavelength scale; 0: unknown, left out
 *
 * What a check of the instrument says of its readings; the same error at all points.
 */
typedef struct { double photometric_u, wavelength_u_nm; } BtAccuracy;

/**
 * BtPart:
 * @BT_PART_NOISE: the reading's own scatter, from point to point
 * @BT_PART_BLANK: that of the blank
 * @BT_PART_PHOTOMETRIC: #BtAccuracy, common to all points
 * @BT_PART_WAVELENGTH: #BtAccuracy times the slope, common to all points
 * @BT_PART_REFLECTANCE: that of the reflectance stated or measured, common to all points
 * @BT_PART_STEP: that of detector steps taken off, common to the side that was moved
 * @BT_PART_THICKNESS: of an absorption coefficient only
 *
 * Where the uncertainty of a film's absorbance or absorption coefficient comes from.
 */
typedef enum {
  BT_PART_NOISE,
  BT_PART_BLANK,
  BT_PART_PHOTOMETRIC,
  BT_PART_WAVELENGTH,
  BT_PART_REFLECTANCE,
  BT_PART_STEP,
  BT_PART_THICKNESS,
  BT_N_PARTS
} BtPart;
/* "noise", "blank", ...: in files. */
const char *bt_part_name (BtPart part);
/* Translated. */
const char *bt_part_title (BtPart part);

/**
 * BtCurve:
 * @n: number of points
 * @energy_ev: (array length=n): ascending
 * @absorbance: (array length=n): of the film alone, decadic
 * @absorbance_u: (array length=n): standard uncertainty from noise (film and blank), independent from point to point
 * @parts: by #BtPart, (nullable) (array length=n): each source's standard uncertainty of @absorbance; %NULL where it has none
 * @kind: the light path taken in the end
 * @path: one translated sentence naming the light path taken
 * @alpha: one translated sentence saying which absorption coefficient follows from it
 * @flags: (element-type BtFlag): what the light path had to leave out
 *
 * A film's own absorbance after its light path.
 */
typedef struct {
  gsize n;
  double *energy_ev, *absorbance, *absorbance_u;
  double *parts[BT_N_PARTS];
  BtLightPathKind kind;
  char *path, *alpha;
  GPtrArray *flags;
} BtCurve;

/**
 * bt_film_light_path:
 * @how: (nullable): blank ratio where %NULL
 * @accuracy: (nullable): of the instrument
 *
 * Takes the film's reading along its light path. The blank and a measured reflectance are interpolated onto the film's axis with their noise;
 * without a blank A = A_film, flagged "no-blank". Points that the blank or the reflectance does not cover, or that no film could give, are dropped
 * and flagged.
 *
 * Returns: (transfer full): the film's own absorbance
 */
BtCurve *bt_film_light_path (BtFilm *self, const BtLightPath *how, const BtAccuracy *accuracy);
void bt_curve_free (BtCurve *curve);
/* Linear interpolation of a curve's absorbance and, where wanted, of its parts ((nullable): @parts of BT_N_PARTS, 0 where there is none; noise and
 * blank of two independent neighbours). FALSE outside its range. */
gboolean bt_curve_at (const BtCurve *curve, double energy_ev, double *absorbance, double *parts);

/**
 * bt_curve_measure_step:
 *
 * Measures the step at an energy, however small, from a parabola on either side; bends that no parabola follows count in its uncertainty, so that
 * a band's edge is no step. Returns: %FALSE where the curve has too few points on a side
 */
gboolean bt_curve_measure_step (const BtCurve *curve, double energy_ev, BtStep *step);
/* Moves one side of each step so that both meet: that of longer wavelengths (@keep_visible) or that of shorter ones. The moved side gets the step's
 * uncertainty (BT_PART_STEP) and the curve a flag "detector-step-corrected". */
void bt_curve_correct_steps (BtCurve *curve, const BtStep *steps, gsize n_steps, gboolean keep_visible);
/**
 * bt_film_judge_path:
 * @stray_light: share of stray light; 0: unknown
 * @range: energies that are to be fitted
 *
 * Adds flags to @curve for what its light path leaves out or cannot know, each with its size: an uneven film, stray light, reflection, the
 * substrate's cut-off, a slab that is none, a baseline below zero.
 */
void bt_film_judge_path (BtFilm *self, const BtLightPath *how, double stray_light, BtRange range, BtCurve *curve);

/**
 * BtAlpha:
 * @value, @u: absorption coefficient and its standard uncertainty, 1/cm, by first-order propagation (JCGM 100:2008)
 * @parts: by #BtPart: what each source gives to @u, 1/cm
 * @mean, @spread: mean and standard deviation of the Monte Carlo distribution (JCGM 101:2008); NAN where not made
 * @low, @high: probabilistically symmetric coverage interval from it; NAN where not made
 *
 * An absorption coefficient, base e. All NAN where the film has no thickness.
 */
typedef struct { double value, u, parts[BT_N_PARTS], mean, spread, low, high; } BtAlpha;
/**
 * bt_film_alpha:
 * @curve: the film's own after @how and @accuracy
 * @n_draws: Monte Carlo draws; 0: first order only
 * @level: of the interval
 *
 * The absorption coefficient at one energy. The draws go through the light path itself: readings, blank, reflectance and scale are normal,
 * a thickness of n readings follows Student's t of n - 1 degrees of freedom (JCGM 101:2008 6.4.9), any other a normal distribution cut at 0. The same
 * input gives the same draws.
 *
 * Returns: %FALSE outside the curve's range
 */
gboolean bt_film_alpha (BtFilm *self, const BtCurve *curve, const BtLightPath *how, const BtAccuracy *accuracy, double energy_ev, guint n_draws, double level,
                        BtAlpha *alpha);

/* alpha = ln(10) A / t, base e, in 1/cm; t in nm. NAN where @thickness_nm is not above 0. */
double bt_alpha_per_cm (double absorbance, double thickness_nm);
/* Its standard uncertainty by first-order propagation (JCGM 100:2008 eq. 10); 0 for an unknown part. */
double bt_alpha_u_per_cm (double absorbance, double absorbance_u, double thickness_nm, double thickness_u_nm);
/* 1 - 10^-A: the share of light taken up, reflection left out. */
double bt_absorptance (double absorbance);

G_END_DECLS

#endif
