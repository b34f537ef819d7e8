#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""mutation.py - small changes of the source, one at a time: do the suites notice?

  mutation.py [--count N] [--seed S] [--log FILE]      default 230 wanted (some groups have fewer places), seed 1

Places are drawn at random from the code (not comments, texts, preprocessor lines or declarations of types) of the groups below, each
group with its share: a relation or arithmetic operator exchanged, a logical one exchanged, a number changed by a hundredth, a condition
negated, a statement left out. A mutant that does not compile or compiles to the same object is replaced by another. It is killed if
one of its suites fails, crashes or takes too long. Works on a copy in build-mutation; the source is never touched. Ends with one JSON line; exit status 1
below 80 %.
"""
import argparse, hashlib, json, os, random, re, shutil, subprocess, sys, time

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
COPY = os.path.join(ROOT, "build-mutation")
BAR = 0.80
# group, share, files, suites in the order in which they are tried
GROUPS = [
    ("units", 0.25, ["src/units.c"], ["units"]),
    ("interpolation", 0.25, ["src/numerics/steffen.c", "src/history/history.c"], ["numerics", "history"]),
    ("integrals", 0.2, ["src/numerics/quadrature.c", "src/history/history_excess.c"], ["numerics", "history"]),
    ("equations", 0.3, ["src/wind/wind_local.c", "src/wind/wind_problem.c", "src/porosity/porosity.c"], ["porosity", "wind:wind-quick"]),
]
EXCHANGE = [(r"<=", "<"), (r">=", ">"), (r"(?<![<\-])<(?![<=])", "<="), (r"(?<![>\-])>(?![>=])", ">="), (r"==", "!="), (r"!=", "=="),
            (r"&&", "||"), (r"\|\|", "&&"), (r"(?<=[\w)\]] )\+(?= )", "-"), (r"(?<=[\w)\]] )-(?= )", "+"), (r"(?<=[\w)\]] )\*(?= )", "/"), (r"(?<=[\w)\]] )/(?= )", "*")]
NUMBER = re.compile(r"(?<![\w.\"%])(\d+\.\d+(?:e[+-]?\d+)?)(?![\w.])")


def code_lines(text):
    """Line numbers that hold code inside a function body."""
    inside, comment = False, False
    for number, line in enumerate(text.splitlines()):
        bare = line.strip()
        if comment or bare.startswith("/*"):
            comment = "*/" not in bare
            continue
        if line.startswith("}"):
            inside = False
        if inside and bare and not bare.startswith(("#", "//", "enum", "struct lxg_error", "lxg_error_")) and "lxg_error_set" not in bare:
            yield number
        if re.match(r"^[a-z].*\{$", line) or (line.endswith("{") and not line.startswith(" ")):
            inside = True


def mutants(path):
    """(line, old line, new line)"""
    with open(os.path.join(ROOT, path)) as file:
        lines = file.read().splitlines()
    for number in code_lines("\n".join(lines)):
        line = lines[number]
        code = re.split(r"\s/\*", line)[0]
        for pattern, new in EXCHANGE:
            for match in re.finditer(pattern, code):
                if code[: match.start()].count('"') % 2 == 0:
                    yield number, line, line[: match.start()] + new + line[match.end():]
        for match in NUMBER.finditer(code):
            value = float(match.group(1))
            yield number, line, line[: match.start()] + repr(value * 1.01 if value else 0.01) + line[match.end():]
        if re.match(r"\s+if \((.*)\) \{$", code):
            yield number, line, re.sub(r"if \((.*)\) \{$", r"if (!(\1)) {", code)
        if re.match(r"\s+[a-z][\w\->\[\].]* [-+*/]?= .*;$", code) and not re.match(r"\s+(const|double|size_t|int|bool|static|return|enum|struct)\b", code):
            yield number, line, re.match(r"\s+", line).group(0) + ";"


def run(command):
    done = subprocess.run(command, cwd=COPY, capture_output=True, text=True, errors="replace")
    if done.returncode != 0 and "tests" in command:
        print(done.stdout[-2000:], done.stderr[-2000:], flush=True)
    return done.returncode == 0


def packages(what):
    return subprocess.run(["pkg-config", what, "gsl", "yaml-0.1", "libcjson", "check"], capture_output=True, text=True).stdout.split()


def compile_one(source):
    """The object of one source, without debugging data, put into the library."""
    target = "build/" + source[:-2] + ".o"
    return run(["gcc", "-std=c11", "-D_POSIX_C_SOURCE=200809L", "-O1", "-fPIC", "-ffp-contract=off", "-w", "-Iinclude", "-Isrc", '-DLXG_VERSION="0"',
                *packages("--cflags"), "-c", "-o", target, source])


def link():
    def objects(start, without):
        for folder, _, names in os.walk(os.path.join(COPY, "build", start)):
            if os.path.basename(folder) not in without:
                yield from (os.path.join(folder, name) for name in names if name.endswith(".o"))

    return run(["gcc", "-pthread", "-o", "build/run-tests", *objects("tests", ("reliability", "bench", "calibration")), *objects("src", ("cli",)),
                *packages("--libs"), "-lm"])


def contents(source):
    code = subprocess.run(["objdump", "-d", "-s", "-j", ".text", "-j", ".rodata", "-j", ".rodata.cst8", "build/" + source[:-2] + ".o"], cwd=COPY, capture_output=True).stdout
    return hashlib.sha256(code).digest()


def suites_fail(suites, times):
    for suite in suites:
        try:
            name, _, part = suite.partition(":")
            case = {"CK_RUN_CASE": part} if part else {}
            if subprocess.run([os.path.join(COPY, "build/run-tests"), name], cwd=COPY, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL,
                              timeout=10 + 4 * times[suite], env={**os.environ, **case, "CK_DEFAULT_TIMEOUT": "300"}).returncode != 0:
                return suite
        except subprocess.TimeoutExpired:
            return suite + " (time)"
    return None


def main():
    parser = argparse.ArgumentParser()
    parser.add_argument("--count", type=int, default=230, help="one group has fewer places than its share")
    parser.add_argument("--seed", type=int, default=1)
    parser.add_argument("--log", default=os.path.join(ROOT, "build-mutation.log"))
    given = parser.parse_args()
    shutil.copytree(ROOT, COPY, dirs_exist_ok=True, ignore=shutil.ignore_patterns("build*", "demo-output", ".git"))
    if not run(["make", "-s", "-j2", "OPT=-O1 -g0", "BUILD=build", "WARN=-w", "tests"]) or not link():
        sys.exit("the source does not build")
    times = {}
    for suite in sorted({s for group in GROUPS for s in group[3]}):
        start = time.time()
        if suites_fail([suite], {suite: 600}):
            sys.exit(f"suite {suite} fails without a mutant")
        times[suite] = time.time() - start
        print(f"{suite}: {times[suite]:.1f} s", flush=True)
    chance, killed, tried, table, began = random.Random(given.seed), 0, 0, {}, time.time()
    before = {}
    log = open(given.log, "w")
    for group, share, files, suites in GROUPS:
        places = [(path, *mutant) for path in files for mutant in mutants(path)]
        chance.shuffle(places)
        wanted, done, dead = round(given.count * share), 0, 0
        for path, number, old, new in places:
            if done == wanted:
                break
            source = os.path.join(COPY, path)
            with open(source) as file:
                original = file.read()
            if path not in before:
                compile_one(path)
                before[path] = contents(path)
            lines = original.splitlines()
            lines[number] = new
            with open(source, "w") as file:
                file.write("\n".join(lines) + "\n")
            if compile_one(path) and contents(path) != before[path] and link():
                by = suites_fail(suites, times)
                done += 1
                dead += by is not None
                log.write(f"{'killed by ' + by if by else 'SURVIVED'}: {path}:{number + 1}: {old.strip()} -> {new.strip()}\n")
                log.flush()
            with open(source, "w") as file:
                file.write(original)
            compile_one(path)
        table[group] = f"{dead}/{done}"
        killed, tried = killed + dead, tried + done
    score = killed / tried if tried else 0.0
    print(json.dumps({"mutants": tried, "killed": killed, "score": round(score, 3), "groups": table, "seed": given.seed, "seconds": round(time.time() - began)}))
    return 0 if score >= BAR else 1


if __name__ == "__main__":
    sys.exit(main())
