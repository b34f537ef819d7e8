#!/usr/bin/env bash
# SPDX-License-Identifier: GPL-3.0-or-later
# opacity-winds.sh PROGRAM PUBLISHED - draws docs/figures/opacity-winds.svg: families of winds on the published table X = 0.35, Z = 0.02
# (Iglesias & Rogers 1996, ApJ 464, 943; PUBLISHED is its file) and on the built-in formula. Needs gnuplot.
set -eu
program=$(realpath "$1") published=$(realpath "$2") figures=$(cd "$(dirname "$0")" && pwd)
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT
cd "$work"
"$program" opacity import -q --date 1996 "$published" -o tables > /dev/null
for mass in 0.7 1.0 1.25; do
  for source in '{tables: [tables/x0.3500-cno0.0000-z0.0200.ecsv]}' '{formula: kramers}'; do
    case $source in *tables*) name=table ;; *) name=formula ;; esac
    printf 'case: 1\nstar: {mass: %s Msun}\ncomposition: {hydrogen: 0.35, helium: 0.63, metals: 0.02}\nopacity: %s\nhold: {base_temperature: 1.0e8 K}\n' \
      "$mass" "$source" > "$name.yaml"
    "$program" family -q -o "$name-$mass.ecsv" "$name.yaml"
  done
done
gnuplot "$figures/opacity-winds.gp" > "$figures/opacity-winds.svg"
