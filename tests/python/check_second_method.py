#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""One wind by a second method: shooting with SciPy, the equations written anew, nothing shared with the program.

The program holds (photospheric luminosity, photospheric temperature). Here the photosphere follows from the two, its speed is
bisected until the inward march (stable in this direction) runs through v = c_T with the driving term vanishing there, and the
march goes on inside to the star. Compared: rate, critical point, base. Opacity: the closed-form law `reference` as documented.

  check_second_method.py LUXGALE
"""
import subprocess
import sys

import numpy as np
import yaml
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

C, G, K, MU, SIGMA = 2.99792458e10, 6.67430e-8, 1.380649e-16, 1.66053906660e-24, 5.670374419e-5
A = 4 * SIGMA / C
GM = 1.3271244e26
MSUN, RSUN, YEAR = GM / G, 6.957e10, 3.15576e7
X, Z = 0.35, 0.02
Y = 1 - X - Z
MEAN = 1 / (2 * X + 0.75 * Y + 0.5 * Z)
KAPPA_E = 0.2 * (1 + X)
L_EDD = 4 * np.pi * GM * C / KAPPA_E
R0 = 7.83e8 * np.sqrt(1.44 ** (2 / 3) - 1.44 ** (-2 / 3))
TOLERANCE = 2e-5  # the march's own error (rtol 1e-11) and the step over the critical point (1e-3 in ln r, second order)


def opacity(rho, t):
    lt, r = np.log10(t), rho / (t / 1e6) ** 3
    return (KAPPA_E / (1 + (t / 4.5e8) ** 0.86) / (1 + (1.1e4 / t) ** 12)
            + (4.34e25 * Z * (1 + X) + 3.68e22 * (1 - Z) * (1 + X)) * rho * t ** -3.5 / (1 + (2e4 / t) ** 8)
            + 2.0 * (Z / 0.02) ** 0.65 * (r / 1e-5) ** 0.42 * np.exp(-((lt - 5.28) / 0.21) ** 2)
            + 0.33 * Y ** 0.5 * (r / 1e-5) ** 0.8 * np.exp(-((lt - 4.63) / 0.25) ** 2))


class Flow:
    """Mdot and the energy rate; derivatives against ln r of (ln v, ln T) in dimensional form."""

    def __init__(self, mdot, energy):
        self.mdot, self.energy = mdot, energy

    def parts(self, x, y):
        r, v, t = np.exp(x), np.exp(y[0]), np.exp(y[1])
        rho = self.mdot / (4 * np.pi * r * r * v)
        ct2 = K * t / (MEAN * MU)
        h = 2.5 * ct2 + 4 * A * t ** 4 / (3 * rho)
        lum = self.energy - self.mdot * (v * v / 2 + h - GM / r)
        kappa = opacity(rho, t)
        phi = 3 * kappa * rho * lum / (16 * np.pi * A * C * r * t ** 4)
        drive = 2 * ct2 + kappa * lum / (4 * np.pi * C * r) + ct2 * phi - GM / r
        return v * v - ct2, drive, phi, lum

    def slope(self, x, y):
        gap, drive, phi, _ = self.parts(x, y)
        return [drive / gap, -phi]


def inward(flow, x, y, end):
    """March inward until the flow turns (drive < 0 while supersonic: +1) or reaches the sound speed (-1)."""
    gap0, drive0, _, _ = flow.parts(x, y)

    def turns(x, y):
        return flow.parts(x, y)[1] / drive0 - 1e-9

    def sonic(x, y):
        return flow.parts(x, y)[0] / gap0 - 1e-7
    turns.terminal = sonic.terminal = True
    s = solve_ivp(flow.slope, [x, end], y, method="DOP853", rtol=1e-11, atol=1e-12, events=[turns, sonic],
                  dense_output=True)
    return (1 if len(s.t_events[0]) else -1), s


def shoot(l_ph, t_ph):
    r_ph = np.sqrt(l_ph / (4 * np.pi * SIGMA)) / t_ph ** 2
    rho = brentq(lambda u: opacity(np.exp(u), t_ph) * np.exp(u) * r_ph - 8 / 3, np.log(1e-16), np.log(1e-4))
    rho = np.exp(rho)
    ct2 = K * t_ph / (MEAN * MU)

    def flow_of(v):
        mdot = 4 * np.pi * r_ph ** 2 * rho * v
        return Flow(mdot, l_ph + mdot * (v * v / 2 + 2.5 * ct2 + 4 * A * t_ph ** 4 / (3 * rho) - GM / r_ph))

    def verdict(v):
        flow = flow_of(v)
        x, y = np.log(r_ph), [np.log(v), np.log(t_ph)]
        # the flow is slowing down at its photosphere: the march is judged from well inside, where it is being driven
        first = solve_ivp(flow.slope, [x, x - 1.9], y, method="DOP853", rtol=1e-11, atol=1e-12, dense_output=True)
        x, y = first.t[-1], first.y[:, -1]
        return inward(flow, x, y, np.log(R0))

    low, high = 600e5, 740e5
    assert verdict(low)[0] != verdict(high)[0], "the photospheric speed is not bracketed"
    rising = verdict(high)[0]
    for _ in range(60):
        middle = 0.5 * (low + high)
        if verdict(middle)[0] == rising:
            high = middle
        else:
            low = middle
    v = 0.5 * (low + high)
    flow, (_, s) = flow_of(v), verdict(v)
    # the critical point: both marches stop next to it; step over with the slope just outside
    x1 = s.t[-1] + 2e-3
    x2 = s.t[-1] + 4e-3
    y1, y2 = s.sol(x1), s.sol(x2)
    g1, g2 = flow.parts(x1, y1)[0], flow.parts(x2, y2)[0]
    xc = x1 - g1 * (x2 - x1) / (g2 - g1)  # v^2 - c_T^2 extrapolated to zero
    yc = y1 + (y2 - y1) * (xc - x1) / (x2 - x1)
    inside = xc - 2e-3
    yi = yc + (y2 - y1) * (inside - xc) / (x2 - x1)
    rest = solve_ivp(flow.slope, [inside, np.log(R0)], yi, method="LSODA", rtol=1e-10, atol=1e-11)
    base = flow.parts(np.log(R0), rest.y[:, -1])
    return {"mass_loss_rate_msun_yr": flow.mdot * YEAR / MSUN, "critical_radius": np.exp(xc),
            "critical_temperature": np.exp(yc[1]), "base_temperature": np.exp(rest.y[1, -1]), "base_luminosity": base[3]}


def program(luxgale, l_ph, t_ph):
    case = {"case": 1, "star": {"mass": "1.0 Msun", "radius": f"{R0!r} cm"},
            "composition": {"hydrogen": X, "helium": Y, "metals": Z}, "opacity": {"formula": "reference"},
            "hold": {"photosphere_luminosity": f"{l_ph!r} erg/s", "photosphere_temperature": f"{t_ph!r} K"}}
    run = subprocess.run([luxgale, "wind", "-"], input=yaml.safe_dump(case), capture_output=True, text=True, check=True)
    wind = yaml.safe_load(run.stdout)["wind"]
    return {"mass_loss_rate_msun_yr": wind["mass_loss_rate_msun_yr"], "critical_radius": wind["critical"]["radius_cm"],
            "critical_temperature": wind["critical"]["temperature_k"],
            "base_temperature": wind["base"]["temperature_k"], "base_luminosity": wind["base"]["luminosity_erg_s"]}


def main():
    failed = 0
    l_ph, t_ph = 0.7147780 * L_EDD, 36255.0
    ours, second = program(sys.argv[1], l_ph, t_ph), shoot(l_ph, t_ph)
    # the critical point is extrapolated linearly over 4e-3 in ln r, the base inherits that
    allowed = {"mass_loss_rate_msun_yr": TOLERANCE, "critical_radius": 5e-5, "critical_temperature": 2e-4,
               "base_temperature": 5e-4, "base_luminosity": 5e-4}
    for key, limit in allowed.items():
        off = ours[key] / second[key] - 1
        good = abs(off) <= limit
        failed += not good
        print(f"{'ok' if good else 'FAILED'}: {key} {ours[key]:.8g}, by shooting {second[key]:.8g} ({off:+.1e}, allowed {limit:.0e})")
    print(f"{len(allowed) - failed} passed, {failed} failed")
    return failed > 0


if __name__ == "__main__":
    sys.exit(main())
