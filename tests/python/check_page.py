# SPDX-License-Identifier: GPL-3.0-or-later
"""check_page.py PROGRAM: the HTML page of a report, read by Python's HTML parser and, where Chromium is installed, by a browser.

Rules: HTML Living Standard (every element closed, ids unique, no obsolete nesting here), nothing fetched from elsewhere, no script,
numbers as in the report. With Chromium: no console message, nothing wider than 360 px, colours differ between light and dark.
"""
import html.parser
import os
import re
import shutil
import subprocess
import sys
import tempfile

import yaml

ROOT = os.path.dirname(os.path.dirname(os.path.dirname(os.path.abspath(__file__))))
PROGRAM = os.path.abspath(sys.argv[1])
VOID = {"meta", "link", "br", "img", "input", "hr"}
passed = failed = 0


def check(name, good, detail=""):
    global passed, failed
    passed += bool(good)
    failed += not good
    if not good:
        print(f"FAIL {name} {detail}")


class Reader(html.parser.HTMLParser):
    def __init__(self):
        super().__init__()
        self.open, self.ids, self.bad, self.text, self.svgs = [], [], [], [], 0

    def handle_starttag(self, tag, attributes):
        self.attributes(tag, attributes)
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag, attributes):
        self.attributes(tag, attributes)

    def attributes(self, tag, attributes):
        self.svgs += tag == "svg"
        if tag in ("script", "iframe", "object", "embed"):
            self.bad.append(tag)
        for name, value in attributes:
            if name == "id":
                self.ids.append(value)
            if name.startswith("on") or (name in ("src", "href", "xlink:href", "action") and not re.match(r"#|data:,$", value or "")):
                self.bad.append(f"{tag} {name}={value}")

    def handle_endtag(self, tag):
        if not self.open or self.open.pop() != tag:
            self.bad.append(f"</{tag}> closes nothing")

    def handle_data(self, data):
        self.text.append(data)


def browser(path, body, *options):
    """The page's DOM after a browser has read `body`, and what it wrote to the console."""
    with tempfile.TemporaryDirectory() as profile:
        shell = os.path.join(os.path.dirname(path), "shell.html")
        with open(shell, "w", encoding="utf-8") as file:
            file.write(body)
        done = subprocess.run(["chromium", "--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run",
                               "--disable-background-networking", "--disable-component-update", "--disable-sync",
                               "--allow-file-access-from-files", f"--user-data-dir={profile}", "--enable-logging=stderr", *options,
                               "--dump-dom", f"file://{shell}"], capture_output=True, text=True, timeout=120, check=False)
    return done.stdout, [line for line in done.stderr.splitlines() if "CONSOLE" in line]


def in_browser(path):
    probe = ("<!DOCTYPE html><iframe id=f style='width:360px;height:700px' src='page.html'></iframe><p id=out></p><script>"
             "f.onload=()=>{const d=f.contentDocument;out.textContent=d.documentElement.scrollWidth+' '+"
             "getComputedStyle(d.body).backgroundColor+' '+d.querySelectorAll('figure svg').length}</script>")
    seen = {}
    for scheme in ("1", "0"):  # light, dark
        dom, console = browser(path, probe, f"--blink-settings=preferredColorScheme={scheme}")
        found = re.search(r'<p id="out">(\d+) (rgb\([^)]*\)) (\d+)</p>', dom)
        check(f"browser reads the page ({scheme})", found, dom[-300:])
        check("no console message", not console, console[:3])
        if found:
            check("no wider than 360 px", int(found[1]) <= 360, found[1])
            check("pictures in the browser", int(found[3]) == 7, found[3])
            seen[scheme] = found[2]
    check("light and dark differ", len(set(seen.values())) == 2, seen)


with tempfile.TemporaryDirectory() as work:
    page, report = os.path.join(work, "page.html"), os.path.join(work, "r.yaml")
    title = "it's <b>bold</b> & `x` \"q\""
    done = subprocess.run([PROGRAM, "outburst", "--quiet", "--html", page, "-o", report, "--set", "title=" + repr(title).replace("\\'", "''"),
                           os.path.join(ROOT, "examples/quickstart.yaml")], capture_output=True, text=True, check=False)
    check("page is written", done.returncode == 0, done.stderr)
    with open(page, encoding="utf-8") as file:
        text = file.read()
    reader = Reader()
    reader.feed(text)
    words = " ".join("".join(reader.text).split())
    with open(report, encoding="utf-8") as file:
        mass = yaml.safe_load(file)["ejecta"]["mass_msun"]
    check("well nested, no script, nothing from elsewhere", not reader.bad and not reader.open, (reader.bad[:5], reader.open))
    check("ids are unique", len(reader.ids) == len(set(reader.ids)), [i for i in reader.ids if reader.ids.count(i) > 1][:5])
    check("no address of anything", not re.search(r"url\((?!#)|@import|https?://(?!www\.w3\.org)", text))
    check("seven pictures", reader.svgs == 7, reader.svgs)
    check("title as text", title in words, words[:200])
    check("ejected mass to four digits", f"{mass:.3e}" in words, f"{mass:.3e}")
    check("warning", "thin-wind" in words)
    check("input and checksums", "quickstart-luminosity.ecsv" in words and "sha256" in words)
    if shutil.which("chromium"):
        in_browser(page)
    else:
        print("page: no chromium here, the browser's part is left out")
print(f"page: {passed} passed, {failed} failed")
sys.exit(failed > 0)
