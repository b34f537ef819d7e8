# SPDX-License-Identifier: GPL-3.0-or-later
# shellcheck shell=bash
# super-eddington.sh - porous winds above the Eddington limit, hand-over, tiring, claims: results and what is refused.
# shellcheck source=lib.sh
. "$ROOT/tests/cli/lib.sh"

example=$ROOT/examples/super-eddington.yaml
expect "example" 0 'thin-wind' 'verdict: "insufficient"' "$LUXGALE" outburst --epochs epochs.ecsv -o - "$example"
expect "each epoch names its flow" 0 "" ',porous,' cat epochs.ecsv
grep -c ',plain,' epochs.ecsv | { read -r n; verdict "two plain epochs" "$([ "$n" = 2 ] || echo "$n")"; }
expect "a jump is told" 0 'handover-(jump|gap)' 'rate_jump' "$LUXGALE" outburst --set settings.handover_jump=0.001 "$example"
expect "always porous" 0 '*' 'when: "always"' "$LUXGALE" outburst --set porosity.when=always "$example"
expect "no claim, no verdict" 1 "" "" grep -q driving: <("$LUXGALE" outburst -q --set driving=null "$example" | sed '/^case:/,/^star:/d')

# Photon tiring: 1e-4 Msun/yr off the surface of the dwarf takes more than ten times the light of L_Edd (physics: G M/R_0 = 2.4e17 erg/g).
cat > tired.yaml <<'YAML'
case: 1
star: {mass: 1.0 Msun}
composition: {hydrogen: 0.35, helium: 0.63, metals: 0.02}
hold: {base_luminosity: 0.5 Ledd, mass_loss_rate: 1.0e-4 Msun/yr}
YAML
expect "above the tiring limit" 1 'energy-limited' 'excess: 16\.' "$LUXGALE" wind tired.yaml
expect "its verdict" 1 '*' 'steady_wind: "no"' "$LUXGALE" wind tired.yaml
expect "quick laws beside a wind" 0 '*' 'enthalpy_speed_km_s: [0-9]' "$LUXGALE" wind -q --set hold='{launch_radius: 1e10 cm, photosphere_luminosity: 5 Ledd}' "$example"
expect "W of a porous wind" 0 '*' 'number_w: [1-9]\.' "$LUXGALE" wind -q --set hold='{launch_radius: 1e10 cm, photosphere_luminosity: 5 Ledd}' "$example"
expect "fifty Eddington luminosities" 0 '*' 'luminosity_ledd: (50|49.9)' "$LUXGALE" wind -q --set hold='{launch_radius: 1e10 cm, photosphere_luminosity: 50 Ledd}' "$example"

edited() {
  sed "$2" "$example" > edited.yaml
  cp "$ROOT/examples/super-eddington-luminosity.ecsv" .
  expect "$1" 2 "$3" "" "$LUXGALE" outburst edited.yaml
}
edited "when of nothing" 's/porosity: {law: length, scale: 0.5,/porosity: {law: none,/' 'porosity.when.*\[porosity-unused\]'
edited "when unknown" 's/when: super-eddington/when: bright/' 'porosity.when = bright.*\[value-word\]'
edited "claim without a speed" 's/, speed: 2000 km.s, speed_error: 200 km.s//' 'driving.*speed.*\[key-missing\]'
edited "claim without a mass" 's/mass: 2.0e-5 Msun, mass_error: 5.0e-6 Msun, //' 'driving.*mass.*\[key-missing\]'
edited "claim of no mass" 's/mass: 2.0e-5/mass: 0/' 'driving.mass.*\[driving-claim\]'
edited "claim faster than light" 's/speed: 2000 km/speed: 4.0e5 km/' 'driving.speed.*\[driving-claim\]'
edited "error as large as the claim" 's/speed_error: 200/speed_error: 2000/' 'driving.speed_error.*\[driving-claim\]'
edited "claim in the wrong unit" 's/mass: 2.0e-5 Msun/mass: 2.0e-5 km/' 'driving.mass.*\[unit-dimension\]'
edited "claim misspelt" 's/mass_error/mass_err/' 'mass_err.*mass_error.*\[key-unknown\]'

# Isotopes of the user's own.
cat > own.yaml <<'YAML'
case: 1
star: {mass: 1.0 Msun}
composition: {hydrogen: 0.35, helium: 0.63, metals: 0.02}
luminosity:
  kind: formula
  end: 600 s
  terms:
  - {law: constant, luminosity: 1 Ledd}
  - law: decay
    mass: 1e-5 Msun
    isotopes:
      13N: 0.01
      Mine: {mass_fraction: 0.02, mass_number: 18, half_life: 300 s, positrons: 1.0, positron_mev: 0.5}
YAML
expect "an isotope of one's own" 0 "" 'formula' "$LUXGALE" star own.yaml
own() {
  sed "$2" own.yaml > edited.yaml
  expect "$1" 2 "$3" "" "$LUXGALE" star edited.yaml
}
own "half-life missing" 's/half_life: 300 s, //' 'Mine.*half_life.*\[key-missing\]'
own "half-life zero" 's/half_life: 300/half_life: 0/' 'Mine.*\[isotope-'
own "too many positrons" 's/positrons: 1.0/positrons: 3/' 'Mine.*\[isotope-'
own "key unknown" 's/positron_mev/positron_kev/' 'positron_kev.*positron_mev.*\[key-unknown\]'
own "name too long" 's/Mine/MyVeryOwnLongIsotope/' '\[isotope-name\]'
own "neither number nor mapping" 's/13N: 0.01/14N: 0.01/' '14N.*\[isotope-unknown\]'

# A reduction that follows the history; a table that does not vary is the constant factor.
printf 'time [d],factor\n0,1.3\n200,1.3\n' > steady.csv
cat > reduced.yaml <<'YAML'
case: 1
star: {mass: 1.0 Msun}
composition: {hydrogen: 0.35, helium: 0.63, metals: 0.02}
opacity: {formula: reference}
porosity: {law: reduction, file: steady.csv}
hold: {base_temperature: 1.0e8 K}
luminosity: {kind: photosphere, file: light.csv}
settings: {gap_fraction: 9}
YAML
printf 'time [d],luminosity [erg/s]\n0,1.3e38\n50,1.5e38\n100,1.4e38\n' > light.csv
expect "factor from a table" 0 '*' 'families: 1' "$LUXGALE" outburst -q reduced.yaml
"$LUXGALE" outburst -q -o - reduced.yaml | grep -A3 '^ejecta' | grep mass_msun | cut -c1-16 > table.txt
"$LUXGALE" outburst -q --set porosity='{law: reduction, factor: 1.3}' -o - reduced.yaml | grep -A3 '^ejecta' | grep mass_msun | cut -c1-16 > constant.txt
same "a steady table is the constant factor" table.txt constant.txt
bad() {
  printf "$2" > steady.csv
  expect "$1" 2 "$3" "" "$LUXGALE" outburst reduced.yaml
}
bad "factor below 1" 'time,factor\n0,1.3\n200,0.9\n' 'steady.csv:3.*\[porosity-factor\]'
bad "factors too short" 'time,factor\n0,1.3\n20,1.3\n' 'porosity.file.*\[porosity-span\]'
bad "no factors" 'time,reduction\n0,1.3\n20,1.3\n' 'factor.*\[table-column\]'
bad "factors backwards" 'time,factor\n9,1.3\n0,1.3\n' 'reduced.yaml:.*porosity.file.*line 3.*\[history-order\]'
printf 'time,factor\n0,1.3\n200,1.3\n' > steady.csv
expect "a table for another law" 2 'porosity.file.*\[porosity-unused\]' "" "$LUXGALE" outburst --set porosity='{law: length, scale: 1, file: steady.csv}' reduced.yaml
expect "a table and a factor" 2 'porosity.factor.*\[porosity-unused\]' "" "$LUXGALE" outburst --set porosity.factor=2 reduced.yaml
expect "factor of one wind" 2 'porosity-history' "" "$LUXGALE" wind --set hold.launch_radius='1e10 cm' reduced.yaml
finish
