# SPDX-License-Identifier: GPL-3.0-or-later
"""compare.py REPORT GOLDEN: every number of the golden report against the report, with a relative tolerance.

A golden file holds `tolerance:` (relative) and `report:`, a part of a report. Words must be equal, numbers equal within the tolerance;
keys that the golden file does not hold are not looked at. Golden files guard against unnoticed change; they are no evidence of truth.
"""
import math
import sys

import yaml


def differences(path, found, wanted, tolerance):
    if isinstance(wanted, dict):
        for key, value in wanted.items():
            if not isinstance(found, dict) or key not in found:
                yield f"{path}.{key}: missing"
            else:
                yield from differences(f"{path}.{key}", found[key], value, tolerance)
    elif isinstance(wanted, list):
        if not isinstance(found, list) or len(found) != len(wanted):
            yield f"{path}: {found}, expected {wanted}"
        else:
            for i, (f, w) in enumerate(zip(found, wanted)):
                yield from differences(f"{path}[{i}]", f, w, tolerance)
    elif isinstance(wanted, float):
        good = isinstance(found, (int, float)) and not isinstance(found, bool)
        if not good or not math.isclose(found, wanted, rel_tol=tolerance, abs_tol=0.0):
            yield f"{path}: {found!r}, expected {wanted!r} within {tolerance:g}"
    elif found != wanted:
        yield f"{path}: {found!r}, expected {wanted!r}"


def compare(report, golden):
    with open(golden) as file:
        wanted = yaml.safe_load(file)
    return list(differences("report", report, wanted["report"], wanted["tolerance"]))


def main():
    with open(sys.argv[1]) as file:
        found = compare(yaml.safe_load(file), sys.argv[2])
    print("\n".join(found))
    return 1 if found else 0


if __name__ == "__main__":
    sys.exit(main())
