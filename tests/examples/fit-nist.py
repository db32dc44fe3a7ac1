#!/usr/bin/python3
"""A fit in 30 lines, from Python: an exponential and two Gaussians, NIST's problem Gauss1. Argument: the data, Gauss1.dat."""
import sys

import gi

gi.require_version("Bandtally", "0")
from gi.repository import Bandtally  # noqa: E402

rows = [line.split() for line in open(sys.argv[1], encoding="ascii").read().splitlines()[60:]]
y, x = [float(row[0]) for row in rows], [float(row[1]) for row in rows]

fit = Bandtally.Fit.new(x, y, None)
# NIST writes exp(-((x - b4) / b5)^2); a Gaussian here has its full width at half maximum, 2 sqrt(ln 2) b5.
factor = 1.6651092223153954
tail = fit.add_shape(Bandtally.Shape.EXPONENTIAL, [0.01, 0])
first = fit.add_shape(Bandtally.Shape.GAUSSIAN, [65, factor * 20])
second = fit.add_shape(Bandtally.Shape.GAUSSIAN, [178, factor * 16.5])
for amplitude, start in ((tail, 97), (first, 100), (second, 70)):
    fit.set_start(amplitude, start)
result = fit.solve(None, None)
value, u = result.dup_x(), result.dup_u()
names = {"b1": tail, "b2": tail + 1, "b3": first, "b4": first + 1, "b5": first + 2, "b6": second, "b7": second + 1, "b8": second + 2}
for name, i in names.items():
    scale = factor if name in ("b5", "b8") else 1
    print(f"{name} = {value[i] / scale:.9g} +- {u[i] / scale:.6g}")
