/* The Voigt function in long double, in a way that shares nothing with the kernels: the trapezoidal rule with its pole's
 * correction (Matta and Reichl, Math. Comp. 25, 339 (1971), from memory). test-voigt.c checks it against 25-digit values. */
#ifndef VOIGT_REFERENCE_H
#define VOIGT_REFERENCE_H

#include <complex.h>
#include <math.h>

#define LN2L 0.693147180559945309417232121458176568L
#define PIL 3.141592653589793238462643383279502884L

/* w(z) for Im z >= 0 by the trapezoidal rule with step 0.4: error about exp(-(pi / 0.4)^2) = 2e-27. The grid is the one whose
 * points stay away from z. */
static inline long double complex
faddeeva (long double complex z)
{
  const long double h = 0.4L, share = creall (z) / h - floorl (creall (z) / h),
                    shift = share >= 0.25L && share <= 0.75L ? 0 : 0.5L;
  long double complex sum = 0;

  for (int k = -20; k < 20; k++)
    {
      long double t = (k + shift) * h;

      sum += expl (-t * t) / (z - t);
    }
  sum *= I * h / PIL;
  if (cimagl (z) < PIL / h)
    sum += 2 * cexpl (-z * z) / (1 - (shift > 0 ? -1 : 1) * cexpl (-2 * PIL * I * z / h));
  return sum;
}

/* Of unit height; q as for BT_SHAPE_VOIGT, the Gaussian width not 0. */
static inline long double
voigt_reference (const long double *q, long double x)
{
  const long double scale = sqrtl (LN2L) / q[1], y = scale * q[2];

  return creall (faddeeva (2 * scale * (x - q[0]) + I * y)) / creall (faddeeva (I * y));
}

#endif
