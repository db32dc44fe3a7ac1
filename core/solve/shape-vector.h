/* Vectors for the kernels of shapes. A file that holds the kernels for one instruction set defines
 *   LANES   doubles in a vector
 *   TARGET  the attribute that lets a function use that set, or nothing
 *   KERNELS the name of the table
 * and includes shape-kernels.h. Kernels take whole vectors only and work on each lane for itself; shape-eval.c fills up the
 * last one. So every point goes through the same instructions, and its value does not depend on where it stands in an array.
 *
 * Never to be compiled with -ffast-math: it removes the rounding by a large constant, and the values are silently wrong. */
#ifdef __FAST_MATH__
#error "-ffast-math breaks the exponential of the shapes"
#endif

#include <float.h>
#include <glib.h>
#include <math.h>
#include <string.h>

#if FLT_EVAL_METHOD != 0
#error "the shapes need arithmetic in double, not wider: on 32-bit x86 compile with -msse2 -mfpmath=sse"
#endif

#ifdef BT_HAVE_AVX
#include <immintrin.h>
#endif

#define KERNEL static inline __attribute__ ((always_inline)) TARGET
#define ENTRY static TARGET

typedef double V __attribute__ ((vector_size (LANES * 8)));
typedef guint64 U __attribute__ ((vector_size (LANES * 8)));

/* Every vector argument below is inlined away, so no calling convention is at stake. */
#if defined(__GNUC__) && !defined(__clang__)
#pragma GCC diagnostic ignored "-Wpsabi"
#endif

KERNEL V
splat (double a)
{
  return (V){ 0 } + a;
}

/* Lane by lane a < b ? yes : no, the smaller and the larger; where one is not a number: no, b, b. By intrinsics where there are
 * some: GCC 12 makes the masks of a vector comparison in a register that holds up the next round until this one is done. */
#if defined(BT_HAVE_AVX) && LANES == 8
#define below(a, b, yes, no) ((V)_mm512_mask_blend_pd (_mm512_cmp_pd_mask (a, b, _CMP_LT_OQ), no, yes))
#define smaller(a, b) ((V)_mm512_min_pd (a, b))
#define larger(a, b) ((V)_mm512_max_pd (a, b))
#elif defined(BT_HAVE_AVX) && LANES == 4
#define below(a, b, yes, no) ((V)_mm256_blendv_pd (no, yes, _mm256_cmp_pd (a, b, _CMP_LT_OQ)))
#define smaller(a, b) ((V)_mm256_min_pd (a, b))
#define larger(a, b) ((V)_mm256_max_pd (a, b))
#else
KERNEL V
below (V a, V b, V yes, V no)
{
  U mask = (U)(a < b);

  return (V)(((U)yes & mask) | ((U)no & ~mask));
}

#if defined(BT_HAVE_AVX) && LANES == 2
#define smaller(a, b) ((V)_mm_min_pd (a, b))
#define larger(a, b) ((V)_mm_max_pd (a, b))
#else
#define smaller(a, b) below (a, b, a, b)
#define larger(a, b) below (b, a, a, b)
#endif
#endif

/* A bit for each lane of @v that is above @limit. */
#define ALL_LANES ((1u << LANES) - 1)

KERNEL guint
lanes_above (V v, double limit)
{
#if defined(BT_HAVE_AVX) && LANES == 8
  return _mm512_cmp_pd_mask (v, splat (limit), _CMP_GT_OQ);
#elif defined(BT_HAVE_AVX) && LANES == 4
  return (guint)_mm256_movemask_pd (_mm256_cmp_pd (v, splat (limit), _CMP_GT_OQ));
#else
  guint bits = 0;

  for (guint i = 0; i < LANES; i++)
    bits |= (guint)(v[i] > limit) << i;
  return bits;
#endif
}

KERNEL V
load (const double *x)
{
  V v;

  memcpy (&v, x, sizeof v);
  return v;
}

KERNEL void
store (double *x, V v)
{
  memcpy (x, &v, sizeof v);
}

/* The derivative by @parameter, if it is wanted. */
KERNEL void
store_column (double *const *df, guint parameter, gsize i, V v)
{
  if (df != NULL && df[parameter] != NULL)
    store (df[parameter] + i, v);
}
