/* The kernels of the shapes for any processor. */
#define LANES 2
#define TARGET
#include "shape-kernels.h"

const BtShapeKernels bt_shape_kernels_plain = TABLE;
