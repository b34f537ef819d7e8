#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""scorecard.py - the reliability tests, one row each: name, figure, bar, PASS or FAIL.

  scorecard.py --quick       rows for every change (about four minutes on two cores)
  scorecard.py               all rows, the long ones at release length (hours)
  scorecard.py ROW...        these rows, quick or long by --quick

Rows come from programs of this folder that end with one line of JSON. A bar is missed: exit status 1.
"""
import argparse, json, os, subprocess, sys, tempfile, time

HERE = os.path.dirname(os.path.abspath(__file__))
ROOT = os.path.dirname(os.path.dirname(HERE))
BUILD = os.path.join(ROOT, "build")
EXAMPLES = os.path.join(ROOT, "examples")
LUXGALE = os.path.join(BUILD, "luxgale")
PYTHON = "/usr/bin/python3"


def last_json(command, folder=ROOT, environment=None):
    """(exit status, last line as JSON, text before it)"""
    done = subprocess.run(command, cwd=folder, capture_output=True, text=True, errors="replace", env={**os.environ, **(environment or {})})
    lines = done.stdout.strip().splitlines()
    try:
        result = json.loads(lines[-1])
    except (IndexError, ValueError):
        result = {}
    return done.returncode, result, "\n".join(lines[:-1] + done.stderr.splitlines())[-3000:]


def tool(name, *words):
    return last_json([PYTHON, os.path.join(HERE, name), *words])


def fuzz(quick):
    subprocess.run(["make", "fuzz"], cwd=ROOT, check=True, stdout=subprocess.DEVNULL)
    status, result, text = tool("fuzz.py", "--seconds", "3" if quick else "2000", "--jobs", "2", *(["--seed", "1"] if quick else []))
    return status == 0 and result.get("executions", 0) > 0, f"{result.get('executions', 0):,} executions, {len(result.get('findings', ['?']))} findings", text


def faults(job):
    def row(quick):
        commands = [("out.yaml", ["star", "-o", "out.yaml", "reference.yaml"]), ("out.yaml", ["star", "--format", "json", "-o", "out.yaml", "quickstart.yaml"])]
        if not quick or job == "memory":
            commands.append(("out.yaml,table.ecsv", ["wind", "-o", "out.yaml", "--structure", "table.ecsv", "wind.yaml"]))
        if not quick:
            commands += [("out.yaml,table.ecsv", ["outburst", "-o", "out.yaml", "--epochs", "table.ecsv", "quickstart.yaml"]),
                         ("out.yaml,table.ecsv", ["family", "-o", "out.yaml", "--epochs", "table.ecsv", "quickstart.yaml"])]
        points = children = bad = 0
        text = ""
        for outputs, words in commands:
            with tempfile.TemporaryDirectory() as folder:
                for name in os.listdir(EXAMPLES):
                    os.symlink(os.path.join(EXAMPLES, name), os.path.join(folder, name))
                status, result, said = last_json([os.path.join(BUILD, "faults"), job, outputs, *words], folder)
            points, children, text = points + result.get("points", 0), children + result.get("children", 0), text + said
            bad += result.get("violations", 1) + (status != 0 and result.get("violations", 1) == 0)
        return bad == 0, f"{children} runs at {points} points, {bad} violations", text
    return row


def environment(job, figure, *words):
    def row(quick):
        status, result, text = tool("environment.py", job, LUXGALE, *([] if quick else words))
        return status == 0, figure.format(**{**{"failures": "?"}, **result}) if result else "no result", text
    return row


def hostile(job, quick_words, words):
    def row(quick):
        status, result, text = tool("hostile.py", job, *(quick_words if quick else words))
        what = f"{result.get('files')} files, {result.get('peak_mib')} MiB" if job == "files" else f"{result.get('keys')} keys, {result.get('runs')} runs"
        return status == 0 and result.get("files", result.get("runs", 0)) >= 300, f"{what}, {result.get('failures')} failures", text
    return row


def stress(quick):
    program = os.path.join(BUILD, "stress")
    halves = [(0, 75), (75, 75)] if quick else [(0, 2500), (2500, 2500)]
    running = [subprocess.Popen([program, "--cases", str(count), "--first", str(first), "--second", "4", *([] if quick else ["--again", "2"])], stdout=subprocess.PIPE, text=True) for first, count in halves]
    texts = [process.communicate()[0] for process in running]
    results = [json.loads(text.strip().splitlines()[-1]) for text in texts]
    total = {key: sum(r[key] for r in results) for key in ("cases", "solved", "none", "contradictions", "false_proofs")}
    worst = max(r["most_residual"] for r in results), max(r["most_steps"] for r in results), max(r["most_difference"] for r in results)
    return all(p.returncode == 0 for p in running), (f"{total['cases']} cases: {total['solved']} solved, {total['none']} with a reason; residual {worst[0]:.1e}, "
            f"{worst[1]} steps, meshes differ {worst[2]:.1e}, {total['false_proofs']} false proofs"), "\n".join(texts)


def valgrind(quick):
    commands = [["star", os.path.join(EXAMPLES, "reference.yaml")], ["star", "--format", "json", "--set", "star.mass=1.2 Msun", os.path.join(EXAMPLES, "quickstart.yaml")],
                ["star", "--set", "opacity.formula=kramer", os.path.join(EXAMPLES, "wind.yaml")], ["wind", "--sat"], ["help", "case"]]
    if not quick:
        commands += [["wind", os.path.join(EXAMPLES, "wind.yaml")], ["outburst", os.path.join(EXAMPLES, "quickstart.yaml")], ["family", os.path.join(EXAMPLES, "quickstart.yaml")]]
    bad, text = 0, ""
    for words in commands:
        done = subprocess.run(["valgrind", "-q", "--error-exitcode=99", "--leak-check=full", "--show-leak-kinds=all", "--errors-for-leak-kinds=all", LUXGALE, *words], capture_output=True, text=True)
        bad += done.returncode == 99
        text += done.stderr if done.returncode == 99 else ""
    return bad == 0, f"{len(commands)} commands, {bad} with findings", text


def threads(quick):
    done = subprocess.run("make -s -j2 OPT='-O1 -fsanitize=thread' BUILD=build-thread tests && CK_FORK=no build-thread/run-tests uncertainty", shell=True, cwd=ROOT, capture_output=True, text=True)
    races = (done.stdout + done.stderr).count("WARNING: ThreadSanitizer")
    return done.returncode == 0 and races == 0, f"suite uncertainty, {races} races", done.stdout + done.stderr


def coverage(quick):
    status, result, text = tool("coverage.py")
    return status == 0, f"{result.get('lines')} % of {result.get('of')} lines", text


def mutation(quick):
    status, result, text = tool("mutation.py")
    return status == 0, f"{result.get('killed')} of {result.get('mutants')} killed", text


# name, in the quick set, bar, row
ROWS = [
    ("fuzz", True, "no crash, leak, hang over 1 s, 512 MiB", fuzz),
    ("no-memory", True, "exit 4 or handled, no leak, old output intact", faults("memory")),
    ("io-errors", True, "exit 3 or handled, old or new output", faults("io")),
    ("killed-at-calls", True, "old or new output, clean after the next run", faults("kill")),
    ("killed-any-time", True, "old or new output, clean after the next run", environment("kill", "{runs} runs, {killed} killed, {failures} failures", "500")),
    ("system-calls", True, "exit 3 or handled; write, fsync, rename, fsync", environment("strace", "{runs} runs, {failures} failures")),
    ("full-disk", True, "exit 3, message, old output", environment("signal", "{checks} checks, {failures} failures")),
    ("hostile-files", True, ">= 300 as listed, 1 s, 64 MiB", hostile("files", [LUXGALE], [LUXGALE])),
    ("hostile-numbers", True, "refused or finite, traps on", hostile("numbers", [os.path.join(BUILD, "luxgale-trap")], [os.path.join(BUILD, "luxgale-trap")])),
    ("hostile-winds", False, "refused, or finite numbers, 60 s", hostile("numbers", None, [LUXGALE, "--winds"])),
    ("stress", True, "residual < 1e-6 or reason; meshes agree to 1e-4", stress),
    ("same-bytes", True, "threads, locale, zone, folder: equal", environment("same", "{compared} comparisons, {failures} differ")),
    ("valgrind", True, "no finding", valgrind),
    ("threads", False, "no race", threads),
    ("memory", False, "<= 300 MiB for 1e6 epochs", environment("memory", "read {read_mib} MiB, outburst {outburst_mib} MiB")),
    ("coverage", False, ">= 92 % of lines", coverage),
    ("mutation", False, ">= 80 % killed", mutation),
]


def main():
    parser = argparse.ArgumentParser()
    parser.add_argument("--quick", action="store_true")
    parser.add_argument("--verbose", action="store_true", help="show what a failing row said")
    parser.add_argument("rows", nargs="*")
    given = parser.parse_args()
    failed = 0
    for name, quick, bar, row in ROWS:
        if given.rows and name not in given.rows or not given.rows and given.quick and not quick:
            continue
        start = time.time()
        try:
            fine, figure, text = row(given.quick)
        except (OSError, subprocess.SubprocessError, ValueError, KeyError, IndexError) as problem:
            fine, figure, text = False, f"did not run: {problem}", ""
        failed += not fine
        print(f"{'PASS' if fine else 'FAIL'}  {name:16} {figure}  (bar: {bar})  {time.time() - start:.0f} s", flush=True)
        if not fine:
            print("\n".join("      " + line[:300] for line in text.splitlines()[-(60 if given.verbose else 12):]), flush=True)
    print(f"scorecard: {'all rows pass' if failed == 0 else str(failed) + ' rows fail'}")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
