#!/usr/bin/env bash
# SPDX-License-Identifier: GPL-3.0-or-later
# demo.sh PROGRAM FOLDER: the main job on the bundled example; report, table and pictures go to FOLDER. Run by `make demo`.
set -eu
luxgale=$1 out=$2
here=$(cd "$(dirname "$0")" && pwd)
mkdir -p "$out"
echo "An invented nova: a burning shell on a white dwarf exceeds the Eddington luminosity and fades."
echo
echo "\$ luxgale outburst --epochs $out/epochs.ecsv -o $out/report.yaml examples/quickstart.yaml"
"$luxgale" outburst --epochs "$out/epochs.ecsv" -o "$out/report.yaml" "$here/quickstart.yaml"
echo
awk '/^(star|super_eddington|ejecta|energy|epochs):/ { show = 1 } /^[a-z_]+:/ && !/^(star|super_eddington|ejecta|energy|epochs):/ { show = 0 } show' \
  "$out/report.yaml"
cat > "$out/epochs.gp" <<'GP'
set terminal svg size 800,900 noenhanced
set datafile separator ','
set datafile missing ''
set output 'epochs.svg'
set multiplot layout 3,1
set key top right
set xlabel 'time (d)'
set ylabel 'luminosity (L_Edd)'
plot 'epochs.ecsv' using 'time_d':'luminosity_ledd' with lines title 'at the base', 1 with lines dt 2 title 'Eddington'
set logscale y
set format y '10^{%L}'
set ylabel 'mass-loss rate (Msun/yr)'
plot 'epochs.ecsv' using 'time_d':'mass_loss_rate_msun_yr' with lines notitle
unset logscale y
set format y '%g'
set ylabel 'speed (km/s)'
plot 'epochs.ecsv' using 'time_d':'terminal_speed_km_s' with lines title 'terminal', \
     'epochs.ecsv' using 'time_d':'photosphere_speed_km_s' with lines title 'photosphere'
GP
if command -v gnuplot > /dev/null; then
  (cd "$out" && gnuplot -d epochs.gp && echo && echo "picture: $out/epochs.svg")
fi
echo "full report: $out/report.yaml    one row an epoch: $out/epochs.ecsv"
