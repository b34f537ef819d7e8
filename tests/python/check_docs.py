# SPDX-License-Identifier: GPL-3.0-or-later
"""check_docs.py PROGRAM [--write]: the documents against the program.

Links lead somewhere; every command shown is run, and prints what is shown beside it within 1 % (README.md: readme.py); the generated documents
are those of the tables; every key of a report and every warning is explained. `--write` renews the outputs shown.
"""
import glob
import os
import re
import shlex
import subprocess
import sys
import tempfile

import yaml

from readme import same

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
PROGRAM = os.path.abspath(sys.argv[1])
WRITE = "--write" in sys.argv
passed = failed = 0


def check(name, good, detail=""):
    global passed, failed
    passed += bool(good)
    failed += not good
    if not good:
        print(f"FAIL {name} {detail}")


def slug(heading):
    """Anchor of a heading, as Markdown viewers make it."""
    return re.sub(r"[^\w\- ]", "", heading.strip().lower()).replace(" ", "-")


def links(path, text):
    text = re.sub(r"^(?: {4}|```).*$", "", text, flags=re.M)
    for target in re.findall(r"\]\(([^)\s]+)\)", text):
        if re.match(r"https?:|mailto:", target):
            continue
        file, _, anchor = target.partition("#")
        there = os.path.normpath(os.path.join(os.path.dirname(path), file)) if file else path
        good = os.path.exists(there)
        if good and anchor:
            with open(there, encoding="utf-8") as other:
                good = anchor in [slug(line.lstrip("#")) for line in other if line.startswith("#")]
        check(f"{os.path.relpath(path, ROOT)}: link {target}", good)
    for name in re.findall(r"`((?:docs|examples|include|src|tests)/[\w./-]+\.\w+)`", text):
        if "NAME" in name:
            continue
        check(f"{os.path.relpath(path, ROOT)}: file {name}", os.path.exists(os.path.join(ROOT, name)))


def run(command, folder):
    """Output lines of a shown command; a shell reads it as a reader's shell would."""
    words = re.sub(r"(?<![\w/.-])(?:build/)?luxgale(?= )", shlex.quote(PROGRAM), command)
    done = subprocess.run(["bash", "-c", words], capture_output=True, text=True, cwd=folder, timeout=300, check=False)
    return done


def commands(path, text):
    """Runs what is shown and compares the lines below it; returns the text with the outputs of now."""
    out, now, place = [], None, 0
    with tempfile.TemporaryDirectory() as folder:
        for name in ("examples", "opacity", "docs"):
            os.symlink(os.path.join(ROOT, name), os.path.join(folder, name))
        fenced = False
        for number, line in enumerate(text.split("\n"), 1):
            fenced ^= line.startswith("```")
            body = line if fenced else line[4:] if line.startswith("    ") else None
            shown = re.match(r"\$ (.*)|((?:build/)?luxgale [a-z].*)", body or "")
            where = f"{os.path.relpath(path, ROOT)}:{number}"
            if shown:
                command = re.split(r"\s{3,}", shown[1] or shown[2])[0]
                if not re.match(r"(build/)?luxgale |cat |head ", command) or re.search(r"\b[A-Z]{4,}\b|\.\.\.|THIS-FILE", command):
                    now = None
                    continue_line = line
                    out.append(continue_line)
                    continue
                done = run(command, folder)
                check(f"{where}: {command}", done.returncode in (0, 1) and (done.returncode == 0 or "no answer" in done.stderr or "grep" in command),
                      f"{done.returncode} {done.stderr[:200]}")
                now, place = (done.stdout.splitlines(), 0) if shown[1] else (None, 0)
            elif body is None or line.startswith("```"):
                now = None
            elif now is not None and body.strip() not in ("...", ""):
                found = next((k for k in range(place, len(now)) if now[k].split(":")[0] == body.split(":")[0]), None)
                check(f"{where}: {body.strip()!r}", found is not None and same(body, now[found]), None if found is None else now[found].strip())
                if found is not None:
                    line, place = line[:len(line) - len(body)] + now[found], found + 1
            out.append(line)
    return "\n".join(out)


def help_text(topic):
    return subprocess.run([PROGRAM, "help", *topic.split()], capture_output=True, text=True, check=False)


def report_keys():
    """Paths of the keys of the example reports."""
    paths = set()

    def walk(node, path):
        if isinstance(node, dict) and node:
            for key, value in node.items():
                walk(value, f"{path}.{key}" if path else key)
        elif isinstance(node, list) and node and isinstance(node[0], dict):
            for value in node:
                walk(value, path + "[]")
        elif not (isinstance(node, (dict, list)) and not node):
            paths.add(path)

    for name, command in (("quickstart", "outburst"), ("super-eddington", "outburst"), ("decline", "decline"), ("quickstart", "opacity at"), ("no-wind", "outburst"), ("wind", "wind"), ("quickstart", "family"), ("quickstart", "star")):
        case = os.path.join(ROOT, "examples", name + ".yaml")
        walk(yaml.safe_load(subprocess.run([PROGRAM, *command.split(), "-q", *(["--log-t", "5.25", "--log-r", "-4"] if "at" in command.split() else []), case], capture_output=True, text=True, check=False).stdout), "")
    return paths


def documented(path, rows):
    path = re.sub(r"_(lo|hi)$", "", path)  # bounds of the number without it
    pattern = [re.escape(row).replace(r"\*", ".*") + r"(?:$|[.\[])" for row in rows]
    return any(re.match(p, path) for p in pattern) or path + ".*" in rows  # a section that is null


for document in sorted([os.path.join(ROOT, n) for n in ("README.md", "DEVELOPERS.md")] + glob.glob(os.path.join(ROOT, "docs", "*.md"))):
    with open(document, encoding="utf-8") as file:
        content = file.read()
    links(document, content)
    if os.path.basename(document) not in ("README.md", "DEVELOPERS.md"):
        renewed = commands(document, content)
        if WRITE and renewed != content:
            with open(document, "w", encoding="utf-8") as file:
                file.write(renewed)
for name in ("inputs.md", "report.md"):
    with open(os.path.join(ROOT, "docs", name), encoding="utf-8") as file:
        check(f"docs/{name} is as the tables say (else: make docs)", file.read() == help_text(name).stdout)
with open(os.path.join(ROOT, "docs", "report.md"), encoding="utf-8") as file:
    table = re.findall(r"^\| `([^`]+)` \|", file.read(), flags=re.M)
for key in sorted(report_keys()):
    check(f"key of a report is explained: {key}", documented(key, table))
codes = set()
for source in glob.glob(os.path.join(ROOT, "src", "**", "*.c"), recursive=True):
    with open(source, encoding="utf-8") as file:
        codes |= set(re.findall(r'(?:lxg_report_warn|warn_count)\(\s*\w+,\s*"([a-z0-9-]+)"', file.read()))
for code in sorted(codes):
    check(f"warning is explained: {code}", help_text(f"reason {code}").returncode == 0)
print(f"documents: {passed} passed, {failed} failed")
sys.exit(failed > 0)
