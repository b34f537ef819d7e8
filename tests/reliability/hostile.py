#!/usr/bin/python3
# SPDX-License-Identifier: GPL-3.0-or-later
"""hostile.py - bad files with the exit status and the code each must give, and bad numbers for every numeric key.

  hostile.py files LUXGALE
  hostile.py numbers LUXGALE-TRAP [--winds]     --winds: also solve the wind wherever the number was accepted

What is expected follows from the documented formats (headers of document.h and table.h, docs/inputs.md), never from a run. Limits a
file: 1 s, 64 MiB. Numbers: the keys come from `luxgale help inputs.md`, so new keys are covered by themselves; the program traps
invalid operations and division by zero; it must end with a defined error or with finite numbers. Ends with
one JSON line.
"""
import json, os, re, resource, signal, subprocess, sys, tempfile, time

SECONDS, BYTES = 1.0, 64 << 20
STAR = "star: {mass: 1.0 Msun}\ncomposition: {hydrogen: 0.35, helium: 0.63}\n"
GOOD = "case: 1\n" + STAR
SYNTAX, REFUSED, LIMIT = "document-syntax", "document-refused", "document-limit"


def run(command, stdin=b"", seconds=10.0, folder=None):
    """Exit status (negative: signal; None: too long), text of stdout, of stderr, seconds. Seconds are of processor time, which does
    not depend on what else runs; the clock stops a program that waits."""
    before = resource.getrusage(resource.RUSAGE_CHILDREN)
    limit = int(seconds) + 1
    process = subprocess.Popen(command, stdin=subprocess.PIPE, stdout=subprocess.PIPE, stderr=subprocess.PIPE, cwd=folder,
                               preexec_fn=lambda: resource.setrlimit(resource.RLIMIT_CPU, (limit, limit)))
    try:
        out, err = process.communicate(stdin, timeout=30 * seconds)
    except subprocess.TimeoutExpired:
        process.kill()
        process.communicate()
        return None, "", "", 30 * seconds
    after = resource.getrusage(resource.RUSAGE_CHILDREN)
    used = after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime
    status = None if process.returncode in (-signal.SIGXCPU, -signal.SIGKILL) else process.returncode
    return status, out.decode(errors="replace"), err.decode(errors="replace"), used


def documents():
    """(name, bytes, exit status, code)"""
    json_case = json.dumps({"case": 1, "title": "a\u00e9 \"q\"", "star": {"mass": "1.0 Msun"}, "composition": {"hydrogen": 0.35}}).encode()
    yield "good.json", json_case, 0, ""
    for size in range(len(json_case)):  # every beginning of a JSON text is no JSON text
        yield f"prefix-{size}.json", json_case[:size], 2, SYNTAX
    for byte in [b for b in range(32) if b not in (9, 10, 13)] + [127]:
        if byte != 127:
            yield f"control-{byte}.yaml", GOOD.encode() + b'title: "x' + bytes([byte]) + b'y"\n', 2, SYNTAX
            yield f"control-{byte}.json", json_case.replace(b"case", b"ca" + bytes([byte]) + b"se"), 2, SYNTAX
    bad_utf8 = [b"\x80", b"\xc0\x80", b"\xc3", b"\xc3\x28", b"\xe0\x80\x80", b"\xed\xa0\x80", b"\xf4\x90\x80\x80", b"\xf8\x88\x80\x80\x80",
                b"\xff", b"\xe2\x82", b"\xf0\x9f\x98", b"caf\xe9"]
    for i, piece in enumerate(bad_utf8):
        yield f"utf8-{i}.yaml", GOOD.encode() + b"title: " + piece + b"\n", 2, SYNTAX
        yield f"utf8-{i}.json", json_case.replace(b"Msun", piece), 2, SYNTAX
    yield "utf16.yaml", GOOD.encode("utf-16"), 2, SYNTAX
    yield "utf32.yaml", GOOD.encode("utf-32"), 2, SYNTAX
    yield "crlf.yaml", GOOD.replace("\n", "\r\n").encode(), 0, ""
    yield "bom.yaml", b"\xef\xbb\xbf" + GOOD.encode(), 0, ""
    yield "no-newline.yaml", GOOD.encode()[:-1], 0, ""
    yield "comments.yaml", b"# a\n\n---\n" + GOOD.encode() + b"# end\n", 0, ""
    texts = {
        "empty": ("", SYNTAX), "blank": (" \n\n", SYNTAX), "comment-only": ("# nothing\n", SYNTAX), "unclosed-list": (GOOD + "title: [a\n", SYNTAX),
        "unclosed-map": (GOOD + "title: {a\n", SYNTAX), "unclosed-quote": (GOOD + 'title: "a\n', SYNTAX), "unclosed-single": (GOOD + "title: 'a\n", SYNTAX),
        "tab-indent": ("case: 1\nstar:\n\tmass: 1\n", SYNTAX), "wrong-indent": ("case: 1\n  star: 1\n", SYNTAX), "colon": (": :\n:\n - :\n", None),
        "two-documents": (GOOD + "---\ncase: 1\n", REFUSED), "anchor": (GOOD + "title: &a x\n", REFUSED), "alias": (GOOD + "title: *a\n", REFUSED),
        "merge": (GOOD + "<<: {a: 1}\n", REFUSED), "tag": (GOOD + "title: !!str x\n", REFUSED), "local-tag": (GOOD + "title: !x y\n", REFUSED),
        "binary-tag": (GOOD + "title: !!binary aGk=\n", REFUSED), "complex-key": ("? [a, b]\n: 1\n", None), "map-key": ("{a: 1}: 2\n", None),
        "duplicate": (GOOD + "case: 1\n", "key-duplicate"), "duplicate-nested": ("case: 1\nstar: {mass: 1, mass: 2}\n", "key-duplicate"),
        "scalar-root": ("42\n", "kind-mapping"), "list-root": ("- 1\n- 2\n", "kind-mapping"), "text-root": ("\"case\"\n", "kind-mapping"),
        "no-case": (STAR, "key-missing"), "case-2": ("case: 2\n" + STAR, "case-version"), "case-text": ("case: one\n" + STAR, "value-integer"),
        "case-real": ("case: 1.0\n" + STAR, "value-integer"), "case-list": ("case: [1]\n" + STAR, None), "case-null": ("case: ~\n" + STAR, None),
        "case-quoted": ('case: "1"\n' + STAR, None), "case-octal": ("case: 01\n" + STAR, "value-integer"), "case-huge": ("case: 99999999999999999999\n" + STAR, "value-integer"),
        "unknown": (GOOD + "wheels: 4\n", "key-unknown"), "unknown-nested": ("case: 1\nstar: {mass: 1, wheels: 4}\n", None), "star-list": (GOOD.replace("{mass: 1.0 Msun}", "[1]"), "kind-mapping"),
        "star-text": (GOOD.replace("{mass: 1.0 Msun}", "sun"), "kind-mapping"), "star-null": (GOOD.replace("{mass: 1.0 Msun}", "~"), None),
        "mass-list": (GOOD.replace("1.0 Msun", "[1]"), None), "mass-map": (GOOD.replace("1.0 Msun", "{a: 1}"), None), "mass-bool": (GOOD.replace("1.0 Msun", "true"), None),
        "mass-null": (GOOD.replace("1.0 Msun", "~"), None), "mass-unit": (GOOD.replace("Msun", "Mson"), "unit-unknown"), "mass-dimension": (GOOD.replace("Msun", "km"), "unit-dimension"),
        "mass-two": (GOOD.replace("1.0 Msun", "1.0 2.0 Msun"), None), "mass-glued": (GOOD.replace("1.0 Msun", "1.0Msun"), None), "mass-comma": (GOOD.replace("1.0 Msun", "'1,0 Msun'"), None),
        "mass-hex": (GOOD.replace("1.0 Msun", "0x10 Msun"), None), "mass-sexagesimal": (GOOD.replace("1.0 Msun", "1:30 Msun"), None), "mass-underscore": (GOOD.replace("1.0 Msun", "1_0 Msun"), None),
        "mass-fullwidth": (GOOD.replace("1.0", "\uff11"), None), "mass-minus-sign": (GOOD.replace("1.0", "\u22121.0"), None),
        "hydrogen-text": (GOOD.replace("0.35", "much"), "value-number"), "hydrogen-percent": (GOOD.replace("0.35", "35%"), "value-number"), "hydrogen-unit": (GOOD.replace("0.35", "0.35 Msun"), "value-number"),
        "sum": (GOOD.replace("0.63", "0.53"), "composition-sum"), "title-null": (GOOD + "title: ~\n", ""), "title-number": (GOOD + "title: 1\n", ""),
        "formula-word": (GOOD + "opacity: {formula: krammers}\n", None), "formula-omit": (GOOD + "opacity: {formula: scattering, omit: [iron]}\n", None),
        "omit-unknown": (GOOD + "opacity: {omit: [irn]}\n", None), "omit-scalar": (GOOD + "opacity: {omit: iron}\n", "kind-sequence"), "tables-missing": (GOOD + "opacity: {tables: [nothere.ecsv]}\n", 3),
        "tables-empty": (GOOD + "opacity: {tables: []}\n", None), "outside-alone": (GOOD + "opacity: {outside: clamp}\n", "opacity-unused"), "porosity-unused": (GOOD + "porosity: {law: none, factor: 2}\n", "porosity-unused"),
        "porosity-missing": (GOOD + "porosity: {law: length}\n", "key-missing"), "burning-word": (GOOD + "burning: {law: yes}\n", "value-word"), "hold-three": (GOOD + "hold: {base_temperature: 1e8, base_luminosity: 1 Ledd, launch_radius: 1 Rsun}\n", "hold-many"),
        "hold-unknown": (GOOD + "hold: {temperature: 1e8}\n", "key-unknown"), "hold-list": (GOOD + "hold: [1, 2]\n", "kind-mapping"), "lum-file-missing": (GOOD + "luminosity: {kind: base, file: nothere.ecsv}\n", 3),
        "lum-kind": (GOOD + "luminosity: {kind: bas, file: x}\n", "value-word"), "lum-no-file": (GOOD + "luminosity: {kind: base}\n", "key-missing"), "lum-folder": (GOOD + "luminosity: {kind: base, file: .}\n", 3),
        "terms-empty": (GOOD + "luminosity: {kind: formula, end: 3 d, terms: []}\n", None), "terms-scalar": (GOOD + "luminosity: {kind: formula, end: 3 d, terms: 1}\n", None),
        "end-before-start": (GOOD + "luminosity: {kind: formula, start: 5 d, end: 3 d, terms: [{law: constant, luminosity: 1 Ledd}]}\n", None),
        "settings-unknown": (GOOD + "settings: {gap: 1}\n", "key-unknown"), "settings-range": (GOOD + "settings: {gap_fraction: 1e9}\n", "value-range"),
    }
    for name, (text, code) in texts.items():
        status, code = (3, None) if code == 3 else (0, "") if code == "" else (2, code)
        yield name + ".yaml", text.encode(), status, code
    deep = 100000
    yield "deep-list.yaml", b"a: " + b"[" * deep, 4, LIMIT
    yield "deep-map.yaml", b"{a: " * deep, 4, LIMIT
    yield "deep-dash.yaml", b"- " * 2000 + b"x\n", 4, LIMIT
    yield "deep-list.json", b"[" * deep, 4, LIMIT
    yield "deep-map.json", b'{"a":' * deep, 4, LIMIT
    yield "many-keys.yaml", b"".join(b"k%d: 1\n" % i for i in range(200000)), 4, LIMIT
    yield "many-keys.json", b"{" + b",".join(b'"k%d":1' % i for i in range(200000)) + b"}", 4, LIMIT
    yield "many-items.json", b"[" + b"1," * 200000 + b"1]", 4, LIMIT
    yield "long-scalar.yaml", GOOD.encode() + b'title: "' + b"x" * (1 << 20) + b'"\n', 4, LIMIT
    yield "long-key.yaml", b"x" * (1 << 20) + b": 1\n", None, None
    yield "long-scalar.json", json_case.replace(b"q", b"x" * (1 << 20)), 4, LIMIT
    yield "large.yaml", b"# " + b"x" * (5 << 20) + b"\n" + GOOD.encode(), 4, "read-size"
    json_texts = {"trailing-comma": b'{"case": 1,}', "single-quotes": b"{'case': 1}", "comment": b'{"case": 1 /* x */}', "nan": b'{"case": NaN}', "infinity": b'{"case": Infinity}',
                  "plus": b'{"case": +1}', "dot": b'{"case": .5}', "zero": b'{"case": 01}', "dot-end": b'{"case": 1.}', "bare": b"{case: 1}", "twice": b'{"case": 1} {"case": 1}', "escape": b'{"a": "\\x41"}',
                  "surrogate": b'{"a": "\\ud800"}', "low-surrogate": b'{"a": "\\udc00"}', "short-escape": b'{"a": "\\u12"}', "nul-escape": b'{"a": "\\u0000"}', "newline": b'{"a": "x\ny"}', "true-case": b'{"a": True}'}
    for name, text in json_texts.items():
        yield "syntax-" + name + ".json", text, 2, SYNTAX
    yield "duplicate.json", b'{"case": 1, "case": 1}', 2, "key-duplicate"
    yield "duplicate-escaped.json", b'{"case": 1, "c\\u0061se": 1}', 2, "key-duplicate"


def tables():
    """Luminosity tables: (name, bytes, exit status, code)"""
    head = "# %ECSV 1.0\n# ---\n# datatype:\n# - {name: time, unit: d, datatype: float64}\n# - {name: luminosity, unit: erg / s, datatype: float64}\n"
    good = "time [d],luminosity [erg/s]\n0,1e38\n1,1.1e38\n2,1e38\n"
    ecsv = head + "time luminosity\n0 1e38\n1 1.1e38\n"
    yield "good.csv", good, 0, ""
    yield "good.ecsv", ecsv, 0, ""
    yield "crlf.csv", good.replace("\n", "\r\n"), 0, ""
    yield "quoted.csv", good.replace("1.1e38", '"1.1e38"'), 0, ""
    yield "comments.csv", "# x\n" + good.replace("1,", "# y\n1,", 1), 0, ""
    yield "extra-column.csv", "time,luminosity,note\n0,1e38,a\n1,1e38,\"b,\"\"c\"\n", 0, ""
    yield "one-row.csv", "time,luminosity\n0,1e38\n", 0, ""
    bad = {
        "empty": ("", "table-empty"), "blank": ("\n\n\n", "table-empty"), "header-only": ("time,luminosity\n", None), "ragged-short": (good + "3\n", "table-ragged"),
        "ragged-long": (good + "3,1e38,5\n", "table-ragged"), "unclosed": (good + '3,"1e38\n', "table-quote"), "after-quote": (good + '3,"1e38"x\n', "table-quote"), "nul": (good + "3,1e3\0" + "8\n", "table-byte"),
        "control": (good + "3,1e3\x01\n", None), "latin": (good.encode() + b"3,\xe9\n", "table-number"), "utf16": (good.encode("utf-16"), None), "no-time": (good.replace("time", "date"), "table-column"),
        "no-luminosity": (good.replace("luminosity", "light"), "table-column"), "column-twice": (good.replace("luminosity", "time"), None), "unit-unknown": (good.replace("erg/s", "watt!"), "unit-unknown"),
        "unit-dimension": (good.replace("[d]", "[K]"), "unit-dimension"), "text": (good.replace("1.1e38", "bright"), "table-number"), "missing": (good.replace("1.1e38", ""), "table-missing"),
        "missing-time": (good.replace("1,1.1", ",1.1"), "table-missing"), "nan": (good.replace("1.1e38", "nan"), None), "inf": (good.replace("1.1e38", "inf"), None), "overflow": (good.replace("1.1e38", "1e999"), None),
        "unsorted": ("time,luminosity\n1,1e38\n0,1e38\n", "history-order"), "same-time": ("time,luminosity\n1,1e38\n1,1e38\n", "history-duplicate"), "zero": (good.replace("1.1e38", "0"), "history-luminosity"),
        "negative": (good.replace("1.1e38", "-1e38"), "history-luminosity"), "negative-error": ("time,luminosity,luminosity_error\n0,1e38,-1e37\n", "history-error"), "semicolon": (good.replace(",", ";"), None),
        "hex": (good.replace("1.1e38", "0x1p3"), "table-number"), "decimal-comma": (good.replace("1.1e38", '"1,1e38"'), "table-number"),
        "ecsv-no-header": ("# %ECSV 1.0\n# ---\ntime luminosity\n0 1\n", None), "ecsv-version": (ecsv.replace("1.0", "9.9", 1), "table-header"), "ecsv-yaml": (ecsv.replace("- {name: time", "- {name: [time"), None),
        "ecsv-names": (ecsv.replace("time luminosity", "time light"), "table-header"), "ecsv-type": (ecsv.replace("float64", "complex128"), None), "ecsv-ragged": (ecsv + "3\n", "table-ragged"),
        "ecsv-delimiter": (ecsv.replace("# datatype", "# delimiter: ';'\n# datatype"), "table-header"), "ecsv-alias": (ecsv.replace("unit: d", "unit: *d"), None), "ecsv-no-rows": (head + "time luminosity\n", None),
        "ecsv-cut": (head, None), "ecsv-cut-header": (head[:60], None),
    }
    for name, (text, code) in bad.items():
        yield name + (".ecsv" if name.startswith("ecsv") else ".csv"), text, 2, code
    yield "many-columns.csv", ",".join(f"c{i}" for i in range(100000)) + "\n", 4, "table-limit"
    yield "long-line.csv", "time,luminosity\n0," + "1" * (3 << 20) + "\n", 4, "table-limit"


def grids():
    """Own opacity tables."""
    head = ("# %ECSV 1.0\n# ---\n# datatype:\n# - {name: log_t, datatype: float64}\n# - {name: log_r, datatype: float64}\n# - {name: log_kappa, datatype: float64}\n"
            "# meta:\n#   composition: {hydrogen: 0.35, helium: 0.63, cno: 0.0, metals: 0.02}\n#   source: invented\nlog_t log_r log_kappa\n")
    rows = [f"{4 + 0.1 * i:.1f} {-6 + 0.5 * j} {-0.3 + 0.01 * i * j}\n" for i in range(5) for j in range(5)]
    good = head + "".join(rows)
    yield "good-grid.ecsv", good, 0, ""
    yield "shuffled-grid.ecsv", head + "".join(reversed(rows)), 0, ""
    bad = {"twice": (good + rows[3], "opacity-table-duplicate"), "no-composition": (good.replace("#   composition: {hydrogen: 0.35, helium: 0.63, cno: 0.0, metals: 0.02}\n", ""), "opacity-table-composition"),
           "composition-sum": (good.replace("0.63", "0.53"), "composition-sum"), "no-column": (good.replace("log_kappa", "kappa"), "table-column"),
           "unit": (good.replace("name: log_t,", "name: log_t, unit: K,"), "opacity-table-unit"), "range": (good.replace(rows[7], "4.1 -5.0 400\n"), "opacity-grid-range"), "text": (good.replace(rows[7], "4.1 -5.0 x\n"), "table-number"),
           "other": (good.replace("hydrogen: 0.35, helium: 0.63", "hydrogen: 0.70, helium: 0.28"), None), "composition-text": (good.replace("0.35", "x"), None)}
    for name, (text, code) in bad.items():
        yield name + "-grid.ecsv", text, 2, code
    yield "few-grid.ecsv", head + "".join(rows[:10]), 4, "opacity-grid-size"


def arguments(luxgale):
    """Command lines: (name, arguments, exit status, code)"""
    yield "none", [], 2, "command-missing"
    yield "no case", ["star"], 2, "case-missing"
    yield "unknown command", ["stra", "c.yaml"], 2, "command-unknown"
    yield "unknown option", ["star", "--thread", "x", "c.yaml"], 2, None
    yield "two cases", ["star", "c.yaml", "c.yaml"], 2, "operand-extra"
    yield "empty name", ["star", ""], 3, "read-open"
    yield "no file", ["star", "nothere.yaml"], 3, "read-open"
    yield "folder", ["star", "."], 3, "read-failed"
    yield "zeros", ["star", "/dev/zero"], 4, "read-size"
    yield "long name", ["star", "x" * 5000], 3, "read-open"
    yield "memory of a process", ["star", "/proc/self/mem"], 3, "read-failed"
    for value in ["0", "-1", "1.5", "x", "", "99999999999999999999", "1e3"]:
        yield "threads " + value, ["star", "--threads", value, "c.yaml"], 2, "option-value"
    for value in ["-1", "x", "", "9999999999999999999999"]:
        yield "seed " + value, ["star", "--seed", value, "c.yaml"], 2, "option-value"
    for value in ["", "=", "=1", "star", "star.mass", ".=1", "star..mass=1", "star.=1", "star.mass=[", "star.mass='", "star.mass={a: 1, a: 2}", "star.mass=&a 1", "star.mass.x=1", "a" * 100000 + "=1"]:
        yield "set " + value[:20], ["star", "--set", value, "c.yaml"], None, None
    yield "output folder", ["star", "-o", ".", "c.yaml"], 3, None
    yield "output nowhere", ["star", "-o", "no/where.yaml", "c.yaml"], 3, "write-open"
    yield "output full", ["star", "-o", "/dev/full", "c.yaml"], 3, "write-failed"
    yield "output empty", ["star", "-o", "", "c.yaml"], 3, None
    yield "output long", ["star", "-o", "x" * 300, "c.yaml"], 3, None


def check_files(luxgale):
    failures, count = [], 0

    def judge(name, result, status, code):
        got, _, err, seconds = result
        found = re.findall(r"\[([a-z0-9-]+)\]$", err, re.M)
        wrong = []
        if got is None or seconds > SECONDS:
            wrong.append(f"took {seconds:.1f} s")
        elif got < 0 or got == 70 or "runtime error" in err:
            wrong.append(f"ended with {got}")
        elif status is None:
            if got not in (2, 4) or not found:
                wrong.append(f"exit status {got} {found}: an explained refusal is due")
        elif got != status:
            wrong.append(f"exit status {got}, not {status}: {err.strip()[:150]}")
        elif status >= 2 and not found:
            wrong.append("no code in the message")
        elif code and code not in found:
            wrong.append(f"{found}, not {code}")
        if wrong:
            failures.append(f"{name}: {', '.join(wrong)}")

    with tempfile.TemporaryDirectory() as folder:
        resource.setrlimit(resource.RLIMIT_STACK, (256 << 10, resource.RLIM_INFINITY))
        with open(os.path.join(folder, "c.yaml"), "w") as file:
            file.write(GOOD)
        for source, wrap in ((documents, None), (tables, "luminosity: {kind: base, file: %s}\n"), (grids, "opacity: {tables: [%s]}\n")):
            for name, content, status, code in source():
                with open(os.path.join(folder, name), "wb") as file:
                    file.write(content.encode() if isinstance(content, str) else content)
                case = name
                if wrap is not None:
                    case = "case.yaml"
                    with open(os.path.join(folder, case), "w") as file:
                        file.write(GOOD + wrap % name)
                judge(name, run([luxgale, "star", case], folder=folder), status, code)
                count += 1
        for name, words, status, code in arguments(luxgale):
            judge(name, run([luxgale] + words, folder=folder), status, code)
            count += 1
        memory = resource.getrusage(resource.RUSAGE_CHILDREN).ru_maxrss * 1024
    if memory > BYTES:
        failures.append(f"{memory >> 20} MiB used")
    return {"files": count, "peak_mib": memory >> 20, "failures": failures}


VALUES = ["0", "-0.0", "-1", "nan", "inf", "-inf", ".inf", "4.9e-324", "1e-310", "1e308", "-1e308", "1.7976931348623157e308", "1e999", "1e-999", "1e-30", "1e30",
          "1", "0.5", "1e5", "0x10", "1_000", "''", "~", "true", "[1]", "{a: 1}"]
BASES = {
    "": {"case": 1, "star": {"mass": "1.0 Msun"}, "composition": {"hydrogen": 0.35, "helium": 0.63}, "hold": {"base_temperature": "1.0e8 K", "base_luminosity": "1.02 Ledd"}},
    "porosity": [{"law": "reduction", "factor": 2.0}, {"law": "length", "scale": 1.0, "power": 2.0}],
    "luminosity": [{"kind": "formula", "start": "0 d", "end": "30 d", "terms": [{"law": "constant", "luminosity": "1.1 Ledd"}]}],
    "luminosity.terms[]": [{"law": "plateau", "origin": "0 d", "luminosity": "1.1 Ledd", "duration": "3 d", "time_scale": "100 d", "index": 1.0},
                           {"law": "power", "luminosity": "1.1 Ledd", "time_scale": "100 d", "index": 1.0}, {"law": "exponential", "luminosity": "1.1 Ledd", "time_scale": "100 d"},
                           {"law": "decay", "mass": "1e-3 Msun", "gamma_time": "30 d", "isotopes": {"Ni56": 0.1}}, {"law": "hot_cno", "mass": "1e-5 Msun", "hydrogen": 0.5, "cno": 0.1}],
}


def keys(luxgale):
    """Numeric keys of a case: (section, name, kind)."""
    section = ""
    for line in run([luxgale, "help", "inputs.md"])[1].splitlines():
        if line.startswith("## "):
            section = "" if line.startswith("## Top") else line[3:].strip().strip("`")
        row = re.match(r"\| `([a-z_]+)` \| (quantity|number|integer)\b", line)
        if row:
            yield section, row.group(1), row.group(2)


def settings(luxgale):
    for line in run([luxgale, "help", "settings"])[1].splitlines():
        row = re.match(r" +([a-z]+(?:_[a-z]+)+)\b", line)
        if row:
            yield "settings", row.group(1), "number"


def cases(section, name):
    """Cases that hold the key with a good value or without; the value is set by the caller in the mapping returned."""
    if section == "luminosity.terms[]":
        for term in BASES[section]:
            base = json.loads(json.dumps(BASES[""]))
            base["luminosity"] = json.loads(json.dumps(BASES["luminosity"][0]))
            base["luminosity"]["terms"] = [dict(term)]
            yield base, base["luminosity"]["terms"][0]
        return
    for part in BASES.get(section, [{}]) if section else [{}]:
        base = json.loads(json.dumps(BASES[""]))
        if section and section not in base:
            base[section] = dict(part)
        if section == "hold":
            base["hold"] = {k: v for k, v in list(base["hold"].items())[:1] if k != name} or {"base_luminosity": "1.02 Ledd"}
        yield base, base if not section else base[section]


def check_numbers(luxgale, winds):
    failures, runs, accepted, rows = [], 0, 0, list(keys(luxgale)) + list(settings(luxgale))
    spent = time.time()
    for section, name, kind in rows:
        for number in VALUES:
            for base, place in cases(section, name):
                place[name] = "@"
                text = json.dumps(base).replace('"@"', number)  # JSON with the number as it stands is a YAML flow mapping
                for command, seconds in (("star", 5.0), ("wind", 60.0)):
                    got, out, err, _ = run([luxgale, command, "-"], text.encode(), seconds)
                    runs += 1
                    where = f"{command}: {section}.{name} = {number}"
                    if got is None:
                        failures.append(where + f": more than {seconds:.0f} s: {text}")
                    elif got < 0 or got not in (0, 1, 2, 4):
                        failures.append(where + f": ended with {got}: {err.strip()[:100]}: {text}")
                    elif got in (2, 4) and not re.search(r"\[[a-z0-9-]+\]$", err, re.M):
                        failures.append(where + ": refused without a code")
                    elif got in (0, 1) and re.search(r": [-.]*(nan|inf)", out, re.I):
                        failures.append(where + ": a number that is not finite in the report")
                    if got not in (0, 1) or not winds or section in ("luminosity", "luminosity.terms[]", "errors", "settings", ""):
                        break
                    accepted += 1
    return {"keys": len(rows), "runs": runs, "winds": accepted, "seconds": round(time.time() - spent, 1), "failures": failures}


def main():
    luxgale = os.path.abspath(sys.argv[2])
    result = check_files(luxgale) if sys.argv[1] == "files" else check_numbers(luxgale, "--winds" in sys.argv)
    for line in result["failures"][:40]:
        print(line)
    result["failures"] = len(result["failures"])
    print(json.dumps(result))
    return 1 if result["failures"] else 0


if __name__ == "__main__":
    sys.exit(main())
