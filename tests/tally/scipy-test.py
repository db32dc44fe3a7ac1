#!/usr/bin/python3
"""The fit of one film against scipy.optimize.least_squares (trust region reflective), an independent solver, on the same data and the same
form of model: tail, offset and one band a group with wings and sidebands. scipy knows neither the weights nor the priors. Prints TAP.
Usage: scipy-test.py BANDTALLY-CLI"""
import json
import os
import subprocess
import sys
import tempfile

import numpy as np
from scipy.optimize import least_squares

HC_EV_NM = 1239.8419843320026
GROUPS = ["S11", "S22", "M11"]
checks = []


def check(name, good, text=""):
    checks.append(good)
    print("%s %d - %s%s" % ("ok" if good else "not ok", len(checks), name, " # " + text if text else ""), flush=True)


def line(e, centre, fwhm, wings):
    u = (e - centre) / fwhm
    return (1 - wings) * np.exp(-4 * np.log(2) * u * u) + wings / (1 + 4 * u * u)


def model(p, e):
    height, centre, width, offset, wings, side = p[:6]
    y = height / (1 + ((e - centre) / width) ** 2) + offset
    for group, (h, c, w) in zip(GROUPS, p[6:].reshape(-1, 3)):
        band = line(e, c, w, wings)
        if group in ("S11", "S22"):
            band = (1 - side) * band + side / 1.8 * line(e, c + 0.2, 1.8 * w, wings)
        y = y + h * band
    return y


def area(p, index):
    h, _, w = p[6 + 3 * index:9 + 3 * index]
    return h * w * ((1 - p[4]) * np.sqrt(np.pi / (4 * np.log(2))) + p[4] * np.pi / 2)


def main():
    cli = sys.argv[1]
    with tempfile.TemporaryDirectory() as folder:
        film, recipe = os.path.join(folder, "film.csv"), os.path.join(folder, "recipe.json")
        subprocess.run([cli, "forecast", "--seed", "5", "--scatter", "0.1", "--fraction", "0.6", "--output", film], check=True)
        with open(recipe, "w") as f:
            # Up to where S33 begins, so that the data alone decide and not what is known beforehand of higher transitions.
            json.dump({"tails": ["plasmon"], "diameter_nm": 1.4, "diameter_spread_nm": 0.1, "range_ev": [0.5, 2.1],
                       "max_bands": {"S11": 1, "S22": 1, "M11": 1, "S33": 0, "S44": 0, "M22": 0}}, f)
        out = subprocess.run([cli, "grade", "--recipe", recipe, "--json", "-", film], check=True, capture_output=True, text=True).stdout
        tally = json.loads(out)["films"][0]
        data = np.loadtxt(film, delimiter=",", comments=["#", "w"])
    energy, absorbance = HC_EV_NM / data[::-1, 0], data[::-1, 1]
    low, high = tally["fitted_range_ev"]
    # Even weight along the energy axis: means over bins of 3 meV.
    bins = np.floor((energy - low) / 0.003).astype(int)
    keep = (energy >= low) & (energy <= high)
    e = np.array([energy[keep & (bins == b)].mean() for b in np.unique(bins[keep])])
    y = np.array([absorbance[keep & (bins == b)].mean() for b in np.unique(bins[keep])])
    start = np.array([0.8, 4.6, 1.2, 0.0, 0.1, 0.06, 0.4, 0.7, 0.15, 0.15, 1.24, 0.25, 0.06, 1.77, 0.35])
    lower = np.array([0, 4.0, 0.4, -0.02, 0, 0] + [0, 0.55, 0.055, 0, 1.0, 0.08, -1, 1.5, 0.11])
    upper = np.array([20, 5.6, 4.0, 1, 0.6, 0.2] + [5, 0.85, 0.3, 5, 1.5, 0.5, 5, 2.1, 0.6])
    fit = least_squares(lambda p: (model(p, e) - y) / 1e-3, start, bounds=(lower, upper), x_scale="jac", xtol=1e-12, ftol=1e-12, max_nfev=4000)
    check("scipy converged", fit.success)
    bands = {b["group"]: b for b in tally["bands"]}
    for index, group in enumerate(GROUPS):
        ours, theirs = bands[group], fit.x[6 + 3 * index:9 + 3 * index]
        for name, value, u, other in (("centre", ours["centre_ev"], ours["centre_u_ev"], theirs[1]),
                                      ("FWHM", ours["fwhm_ev"], ours["fwhm_u_ev"], theirs[2]),
                                      ("area", ours["area"], ours["area_u"], area(fit.x, index))):
            # Expanded uncertainty, k = 2 (JCGM 100:2008, 6.2).
            check("%s of %s" % (name, group), abs(value - other) <= 2 * u, "%.5f +- %.5f, scipy %.5f" % (value, u, other))
    fraction = area(fit.x, 1) / (area(fit.x, 1) + area(fit.x, 2))
    ours = tally["semiconducting_fraction"]
    check("fraction", ours["low"] <= fraction <= ours["high"], "%.4f, scipy %.4f" % (ours["value"], fraction))
    print("1..%d" % len(checks))
    return 0 if all(checks) else 1


sys.exit(main())
