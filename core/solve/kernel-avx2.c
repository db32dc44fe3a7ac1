/* The same loops for AVX2 with fused multiply-add. */
#if defined(__x86_64__)
#pragma GCC target("avx2,fma")
#define KERNEL(name) name##_avx2
#include "kernel-loops.h"

const BtKernel bt_kernel_avx2
    = { "avx2", products_avx2, add_avx2, difference_avx2, dot_avx2, weigh_avx2, cholesky_avx2, append_avx2 };
#endif
