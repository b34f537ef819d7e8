# SPDX-License-Identifier: GPL-3.0-or-later
"""check_tables.py PROGRAM: every kind of table that the program writes, read by astropy: units known, descriptions text, numbers finite.

Oracle: astropy's unit parser (FITS and CDS spellings) and its ECSV reader. The unit at the end of a column's name is the one declared.
"""
import glob
import os
import subprocess
import sys
import tempfile

import numpy as np
from astropy import units as u
from astropy.table import QTable

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
PROGRAM = os.path.abspath(sys.argv[1])
NAMED = [("_msun_yr", u.Msun / u.yr), ("_erg_s", u.erg / u.s), ("_km_s", u.km / u.s), ("_g_cm3", u.g / u.cm**3), ("_cm2_g", u.cm**2 / u.g),
         ("_msun", u.Msun), ("_rsun", u.Rsun), ("_mag", u.mag), ("_cm", u.cm), ("_k", u.K), ("_d", u.d)]
passed = failed = 0


def check(name, good, detail=""):
    global passed, failed
    passed += bool(good)
    failed += not good
    if not good:
        print(f"FAIL {name} {detail}")


def read(path):
    name = os.path.basename(path)
    table = QTable.read(path, format="ascii.ecsv")
    check(f"{name}: rows", len(table) > 0)
    for column in table.colnames:
        unit = table[column].unit if hasattr(table[column], "unit") else None
        check(f"{name}.{column}: unit known", not isinstance(unit, u.UnrecognizedUnit), unit)
        for tail, wanted in NAMED:
            if column.endswith(tail) and not column.startswith("share_"):
                check(f"{name}.{column}: unit as named", unit is not None and u.Unit(unit).is_equivalent(wanted) and u.Unit(unit).to(wanted) == 1.0, unit)
                break
        if table[column].dtype.kind == "f":
            values = np.asarray(getattr(table[column], "value", table[column]))
            values = values[~np.ma.getmaskarray(table[column])] if np.ma.isMaskedArray(table[column]) else values
            check(f"{name}.{column}: no infinity", not np.any(np.isinf(np.asarray(values, dtype=float))))


with tempfile.TemporaryDirectory() as work:
    for command, case, options in [("outburst", "quickstart", ["--epochs", "a.ecsv"]), ("wind", "wind", ["--structure", "b.ecsv"]),
                                   ("family", "quickstart", ["--epochs", "c.ecsv"]), ("decline", "decline", ["--epochs", "d.ecsv"]),
                                   ("outburst", "super-eddington", ["--epochs", "e.ecsv"]), ("wind", "wind", ["--plots", "p"]),
                                   ("opacity tabulate", "quickstart", ["--log-t", "4:8:0.5", "--log-r", "-6:-2:1", "-o", "f.ecsv"])]:
        done = subprocess.run([PROGRAM, *command.split(), "-q", *options, os.path.join(ROOT, "examples", case + ".yaml")], cwd=work,
                              capture_output=True, text=True, check=False)
        check(f"{command} {case}", done.returncode == 0, done.stderr[:200])
    tables = glob.glob(os.path.join(work, "*.ecsv")) + glob.glob(os.path.join(work, "p", "*.ecsv"))
    check("eight tables", len(tables) == 8, tables)
    for path in sorted(tables):
        read(path)
print(f"tables: {passed} passed, {failed} failed")
sys.exit(failed > 0)
