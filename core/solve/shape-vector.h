/* Vectors for the kernels of shapes. A file that holds the kernels for one instruction set defines
 *   LANES   doubles in a vector
 *   TARGET  the attribute that lets a function use that set, or nothing
 * and includes shape-kernels.h. Kernels work on each lane for itself, with the same operations in every lane and also in the last, partly filled
 * vector: that is why a point's value does not depend on where it stands in an array.
 *
 * Never to be compiled with -ffast-math: it removes the rounding by a large constant, and the values are silently wrong. */
#ifdef __FAST_MATH__
#error "-ffast-math breaks the exponential of the shapes"
#endif

#include <glib.h>
#include <math.h>
#include <string.h>

#define KERNEL static inline __attribute__ ((always_inline)) TARGET
#define ENTRY static TARGET

typedef double V __attribute__ ((vector_size (LANES * 8)));
typedef guint64 U __attribute__ ((vector_size (LANES * 8)));
typedef gint64 M __attribute__ ((vector_size (LANES * 8)));

/* Every vector argument below is inlined away, so no calling convention is at stake. */
#if defined(__GNUC__) && !defined(__clang__)
#pragma GCC diagnostic ignored "-Wpsabi"
#endif

KERNEL V
splat (double a)
{
  return (V){ 0 } + a;
}

KERNEL V
pick (M mask, V yes, V no)
{
  return (V) (((U) yes & (U) mask) | ((U) no & ~(U) mask));
}

/* @n: how many are left, at least 1. Lanes beyond repeat the last one. */
KERNEL V
load (const double *x, gsize n)
{
  V v;

  if (G_LIKELY (n >= LANES))
    memcpy (&v, x, sizeof v);
  else
    {
      double padded[LANES];

      for (gsize i = 0; i < LANES; i++)
        padded[i] = x[i < n ? i : n - 1];
      memcpy (&v, padded, sizeof v);
    }
  return v;
}

KERNEL void
store (double *x, gsize n, V v)
{
  if (G_LIKELY (n >= LANES))
    memcpy (x, &v, sizeof v);
  else
    memcpy (x, &v, n * sizeof (double));
}
