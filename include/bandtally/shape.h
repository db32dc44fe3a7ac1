/* Shapes that a sum of bands and tails is made of: values and derivatives for whole arrays. Knows nothing of nanotubes. */
#ifndef BANDTALLY_SHAPE_H
#define BANDTALLY_SHAPE_H

#include <glib.h>

G_BEGIN_DECLS

/**
 * BtShape:
 * @BT_SHAPE_CONSTANT: 1
 * @BT_SHAPE_LINE: x - x0; q = (x0)
 * @BT_SHAPE_GAUSSIAN: exp(-4 ln 2 ((x - c) / w)^2); q = (c, w), w the FWHM
 * @BT_SHAPE_LORENTZIAN: 1 / (1 + u^2), u = 2 (x - c) / w; q = (c, w), w the FWHM
 * @BT_SHAPE_VOIGT: convolution of a Gaussian of FWHM wg and a Lorentzian of FWHM wl, divided by its value at c; q = (c, wg,
 * wl); one of the widths may be 0
 * @BT_SHAPE_PSEUDO_VOIGT: f = (1 - s) Gaussian + s Lorentzian of one centre and FWHM; q = (c, w, s)
 * @BT_SHAPE_FANO: f = (a + u)^2 / ((1 + a^2) (1 + u^2)), u = 2 (x - c) / w: U. Fano, Phys. Rev. 124, 1866 (1961), eq. 21 (from
 * memory), over its largest value; q = (c, w, a), a the asymmetry; far from c it tends to 1 / (1 + a^2), not to 0
 * @BT_SHAPE_EXPONENTIAL: exp(-b (x - x0)); q = (b, x0)
 * @BT_SHAPE_RECIPROCAL_EXPONENTIAL: exp(-b (1/x - 1/x0)): an exponential in wavelength over an axis of energy; q = (b, x0)
 * @BT_SHAPE_POWER: f = (x / x0)^-p; q = (p, x0); NaN where x / x0 is not a positive normal number
 * @BT_SHAPE_PLASMON: 1 / (1 + u^2), u = (x - c) / g: the Lorentzian as tails have it; q = (c, g), g the half width at half
 * height
 *
 * All but %BT_SHAPE_LINE have unit height: at c, at x0, or for %BT_SHAPE_FANO at c + w / (2 a). Parameters come in the order
 * given; x0 is not one of them: it is a reference, held by whoever fits (it could not be told from the height), and follows the
 * parameters in q.
 */
typedef enum
{
  BT_SHAPE_CONSTANT,
  BT_SHAPE_LINE,
  BT_SHAPE_GAUSSIAN,
  BT_SHAPE_LORENTZIAN,
  BT_SHAPE_VOIGT,
  BT_SHAPE_PSEUDO_VOIGT,
  BT_SHAPE_FANO,
  BT_SHAPE_EXPONENTIAL,
  BT_SHAPE_RECIPROCAL_EXPONENTIAL,
  BT_SHAPE_POWER,
  BT_SHAPE_PLASMON
} BtShape;
/* Not one of them, so that bindings call the members by their own names. */
#define BT_N_SHAPES (BT_SHAPE_PLASMON + 1)

/* The most parameters a shape has, and the most numbers in q. */
#define BT_SHAPE_MAX_PARAMETERS 3

/**
 * BtShapeRole:
 * @BT_SHAPE_ROLE_CENTRE: a place on the x axis
 * @BT_SHAPE_ROLE_WIDTH: a length on the x axis, not negative
 * @BT_SHAPE_ROLE_SHARE: between 0 and 1
 * @BT_SHAPE_ROLE_OTHER: a decay, an exponent, an asymmetry
 *
 * What a parameter is, for limits and steps.
 */
typedef enum
{
  BT_SHAPE_ROLE_CENTRE,
  BT_SHAPE_ROLE_WIDTH,
  BT_SHAPE_ROLE_SHARE,
  BT_SHAPE_ROLE_OTHER
} BtShapeRole;

/* "gaussian" ...: in files; never translated. %NULL for what is not a shape. */
const char *bt_shape_name (BtShape shape);
gboolean bt_shape_from_name (const char *name, BtShape *shape);
/* How many nonlinear parameters @shape has: the number of derivatives. */
guint bt_shape_n_parameters (BtShape shape);
/* How many references follow the parameters in q: 1 for shapes with x0, else 0. */
guint bt_shape_n_references (BtShape shape);
BtShapeRole bt_shape_parameter_role (BtShape shape, guint parameter);
/* "centre", "gaussian width" ...; never translated. Also for references. */
const char *bt_shape_parameter_name (BtShape shape, guint parameter);

/**
 * bt_shape_eval:
 * @q: parameters, then references
 * @x: (array length=n): finite, in any order and alignment
 * @f: (out) (array length=n): values
 * @df: (nullable): bt_shape_n_parameters() pointers, each to an array of @n for the derivative by that parameter, or %NULL
 * where it is not wanted
 *
 * No allocation, no state, no error path: safe from any thread. The arrays may not overlap. A NaN among q and x gives NaN, a
 * width of 0 nothing useful; the caller keeps widths positive.
 *
 * Errors of f as shares of the height, at most: Gaussian 3e-16, and what is under 1e-307 is 0; Lorentzian, pseudo-Voigt and
 * Fano 1e-15; Voigt 1e-13, and beyond 5 wg from the centre, or where wl > 5.5 wg, 1e-13 of the value itself (tested for wl / wg
 * from 1e-4 to 1e6; between 2 and 5 wg a Voigt with hardly any Lorentzian part is good to a share of the height only). As
 * shares of the value: exponentials (1 + 2 |log f|) 2.3e-16, power (1 + |p| + 2 |log f|) 2.3e-16. Errors of derivatives as
 * shares of their largest value: 6e-15, Voigt 5e-12.
 *
 * Voigt: J. A. C. Weideman, SIAM J. Numer. Anal. 31, 1497 (1994), with 32 terms; the asymptotic series of the Faddeeva function
 * in the wings; above wl = 5.4 wg the convolution by 16-point Gauss-Hermite quadrature.
 *
 * The instruction set is chosen at run time (x86-64: plain, AVX2 with FMA, AVX-512; elsewhere plain). On one machine a point's
 * value depends on q and its x only, to the last bit: not on @n, the alignment, its place in the array or whether derivatives
 * are wanted. Machines with and without FMA differ in the last bits.
 */
void bt_shape_eval (BtShape shape, const double *q, const double *x, gsize n, double *f, double *const *df);

/**
 * bt_shape_support:
 * @loss: a share of the height, for example 1e-16
 * @low: (out): below it, |f| < @loss; -INFINITY where there is no such place
 * @high: (out): above it, |f| < @loss; INFINITY where there is no such place
 *
 * Where a shape may be skipped. Of the derivatives what is lost there is more: of a Gaussian's at most
 * 4 ln(1 / loss) @loss / w, for a loss under 0.01.
 */
void bt_shape_support (BtShape shape, const double *q, double loss, double *low, double *high);

G_END_DECLS

#endif
