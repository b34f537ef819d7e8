# SPDX-License-Identifier: GPL-3.0-or-later
"""check_outputs.py PROGRAM: what the program writes, read by independent programs (PyYAML, json, astropy) and integrated anew.

The examples' numbers are also compared with golden files (tests/golden), which guard against unnoticed change.
"""
import json
import os
import subprocess
import sys
import tempfile

import numpy as np
import yaml
from astropy import units as u
from astropy.table import QTable

from compare import compare

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
PROGRAM = os.path.abspath(sys.argv[1])
EPOCHS = [("time_d", "d"), ("luminosity_erg_s", "erg / s"), ("luminosity_ledd", ""),
          ("mass_loss_rate_msun_yr", "solMass / yr"), ("terminal_speed_km_s", "km / s"), ("photosphere_radius_rsun", "solRad"),
          ("photosphere_temperature_k", "K"), ("photosphere_speed_km_s", "km / s"), ("ejected_mass_msun", "solMass"), ("verdict", "")]
passed = failed = 0


def check(name, good, detail=""):
    global passed, failed
    passed += bool(good)
    failed += not good
    if not good:
        print(f"FAIL {name} {detail}")


def run(command, example, *options, status=0):
    case = os.path.join(ROOT, "examples", example)
    done = subprocess.run([PROGRAM, command, "--quiet", *options, case], capture_output=True, text=True)
    check(f"{command} {example}: exit status {status}", done.returncode == status, f"{done.returncode} {done.stderr[:300]}")
    return done.stdout


def table(path):
    read = QTable.read(path, format="ascii.ecsv")
    for name in read.colnames:
        unit = getattr(read[name], "unit", None)
        check(f"{path}: unit of {name}", not isinstance(unit, u.UnrecognizedUnit), str(unit))
    return read


def number(column):
    """Plain numbers, NaN where missing."""
    value = getattr(column, "value", column)
    return np.ma.filled(np.ma.asarray(value, dtype=float), np.nan)


def outburst(folder, example):
    """Epoch table against report: an integral taken anew by the trapezoidal rule, which for these samplings errs by a few percent."""
    path = os.path.join(folder, "epochs.ecsv")
    report = yaml.safe_load(run("outburst", example, "--epochs", path))
    epochs = table(path)
    for place, (name, unit) in enumerate(EPOCHS):
        check(f"{example}: column {place}", epochs.colnames[place] == name)
        if unit:
            check(f"{example}: unit of {name}", epochs[name].unit == u.Unit(unit))
    time, rate = number(epochs["time_d"]), np.nan_to_num(number(epochs["mass_loss_rate_msun_yr"]))
    speed = np.nan_to_num(number(epochs["terminal_speed_km_s"]))
    mass = np.trapz(rate, time) / 365.25
    check(f"{example}: mass", np.isclose(mass, report["ejecta"]["mass_msun"], rtol=0.05), f"{mass} {report['ejecta']['mass_msun']}")
    kinetic = np.trapz(0.5 * rate * 1.98840987e33 * (speed * 1e5) ** 2, time) / 365.25
    check(f"{example}: energy", np.isclose(kinetic, report["ejecta"]["kinetic_energy_erg"], rtol=0.05),
          f"{kinetic} {report['ejecta']['kinetic_energy_erg']}")
    check(f"{example}: last mass", np.isclose(number(epochs["ejected_mass_msun"])[-1], report["ejecta"]["mass_msun"], rtol=1e-12))
    check(f"{example}: count", len(epochs) == report["epochs"]["count"])
    return report


DECLINE = [("time_d", "d"), ("phase", None), ("envelope_mass_msun", "Msun"), ("mass_loss_rate_msun_yr", "Msun/yr"),
           ("burning_rate_msun_yr", "Msun/yr"), ("luminosity_erg_s", "erg/s"), ("luminosity_ledd", None),
           ("nuclear_luminosity_erg_s", "erg/s"), ("photosphere_radius_rsun", "Rsun"), ("photosphere_temperature_k", "K"),
           ("photosphere_speed_km_s", "km/s"), ("terminal_speed_km_s", "km/s")]


def decline(folder):
    """Table of an eruption against its report: integrals by the trapezoidal rule, the photosphere's law, phases in order."""
    path = os.path.join(folder, "decline.ecsv")
    report = yaml.safe_load(run("decline", "decline.yaml", "--epochs", path))["decline"]
    states = table(path)
    for place, (name, unit) in enumerate(DECLINE):
        check(f"decline: column {place}", states.colnames[place] == name)
        if unit:
            check(f"decline: unit of {name}", states[name].unit == u.Unit(unit))
    time = number(states["time_d"])
    for rate, total in ("mass_loss_rate_msun_yr", "ejected_mass_msun"), ("burning_rate_msun_yr", "burnt_mass_msun"):
        mass = np.trapz(np.nan_to_num(number(states[rate])), time) / 365.25
        check(f"decline: {total}", np.isclose(mass, report[total], rtol=0.01), f"{mass} {report[total]}")
    radius, temperature = number(states["photosphere_radius_rsun"]) * 6.957e10, number(states["photosphere_temperature_k"])
    light = 4 * np.pi * radius**2 * 5.670374419e-5 * temperature**4
    check("decline: photosphere", np.allclose(light, number(states["luminosity_erg_s"]), rtol=1e-3))
    phases = [str(p) for p in states["phase"]]
    check("decline: wind, then static", phases == sorted(phases, reverse=True) and len(set(phases)) == 2)
    check("decline: shares", np.isclose(report["light_share"] + report["lifting_share"] + report["kinetic_share"], 1))
    check("decline: ends", report["wind_duration_d"] < report["turnoff_d"] == time[-1])


def forms():
    """The same tree as YAML and as JSON, for strict readers."""
    first = yaml.safe_load(run("wind", "wind.yaml"))
    second = json.loads(run("wind", "wind.yaml", "--format", "json"))
    check("YAML and JSON alike", first == second)


def golden(name, report):
    path = os.path.join(ROOT, "tests", "golden", name + ".yaml")
    for line in compare(report, path):
        check(f"golden {name}:", False, line)
    check(f"golden {name} read", True)


def main():
    with tempfile.TemporaryDirectory() as folder:
        forms()
        nova = outburst(folder, "quickstart.yaml")
        golden("quickstart", nova)
        golden("supergiant", outburst(folder, "supergiant.yaml"))
        golden("no-wind", yaml.safe_load(run("outburst", "no-wind.yaml", status=1)))
        outburst(folder, "reference.yaml")
        decline(folder)
        # what an astronomer expects of a nova: Mass and speeds of the literature (see docs/physics.md)
        check("nova mass", 1e-6 < nova["ejecta"]["mass_msun"] < 1e-4, nova["ejecta"]["mass_msun"])
        check("nova speed", 300 < nova["ejecta"]["mean_speed_km_s"] < 2000, nova["ejecta"]["mean_speed_km_s"])
        path = os.path.join(folder, "family.ecsv")
        run("family", "quickstart.yaml", "-o", path)
        family = table(path)
        check("family in order", np.all(np.diff(number(family["launch_radius_cm"])[:50]) > 0))
        path = os.path.join(folder, "structure.ecsv")
        wind = yaml.safe_load(run("wind", "wind.yaml", "--structure", path))
        rows = table(path)
        flux = 4 * np.pi * number(rows["radius_cm"]) ** 2 * number(rows["density_g_cm3"]) * number(rows["speed_km_s"]) * 1e5
        rate = wind["wind"]["mass_loss_rate_msun_yr"] * 1.98840987e33 / 3.15576e7
        check("structure keeps the mass flux", np.allclose(flux, rate, rtol=1e-6), str(np.max(np.abs(flux / rate - 1))))
    print(f"outputs: {passed} passed, {failed} failed")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
