/* The loops themselves; included once for each instruction set, with KERNEL (name) giving the names. No fast-math anywhere: the
 * order of every sum is written out, so that a result depends on the instruction set alone and not on the compiler's mood. */
#include <float.h>
#include <math.h>
#include <string.h>

#include "kernel-private.h"

/* Vectors pass between inlined functions only. */
#pragma GCC diagnostic ignored "-Wpsabi"

typedef double Vector __attribute__ ((vector_size (32), may_alias));
/* As it comes from a matrix whose rows are only aligned to 8 bytes. */
typedef double Loose __attribute__ ((vector_size (32), aligned (8), may_alias));

static inline __attribute__ ((always_inline)) double
total (Vector v)
{
  return (v[0] + v[1]) + (v[2] + v[3]);
}

/* Four sums at once: each is (0 + 1) + (2 + 3) of its vector. */
static inline __attribute__ ((always_inline)) Vector
totals (Vector a, Vector b, Vector c, Vector d)
{
  const Vector ab = __builtin_shufflevector (a, b, 0, 4, 2, 6) + __builtin_shufflevector (a, b, 1, 5, 3, 7);
  const Vector cd = __builtin_shufflevector (c, d, 0, 4, 2, 6) + __builtin_shufflevector (c, d, 1, 5, 3, 7);

  return __builtin_shufflevector (ab, cd, 0, 1, 4, 5) + __builtin_shufflevector (ab, cd, 2, 3, 6, 7);
}

/* Whether columns a to a + 3 belong to parameters one after the other. */
static inline __attribute__ ((always_inline)) gboolean
in_a_run (const guint *index, guint m, guint a)
{
  return a + 4 <= m && index[a + 1] == index[a] + 1 && index[a + 2] == index[a] + 2 && index[a + 3] == index[a] + 3;
}

/* Columns a to a + 3 times column b, where they belong. In a run what falls below the diagonal is written too; nobody reads it.
 */
static inline __attribute__ ((always_inline)) void
put (double *g, gsize stride, const guint *index, guint m, guint a, guint b, guint run, Vector sum)
{
  const guint w = index[b];

  if (run && (b >= a || w <= index[a]))
    {
      *(Loose *)(g + w * stride + index[a]) += sum;
      return;
    }
  for (guint i = 0; i < 4 && a + i < m; i++)
    if (b <= a + i)
      g[MIN (index[a + i], w) * stride + MAX (index[a + i], w)] += sum[i];
}

/* Room after the last column up to a multiple of 4 counts as nothing. */
static inline __attribute__ ((always_inline)) void
clear_rest (double *columns, guint m)
{
  for (guint a = m; a % 4 != 0; a++)
    memset (columns + (gsize)a * BT_BLOCK, 0, sizeof (double) * BT_BLOCK);
}

#ifndef WIDE_REGISTERS
/* 4 x 2 tiles: eight sums fit the registers, six loads feed eight multiply-adds. */
static void
KERNEL (products) (double *columns, guint m, const guint *index, double *g, gsize stride)
{
  for (guint a = m; a % 4 != 0; a++)
    memset (columns + (gsize)a * BT_BLOCK, 0, sizeof (double) * BT_BLOCK);
  for (guint a = 0; a < m; a += 4)
    for (guint b = 0, run = in_a_run (index, m, a); b < a + 4 && b < m; b += 2)
      {
        const Vector *p0 = (const Vector *)(columns + (gsize)a * BT_BLOCK), *p1 = p0 + BT_BLOCK / 4, *p2 = p1 + BT_BLOCK / 4,
                     *p3 = p2 + BT_BLOCK / 4;
        const Vector *q0 = (const Vector *)(columns + (gsize)b * BT_BLOCK), *q1 = q0 + BT_BLOCK / 4;
        Vector s0 = { 0 }, s1 = s0, s2 = s0, s3 = s0, s4 = s0, s5 = s0, s6 = s0, s7 = s0;

        for (int t = 0; t < BT_BLOCK / 4; t++)
          {
            const Vector u = q0[t], w = q1[t];

            s0 += p0[t] * u;
            s1 += p0[t] * w;
            s2 += p1[t] * u;
            s3 += p1[t] * w;
            s4 += p2[t] * u;
            s5 += p2[t] * w;
            s6 += p3[t] * u;
            s7 += p3[t] * w;
          }
        put (g, stride, index, m, a, b, run, totals (s0, s2, s4, s6));
        if (b + 1 < m)
          put (g, stride, index, m, a, b + 1, run, totals (s1, s3, s5, s7));
      }
}
#else
typedef double Wide __attribute__ ((vector_size (64), may_alias));

static inline __attribute__ ((always_inline)) Vector
folded (Wide v)
{
  const Vector low = { v[0], v[1], v[2], v[3] }, high = { v[4], v[5], v[6], v[7] };

  return low + high;
}

/* 4 x 4 tiles: sixteen sums of eight. */
static void
KERNEL (products) (double *columns, guint m, const guint *index, double *g, gsize stride)
{
  clear_rest (columns, m);
  for (guint a = 0; a < m; a += 4)
    for (guint b = 0, run = in_a_run (index, m, a); b <= a; b += 4)
      {
        const Wide *p = (const Wide *)(columns + (gsize)a * BT_BLOCK), *q = (const Wide *)(columns + (gsize)b * BT_BLOCK);
        enum
        {
          NEXT = BT_BLOCK / 8
        };
        Wide s[4][4] = { 0 };

        for (int t = 0; t < NEXT; t++)
          {
            const Wide q0 = q[t], q1 = q[t + NEXT], q2 = q[t + 2 * NEXT], q3 = q[t + 3 * NEXT];

#pragma GCC unroll 4
            for (int i = 0; i < 4; i++)
              {
                const Wide pi = p[t + i * NEXT];

                s[i][0] += pi * q0;
                s[i][1] += pi * q1;
                s[i][2] += pi * q2;
                s[i][3] += pi * q3;
              }
          }
#pragma GCC unroll 4
        for (guint k = 0; k < 4; k++)
          if (b + k < m)
            put (g, stride, index, m, a, b + k, run,
                 totals (folded (s[0][k]), folded (s[1][k]), folded (s[2][k]), folded (s[3][k])));
      }
}
#endif

static void
KERNEL (add) (double *y, double a, const double *x)
{
  Vector *to = (Vector *)y;
  const Vector *from = (const Vector *)x;

  for (int t = 0; t < BT_BLOCK / 4; t++)
    to[t] += a * from[t];
}

static void
KERNEL (difference) (double *to, const double *x, const double *y)
{
  for (int t = 0; t < BT_BLOCK / 4; t++)
    ((Vector *)to)[t] = ((const Vector *)x)[t] - ((const Vector *)y)[t];
}

static double
KERNEL (dot) (const double *x, const double *y)
{
  const Vector *a = (const Vector *)x, *b = (const Vector *)y;
  Vector s0 = { 0 }, s1 = s0;

  for (int t = 0; t < BT_BLOCK / 4; t += 2)
    {
      s0 += a[t] * b[t];
      s1 += a[t + 1] * b[t + 1];
    }
  return total (s0 + s1);
}

static void
KERNEL (weigh) (double *x, const double *w)
{
  Vector *to = (Vector *)x;
  const Vector *by = (const Vector *)w;

  for (int t = 0; t < BT_BLOCK / 4; t++)
    to[t] *= by[t];
}

/* y[0..n) -= a x[0..n) */
static inline __attribute__ ((always_inline)) void
subtract (double *restrict y, double a, const double *restrict x, gsize n)
{
  gsize i = 0;

  for (; i + 4 <= n; i += 4)
    *(Loose *)(y + i) -= a * *(const Loose *)(x + i);
  for (; i < n; i++)
    y[i] -= a * x[i];
}

/* Four rows at once: one load and one store of y for four multiply-adds. */
static inline __attribute__ ((always_inline)) void
subtract_four (double *restrict y, const double *a, gsize apart, const double *restrict x, gsize stride, gsize n)
{
  const double a0 = a[0], a1 = a[apart], a2 = a[2 * apart], a3 = a[3 * apart];
  gsize i = 0;

  for (; i + 4 <= n; i += 4)
    *(Loose *)(y + i) -= (a0 * *(const Loose *)(x + i) + a1 * *(const Loose *)(x + stride + i))
                         + (a2 * *(const Loose *)(x + 2 * stride + i) + a3 * *(const Loose *)(x + 3 * stride + i));
  for (; i < n; i++)
    y[i] -= (a0 * x[i] + a1 * x[stride + i]) + (a2 * x[2 * stride + i] + a3 * x[3 * stride + i]);
}

static gboolean
KERNEL (cholesky) (double *a, gsize m, gsize stride, double *share)
{
  *share = 1;
  for (gsize k = 0; k < m; k++)
    {
      double *row = a + k * stride + k;
      const double original = row[0];
      gsize i = 0;

      if (!(original > 0) || !isfinite (original))
        return FALSE;
      for (; i + 4 <= k; i += 4)
        subtract_four (row, a + i * stride + k, stride, a + i * stride + k, stride, m - k);
      for (; i < k; i++)
        subtract (row, a[i * stride + k], a + i * stride + k, m - k);
      /* What is left of the diagonal, as a share of it: small where the column nearly depends on those before it. Judged so,
       * the units of the parameters do not decide what counts as zero. */
      *share = fmin (*share, row[0] / original);
      if (!(row[0] > 64 * DBL_EPSILON * original))
        return FALSE;
      {
        const double pivot = sqrt (row[0]), inverse = 1 / pivot;

        row[0] = pivot;
        for (gsize j = 1; j < m - k; j++)
          row[j] *= inverse;
      }
    }
  return TRUE;
}

static void
KERNEL (append) (double *r, double *rows, gsize n, gsize m, gsize stride, double *work)
{
  for (gsize k = 0; k < m; k++)
    {
      double *top = r + k * stride, norm = 0, alpha, scale;

      for (gsize i = 0; i < n; i++)
        norm += rows[i * stride + k] * rows[i * stride + k];
      if (norm == 0)
        continue;
      alpha = -copysign (sqrt (top[k] * top[k] + norm), top[k]);
      scale = 1 / (alpha * (alpha - top[k])); /* 2 / v'v for v = (top - alpha, rows) */
      {
        const double v0 = top[k] - alpha;

        for (gsize j = k + 1; j < m; j++)
          work[j] = -v0 * top[j];
        for (gsize i = 0; i < n; i++)
          subtract (work + k + 1, rows[i * stride + k], rows + i * stride + k + 1, m - k - 1);
        for (gsize j = k + 1; j < m; j++)
          {
            work[j] *= -scale;
            top[j] -= v0 * work[j];
          }
        for (gsize i = 0; i < n; i++)
          subtract (rows + i * stride + k + 1, rows[i * stride + k], work + k + 1, m - k - 1);
      }
      top[k] = alpha;
    }
}
