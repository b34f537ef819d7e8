# SPDX-License-Identifier: GPL-3.0-or-later
"""readme.py PROGRAM [--write]: the outputs shown in README.md and docs/super-eddington.md against what its commands print now, within 1 %; --write renews them."""
import math
import os
import subprocess
import sys
import tempfile

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
PROGRAM = os.path.abspath(sys.argv[1])


def output(command, folder):
    command = command.replace("build/luxgale", PROGRAM).replace("examples/", os.path.join(ROOT, "examples/"))
    return subprocess.run(command, shell=True, capture_output=True, text=True, cwd=folder).stdout.splitlines()


def same(shown, now):
    key, _, value = shown.partition(":")
    other, _, found = now.partition(":")
    if key != other:
        return False
    try:
        return math.isclose(float(value), float(found), rel_tol=0.01)
    except ValueError:
        return value == found


def check(name):
    path = os.path.join(ROOT, name)
    with open(path) as file:
        lines = file.read().split("\n")
    bad, now = 0, None
    with tempfile.TemporaryDirectory() as folder:
        for i, line in enumerate(lines):
            if line.startswith("    $ build/luxgale"):
                now = output(line[6:], folder)
            elif not line.startswith("    "):
                now = None
            elif now is not None and line.strip() != "...":
                # the next line with this key, so that the order of the report is kept
                place = next((k for k, text in enumerate(now) if text.split(":")[0] == line[4:].split(":")[0]), None)
                if place is None or not same(line[4:], now[place]):
                    bad += 1
                    print(f"{name}:{i + 1}: shows {line.strip()!r}, now {None if place is None else now[place].strip()!r}")
                if place is not None:
                    lines[i] = "    " + now[place]
                    now = now[place + 1:]
    if "--write" in sys.argv:
        with open(path, "w") as file:
            file.write("\n".join(lines))
    print(f"{name}: {'as shown' if bad == 0 else f'{bad} lines differ'}")
    return bad


def main():
    return 1 if sum([check(name) for name in ("README.md", "docs/super-eddington.md")]) else 0


if __name__ == "__main__":
    sys.exit(main())
