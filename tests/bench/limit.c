/* What the processor allows for one pass of a fit of bands: the same shapes over the same blocks, their products and nothing
 * else. Run it beside the fit benchmark; a fit cannot take less than its passes times this. A measurement, not a test.
 *
 * A pass writes value and two derivatives of every band in the blocks where the band is above 1e-16 of its height, those of a
 * tail, a constant and a residual, and sums all products of columns of a block. Floors: values at the speed of one long array,
 * products at the speed of multiply-adds in registers. Bands lie as in the workloads film-4, film-12 and film-20. Prints one
 * JSON line each, best of 25. */
#include <bandtally/shape.h>

#include "kernel-private.h"

#include <math.h>
#include <stdio.h>
#include <string.h>

enum
{
  BLOCK = 64,
  MOST_POINTS = 4096,
  MOST_COLUMNS = 72
};

static double energy[MOST_POINTS] __attribute__ ((aligned (64)));
static double g[MOST_COLUMNS * MOST_COLUMNS], columns[MOST_COLUMNS][BLOCK] __attribute__ ((aligned (64)));
static volatile double sink;

static double
seconds (void)
{
  return (double)g_get_monotonic_time () * 1e-6;
}

/* Multiply-adds a second, in independent vectors of what this file was built for and of what the processor has. */
typedef double Eight __attribute__ ((vector_size (64)));

static inline __attribute__ ((always_inline)) double
chain (long n)
{
  Eight s0 = { 0 }, s1 = s0, s2 = s0, s3 = s0, s4 = s0, s5 = s0, s6 = s0, s7 = s0, s8 = s0, s9 = s0;
  const Eight k = s0 + 0.999999, d = s0 + 1e-9;

  for (long i = 0; i < n; i++)
    {
      s0 = s0 * k + d;
      s1 = s1 * k + d;
      s2 = s2 * k + d;
      s3 = s3 * k + d;
      s4 = s4 * k + d;
      s5 = s5 * k + d;
      s6 = s6 * k + d;
      s7 = s7 * k + d;
      s8 = s8 * k + d;
      s9 = s9 * k + d;
    }
  s0 += s1 + s2 + s3 + s4 + s5 + s6 + s7 + s8 + s9;
  return s0[0] + s0[7];
}

static double
chain_plain (long n)
{
  return chain (n);
}

#if defined(__x86_64__)
__attribute__ ((target ("avx2,fma"))) static double
chain_avx2 (long n)
{
  return chain (n);
}

__attribute__ ((target ("avx512f,prefer-vector-width=512"))) static double
chain_avx512 (long n)
{
  return chain (n);
}
#endif

static double
multiply_adds (void)
{
  double (*run) (long) = chain_plain, best = 0;

#if defined(__x86_64__)
  if (__builtin_cpu_supports ("avx2") && __builtin_cpu_supports ("fma"))
    run = chain_avx2;
  if (__builtin_cpu_supports ("avx512f"))
    run = chain_avx512;
#endif
  for (int i = 0; i < 25; i++)
    {
      const double before = seconds ();

      sink = run (20000);
      best = fmax (best, 20000 * 80 / (seconds () - before));
    }
  return best;
}

/* Nanoseconds a value with two derivatives. */
static double
band_value (void)
{
  static double f[1024], df[2][1024];
  double *const to[] = { df[0], df[1] }, best = INFINITY;

  for (int i = 0; i < 25; i++)
    {
      const double before = seconds ();

      for (int k = 0; k < 20; k++)
        bt_shape_eval (BT_SHAPE_GAUSSIAN, (double[]){ 2, 0.5 }, energy, 1024, f, to);
      best = fmin (best, (seconds () - before) / (20 * 1024));
    }
  return best * 1e9;
}

typedef struct
{
  const char *name;
  int points, bands;
} Workload;

/* Fills the columns block by block; counts values and products. */
static void
fill (const Workload *work, const BtKernel *kernel, double *values, double *products)
{
  guint index[MOST_COLUMNS];
  const double width = 1.15 * fmin (0.16, 2.55 / work->bands);

  *values = *products = 0;
  for (int from = 0; from < work->points; from += BLOCK)
    {
      const double low = energy[from], high = energy[MIN (from + BLOCK, work->points) - 1];
      int m = 0;

      for (int j = 0; j < work->bands; j++)
        {
          const double q[] = { 0.85 + 2.55 * j / (work->bands - 1), width };
          double above, below, *const to[] = { columns[m + 1], columns[m + 2] };

          bt_shape_support (BT_SHAPE_GAUSSIAN, q, 1e-16, &below, &above);
          if (above < low || below > high)
            continue;
          bt_shape_eval (BT_SHAPE_GAUSSIAN, q, energy + from, BLOCK, columns[m], to);
          m += 3;
          *values += BLOCK;
        }
      bt_shape_eval (BT_SHAPE_LORENTZIAN, (double[]){ 4.6, 2.2 }, energy + from, BLOCK, columns[m],
                     (double *[]){ NULL, columns[m + 1] });
      m += 4;
      for (int a = 0; a < m; a++)
        index[a] = (guint)a;
      if (kernel != NULL)
        kernel->products (columns[0], (guint)m, index, g, MOST_COLUMNS);
      *products += BLOCK * m * (m + 1) / 2.0;
    }
  sink = columns[0][0];
}

int
main (void)
{
  static const Workload workloads[] = { { "film-4", 1301, 4 }, { "film-12", 1301, 12 }, { "film-20", 4000, 20 } };
  const double rate = multiply_adds ();
  double one;

  for (int i = 0; i < MOST_POINTS; i++)
    energy[i] = 0.77 + 3.36 * i / MOST_POINTS;
  one = band_value ();
  printf ("{\"what\": \"floors\", \"band_value_ns\": %.3f, \"multiply_adds_per_ns\": %.1f}\n", one, rate * 1e-9);
  for (gsize w = 0; w < G_N_ELEMENTS (workloads); w++)
    {
      const Workload *work = &workloads[w];
      double values, products, best[2] = { INFINITY, INFINITY };

      /* Even in wavelength, ascending in energy. */
      for (int i = 0; i < MOST_POINTS; i++)
        energy[i] = 1239.841984 / (1600 - 1300.0 * MIN (i, work->points - 1) / (work->points - 1));
      for (int with = 0; with < 2; with++)
        for (int i = 0; i < 25; i++)
          {
            const double before = seconds ();

            for (int k = 0; k < 20; k++)
              fill (work, with ? bt_kernel () : NULL, &values, &products);
            best[with] = fmin (best[with], (seconds () - before) / 20);
          }
      printf ("{\"workload\": \"%s\", \"what\": \"one pass\", \"columns_us\": %.1f, \"pass_us\": %.1f, \"floor_us\": %.1f}\n",
              work->name, best[0] * 1e6, best[1] * 1e6, best[0] * 1e6 + products / rate * 1e6);
    }
  return 0;
}
