/* The same loops for AVX-512, with larger tiles. */
#if defined(__x86_64__)
#pragma GCC target("avx512f,avx512vl,avx512dq,avx2,fma,prefer-vector-width=512")
#define KERNEL(name) name##_avx512
#define WIDE_REGISTERS
#include "kernel-loops.h"

const BtKernel bt_kernel_avx512 = { "avx512",     products_avx512, add_avx512,  difference_avx512, dot_avx512,
                                    weigh_avx512, cholesky_avx512, append_avx512 };
#endif
