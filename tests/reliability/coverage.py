#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""coverage.py - lines of src/ that the suites, the command-line tests and the fault injection reach (gcc --coverage, gcovr).

Builds in build-coverage, runs everything once, writes build-coverage/coverage.txt. Ends with one JSON line; exit status 1 below 92 %."""
import json, os, re, subprocess, sys

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
BUILD = "build-coverage"
BAR = 92.0


def run(command):
    done = subprocess.run(command, shell=True, cwd=ROOT, capture_output=True, text=True, errors="replace")
    print(f"{done.returncode} {command}", flush=True)
    return done


def main():
    run(f"make -s -j2 OPT='-O1 --coverage' BUILD={BUILD} all tests {BUILD}/faults")
    run(f"find {BUILD} -name '*.gcda' -delete")
    run(f"{BUILD}/run-tests")
    run(f"tests/cli/run {BUILD}/luxgale")
    run(f"/usr/bin/python3 tests/reliability/hostile.py files {BUILD}/luxgale")
    run(f"/usr/bin/python3 tests/reliability/environment.py signal {BUILD}/luxgale")
    listing = run(f"gcovr -r . --object-directory {BUILD} -f 'src/.*' --gcov-ignore-parse-errors").stdout
    with open(os.path.join(ROOT, BUILD, "coverage.txt"), "w") as file:
        file.write(listing)
    total = re.search(r"^TOTAL +(\d+) +(\d+) +\d+%", listing, re.M)
    lines = 100.0 * int(total.group(2)) / int(total.group(1)) if total else 0.0
    print(json.dumps({"lines": round(lines, 1), "of": int(total.group(1)) if total else 0, "bar": BAR}))
    return 0 if lines >= BAR else 1


if __name__ == "__main__":
    sys.exit(main())
