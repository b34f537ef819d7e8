# SPDX-License-Identifier: GPL-3.0-or-later
"""check_tutorial.py PROGRAM [--write]: every command of docs/tutorial-*.md is run, and what it prints compared with what stands there.

A block ```console holds lines `$ COMMAND` (continued by a backslash), each followed by its output. Words must be equal, numbers agree
within 2 %, for opacities may be calibrated anew. --write puts the present output in.
"""
import glob
import math
import os
import re
import subprocess
import sys
import tempfile

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
TOLERANCE = 0.02
NUMBER = re.compile(r"[-+]?\d+(?:\.\d+)?(?:e[-+]?\d+)?")


def alike(found, wanted):
    if NUMBER.sub("#", found) != NUMBER.sub("#", wanted):
        return False
    pairs = zip(NUMBER.findall(found), NUMBER.findall(wanted))
    return all(math.isclose(float(a), float(b), rel_tol=TOLERANCE, abs_tol=1e-9) for a, b in pairs)


def commands(block):
    """[(command lines, output lines)]"""
    result = []
    continued = False
    for line in block:
        if line.startswith("$ "):
            result.append(([line], []))
            continued = line.endswith("\\")
        elif continued:
            result[-1][0].append(line)
            continued = line.endswith("\\")
        else:
            result[-1][1].append(line)
    return result


def main():
    program = os.path.abspath(sys.argv[1])
    write = "--write" in sys.argv
    passed = failed = 0
    for path in sorted(glob.glob(os.path.join(ROOT, "docs", "tutorial-*.md"))):
        with open(path) as file:
            lines = file.read().split("\n")
        written, block, inside = [], [], False
        with tempfile.TemporaryDirectory() as folder:
            os.symlink(os.path.join(ROOT, "examples"), os.path.join(folder, "examples"))
            environment = dict(os.environ, PATH=os.path.dirname(program) + ":" + os.environ["PATH"])
            for line in lines:
                if line == "```" and inside:
                    for command, wanted in commands(block):
                        text = "\n".join(command)[2:]
                        done = subprocess.run(["bash", "-c", text], cwd=folder, env=environment, text=True,
                                              stdout=subprocess.PIPE, stderr=subprocess.STDOUT)
                        found = done.stdout.rstrip("\n").split("\n") if done.stdout.strip() else []
                        good = done.returncode == 0 and len(found) == len(wanted) and all(map(alike, found, wanted))
                        written += command + found
                        passed += good
                        failed += not good
                        if not good and not write:
                            print(f"FAIL {os.path.basename(path)}: {text}: exit {done.returncode}")
                            print("\n".join(f"  {a!r} expected {b!r}" for a, b in zip(found, wanted) if not alike(a, b)))
                    block, inside = [], False
                    written.append(line)
                elif inside:
                    block.append(line)
                else:
                    inside = line == "```console"
                    written.append(line)
        if write:
            with open(path, "w") as file:
                file.write("\n".join(written))
    print(f"tutorials: {passed} passed, {failed} failed")
    return 1 if (failed and not write) or passed + failed == 0 else 0


if __name__ == "__main__":
    sys.exit(main())
