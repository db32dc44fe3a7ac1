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
      V l = load (x + i, n - i) - q[1], e = exp_full (l * -q[0]);

      store (f + i, n - i, e);
      store_column (df, 0, i, n, -l * e);
    }
}

ENTRY void
reciprocal_exponential (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i += LANES)
    {
      V v = load (x + i, n - i), l = (q[1] - v) / (v * q[1]), e = exp_full (l * -q[0]);

      store (f + i, n - i, e);
      store_column (df, 0, i, n, -l * e);
    }
}

ENTRY void
power (const double *q, const double *x, gsize n, double *f, double *const *df)
{
  for (gsize i = 0; i < n; i += LANES)
    {
      V r = load (x + i, n - i) / q[1], l = log_normal (r), e;

      l = pick ((r >= 0x1p-1022) & (r <= 0x1.fffffffffffffp1023), l, splat (NAN));
      e = exp_full (l * -q[0]);
      store (f + i, n - i, e);
      store_column (df, 0, i, n, -l * e);
    }
}

/* Not a shape: exp of an array, for the tests and whoever needs it. */
ENTRY void
exponentials (const double *x, gsize n, double *out)
{
  for (gsize i = 0; i < n; i += LANES)
    store (out + i, n - i, exp_full (load (x + i, n - i)));
}

ENTRY void
logarithms (const double *x, gsize n, double *out)
{
  for (gsize i = 0; i < n; i += LANES)
    store (out + i, n - i, log_normal (load (x + i, n - i)));
}
