/* Kernels: Gaussian, Lorentzian and what is made of them. */

#define LN16 2.772588722239781 /* 4 ln 2 */

ENTRY void
gaussian (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  const double inverse = 1 / q[1], slope = 2 * LN16 * inverse;

  for (gsize i = 0; i < n; i += LANES)
    {
      V u = (load (x + i) - q[0]) * inverse, g = exp_flushed (u * u * -LN16);

      store (f + i, g);
      if (df != NULL)
        {
          V d = u * g * slope;

          store_column (df, 0, i, d);
          store_column (df, 1, i, u * d);
        }
    }
}

/* @inverse: 1 / half width; @per: derivative of the half width by the width parameter. */
KERNEL void
lorentzian_of (double centre, double inverse, double per, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i += LANES)
    {
      V u = (load (x + i) - centre) * inverse, l = 1.0 / (1.0 + u * u);

      store (f + i, l);
      if (df != NULL)
        {
          V d = u * l; /* before squaring, or far away infinity times 0 */

          store_column (df, 0, i, d * l * (2 * inverse));
          store_column (df, 1, i, d * d * (2 * inverse * per));
        }
    }
}

ENTRY void
lorentzian (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  lorentzian_of (q[0], 2 / q[1], 0.5, x, n, f, df);
}

ENTRY void
plasmon (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  lorentzian_of (q[0], 1 / q[1], 1, x, n, f, df);
}

ENTRY void
pseudo_voigt (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  const double inverse = 1 / q[1], share = q[2], rest = 1 - share;

  for (gsize i = 0; i < n; i += LANES)
    {
      V u = (load (x + i) - q[0]) * inverse, g = exp_flushed (u * u * -LN16), l = 1.0 / (1.0 + 4.0 * u * u);

      store (f + i, rest * g + share * l);
      if (df != NULL)
        {
          V ul = u * l;
          V dg = u * g * (2 * LN16 * inverse * rest), dl = ul * (8 * inverse * share);

          store_column (df, 0, i, dg + dl * l);
          store_column (df, 1, i, u * dg + dl * ul);
          store_column (df, 2, i, l - g);
        }
    }
}

ENTRY void
fano (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  const double inverse = 2 / q[1], a = q[2], norm = 1 / (1 + a * a);

  for (gsize i = 0; i < n; i += LANES)
    {
      V u = (load (x + i) - q[0]) * inverse, l = 1.0 / (1.0 + u * u), s = u + a;

      store (f + i, s * (s * l) * norm);
      if (df != NULL)
        {
          V common = (s * l) * (1.0 - a * u) * (2 * norm); /* df/da = common norm, df/du = common l */
          V d = common * l * -inverse;

          store_column (df, 0, i, d);
          store_column (df, 1, i, 0.5 * u * d);
          store_column (df, 2, i, common * norm);
        }
    }
}
