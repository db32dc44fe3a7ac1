/* Kernels: constant, line, exponentials and power. */

ENTRY void
constant (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i++)
    f[i] = 1;
}

ENTRY void
line (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i++)
    f[i] = x[i] - q[0];
}

ENTRY void
exponential (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i += LANES)
    {
      V l = load (x + i) - q[1], e = exp_full (l * -q[0]);

      store (f + i, e);
      store_column (df, 0, i, -l * e);
    }
}

ENTRY void
reciprocal_exponential (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i += LANES)
    {
      V v = load (x + i), l = (q[1] - v) / (v * q[1]), e = exp_full (l * -q[0]);

      store (f + i, e);
      store_column (df, 0, i, -l * e);
    }
}

ENTRY void
power (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i += LANES)
    {
      V r = load (x + i) / q[1];
      V l = below (r, splat (0x1p-1022), splat (NAN), log_normal (r) + (r - r)); /* r - r: infinities and NaN give NaN */
      V e = exp_full (l * -q[0]);

      store (f + i, e);
      store_column (df, 0, i, -l * e);
    }
}

/* Not shapes: exp and log of x. */
ENTRY void
exponentials (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i += LANES)
    store (f + i, exp_full (load (x + i)));
}

ENTRY void
logarithms (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i += LANES)
    store (f + i, log_normal (load (x + i)));
}
