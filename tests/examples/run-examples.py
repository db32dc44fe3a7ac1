#!/usr/bin/python3
"""Runs the example and compares what it prints with NIST's certified values (tests/solve/nist-strd/Misra1a.dat)."""
import re
import subprocess
import sys

EXPECTED = {"b1": (2.3894212918e02, 2.7070075241e00), "b2": (5.5015643181e-04, 7.2668688436e-06)}

run = subprocess.run([sys.argv[1]], capture_output=True, text=True)
found = {n: (float(v), float(u)) for n, v, u in re.findall(r"(\w+) = (\S+) \+- (\S+)", run.stdout)}
print("1..%d" % len(EXPECTED))
for i, (name, (value, u)) in enumerate(EXPECTED.items(), 1):
    v, s = found.get(name, (0, 0))
    good = run.returncode == 0 and abs(v / value - 1) < 1e-7 and abs(s / u - 1) < 1e-3
    print("%sok %d - example fits %s" % ("" if good else "not ", i, name))
