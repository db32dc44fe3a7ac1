/* The kernels of the shapes for x86-64 with AVX2 and fused multiply-add. */
#include "shape-private.h"

#ifdef BT_HAVE_AVX
#define LANES 4
#define TARGET __attribute__ ((target ("avx2,fma")))
#define KERNELS bt_shape_kernels_avx2
#include "shape-kernels.h"
#endif
