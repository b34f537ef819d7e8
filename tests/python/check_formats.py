# SPDX-License-Identifier: GPL-3.0-or-later
"""Readers that are not ours (astropy, PyYAML, Python's json and float) read what luxgale wrote into the folder given.

Called by tests/test_table.c. Any difference, or a missing package, ends in a non-zero status. Leaves astropy.ecsv in the
folder, which luxgale then reads.
"""
import json
import struct
import sys
from pathlib import Path

import astropy.units as u
import numpy as np
import yaml
from astropy.table import MaskedColumn, QTable, Table

ODD_TEXTS = ["V", "a,b", 'say "hi"', " padded ", "# no comment", "line\nbreak", "", "caf\u00e9", "12", "nan", "True"]


def same(what, got, expected):
    if got != expected or type(got) is not type(expected):
        sys.exit(f"{what}: {got!r} is not {expected!r}")


def value_of(bits):
    return struct.unpack(">d", bytes.fromhex(bits))[0]


def digits(text):
    return text.lower().split("e")[0].replace("-", "").replace(".", "").strip("0")


def check_numbers(folder):
    lines = [line.split() for line in (folder / "bits.txt").read_text().splitlines()]
    expected = [value_of(bits) for bits, _ in lines]
    for (_, text), value in zip(lines, expected):
        same(f"float of {text}", float(text), value)
        same(f"number of digits of {text}", len(digits(text)), len(digits(repr(value))))
    as_yaml = yaml.safe_load((folder / "numbers.yaml").read_text(encoding="utf-8"))
    as_json = json.loads((folder / "numbers.json").read_text(encoding="utf-8"))
    for reader, tree in (("yaml", as_yaml), ("json", as_json)):
        same(f"{reader}: count", len(tree["numbers"]), len(expected))
        for got, value in zip(tree["numbers"], expected):
            same(reader, got, value)
        same(f"{reader}: words", tree["words"], ODD_TEXTS + ["12:30:00", "~"])
        same(f"{reader}: none", tree["no"], None)
        same(f"{reader}: bool", tree["on"], True)
        same(f"{reader}: integer", tree["points"], 9007199254740993)


def check_table(folder):
    table = QTable.read(folder / "random.ecsv", format="ascii.ecsv")
    same("names", table.colnames, ["time_d", "verdict", "mass_loss_rate", "ratio"])
    if table["time_d"].unit != u.d or table["mass_loss_rate"].unit != u.solMass / u.yr:
        sys.exit("units were not recognised")
    plain = Table.read(folder / "random.ecsv", format="ascii.ecsv")
    rows = [line.split() for line in (folder / "random.txt").read_text().splitlines()]
    same("rows", len(plain), len(rows))
    for row, (first, second, third, missing) in zip(plain, rows):
        same("time_d", float(row["time_d"]), value_of(first))
        same("missing", row["mass_loss_rate"] is np.ma.masked, missing == "1")
        if missing == "0":
            same("mass_loss_rate", float(row["mass_loss_rate"]), value_of(second))
        same("ratio", float(row["ratio"]), value_of(third))
        # astropy drops the blanks around a text, quoted or not
        if row["verdict"] is not np.ma.masked and str(row["verdict"]) not in [text.strip() for text in ODD_TEXTS]:
            sys.exit(f"verdict {row['verdict']!r}")
    same("description", plain["time_d"].description, "time: since start, # 1")
    same("description", plain["verdict"].description, '"quoted"')
    same("meta", dict(plain.meta), {"title": "no", "scale": 1.0e38, "small": 1e-5, "case": {"tables": ["a: b"]}})


def check_units(folder):
    """Factors of the table against astropy's, to 1e-12: both go back to the same IAU and CODATA values."""
    table = QTable.read(folder / "units.ecsv", format="ascii.ecsv")
    rows = [line.split("|") for line in (folder / "units.txt").read_text().splitlines()]
    same("units", len(table.colnames), len(rows))
    for dimension, factor, spelling, name in rows:
        if spelling == "":
            continue
        unit = table[name].unit
        if isinstance(unit, u.UnrecognizedUnit):
            sys.exit(f"astropy does not know {spelling}")
        if dimension == "magnitude":
            continue  # logarithmic: no factor
        base = {"angle": u.rad, "flux density": u.erg / u.s / u.cm**2 / u.Hz}.get(dimension)
        scale = unit.to(base) if base is not None else unit.cgs.scale
        if abs(scale / float(factor) - 1.0) > 1e-12:
            sys.exit(f"{spelling}: astropy has {scale!r}, luxgale {factor}")


def write_table(folder):
    light = MaskedColumn([1.0, 2.5, 3.0], mask=[False, False, True], unit="solLum")
    table = Table([[0.5, 1.5, 2.5], light, ["V", "a b", "c"], [True, False, True]], names=["time", "light", "band", "ok"])
    table["time"].unit = "d"
    table.meta["source"] = "invented"
    table.write(folder / "astropy.ecsv", format="ascii.ecsv")


if __name__ == "__main__":
    where = Path(sys.argv[1])
    check_numbers(where)
    check_table(where)
    check_units(where)
    write_table(where)
