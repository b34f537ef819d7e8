# SPDX-License-Identifier: GPL-3.0-or-later
# shellcheck shell=bash
# decline.sh - a whole eruption as a shell user sees it: report, table, refusals, an eruption as history of another command.
# shellcheck source=lib.sh
. "$ROOT/tests/cli/lib.sh"

cat > case.yaml <<'YAML'
case: 1
star: {mass: 1.23 Msun}
composition: {hydrogen: 0.43, cno: 0.22, metals: 0.02}
burning: {law: cno}
decline: {start_temperature: 1.7e4 K, accretion_rate: 2.3e-9 Msun/yr}
YAML

expect "whole eruption" 0 'thin-wind' 'turnoff_d: [0-9.]+' "$LUXGALE" decline --epochs states.ecsv case.yaml
expect "ejected mass" 0 '*' 'ejected_mass_msun: [1-9][.0-9]*e-06' "$LUXGALE" decline -q case.yaml
head -c 40000 states.ecsv > stdout.txt
grep -q '^time_d,phase,envelope_mass_msun,mass_loss_rate_msun_yr,burning_rate_msun_yr,luminosity_erg_s,luminosity_ledd,nuclear_luminosity_erg_s,photosphere_radius_rsun,photosphere_temperature_k,photosphere_speed_km_s,terminal_speed_km_s' states.ecsv
verdict "columns that scripts rely on" "$([ $? -eq 0 ] || echo missing)"
verdict "both phases" "$(grep -q '^[^#].*,wind,' states.ecsv && grep -q '^[^#].*,static,' states.ecsv || echo missing)"
expect "only the wind" 0 '*' 'reason_code: "wind-end"' "$LUXGALE" decline -q --set decline.stop=wind-end case.yaml
expect "stop by time" 0 '*' 'reason_code: "stopped"' "$LUXGALE" decline -q --set decline.stop_time='11 d' case.yaml
expect "start too hot" 1 'decline-start-outside' 'verdict: "none"' "$LUXGALE" decline --set decline.start_temperature='3e6 K' case.yaml
expect "two starts" 2 'decline-start' "" "$LUXGALE" decline --set decline.start_mass='1e-5 Msun' case.yaml
expect "negative accretion" 2 'decline.accretion_rate.*value-range' "" "$LUXGALE" decline --set decline.accretion_rate=-1 case.yaml
expect "start of no mass" 2 'decline.start_temperature.*value-range' "" "$LUXGALE" decline --set decline.start_temperature=0 case.yaml
expect "wrong unit" 2 'decline.stop_time.*unit-dimension' "" "$LUXGALE" decline --set decline.stop_time='3 Msun' case.yaml
expect "unknown key" 2 'did you mean.*start_mass.*key-unknown' "" "$LUXGALE" decline --set decline.start_mas=1 case.yaml
expect "unknown law" 2 'burning.law.*value-word' "" "$LUXGALE" decline --set burning.law=cn0 case.yaml
expect "nothing burns" 2 'decline-burning' "" "$LUXGALE" decline --set burning.law=none case.yaml
expect "no fuel" 2 'burning-fuel' "" "$LUXGALE" decline --set composition.hydrogen=0 case.yaml
expect "something held" 2 'hold-count' "" "$LUXGALE" decline --set hold.envelope_mass=1e-6 case.yaml
expect "two held over a burning base" 2 'hold-burning' "" "$LUXGALE" wind --set hold.envelope_mass=1e-6 --set hold.launch_radius='1 Rsun' case.yaml
expect "one burning wind" 0 '*' 'envelope_mass_msun: 2\.(1999|2)' "$LUXGALE" wind -q --set hold.envelope_mass=2.2e-6 case.yaml
expect "a light dwarf has no wind" 0 "no-wind" "ejected_mass_msun: 0.0" "$LUXGALE" decline --set star.mass=0.62 --set composition.hydrogen=0.7 --set composition.cno=0 --set decline.start_temperature=null case.yaml
expect "history of an eruption" 0 '*' 'none: 0' "$LUXGALE" outburst -q --set luminosity.kind=decline case.yaml
expect "history with a stray key" 2 'luminosity-unused' "" "$LUXGALE" outburst --set luminosity.kind=decline --set luminosity.file=a.ecsv case.yaml
finish
