# SPDX-License-Identifier: GPL-3.0-or-later
# shellcheck shell=bash
# lines.sh - line velocities, profiles, shells and the mass from a speed: results, and what is refused.
# shellcheck source=lib.sh
. "$ROOT/tests/cli/lib.sh"

head='case: 1
star: {mass: 1.05 Msun}
composition: {hydrogen: 0.45, helium: 0.35, cno: 0.18, metals: 0.02}
'
single="${head}hold: {base_temperature: 1.0e8 K, base_luminosity: 1.0 Ledd}
"
columns='time,line,kind,component,rest_wavelength,wavelength,wavelength_error,medium,velocity,velocity_error,speed,speed_error'
cat > lines.csv <<CSV
$columns
3,Na D,absorption,,,,,,,,760,20
3,H beta,blue-edge,,4861.363,4848.9,0.4,air,,,,
3,H beta,emission-peak,,,,,,-4,9,,
CSV

# case MORE: the single wind with more lines of YAML.
case_of() { printf '%s%s\n' "$single" "$1" > case.yaml; }

case_of 'lines: {file: lines.csv}'
expect "lines of one wind" 0 "" 'chi2: [0-9.]+' "$LUXGALE" lines --epochs rows.ecsv case.yaml
verdict "rows are ECSV" "$(head -1 rows.ecsv | grep -qF '# %ECSV 1.0' || echo no)"
verdict "every row is there" "$([ "$(grep -vc '^#' rows.ecsv)" -eq 4 ] || echo no)"
expect "a kind compared with another speed" 0 "" 'model: "depth"' "$LUXGALE" lines --set lines.map='{absorption: depth 0.5}' case.yaml
expect "a depth that the wind has not" 0 'line-left' 'speeds-depth' "$LUXGALE" lines --set lines.map='{absorption: depth 1e30}' case.yaml
expect "no wind at all" 1 'no answer' 'verdict: "none"' "$LUXGALE" lines --set hold.base_luminosity='0.1 Ledd' case.yaml
expect "a shell needs a history" 2 'luminosity.*\[key-missing\]' "" "$LUXGALE" lines --shell s.ecsv case.yaml
expect "profiles that nobody asks for" 2 'lines.profiles.*\[key-missing\]' "" "$LUXGALE" lines --profiles p.ecsv case.yaml
expect "profile of one wind" 0 "" 'absorption_km_s: [0-9.]+' "$LUXGALE" lines --profiles p.ecsv --set lines='{profiles: [{kind: resonance, optical_depth: 1.5, points: 41}]}' case.yaml
verdict "profile has its points" "$([ "$(grep -vc '^#' p.ecsv)" -eq 42 ] || echo no)"
expect "neither lines nor profiles" 2 'lines.file or lines.profiles.*\[key-missing\]' "" "$LUXGALE" lines --set lines=null case.yaml
expect "a fit without lines" 2 'lines.file.*\[key-missing\]' "" "$LUXGALE" lines --set lines='{fit: {}, profiles: [{kind: resonance, strength: 1}]}' case.yaml

# bad rows are named by their line in the file, all of them
cat > bad.csv <<CSV
$columns
3,Na D,absorption,,,,,,,,760,20
4,Na D,absorbtion,,,,,,,,760,20
5,H beta,absorption,,4861.363,4848.9,0.4,,,,,
6,H beta,absorption,,4861.363,4875.0,0.4,air,,,,
7,H beta,blue-edge,,,,,,-900,-5,,
CSV
case_of 'lines: {file: bad.csv}'
for row in 3 4 5 6; do
  expect "bad row $row is named" 2 "row $row " "" "$LUXGALE" lines case.yaml
done
expect "bad rows are counted" 2 '5 line measurements, of which 4 are bad' "" "$LUXGALE" lines case.yaml
expect "and their file" 2 'bad.csv' "" "$LUXGALE" lines case.yaml
expect "bad rows stop every command" 2 'line-kind' "" "$LUXGALE" star case.yaml

# refuse NAME KEYS PATTERN: the section `lines` with these keys is refused.
refuse() { case_of "lines: $2"; expect "$1" 2 "$3" "" "$LUXGALE" lines case.yaml; }
refuse "fit is a number" '{file: lines.csv, fit: 3}' 'lines.fit.*\[kind-mapping\]'
case_of 'lines: {file: none.csv}'
expect "no such file" 3 'none.csv.*\[read-open\]' "" "$LUXGALE" lines case.yaml
refuse "unknown key" '{file: lines.csv, fil: 1}' 'lines.fil.*\[key-unknown\]'
refuse "unknown model" '{file: lines.csv, map: {absorption: base}}' 'case.yaml:5:[0-9]+: error: lines.map.absorption.*\[line-map\]'
refuse "unknown kind" '{file: lines.csv, map: {absorbtion: shell}}' 'absorption.*\[key-unknown\]'
refuse "negative scatter" '{file: lines.csv, scatter: -3}' 'lines.scatter.*\[line-scatter\]'
refuse "negative prior" '{file: lines.csv, priors: {wind: -1}}' 'lines.priors.wind.*\[line-prior\]'
refuse "priors all zero" '{file: lines.csv, priors: {wind: 0, shell: 0, other: 0}}' 'lines.priors.*\[line-prior\]'
refuse "fit: masses turned round" '{file: lines.csv, fit: {mass_low: 1.2, mass_high: 1.0}}' 'lines.fit.*\[linefit-mass\]'
refuse "fit: beyond the white dwarfs" '{file: lines.csv, fit: {mass_high: 1.6}}' 'lines.fit.*\[linefit-mass\]'
refuse "fit: factor" '{file: lines.csv, fit: {held_factor: 0.9}}' 'held_factor.*\[value-range\]'
refuse "fit: too few nodes" '{file: lines.csv, fit: {masses: 3}}' 'lines.fit.masses.*\[value-range\]'
refuse "profile kind" '{profiles: [{kind: maser, strength: 1}]}' 'kind.*resonance.*\[value-word\]'
refuse "profile without strength" '{profiles: [{kind: resonance}]}' 'lines.profiles.0..*\[profile-strength\]'
refuse "profile with two strengths" '{profiles: [{kind: resonance, strength: 1, optical_depth: 1}]}' '\[profile-strength\]'
refuse "oscillator without ions" '{profiles: [{kind: resonance, oscillator_strength: 0.2, wavelength: 1549}]}' '\[profile-strength\]'
refuse "recombination without wavelength" '{profiles: [{kind: recombination, emissivity: 1}]}' 'wavelength.*\[key-missing\]'
refuse "a key of the other kind" '{profiles: [{kind: recombination, emissivity: 1, wavelength: 6563, index: 1}]}' 'index.*\[profile-unused\]'
refuse "even number of points" '{profiles: [{kind: resonance, strength: 1, points: 40}]}' 'points.*\[profile-points\]'
refuse "negative opacity" '{profiles: [{kind: recombination, emissivity: 1, wavelength: 6563, opacity: -1}]}' 'opacity.*\[profile-value\]'

# a history: shell and distribution, in `lines` and in `outburst`
cat > hist.yaml <<YAML
${head}hold: {base_temperature: 1.0e8 K}
luminosity: {kind: formula, end: 120 d, terms: [{law: plateau, luminosity: 1.02 Ledd, duration: 5 d, time_scale: 430 d, index: 1.0}]}
lines: {profiles: [{kind: resonance, optical_depth: 1, points: 21, times: [30 d, 300 d]}]}
YAML
expect "a profile at an epoch without wind" 1 'speeds-time' 'reason_code: "speeds-time"' "$LUXGALE" lines --shell s.ecsv --velocities v.ecsv hist.yaml
verdict "shell table" "$([ "$(grep -vc '^#' s.ecsv)" -eq 202 ] || echo no)"
verdict "velocity table" "$([ "$(grep -vc '^#' v.ecsv)" -eq 101 ] || echo no)"
expect "shell of an outburst" 0 "*" 'swept_shell:' "$LUXGALE" outburst --velocities v2.ecsv hist.yaml
same "the same winds, the same velocities" v.ecsv v2.ecsv
expect "epochs missing" 2 'lines.profiles\[0\].times.*\[key-missing\]' "" "$LUXGALE" lines --set lines.profiles='[{kind: resonance, strength: 1}]' hist.yaml

# mass
printf '%smass: {speed: 900 km/s, speed_error: 30 km/s, age: 90 d, xray_time: 150 d, column: 1e22}\n' "$head" > mass.yaml
expect "mass" 0 "" 'reading: ".*method' "$LUXGALE" mass mass.yaml
expect "missing data are named" 0 "" 'missing: .*"hbeta_luminosity".*"temperature"|"diffusion_time", "opacity"' "$LUXGALE" mass mass.yaml
expect "mass without its section" 2 'mass.*\[key-missing\]' "" "$LUXGALE" mass --set mass=null mass.yaml
expect "nothing to go by" 1 'mass-none' 'values: 0' "$LUXGALE" mass --set mass='{age: 3 d}' mass.yaml
expect "no such wind" 0 'mass-no-wind' 'verdict: "none"' "$LUXGALE" mass --set mass.photosphere_luminosity='0.01 Ledd' mass.yaml
expect "faster than light" 2 'mass.speed.*\[mass-value\]' "" "$LUXGALE" mass --set mass.speed='4e5 km/s' mass.yaml
expect "negative error" 2 'mass.speed_error.*\[mass-error\]' "" "$LUXGALE" mass --set mass.speed_error=-1 mass.yaml
expect "an error alone" 2 'distance_error.*\[mass-error-alone\]' "" "$LUXGALE" mass --set mass.distance_error='1 kpc' mass.yaml
expect "unit of another dimension" 2 'mass.age.*\[unit-dimension\]' "" "$LUXGALE" mass --set mass.age='3 km' mass.yaml

finish
