/* exp and log of vectors. Coefficients: interpolation at Chebyshev nodes in 50 digits, rounded; errors of the
 * polynomials 1.6e-17 and 4.6e-18. */

#define ROUNDER 0x1.8p52 /* adding it rounds to an integer, which then stands in the low bits */
#define LOG2_E 0x1.71547652b82fep0
#define LN2_HIGH 0x1.62e42fefa0000p-1 /* 37 bits: times an exponent it is exact */
#define LN2_LOW 0x1.cf79abc9e3b3ap-40
#define ONE_BITS G_GUINT64_CONSTANT (0x3ff0000000000000)

/* exp (x) = p 2^n, p in about [0.7, 1.42]; returns p. @rounded has n in its low bits. @careful: also keep what 1 + r loses,
 * which takes the error from 1.1 to 0.8 units in the last place. */
KERNEL V
exp_parts (V x, gboolean careful, V *rounded)
{
  V t = x * LOG2_E + ROUNDER, n = t - ROUNDER;
  V r = (x - n * LN2_HIGH) - n * LN2_LOW;
  V s = r * r;
  V a = splat (0x1.0000000000001p-1) + r * 0x1.5555555555556p-3;
  V b = splat (0x1.5555555553d63p-5) + r * 0x1.11111111109b3p-7;
  V c = splat (0x1.6c16c1788bd90p-10) + r * 0x1.a01a01a7c41d5p-13;
  V d = splat (0x1.a019b90d2ae7ap-16) + r * 0x1.71de0dae63bb3p-19;
  V e = splat (0x1.289185613a3d6p-22) + r * 0x1.af38a9b0ec855p-26;
  V f = s * s, tail = s * ((a + s * b) + f * ((c + s * d) + f * e)), sum = 1.0 + r;

  *rounded = t;
  return careful ? sum + (((1.0 - sum) + r) + tail) : 1.0 + (r + tail);
}

KERNEL V
two_to (V rounded)
{
  return (V)(((U)rounded << 52) + ONE_BITS);
}

/* For arguments that cannot exceed 709; 0 below -708. */
KERNEL V
exp_flushed (V x)
{
  V t, p = exp_parts (x, FALSE, &t);

  return below (x, splat (-708), splat (0), p * two_to (t));
}

/* Any argument: subnormal results, infinities and NaN as exp() has them. */
KERNEL V
exp_full (V x)
{
  V c = larger (splat (-746), smaller (splat (710), x)), t, p = exp_parts (c, TRUE, &t);
  V n = t - ROUNDER, half = n * 0.5 + ROUNDER;

  return (p * two_to (half)) * two_to ((n - (half - ROUNDER)) + ROUNDER);
}

/* For positive normal numbers; anything else gives nothing useful. log (2^k m) = k ln 2 + log (1 + f), 1/sqrt 2 <= m < sqrt 2;
 * log (1 + f) = f - f^2/2 + s (f^2/2 + s^2 P (s^2)), s = f / (2 + f): the series of 2 artanh s with its first term written so
 * that it does not lose digits. */
KERNEL V
log_normal (V x)
{
  const guint64 low = G_GUINT64_CONSTANT (0x3fe6a09e667f3bcd), tower = G_GUINT64_CONSTANT (0x4330000000000000);
  U e = ((U)x - low + ONE_BITS) >> 52;
  V k = (V)(e | tower) - (0x1p52 + 1023);
  V f = (V)((U)x - (e << 52) + ONE_BITS) - 1.0;
  V s = f / (2.0 + f), z = s * s, half = 0.5 * f * f, y = z * z;
  V p = (splat (0x1.5555555555558p-1) + z * 0x1.99999999952d7p-2)
        + y
              * ((splat (0x1.2492492df281ap-2) + z * 0x1.c71c62e3f11e6p-3)
                 + y * (splat (0x1.7462b51cb66b1p-3) + z * 0x1.39fe51a7c18f9p-3 + y * 0x1.2b5900de53b32p-3));

  return k * LN2_HIGH - ((half - (s * (half + z * p) + k * LN2_LOW)) - f);
}
