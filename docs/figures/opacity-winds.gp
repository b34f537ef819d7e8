# SPDX-License-Identifier: GPL-3.0-or-later
# Run by opacity-winds.sh in the folder of its tables. Colour is the star, line the opacity.
set terminal svg size 900,420 font "sans-serif,13" noenhanced background "white"
set datafile separator ","
set datafile commentschars "#"
set logscale x
set format x "1e%L"
set xlabel "mass-loss rate [Msun/yr]"
set xrange [5e-7:2e-3]
set grid lc "#dddddd"
masses = "0.7 1.0 1.25"
colour(i) = word("#0072b2 #d55e00 #009e73", i)
file(kind, i) = kind . "-" . word(masses, i) . ".ecsv"
set multiplot layout 1,2
set ylabel "terminal speed [km/s]"
set key top right samplen 2
plot for [i=1:3] file("table", i) using "mass_loss_rate_msun_yr":"terminal_speed_km_s" with lines lw 2 lc rgb colour(i) title word(masses, i) . " Msun, table", \
     for [i=1:3] file("formula", i) using "mass_loss_rate_msun_yr":"terminal_speed_km_s" with lines dt 2 lw 2 lc rgb colour(i) title "formula"
unset key
set ylabel "temperature of the photosphere [K]"
set logscale y
set yrange [5e3:3e5]
plot for [i=1:3] file("table", i) using "mass_loss_rate_msun_yr":"photosphere_temperature_k" with lines lw 2 lc rgb colour(i), \
     for [i=1:3] file("formula", i) using "mass_loss_rate_msun_yr":"photosphere_temperature_k" with lines dt 2 lw 2 lc rgb colour(i)
unset multiplot
