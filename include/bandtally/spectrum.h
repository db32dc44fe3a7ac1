/* A spectrum as an instrument wrote it, and the reading of it from files. */
#ifndef BANDTALLY_SPECTRUM_H
#define BANDTALLY_SPECTRUM_H

#include <gio/gio.h>
#include <bandtally/units.h>
#include <bandtally/flag.h>

G_BEGIN_DECLS

/**
 * BtSpectrumError:
 *
 * Codes of %BT_SPECTRUM_ERROR. Every message is a whole sentence that names the file and, where there is one, the line.
 */
#define BT_SPECTRUM_ERROR (bt_spectrum_error_quark ())
typedef enum {
  BT_SPECTRUM_ERROR_OPEN,      /* no such file, a directory, no permission */
  BT_SPECTRUM_ERROR_EMPTY,     /* nothing in it */
  BT_SPECTRUM_ERROR_FORMAT,    /* not a spectrum: binary, one column, no table */
  BT_SPECTRUM_ERROR_VALUES,    /* a table, but no usable numbers (too few points, all missing, constant x) */
  BT_SPECTRUM_ERROR_UNITS      /* the numbers cannot be in the units stated or inferred */
} BtSpectrumError;
GQuark bt_spectrum_error_quark (void);

/* Fewest points that a spectrum may have. */
#define BT_SPECTRUM_MIN_POINTS 8

#define BT_TYPE_SPECTRUM (bt_spectrum_get_type ())
G_DECLARE_FINAL_TYPE (BtSpectrum, bt_spectrum, BT, SPECTRUM, GObject)

/**
 * BtReadOptions:
 * @x_unit: a #BtXUnit, or -1 to take it from the file
 * @y_unit: a #BtYUnit, or -1 to take it from the file
 *
 * What the user states about a file; overrides what the file says. Pass %NULL for nothing.
 */
typedef struct { int x_unit, y_unit; } BtReadOptions;
#define BT_READ_OPTIONS_INIT { -1, -1 }

/**
 * bt_spectrum_read_file:
 * @path: a file name
 * @options: (nullable): what the user states about it
 *
 * Reads every spectrum in a file: delimited text of any shape (up to 200 MB and 10 million points), or JCAMP-DX 4.24 and 5.01 (XYDATA in AFFN, PAC, SQZ, DIF and DUP;
 * XYPOINTS; linked blocks). Never depends on the locale.
 *
 * Returns: (transfer full) (element-type BtSpectrum): at least one spectrum, or %NULL with @error set
 */
GPtrArray *bt_spectrum_read_file (const char *path, const BtReadOptions *options, GError **error);
/* The same from memory; @name stands for the file in messages. */
GPtrArray *bt_spectrum_read_bytes (GBytes *bytes, const char *name, const BtReadOptions *options, GError **error);
/* (transfer full): the first spectrum of a file, or NULL with @error set. */
BtSpectrum *bt_spectrum_new_from_file (const char *path, GError **error);
/**
 * bt_reflectance_new_from_file:
 *
 * Reads a measured reflectance: the file's column of reflectance, or its only curve, taken for per cent where header or values say so. The
 * other readers refuse such a file, for no absorbance follows from it.
 *
 * Returns: (transfer full): the first one; its "absorbance" is the reflectance, 0 to 1. NULL with @error set
 */
BtSpectrum *bt_reflectance_new_from_file (const char *path, GError **error);
/**
 * bt_spectrum_new:
 * @x: (array length=n): abscissa in @x_unit, any order
 * @y: (array length=n): reading in @y_unit
 *
 * Makes a spectrum from arrays (copied). Not finite points are dropped and counted in a flag; points of equal x are averaged.
 *
 * Returns: (transfer full): a spectrum, or %NULL with @error set (too few points, constant x, energies out of reach)
 */
BtSpectrum *bt_spectrum_new (const double *x, const double *y, gsize n, BtXUnit x_unit, BtYUnit y_unit, const char *title,
                             GError **error);

/* The reading on the common axes: energies ascend strictly; absorbance is decadic (transmittance is converted; where T <= 0 the
 * point is dropped and flagged; an alpha file is kept as alpha, see bt_spectrum_get_y_unit(), and its "absorbance" is
 * alpha / ln 10 in 1/cm). Arrays are owned by the spectrum and have bt_spectrum_get_n_points() elements. */
gsize bt_spectrum_get_n_points (BtSpectrum *self);
const double *bt_spectrum_get_energy_ev (BtSpectrum *self, gsize *n);
const double *bt_spectrum_get_absorbance (BtSpectrum *self, gsize *n);
/* Standard uncertainty of each absorbance from the data's own scatter: robust, from fourth differences, going with the inverse of the light that
 * passes; at least that of the last digit, never 0. A single point that stands out has as much as it stands out. */
const double *bt_spectrum_get_noise (BtSpectrum *self, gsize *n);
/* Linear interpolation; NAN outside the range. */
double bt_spectrum_absorbance_at (BtSpectrum *self, double energy_ev);

/* Exactly as read: the file's own order and units, nothing dropped but missing values. */
const double *bt_spectrum_get_raw_x (BtSpectrum *self, gsize *n);
const double *bt_spectrum_get_raw_y (BtSpectrum *self, gsize *n);
BtXUnit bt_spectrum_get_x_unit (BtSpectrum *self);
BtYUnit bt_spectrum_get_y_unit (BtSpectrum *self);

const char *bt_spectrum_get_title (BtSpectrum *self);
/* (nullable): name as given when it was read. */
const char *bt_spectrum_get_file (BtSpectrum *self);
/* (nullable): lower-case hexadecimal SHA-256 of the file's bytes. */
const char *bt_spectrum_get_sha256 (BtSpectrum *self);
/* One translated sentence: what the file was taken for ("Text, 1301 rows, columns 1 and 2 separated by semicolons, decimal
 * comma, wavelength in nm (header), absorbance (from the values)"). */
const char *bt_spectrum_get_reading (BtSpectrum *self);
/**
 * bt_spectrum_first_lines:
 * @path: a file
 * @n: most lines wanted
 *
 * The beginning of a file as it is, for a person to look at: decoded to UTF-8, long lines cut after 160 characters.
 *
 * Returns: (transfer full) (array zero-terminated=1): the lines, or %NULL with @error set
 */
char **bt_spectrum_first_lines (const char *path, guint n, GError **error);
/* "key = value" statements found in the preamble, such as thickness; (nullable) where absent. Keys compare without case. */
const char *bt_spectrum_get_note (BtSpectrum *self, const char *key);
/* (element-type BtFlag): faults of the reading itself. */
const GPtrArray *bt_spectrum_get_flags (BtSpectrum *self);

/**
 * BtJcampForm:
 * @BT_JCAMP_AFFN: numbers as they are
 * @BT_JCAMP_DIFDUP: integers squeezed to their differences, a fraction of the size
 *
 * How the ordinates of a JCAMP-DX file are written.
 */
typedef enum { BT_JCAMP_AFFN, BT_JCAMP_DIFDUP } BtJcampForm;
/**
 * bt_spectrum_to_jcamp:
 * @form: how to write the ordinates where equal steps and a power of ten make integers of them; otherwise they are written as
 *   numbers, and points of unequal steps as pairs
 *
 * The reading exactly as it was read, as a JCAMP-DX 4.24 file (McDonald and Wilks, Appl. Spectrosc. 42, 151 (1988)). Reading it again
 * gives the same numbers to the last bit. Energies are written in 1/cm, for the standard knows no electronvolts: of those the last bit may change.
 *
 * Returns: (transfer full): the file's text, in ASCII, lines ended by CR LF
 */
char *bt_spectrum_to_jcamp (BtSpectrum *self, BtJcampForm form);
/**
 * bt_spectra_to_jcamp:
 * @spectra: (element-type BtSpectrum): one or more
 * @title: of the whole, where there are several
 * @form: as for bt_spectrum_to_jcamp()
 *
 * One spectrum as bt_spectrum_to_jcamp() writes it; several as the blocks of one compound file (DATA TYPE= LINK), in their order.
 *
 * Returns: (transfer full): the file's text, in ASCII, lines ended by CR LF
 */
char *bt_spectra_to_jcamp (GPtrArray *spectra, const char *title, BtJcampForm form);

/**
 * BtStep:
 * @energy_ev: where the reading jumps (between two points), eV
 * @size: absorbance just above @energy_ev minus just below it (in energy)
 * @size_u: its standard uncertainty
 * @slope: change of the absorbance's slope, above less below, 1/eV
 * @slope_u: its standard uncertainty
 *
 * A change of detector or grating.
 */
typedef struct { double energy_ev, size, size_u, slope, slope_u; } BtStep;
/* Steps found in the reading, and the ranges in which the reading is saturated (bends to a ceiling, or scatters beyond use).
 * Found once, owned by the spectrum. */
const BtStep *bt_spectrum_get_steps (BtSpectrum *self, gsize *n);
const BtRange *bt_spectrum_get_saturated (BtSpectrum *self, gsize *n);

G_END_DECLS

#endif
