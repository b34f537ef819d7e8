# SPDX-License-Identifier: GPL-3.0-or-later
"""check_tutorial.py PROGRAM: runs every command of the tutorials, and looks for every line shown in what they print.

Lines are found in order; numbers may differ by TOLERANCE, so that a change of results shows and a change of rounding does not.
"""
import os
import re
import subprocess
import sys
import tempfile

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
TUTORIALS = ["docs/tutorial-spectroscopist.md"]
TOLERANCE = 5e-3  # relative
NUMBER = re.compile(r"[-+]?\d+\.?\d*(?:[eE][-+]?\d+)?")


def blocks(path):
    """(command, shown lines) of each indented block that begins with `$ `."""
    command, shown = None, []
    for line in open(path, encoding="utf-8").read().splitlines() + [""]:
        if line.startswith("    $ "):
            if command:
                yield command, shown
            command, shown = line[6:], []
        elif command and line.startswith("    "):
            shown.append(line[4:])
        elif command:
            yield command, shown
            command = None


def same(shown, printed):
    if NUMBER.sub("#", shown) != NUMBER.sub("#", printed):
        return False
    pairs = zip(NUMBER.findall(shown), NUMBER.findall(printed))
    return all(abs(float(a) - float(b)) <= TOLERANCE * abs(float(a)) + 1e-300 for a, b in pairs)


def missing(shown, printed):
    """The first shown line that the rest of the output lacks."""
    rest = iter(printed)
    for line in shown:
        if line.strip() != "..." and not any(same(line, other) for other in rest):
            return line
    return None


failed = count = 0
program = os.path.abspath(sys.argv[1])
for tutorial in TUTORIALS:
    with tempfile.TemporaryDirectory() as folder:
        os.symlink(os.path.join(ROOT, "examples"), os.path.join(folder, "examples"))
        for command, shown in blocks(os.path.join(ROOT, tutorial)):
            count += 1
            done = subprocess.run(command.replace("build/luxgale", program), shell=True, cwd=folder, capture_output=True, text=True)
            lost = missing(shown, done.stdout.splitlines())
            if done.returncode != 0 or lost is not None:
                failed += 1
                print(f"FAIL {tutorial}: {command}\n  exit status {done.returncode}; not printed: {lost!r}\n  {done.stderr[:300]}")
print(f"tutorials: {count - failed} commands passed, {failed} failed")
sys.exit(failed > 0 or count == 0)
