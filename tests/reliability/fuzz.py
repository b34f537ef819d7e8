#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""fuzz.py - runs the fuzz targets and counts what they executed.

  fuzz.py --seconds S [--jobs N] [TARGET...]   S seconds each, N at a time

Limits: 1 s an input, 512 MiB, inputs up to 4 KiB. A crash, leak, hang or excess of memory fails; the input is kept in
build-fuzz/found/TARGET. Ends with one JSON line: executions, findings, seconds.
"""
import argparse, json, os, re, subprocess, sys, time
from concurrent.futures import ThreadPoolExecutor

HERE = os.path.dirname(os.path.abspath(__file__))
ROOT = os.path.dirname(os.path.dirname(HERE))
TARGETS = ["units", "number", "yaml", "json", "set", "table", "opacity", "case", "lines", "grid"]
MAPPED = {"yaml", "json", "set", "case"}
LENGTH = {"units": 48, "number": 64, "set": 200}  # longer inputs only cost time; the others: 4096


def run(build, target, seconds, seed):
    work, found = (os.path.join(build, name, target) for name in ("work", "found"))
    empty = os.path.join(build, "empty")
    for folder in (work, found, empty):
        os.makedirs(folder, exist_ok=True)
    dictionary = os.path.join(HERE, "dictionary", ("yaml" if target in MAPPED else "text") + ".dict")
    command = [os.path.join(build, "fuzz-" + target), work, os.path.join(HERE, "corpus", target), "-dict=" + dictionary,
               f"-max_total_time={seconds}", "-timeout=1", "-rss_limit_mb=512", f"-max_len={LENGTH.get(target, 4096)}", "-print_final_stats=1",
               f"-artifact_prefix={found}/", "-verbosity=0", f"-seed={seed}"]
    if not seconds:
        command.append("-runs=0")
    with open(os.path.join(build, f"log-{target}"), "wb") as log:
        status = subprocess.run(command, cwd=empty, stdout=log, stderr=log, stdin=subprocess.DEVNULL).returncode
    text = open(os.path.join(build, f"log-{target}"), errors="replace").read()
    count = re.search(r"stat::number_of_executed_units: *(\d+)", text)
    return {"target": target, "executions": int(count.group(1)) if count else 0, "status": status}


def main():
    parser = argparse.ArgumentParser()
    parser.add_argument("--seconds", type=int, default=4)
    parser.add_argument("--build", default=os.path.join(ROOT, "build-fuzz"), help="folder of the programs and of what they find")
    parser.add_argument("--jobs", type=int, default=1)
    parser.add_argument("--seed", type=int, default=0, help="0: from the clock")
    parser.add_argument("targets", nargs="*")
    given = parser.parse_args()
    seed = given.seed or int(time.time())
    start = time.time()
    with ThreadPoolExecutor(given.jobs) as pool:
        rows = list(pool.map(lambda t: run(os.path.abspath(given.build), t, given.seconds, seed), given.targets or TARGETS))
    for row in rows:
        print(f"{row['target']:10} {row['executions']:12,} {'clean' if row['status'] == 0 else 'FOUND SOMETHING'}")
    bad = [row["target"] for row in rows if row["status"] != 0]
    print(json.dumps({"executions": sum(r["executions"] for r in rows), "findings": bad, "seed": seed,
                      "seconds": round(time.time() - start, 1)}))
    return 1 if bad else 0


if __name__ == "__main__":
    sys.exit(main())
