#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""The same wind, mesh tolerance and opacity by SciPy's solve_bvp, timed beside the program in one run.

  twin_scipy.py LUXGALE BENCH_WIND

Both go from the wind with launch radius 2.00e10 cm to its neighbour with 2.02e10 cm at base temperature 1e8 K (1 Msun, X = 0.35,
Z = 0.02, opacity `reference`), warm-started; luxgale to a residual of 8e-7, solve_bvp to a hundred times that. solve_bvp gets vectorised equations, the critical point at
the ends of both pieces (slope there by L'Hopital's rule from differences), unknown parameters (ln Mdot, lambda, ln R_ph).
"""

import re
import subprocess
import sys
import time

import numpy as np
import yaml
from astropy.table import Table
from scipy.integrate import solve_bvp

C, G, K, MU, SIGMA = 2.99792458e10, 6.67430e-8, 1.380649e-16, 1.66053906660e-24, 5.670374419e-5
A, GM, R0 = 4 * SIGMA / C, 1.3271244e26, 5.5e8
X, Z = 0.35, 0.02
Y = 1 - X - Z
TOLERANCE = 1e-4  # solve_bvp cannot do better: next to the critical point its explicit slopes are small over small
CT2 = K / MU * (2 * X + 0.75 * Y + 0.5 * Z)
KAPPA_E = 0.2 * (1 + X)
L_EDD = 4 * np.pi * GM * C / KAPPA_E


def opacity(rho, t):
    lt, r = np.log10(t), rho / (t / 1e6) ** 3
    return (KAPPA_E / (1 + (t / 4.5e8) ** 0.86) / (1 + (1.1e4 / t) ** 12)
            + (4.34e25 * Z * (1 + X) + 3.68e22 * (1 - Z) * (1 + X)) * rho * t ** -3.5 / (1 + (2e4 / t) ** 8)
            + 2.0 * (Z / 0.02) ** 0.65 * (r / 1e-5) ** 0.42 * np.exp(-((lt - 5.28) / 0.21) ** 2)
            + 0.33 * Y ** 0.5 * (r / 1e-5) ** 0.8 * np.exp(-((lt - 4.63) / 0.25) ** 2))


def local(x, lnv, lnt, lnm, lam):
    r, v, t = np.exp(x), np.exp(lnv), np.exp(lnt)
    g = GM / r
    rho = np.exp(lnm) / (4 * np.pi * r * r * v)
    w, c, h = v * v / g, CT2 * t / g, 4 * A * t ** 4 / (3 * rho) / g
    lhat = lam - np.exp(lnm) * g / L_EDD * (w / 2 + 2.5 * c + h - 1)
    kappa = opacity(rho, t)
    gamma = kappa / KAPPA_E * lhat
    phi = gamma / h
    return w, c, phi, 2 * c + gamma + c * phi - 1, lhat, kappa * rho * r


def critical_slope(x, lnv, lnt, lnm, lam):
    e = 1e-6
    w, c, phi, n, _, _ = local(x, lnv, lnt, lnm, lam)
    nv = (local(x, lnv + e, lnt, lnm, lam)[3] - n) / e
    nt = (local(x, lnv, lnt + e, lnm, lam)[3] - n) / e
    nr = (local(x + e, lnv, lnt, lnm, lam)[3] - n) / e
    a, b, d = 2 * c, c * phi - nv, phi * nt - nr
    return (-b + np.sqrt(np.maximum(b * b - 4 * a * d, 0))) / (2 * a)


class Problem:
    def __init__(self, base_t, rc):
        self.base_t, self.xc = np.log(base_t), np.log(rc)

    def slopes(self, s, y, p):
        lnm, lam, xph = p
        out = np.empty_like(y)
        for k, (x0, x1, end) in enumerate(((np.log(R0), self.xc, 1.0), (self.xc, xph, 0.0))):
            x = x0 + s * (x1 - x0)
            w, c, phi, n, _, _ = local(x, y[2 * k], y[2 * k + 1], lnm, lam)
            with np.errstate(divide="ignore", invalid="ignore"):
                dv = n / (w - c)
            at = s == end
            if np.any(at):
                dv[at] = critical_slope(x[at], y[2 * k, at], y[2 * k + 1, at], lnm, lam)
            out[2 * k], out[2 * k + 1] = (x1 - x0) * dv, -(x1 - x0) * phi
        return out

    def ends(self, ya, yb, p):
        lnm, lam, xph = p
        _, _, _, n, _, _ = local(self.xc, yb[0], yb[1], lnm, lam)
        _, _, _, _, lhat, depth = local(xph, yb[2], yb[3], lnm, lam)
        black_body = 4 * np.pi * SIGMA * np.exp(2 * xph + 4 * yb[3])
        return np.array([ya[1] - self.base_t, 2 * yb[0] - yb[1] - np.log(CT2), ya[2] - yb[0], ya[3] - yb[1], n,
                         np.log(lhat * L_EDD / black_body), np.log(depth / (8 / 3))])


def first_guess(luxgale):
    case = {"case": 1, "star": {"mass": "1.0 Msun", "radius": f"{R0!r} cm"},
            "composition": {"hydrogen": X, "helium": Y, "metals": Z}, "opacity": {"formula": "reference"},
            "hold": {"base_temperature": "1.0e8 K", "launch_radius": "2.0e10 cm"}}
    with subprocess.Popen([luxgale, "wind", "-", "--structure", "/dev/stdout", "-o", "/dev/null"], text=True,
                          stdin=subprocess.PIPE, stdout=subprocess.PIPE) as run:
        table = Table.read(run.communicate(yaml.safe_dump(case))[0].splitlines(), format="ascii.ecsv")
    x, v, t = (np.log(np.array(table[n])) for n in ("radius_cm", "speed_km_s", "temperature_k"))
    v += np.log(1e5)
    tau = np.array(table["opacity_cm2_g"] * table["density_g_cm3"] * table["radius_cm"])
    ph = int(np.argmin(np.abs(tau - 8 / 3)))
    s, xc = np.linspace(0, 1, 400), np.log(2e10)
    inner, outer = np.log(R0) + s * (xc - np.log(R0)), xc + s * (x[ph] - xc)
    y = np.array([np.interp(inner, x, v), np.interp(inner, x, t), np.interp(outer, x, v), np.interp(outer, x, t)])
    lnm = np.log(4 * np.pi * table["radius_cm"][0] ** 2 * table["density_g_cm3"][0] * table["speed_km_s"][0] * 1e5)
    w, c, _, _, lhat, _ = local(x[0], v[0], t[0], lnm, 0.0)
    lam = float(table["luminosity_erg_s"][0]) / L_EDD - lhat
    return s, y, np.array([lnm, lam, x[ph]])


def main():
    luxgale, bench = sys.argv[1:3]
    s, y, p = first_guess(luxgale)
    old = Problem(1e8, 2.0e10)
    start = solve_bvp(old.slopes, old.ends, s, y, p=p, tol=1e-2, max_nodes=20000)
    start = solve_bvp(old.slopes, old.ends, start.x, start.y, p=start.p, tol=TOLERANCE, max_nodes=20000)
    assert start.success, start.message
    new = Problem(1e8, 2.02e10)
    times = []
    for _ in range(5):
        begin = time.process_time()
        twin = solve_bvp(new.slopes, new.ends, start.x, start.y, p=start.p, tol=TOLERANCE, max_nodes=20000)
        times.append(time.process_time() - begin)
    assert twin.success, twin.message
    report = subprocess.run([bench], capture_output=True, text=True, check=True).stdout
    ours = float(re.search(r"reference +one wind, from a neighbour +([\d.eg+-]+) ms", report).group(1)) * 1e-3
    print(report, end="")
    print(f"SciPy      one wind, from a neighbour      {np.median(times) * 1e3:10.4g} ms ({twin.x.size} nodes)")
    print(f"SciPy over luxgale                         {np.median(times) / ours:10.4g} times")


if __name__ == "__main__":
    main()
