/* The kernels of the shapes for any processor. */
#define LANES 2
#define TARGET
#define KERNELS bt_shape_kernels_plain
#include "shape-kernels.h"
