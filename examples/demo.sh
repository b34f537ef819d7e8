#!/usr/bin/env bash
# SPDX-License-Identifier: GPL-3.0-or-later
# demo.sh PROGRAM FOLDER: the main job on the bundled example; report, table and pictures go to FOLDER. Run by `make demo`.
set -eu
luxgale=$1 out=$2
here=$(cd "$(dirname "$0")" && pwd)
mkdir -p "$out"
echo "An invented nova: a burning shell on a white dwarf exceeds the Eddington luminosity and fades."
echo
echo "\$ luxgale outburst --plots $out/pictures --html $out/report.html --epochs $out/epochs.ecsv -o $out/report.yaml examples/quickstart.yaml"
"$luxgale" outburst --plots "$out/pictures" --html "$out/report.html" --epochs "$out/epochs.ecsv" -o "$out/report.yaml" "$here/quickstart.yaml"
echo
awk '/^(star|super_eddington|ejecta|energy|epochs):/ { show = 1 } /^[a-z_]+:/ && !/^(star|super_eddington|ejecta|energy|epochs):/ { show = 0 } show' \
  "$out/report.yaml"
echo
echo "pictures (SVG, PDF, PNG) with their scripts: $out/pictures    one page to read or send: $out/report.html"
echo "full report: $out/report.yaml    one row an epoch: $out/epochs.ecsv"
