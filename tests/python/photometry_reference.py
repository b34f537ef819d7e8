#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""Reference numbers for the photometry tests, from astropy and SciPy alone.

Without argument: compares the committed tests/data/photometry_reference.h with a fresh calculation (exit status 1 when a
number moved by more than 1e-9). With --write: rewrites that file. Nothing of luxgale is used: formulas are stated here once
more, independently, and integrated by quadrature.
"""
import pathlib
import re
import sys

import astropy.constants as const
import astropy.units as u
import numpy as np
from astropy.modeling.physical_models import BlackBody
from scipy.integrate import quad
from scipy.optimize import brentq

FILE = pathlib.Path(__file__).resolve().parent.parent / "data" / "photometry_reference.h"
# Effective wavelength [um] and zero flux [Jy]: Bessell 1979 and Campins et al. 1985; AB for the band at 1455 Angstrom.
BANDS = [("U", 0.36, 1810), ("B", 0.44, 4260), ("V", 0.55, 3640), ("R", 0.64, 3080), ("I", 0.79, 2550),
         ("J", 1.26, 1600), ("H", 1.60, 1080), ("K", 2.22, 670), ("UV1455", 0.1455, 3631)]


def magnitudes():
    """(band, T, R/Rsun, absolute magnitude) of a black sphere at 10 pc."""
    for name, wave, zero in BANDS:
        for temperature, radius in ((6137.0, 83.1), (15280.0, 11.7), (243000.0, 0.213)):
            surface = BlackBody(temperature * u.K)(wave * u.um) * u.sr * np.pi
            flux = surface * (radius * const.R_sun / (10 * u.pc)).to(u.one) ** 2
            yield f"LXG_BAND_{name}", temperature, radius, -2.5 * np.log10((flux / (zero * u.Jy)).to_value(u.one))


def shares():
    """(T, E_low, E_high [keV], share of a black body's luminosity)."""
    for temperature, low, high in ((2.31e4, 0.002, 0.0136), (3.5e5, 0.2, 1.0), (8.7e5, 0.2, 1.0), (4.2e6, 0.05, 0.21),
                                   (4.2e6, 0.2, 1.0), (1.3e5, 0.2, 1.0)):
        kt = (const.k_B * temperature * u.K).to_value(u.keV)
        value = quad(lambda x: x**3 / np.expm1(x), low / kt, high / kt, epsabs=0, epsrel=1e-12)[0] * 15 / np.pi**4
        yield temperature, low, high, value


def posteriors():
    """(parallax, error [mas], length [pc], quantiles 0.025, 0.16, 0.5, 0.84, 0.975 [pc])."""
    for parallax, error, length in ((0.6427, 0.1087, 1350.0), (0.314, 0.052, 1350.0), (-0.21, 0.17, 1350.0),
                                    (2.5, 0.004, 700.0), (0.05, 0.4, 2100.0)):
        scale = length / 1000

        def log_density(r):
            return 2 * np.log(r) - r / scale - 0.5 * ((parallax - 1 / r) / error) ** 2

        grid = np.geomspace(1e-3, 60 * scale, 400001)
        peak = grid[np.argmax(log_density(grid))]
        top = log_density(peak)
        kept = grid[log_density(grid) > top - 45]
        low, high = kept[0] * 0.999, kept[-1] * 1.001
        cuts = np.linspace(low, high, 33)

        def integral(a, b):
            inner = [a] + [c for c in cuts if a < c < b] + [b]
            return sum(quad(lambda r: np.exp(log_density(r) - top), x, y, epsabs=0, epsrel=1e-11)[0]
                       for x, y in zip(inner, inner[1:]))

        total = integral(low, high)
        row = [brentq(lambda r, q=q: integral(low, r) / total - q, low, high, xtol=1e-13, rtol=1e-12) * 1000
               for q in (0.025, 0.16, 0.5, 0.84, 0.975)]
        yield (parallax, error, length, *row)


def free_free():
    """(T, frequency, Mdot [Msun/yr], v [km/s], R [Rsun], thin L_nu, whole L_nu) for pure ionised hydrogen.

    Thin: shells with the share 1 - W(r) of their light that misses the photosphere. Whole: rays through the wind, with a disc
    of the same temperature. Msun is GM_sun/G.
    """
    h, k, c = const.h.cgs.value, const.k_B.cgs.value, const.c.cgs.value
    m_e, e = const.m_e.cgs.value, const.e.esu.value
    m_u = const.u.cgs.value
    m_sun = 1.3271244e26 / const.G.cgs.value
    constant = 32 * np.pi * e**6 / (3 * m_e * c**3) * np.sqrt(2 * np.pi / (3 * k * m_e))
    for temperature, frequency, mdot, speed, radius in ((8900.0, 5.451e14, 3.1e-5, 640.0, 47.0),
                                                        (31000.0, 6.813e14, 7.7e-5, 1130.0, 5.3),
                                                        (12300.0, 1.35e14, 1.4e-4, 410.0, 21.0)):
        r0 = radius * 6.957e10
        b_nu = 2 * h * frequency**3 / c**2 / np.expm1(h * frequency / (k * temperature))
        gaunt = np.log(np.e + np.exp(5.960 - np.sqrt(3) / np.pi * np.log(frequency / 1e9 * (temperature / 1e4) ** -1.5)))
        emission = (constant / m_u**2 / np.sqrt(temperature) * np.exp(-h * frequency / (k * temperature)) * gaunt)
        flux = mdot * m_sun / 3.15576e7 / (4 * np.pi * speed * 1e5)

        def missing(y):  # y = R/r
            return 1 - 0.5 * (1 - np.sqrt(1 - y * y))

        thin = emission * flux**2 * 4 * np.pi / r0 * quad(missing, 0, 1, epsrel=1e-11)[0]
        alpha = emission / (4 * np.pi * b_nu) * flux**2 / r0**4  # at the photosphere

        def depth(p):  # along a ray at impact parameter p, in radii of the photosphere; s = p tan(angle)
            return alpha * r0 * 2 * quad(lambda a: np.cos(a) ** 2 / p**3, 0, np.pi / 2, epsabs=0, epsrel=1e-12)[0]

        def ring(ln_p):
            p = np.exp(ln_p)
            return -np.expm1(-depth(p)) * p * p

        wind = quad(ring, 0, 16, epsrel=1e-8, epsabs=0, limit=400)[0] + depth(np.exp(16)) * np.exp(32)
        whole = 4 * np.pi**2 * b_nu * r0**2 * (1 + 2 * wind)
        yield temperature, frequency, mdot, speed, radius, thin, whole


TABLES = [
    ("reference_magnitudes", "{enum lxg_band band; double temperature, radius_rsun, magnitude;}", magnitudes),
    ("reference_shares", "{double temperature, low_kev, high_kev, share;}", shares),
    ("reference_posteriors", "{double parallax, error, length, quantile[5];}", posteriors),
    ("reference_freefree",
     "{double temperature, frequency, mdot_msun_yr, speed_km_s, radius_rsun, thin, whole;}", free_free),
]


def render():
    lines = ["/* SPDX-License-Identifier: GPL-3.0-or-later",
             " *",
             " * photometry_reference.h - numbers from astropy and SciPy, written by tests/python/photometry_reference.py.",
             " */",
             "#ifndef LUXGALE_TESTS_PHOTOMETRY_REFERENCE_H", "#define LUXGALE_TESTS_PHOTOMETRY_REFERENCE_H", "",
             '#include "luxgale/photometry.h"', "", "/* clang-format off */"]
    for name, shape, rows in TABLES:
        lines.append(f"static const struct {shape} {name}[] = {{")
        for row in rows():
            cells = [cell if isinstance(cell, str) else repr(float(cell)) for cell in row]
            if name == "reference_posteriors":
                cells = cells[:3] + ["{" + ", ".join(cells[3:]) + "}"]
            lines.append("    {" + ", ".join(cells) + "},")
        lines.append("};")
    lines += ["/* clang-format on */", "", "#endif", ""]
    return "\n".join(lines)


def numbers(text):
    return [float(n) for n in re.findall(r"(?<![\w.])-?\d+\.?\d*(?:e[+-]?\d+)?(?![\w.])", text)]


def main():
    fresh = render()
    if "--write" in sys.argv[1:]:
        FILE.write_text(fresh)
        return 0
    old, new = numbers(FILE.read_text()), numbers(fresh)
    if len(old) != len(new):
        print(f"{FILE.name}: {len(old)} numbers, {len(new)} expected")
        return 1
    moved = [(a, b) for a, b in zip(old, new) if abs(a - b) > 1e-9 * max(abs(b), 1e-300)]
    for a, b in moved:
        print(f"{FILE.name}: {a!r} is {b!r} now")
    print(f"{FILE.name}: {len(old)} numbers, {len(moved)} moved")
    return 1 if moved else 0


if __name__ == "__main__":
    sys.exit(main())
