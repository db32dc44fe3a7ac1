/* The portable loops, the choice between the instruction sets, and the small solves that need neither. */
#define KERNEL(name) name
#include "kernel-loops.h"

const BtKernel bt_kernel_portable = { "portable", products, add, difference, dot, weigh, cholesky, append };

/* The widest the processor has, or what BANDTALLY_KERNEL asks for. */
const BtKernel *
bt_kernel (void)
{
#if defined(__x86_64__)
  static gsize chosen;

  if (g_once_init_enter (&chosen))
    {
      const char *wish = g_getenv ("BANDTALLY_KERNEL");
      const BtKernel *kernel = &bt_kernel_portable;

      if (__builtin_cpu_supports ("avx2") && __builtin_cpu_supports ("fma") && g_strcmp0 (wish, "portable") != 0)
        {
          kernel = &bt_kernel_avx2;
          if (__builtin_cpu_supports ("avx512f") && __builtin_cpu_supports ("avx512vl") && __builtin_cpu_supports ("avx512dq")
              && g_strcmp0 (wish, "avx2") != 0)
            kernel = &bt_kernel_avx512;
        }
      g_once_init_leave (&chosen, (gsize)kernel);
    }
  return (const BtKernel *)chosen;
#else
  return &bt_kernel_portable;
#endif
}

void
bt_upper_solve (const double *u, gsize m, gsize stride, double *b)
{
  for (gsize k = m; k-- > 0;)
    {
      const double *row = u + k * stride;
      double s0 = 0, s1 = 0, s2 = 0, s3 = 0;
      gsize j = k + 1;

      for (; j + 4 <= m; j += 4)
        {
          s0 += row[j] * b[j];
          s1 += row[j + 1] * b[j + 1];
          s2 += row[j + 2] * b[j + 2];
          s3 += row[j + 3] * b[j + 3];
        }
      for (; j < m; j++)
        s0 += row[j] * b[j];
      b[k] = (b[k] - ((s0 + s1) + (s2 + s3))) / row[k];
    }
}

void
bt_cholesky_solve (const double *u, gsize m, gsize stride, double *b)
{
  for (gsize k = 0; k < m; k++)
    {
      const double *row = u + k * stride, value = b[k] /= row[k];

      for (gsize j = k + 1; j < m; j++)
        b[j] -= row[j] * value;
    }
  bt_upper_solve (u, m, stride, b);
}

void
bt_upper_invert (const double *u, gsize m, gsize stride, double *inverse)
{
  for (gsize k = m; k-- > 0;)
    {
      double *row = inverse + k * stride;
      const double one_over = 1 / u[k * stride + k];

      memset (row + k, 0, sizeof (double) * (m - k));
      for (gsize i = k + 1; i < m; i++)
        {
          const double *below = inverse + i * stride, factor = u[k * stride + i];

          for (gsize j = i; j < m; j++)
            row[j] -= factor * below[j];
        }
      for (gsize j = k + 1; j < m; j++)
        row[j] *= one_over;
      row[k] = one_over;
    }
}
