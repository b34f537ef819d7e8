#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""environment.py - what must not change the result, what must not be left behind, and how much memory is taken.

  environment.py same LUXGALE      same bytes for any threads, locale, time zone, folder, environment; odd file names
  environment.py memory LUXGALE    a history of a million epochs: at most 300 MiB
  environment.py kill LUXGALE [N]  SIGKILL at N random times (seeded): old or new output, nothing left after the next run
  environment.py signal LUXGALE    a full disk, a small file limit, closed descriptors, a reader that leaves
  environment.py strace LUXGALE    order write, fsync, rename, fsync of the folder; each system call of the program and its libraries
                                   fails in turn with EIO, ENOSPC, EINTR (strace)

Ends with one JSON line."""
import json, os, random, re, resource, shutil, signal, subprocess, sys, tempfile, time

CASE = "case: 1\ntitle: odd\nstar: {mass: 1.05 Msun}\ncomposition: {hydrogen: 0.45, helium: 0.35, cno: 0.18, metals: 0.02}\n"
HOLD = "hold: {base_temperature: 1.0e8 K, base_luminosity: 1.02 Ledd}\n"
OLD = b"the old output\n"
failures = []


def check(fine, text):
    if not fine:
        failures.append(text)


def write(path, text):
    with open(path, "wb") as file:
        file.write(text.encode() if isinstance(text, str) else text)


def read(path):
    with open(path, "rb") as file:
        return file.read()


def leftovers(folder):
    return [name for name in os.listdir(folder) if name.startswith(".luxgale-")]


def same(luxgale, folder):
    """Report and tables of `wind` and `outburst`, byte by byte."""
    examples = os.path.join(os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__)))), "examples")
    for name in os.listdir(examples):
        if os.path.isfile(os.path.join(examples, name)):
            shutil.copy(os.path.join(examples, name), folder)
    locales = os.path.join(folder, "locales")
    os.makedirs(locales)
    made = []
    for name in ("de_DE", "tr_TR"):
        done = subprocess.run(["localedef", "-i", name, "-f", "UTF-8", os.path.join(locales, name + ".UTF-8")], capture_output=True)
        if os.path.isdir(os.path.join(locales, name + ".UTF-8")):
            made.append(name + ".UTF-8")
        else:
            failures.append(f"localedef {name}: {done.stderr.decode()[:100]}")

    def once(command, environment=None, cwd=folder, case=None, threads="1"):
        variables = {"PATH": os.environ["PATH"], "LOCPATH": locales, **(environment or {})}
        table = os.path.join(folder, "table.ecsv")
        option = "--epochs" if command == "outburst" else "--structure"
        case = case or ("wind.yaml" if command == "wind" else "quickstart.yaml")
        done = subprocess.run([luxgale, command, "--threads", threads, option, table, case], capture_output=True, cwd=cwd, env=variables)
        report = re.sub(rb'name: "[^"]*/', b'name: "', done.stdout)
        return done.returncode, report, read(table)

    compared = 0
    for command in ("wind", "outburst"):
        plain = once(command)
        check(plain[0] == 0 and len(plain[1]) > 500 and len(plain[2]) > 500, f"{command}: no result to compare: {plain[0]}")
        variants = {"threads 2": {"threads": "2"}}
        if command == "outburst":
            variants["threads 7"] = {"threads": "7"}
        else:
            for name in made:
                variants[name] = {"environment": {"LC_ALL": name, "LANG": name}}
            variants["time zone"] = {"environment": {"TZ": "Asia/Kathmandu", "LC_TIME": "C"}}
            variants["empty environment"] = {"environment": {"LOCPATH": ""}}
            variants["another folder"] = {"cwd": "/", "case": os.path.join(folder, "wind.yaml")}
        for name, how in variants.items():
            check(once(command, **how) == plain, f"{command}: other bytes with {name}")
            compared += 1
    for name in ["a b.yaml", "-x.yaml", "quote'\".yaml", "new\nline.yaml", "n" * 250 + ".yaml", "\u00fc\u20ac.yaml", "$(id);.yaml"]:
        write(os.path.join(folder, name), CASE)
        done = subprocess.run([luxgale, "star", "-o", "out " + name[:200], "--", name], capture_output=True, cwd=folder)
        check(done.returncode == 0 and read(os.path.join(folder, "out " + name[:200])).startswith(b"program"), f"name {name[:20]!r}: {done.returncode} {done.stderr[:80]}")
        compared += 1
    target = os.path.join(folder, "elsewhere")
    write(target, OLD)
    os.symlink(target, os.path.join(folder, "link.yaml"))
    subprocess.run([luxgale, "star", "-o", "link.yaml", "wind.yaml"], cwd=folder)
    check(read(target) == OLD, "wrote through a symbolic link")
    check(not leftovers(folder), "temporary files left")
    return {"compared": compared, "locales": made}


def memory(luxgale, folder):
    rows = 1000000
    with open(os.path.join(folder, "h.csv"), "w") as file:
        file.write("time [d],luminosity [erg/s]\n")
        file.writelines(f"{i * 1e-4:.4f},{1.70e38 + (i % 997) * 1e34:.6e}\n" for i in range(rows))
    write(os.path.join(folder, "case.yaml"), CASE + "hold: {base_temperature: 1.0e8 K}\nluminosity: {kind: photosphere, file: h.csv}\n")
    start = time.time()
    done = subprocess.run([luxgale, "star", "case.yaml"], cwd=folder, capture_output=True)
    peak = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024
    seconds = time.time() - start
    check(done.returncode == 0, f"star: {done.returncode} {done.stderr[:200]}")
    check(peak <= 300, f"{peak:.0f} MiB")
    start = time.time()
    done = subprocess.run([luxgale, "outburst", "--epochs", "e.ecsv", "case.yaml"], cwd=folder, capture_output=True)
    peak_all = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss / 1024
    check(done.returncode in (0, 1), f"outburst: {done.returncode} {done.stderr[:200]}")
    check(peak_all <= 300, f"outburst: {peak_all:.0f} MiB")
    return {"rows": rows, "read_mib": round(peak), "outburst_mib": round(peak_all), "read_seconds": round(seconds, 1), "outburst_seconds": round(time.time() - start, 1)}


def kill(luxgale, folder, count):
    write(os.path.join(folder, "case.yaml"), CASE)
    command = [luxgale, "star", "-o", "out.yaml", "case.yaml"]
    out = os.path.join(folder, "out.yaml")
    start = time.time()
    for _ in range(20):
        subprocess.run(command, cwd=folder, check=True)
    usual = (time.time() - start) / 20
    new, chance, hit = read(out), random.Random(9), 0
    for i in range(count):
        write(out, OLD)
        process = subprocess.Popen(command, cwd=folder)
        time.sleep(chance.uniform(0.0, 1.2 * usual))
        process.kill()
        hit += process.wait() == -signal.SIGKILL
        check(read(out) in (OLD, new), f"kill {i}: a damaged output")
    subprocess.run(command, cwd=folder, check=True)
    check(read(out) == new, "the next run gives other bytes")
    check(not leftovers(folder), f"{leftovers(folder)} left after the next run")
    return {"runs": count, "killed": hit}


def signals(luxgale, folder):
    write(os.path.join(folder, "case.yaml"), CASE)
    out = os.path.join(folder, "out.yaml")
    write(out, OLD)
    checks = 0

    def fails(name, command, **how):
        nonlocal checks
        checks += 1
        done = subprocess.run(command, cwd=folder, capture_output=True, **how)
        check(done.returncode == 3 and b"[write" in done.stderr, f"{name}: {done.returncode} {done.stderr[:100]}")
        check(read(out) == OLD and not leftovers(folder), f"{name}: files changed")

    fails("file limit", [luxgale, "star", "-o", "out.yaml", "case.yaml"], preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_FSIZE, (100, 100)))
    fails("/dev/full", [luxgale, "star", "-o", "/dev/full", "case.yaml"])
    fails("stdout full", ["sh", "-c", f"exec {luxgale} star case.yaml > /dev/full"])
    fails("help full", ["sh", "-c", f"exec {luxgale} help case > /dev/full"])
    for closed in ("<&-", ">&-", "2>&-", "<&- >&- 2>&-"):
        done = subprocess.run(["sh", "-c", f"exec {luxgale} star -o new.yaml case.yaml {closed}"], cwd=folder, capture_output=True)
        checks += 1
        check(done.returncode == 0 and read(os.path.join(folder, "new.yaml")).startswith(b"program"), f"{closed}: {done.returncode}")
    done = subprocess.run(["bash", "-c", f"{luxgale} help inputs.md | head -1; exit ${{PIPESTATUS[0]}}"], cwd=folder, capture_output=True)
    check(done.returncode in (0, 3) and done.stderr == b"", f"a reader that leaves: {done.returncode} {done.stderr[:80]}")
    for number in (signal.SIGINT, signal.SIGTERM, signal.SIGHUP):
        write(os.path.join(folder, "wind.yaml"), CASE + HOLD)
        process = subprocess.Popen([luxgale, "wind", "-o", "out.yaml", "wind.yaml"], cwd=folder)
        time.sleep(0.05)
        process.send_signal(number)
        start = time.time()
        status = process.wait()
        checks += 1
        check(status in (-number, 0) and time.time() - start < 2, f"signal {number}: {status}")
        check(not leftovers(folder), f"signal {number}: temporary files left")
        write(out, OLD)
    return {"checks": checks}


def strace(luxgale, folder):
    """The sequence of calls, and faults that libraries see too."""
    write(os.path.join(folder, "case.yaml"), CASE)
    out = os.path.join(folder, "out.yaml")
    command = [luxgale, "star", "-o", "out.yaml", "case.yaml"]
    subprocess.run(command, cwd=folder, check=True)
    new, runs = read(out), 0
    trace = os.path.join(folder, "trace")
    subprocess.run(["strace", "-o", trace, "-e", "trace=write,fsync,renameat,rename,renameat2"] + command, cwd=folder, check=True)
    order = re.findall(r"^(?:\d+ +)?(write|fsync|rename)", read(trace).decode(), re.M)
    check(re.fullmatch(r"(write )+fsync rename fsync", " ".join(order)) is not None, f"order {order}")
    for call in ("openat", "read", "write", "fsync", "close", "renameat", "fchmod", "getdents64"):
        for error in ("EIO", "ENOSPC", "EINTR"):
            for number in range(1, 40):
                write(out, OLD)
                done = subprocess.run(["strace", "-o", trace, "-e", "trace=" + call, "-e", f"inject={call}:error={error}:when={number}"] + command, cwd=folder, capture_output=True)
                runs += 1
                if b"(INJECTED)" not in read(trace):
                    break
                early = b"shared librar" in done.stderr  # the loader failed, before the program began
                check(early or done.returncode in (0, 3), f"{call} {error} {number}: {done.returncode} {done.stderr[:100]}")
                check(early or done.returncode == 0 or re.search(rb"\[[a-z-]+\]", done.stderr), f"{call} {error} {number}: no message")
                check(read(out) in ((new,) if done.returncode == 0 else (OLD, new)), f"{call} {error} {number}: damaged output")
                check(not leftovers(folder), f"{call} {error} {number}: temporary file left")
                for name in leftovers(folder):
                    os.remove(os.path.join(folder, name))
    return {"runs": runs, "order": " ".join(order)}


def main():
    luxgale = os.path.abspath(sys.argv[2])
    with tempfile.TemporaryDirectory() as folder:
        job = sys.argv[1]
        result = (same(luxgale, folder) if job == "same" else memory(luxgale, folder) if job == "memory" else
                  kill(luxgale, folder, int(sys.argv[3]) if len(sys.argv) > 3 else 60) if job == "kill" else
                  signals(luxgale, folder) if job == "signal" else strace(luxgale, folder))
    for line in failures[:40]:
        print(line)
    print(json.dumps({**result, "failures": len(failures)}))
    return 1 if failures else 0


if __name__ == "__main__":
    sys.exit(main())
