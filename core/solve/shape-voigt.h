/* Kernel: Voigt. With w (z) the Faddeeva function, z = (x - c) 2 sqrt (ln 2) / wg + i y, y = sqrt (ln 2) wl / wg, the Voigt
 * function is Re w (z) / Re w (i y).
 *
 * |z| > 8: the asymptotic series (Abramowitz and Stegun 7.1.23), 13 terms, and its derivative. There w' below would be a small
 * difference of large numbers; this way the wings and their slopes keep their digits however far out, and cost less.
 *
 * Else, y < 4.5: Weideman's rational function (SIAM J. Numer. Anal. 31, 1497 (1994)) with 32 terms, error under 6e-14 in the
 * whole upper half plane. The coefficients are real, so the polynomial in Z is summed by the two-term recurrence for real
 * coefficients (Knuth, The Art of Computer Programming 2, 4.6.4), half the work of Horner's rule in complex numbers.
 * Derivatives from w' = -2 z w + 2 i / sqrt (pi).
 *
 * y >= 4.5: that derivative would cancel; there the Gauss-Hermite sum of the convolution with 16 nodes is exact to 1e-14 and
 * has no special case for wg = 0. */

#define SQRT_LN2 0x1.aa4499161cd48p-1
#define TWO_OVER_SQRT_PI 0x1.20dd750429b6dp+0
#define WEIDEMAN_L 0x1.306fe0a31b715p+2 /* sqrt (32 / sqrt 2) */
#define MANY_NODES_FROM 4.5
#define FAR 64.0 /* |z|^2 */

/* Fourier coefficients of exp (-t^2) (L^2 + t^2), t = L tan (theta / 2); 40 digits, 1024 points, rounded. */
static const double weideman[32] = {
  0x1.493f998475b45p+1,  0x1.21bb971a2c848p+1,   0x1.d35f15b8926aap+0,   0x1.5875952a2f949p+0,   0x1.cdc92d8080503p-1,
  0x1.178f24b258e95p-1,  0x1.2e89017d37517p-2,   0x1.1ff6a5dc3a45bp-3,   0x1.d5700b627a5eap-5,   0x1.37659861309ecp-6,
  0x1.2831513d8b0afp-8,  0x1.9ba970e0e0f3cp-12,  -0x1.013f37ab5769dp-12, -0x1.1236489e07416p-13, -0x1.67319d42373f4p-16,
  0x1.c9c06fbe5225cp-18, 0x1.2761bd467eb1ep-18,  0x1.c8f773549e4b1p-22,  -0x1.c14303fa76deep-22, -0x1.3e1bc3379a513p-23,
  0x1.89f1232b329c1p-26, 0x1.98d6c2e08d77ap-26,  0x1.beaba6490c40bp-31,  -0x1.b8e8004de0624p-29, -0x1.1f941766b3376p-31,
  0x1.c8b57385ae7f6p-32, 0x1.005e0c593ab93p-33,  -0x1.e7ad5a78d0b05p-35, -0x1.7affdadc31319p-36, 0x1.1a8b5c2689ddfp-37,
  0x1.07407bd7d61e8p-38, -0x1.6edc214ab1583p-40,
};

/* The positive zeros of the Hermite polynomial of degree 16 and their weights over sqrt (pi); 40 digits, rounded. */
static const struct
{
  double place, weight;
} hermite[8] = {
  { 0x1.180b6a54f4f93p-2, 0x1.257237eb1f126p-2 },  { 0x1.a559e4708b514p-1, 0x1.4446e8a55665bp-3 },
  { 0x1.61589fa5e2491p+0, 0x1.835b501eb7e78p-5 },  { 0x1.f3a860b5b5faap+0, 0x1.dc3efb56d3436p-8 },
  { 0x1.45e9f3ca7ad2fp+1, 0x1.13c480766c60bp-11 }, { 0x1.96a7e8960fc8ep+1, 0x1.00b123449bbfap-16 },
  { 0x1.ef4a11a67997ep+1, 0x1.19350d2723044p-23 }, { 0x1.2c144c7cf336dp+2, 0x1.495f790d99a13p-33 },
};

/* (2k - 1)!! / 2^k: of i w (z) sqrt (pi) z in powers of 1 / z^2. */
static const double asymptotic[13] = { 1,
                                       0.5,
                                       0.75,
                                       1.875,
                                       6.5625,
                                       29.53125,
                                       162.421875,
                                       1055.7421875,
                                       7918.06640625,
                                       67303.564453125,
                                       639383.8623046875,
                                       6713530.554199219,
                                       77205601.37329102 };

/* c0 + c1 Z + ... for the complex number Z with real part @re, imaginary part @im and squared modulus @square. */
KERNEL void
polynomial (const double *c, int degree, V re, V im, V square, V *sum_re, V *sum_im)
{
  V r = re + re, b1 = splat (c[degree]), b2 = splat (0);

#pragma GCC unroll 32
  for (int k = degree - 1; k >= 1; k--)
    {
      V b = (c[k] - square * b2) + r * b1;

      b2 = b1;
      b1 = b;
    }
  *sum_re = (c[0] - square * b2) + re * b1;
  *sum_im = im * b1;
}

/* Re w (x + i y), y >= 0, and its derivatives by x and y. */
KERNEL void
near_by (V x, double y, V *value, V *by_x, V *by_y)
{
  const double above = WEIDEMAN_L + y, below_l = WEIDEMAN_L - y;
  V xx = x * x, inverse = 1.0 / (above * above + xx), re, im, k, l;
  V vr = above * inverse, vi = x * inverse; /* v = 1 / (L - i z); Z = (L + i z) / (L - i z) */

  polynomial (weideman, 31, (above * below_l - xx) * inverse, vi * (2 * WEIDEMAN_L), (below_l * below_l + xx) * inverse, &re,
              &im);
  {
    /* w = v (2 p v + 1 / sqrt pi) */
    V tr = 2.0 * (re * vr - im * vi) + 0.5 * TWO_OVER_SQRT_PI, ti = 2.0 * (re * vi + im * vr);

    k = tr * vr - ti * vi;
    l = tr * vi + ti * vr;
  }
  /* w' = dRe/dx + i dIm/dx = -2 z w + 2 i / sqrt pi, and dRe/dy = -dIm/dx. */
  *value = k;
  *by_x = 2.0 * (y * l - x * k);
  *by_y = 2.0 * (x * l + y * k) - TWO_OVER_SQRT_PI;
}

/* The same for @square = |x + i y|^2 above FAR; derivatives only with @slopes. */
KERNEL void
far_by (V x, double y, V square, gboolean slopes, V *value, V *by_x, V *by_y)
{
  static const double factors[13] = { 1,
                                      1.5,
                                      3.75,
                                      13.125,
                                      59.0625,
                                      324.84375,
                                      2111.484375,
                                      15836.1328125,
                                      134607.12890625,
                                      1278767.724609375,
                                      13427061.108398438,
                                      154411202.74658203,
                                      1930140034.3322754 }; /* (2k + 1) times the others */
  V inverse = 1.0 / square, inverse2 = inverse * inverse;
  V ur = (x * x - y * y) * inverse2, ui = (-2 * y) * x * inverse2, re, im; /* u = 1 / z^2 */

  polynomial (asymptotic, 12, ur, ui, inverse2, &re, &im);
  *value = (y * re - x * im) * inverse * (0.5 * TWO_OVER_SQRT_PI);
  *by_x = *by_y = splat (0);
  if (!slopes)
    return;
  polynomial (factors, 12, ur, ui, inverse2, &re, &im);
  *by_x = (ur * im + ui * re) * (0.5 * TWO_OVER_SQRT_PI);
  *by_y = (ur * re - ui * im) * (0.5 * TWO_OVER_SQRT_PI);
}

KERNEL void
voigt_by_faddeeva (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  const double inverse = 1 / q[1], scale = 2 * SQRT_LN2 * inverse, y = SQRT_LN2 * q[2] * inverse;
  double height, peak_slope;
  V peak, nothing, slope;

  near_by (splat (0), y, &peak, &nothing, &slope);
  height = 1 / peak[0];
  peak_slope = slope[0] * height;
  for (gsize i = 0; i < n; i += LANES)
    {
      V u = (load (x + i) - q[0]) * scale, square = u * u + y * y;
      V value = splat (0), by_u = value, by_y = value;
      const guint far = lanes_above (square, FAR);

      if (far != ALL_LANES)
        near_by (u, y, &value, &by_u, &by_y);
      if (far != 0)
        {
          V far_value, far_by_u, far_by_y;

          far_by (u, y, square, df != NULL, &far_value, &far_by_u, &far_by_y);
          if (far == ALL_LANES)
            value = far_value, by_u = far_by_u, by_y = far_by_y;
          else
            {
              value = below (splat (FAR), square, far_value, value);
              by_u = below (splat (FAR), square, far_by_u, by_u);
              by_y = below (splat (FAR), square, far_by_y, by_y);
            }
        }
      value *= height;
      store (f + i, value);
      if (df != NULL)
        {
          by_u *= height;
          by_y = by_y * height - value * peak_slope;
          store_column (df, 0, i, by_u * -scale);
          store_column (df, 1, i, (u * by_u + y * by_y) * -inverse);
          store_column (df, 2, i, by_y * (SQRT_LN2 * inverse));
        }
    }
}

/* Sums over the nodes at t half Lorentzian widths from the centre, nodes at @h times their places; and derivatives by t and h.
 * With a = t - e and b = t + e the pair's derivatives a / (1 + a^2)^2 +- b / (1 + b^2)^2 are written as products with t and e,
 * so that nothing cancels where h is small. */
KERNEL void
convolve (V t, double h, V *sum, V *by_t, V *by_h)
{
  V along = splat (0), across = splat (0);

  *sum = splat (0);
#pragma GCC unroll 8
  for (int k = 0; k < 8; k++)
    {
      const double e = hermite[k].place * h, weight = hermite[k].weight;
      V a = t - e, b = t + e, ab = a * b, squares = a * a + b * b;
      V p = 1.0 + a * a, q = 1.0 + b * b, inverse = 1.0 / (p * q), share = ab * inverse, inverse2 = inverse * inverse;

      *sum += weight * ((p + q) * inverse);
      along += weight * ((1.0 + 2.0 * ab) * inverse2 + share * ((squares - ab) * inverse));
      across += (weight * hermite[k].place * e) * ((1.0 - 2.0 * ab) * inverse2 - share * ((squares + ab) * inverse));
    }
  *by_t = -4.0 * t * along;
  *by_h = -4.0 * across;
}

KERNEL void
voigt_by_nodes (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  const double inverse = 1 / q[2], h = q[1] * inverse / SQRT_LN2;
  double height, peak_slope;
  V peak, nothing, slope;

  convolve (splat (0), h, &peak, &nothing, &slope);
  height = 1 / peak[0];
  peak_slope = slope[0];
  for (gsize i = 0; i < n; i += LANES)
    {
      V t = (load (x + i) - q[0]) * (2 * inverse), sum, by_t, by_h, value;

      convolve (t, h, &sum, &by_t, &by_h);
      value = sum * height;
      store (f + i, value);
      if (df != NULL)
        {
          by_t = by_t * height;
          by_h = (by_h - value * peak_slope) * height;
          store_column (df, 0, i, by_t * (-2 * inverse));
          store_column (df, 1, i, by_h * (inverse / SQRT_LN2));
          store_column (df, 2, i, (t * by_t + h * by_h) * -inverse);
        }
    }
}

ENTRY void
voigt (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  if (SQRT_LN2 * q[2] < MANY_NODES_FROM * q[1])
    voigt_by_faddeeva (q, x, n, f, df);
  else
    voigt_by_nodes (q, x, n, f, df);
}
