# SPDX-License-Identifier: GPL-3.0-or-later
"""use_library.py TREE ROOT: the Python module against the installed library and the installed program on the same case.

The oracle is the program's own files read by PyYAML and astropy: both ways must give the same numbers to the last digit.
"""
import os
import subprocess
import sys
import tempfile

import numpy as np
import yaml
from astropy.table import Table

TREE, ROOT = sys.argv[1:3]
sys.path.insert(0, os.path.join(TREE, "share/doc/luxgale/examples/python"))
import luxgale  # noqa: E402

case = os.path.join(ROOT, "examples/quickstart.yaml")
result = luxgale.run("outburst", case, {"star.mass": "1.1 Msun"})
with tempfile.TemporaryDirectory() as work:
    epochs = os.path.join(work, "e.ecsv")
    done = subprocess.run([os.path.join(TREE, "bin/luxgale"), "outburst", "--quiet", "--set", "star.mass=1.1 Msun", "--epochs", epochs, case],
                          capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stderr
    report = yaml.safe_load(done.stdout)
    table = Table.read(epochs, format="ascii.ecsv")
assert result.full
assert result.report["ejecta"] == report["ejecta"]
assert {"epochs", "family", "shell", "velocities"} == set(result.tables)
for name in table.colnames:
    got = result.table("epochs")[name]
    assert isinstance(got, np.ndarray) and len(got) == len(table)
    if got.dtype == float:
        want = np.array(table[name].filled(np.nan) if hasattr(table[name], "filled") else table[name], dtype=float)
        np.testing.assert_array_equal(got, want)
    else:
        assert list(got) == ["" if value is np.ma.masked else str(value) for value in table[name]], name
assert result.unit("epochs", "mass_loss_rate_msun_yr") == "solMass / yr"
faint = luxgale.run("wind", os.path.join(ROOT, "examples/wind.yaml"), {"hold.base_luminosity": "0.5 Ledd"})
assert not faint.full and faint.report["wind"]["reason_code"] and faint.tables == []
try:
    luxgale.run("star", case, {"star.maas": "1"})
    raise SystemExit("a bad key was accepted")
except luxgale.Failure as failure:
    assert failure.code == "key-unknown" and "mass" in str(failure)
try:
    luxgale.run("sta", case)
    raise SystemExit("a bad command was accepted")
except luxgale.Failure as failure:
    assert failure.code == "command-unknown"
