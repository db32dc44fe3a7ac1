#!/usr/bin/python3
"""Runs the Python example and compares what it prints with the values that NIST certifies in the data file itself; then tries what a script may do wrong.
Arguments: the example, the data."""
import re
import subprocess
import sys

import gi

gi.require_version("Bandtally", "0")
from gi.repository import Bandtally, Gio, GLib  # noqa: E402

example, data = sys.argv[1:3]
number = r"(-?\d\.\d+E[-+]\d+)"
certified = {}
for line in open(data, encoding="ascii").read().splitlines()[:60]:
    match = re.match(rf"\s*(b\d) =\s+\S+\s+\S+\s+{number}\s+{number}", line)
    if match:
        certified[match[1]] = (float(match[2]), float(match[3]))

count = 0


def ok(good, name):
    global count
    count += 1
    print(f"{'ok' if good else 'not ok'} {count} - {name}", flush=True)


run = subprocess.run(["/usr/bin/python3", example, data], capture_output=True, text=True)
found = {n: (float(v), float(u)) for n, v, u in re.findall(r"(b\d) = (\S+) \+- (\S+)", run.stdout)}
ok(len(certified) == 8, "the file certifies eight values")
for name, (value, u) in certified.items():
    v, s = found.get(name, (0, 0))
    ok(run.returncode == 0 and abs(v / value - 1) < 1e-7 and abs(s / u - 1) < 1e-4, f"{name} is NIST's {value:.9g} +- {u:.4g}: {v:.9g} +- {s:.4g}")

x = [0.1 * i for i in range(60)]
y = [2 / (1 + (2 * (t - 3) / 0.8) ** 2) + 0.01 * ((37 * i) % 11 - 5) for i, t in enumerate(x)]
fit = Bandtally.Fit.new(x, y, [0.03] * len(x))
band = fit.add_shape(Bandtally.Shape.LORENTZIAN, [2.7, 1.0])
result = fit.solve(None, None)
best = result.dup_x()
ok(abs(best[band + 1] - 3) < 0.01 and result.n_points == 60, "a band is found")
curve = fit.dup_curve(best, x)
ok(len(curve) == 60 and abs(sum((a - b) ** 2 for a, b in zip(curve, y)) / 0.03 ** 2 / result.chi2 - 1) < 1e-9, "its curve has the chi2 that is told")
inside, low, high = fit.profile(result, band + 1, 0.95)
ok(low < best[band + 1] < high, "the profile interval is about it")
one = fit.dup_resamples(result, Bandtally.ResampleKind.NOISE, 0, 40, True, 7, 1, None)
two = fit.dup_resamples(result, Bandtally.ResampleKind.NOISE, 0, 40, True, 7, 2, None)
ok(len(one) == 40 * len(best) and one == two, "resamples are the same on one thread and on two")
stop = Gio.Cancellable()
stop.cancel()
try:
    fit.solve(None, stop)
    ok(False, "a cancelled fit is an exception")
except GLib.Error as error:
    ok(bool(error.message), "a cancelled fit is an exception")
print(f"1..{count}")
