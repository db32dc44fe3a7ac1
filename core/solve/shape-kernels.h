/* All kernels for one instruction set: see shape-vector.h for what to define first. Ends with their table, called KERNELS. */
#include "shape-private.h"

#include "shape-vector.h"

#include "exponential-kernel.h"

#include "shape-peaks.h"
#include "shape-tails.h"
#include "shape-voigt.h"

const BtShapeKernels KERNELS = {
  .lanes = LANES,
  .eval = {
    [BT_SHAPE_CONSTANT] = constant,
    [BT_SHAPE_LINE] = line,
    [BT_SHAPE_GAUSSIAN] = gaussian,
    [BT_SHAPE_LORENTZIAN] = lorentzian,
    [BT_SHAPE_VOIGT] = voigt,
    [BT_SHAPE_PSEUDO_VOIGT] = pseudo_voigt,
    [BT_SHAPE_FANO] = fano,
    [BT_SHAPE_EXPONENTIAL] = exponential,
    [BT_SHAPE_RECIPROCAL_EXPONENTIAL] = reciprocal_exponential,
    [BT_SHAPE_POWER] = power,
    [BT_SHAPE_PLASMON] = plasmon,
  },
  .exponential = exponentials,
  .logarithm = logarithms,
};
