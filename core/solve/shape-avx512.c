/* The kernels of the shapes for x86-64 with AVX-512. */
#include "shape-private.h"

#ifdef BT_HAVE_AVX
#define LANES 8
#define TARGET __attribute__ ((target ("avx512f,avx512dq,avx2,fma")))
#define KERNELS bt_shape_kernels_avx512
#include "shape-kernels.h"
#endif
