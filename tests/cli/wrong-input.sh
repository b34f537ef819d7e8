# SPDX-License-Identifier: GPL-3.0-or-later
# shellcheck shell=bash
# wrong-input.sh - cases that must be refused: exit status, place, stable code, and what is allowed.
# shellcheck source=lib.sh
. "$ROOT/tests/cli/lib.sh"

good='case: 1
star: {mass: 1.0 Msun}
composition: {hydrogen: 0.35, helium: 0.63, cno: 0.0, metals: 0.02}
opacity: {formula: reference}
hold: {base_temperature: 1.0e8 K, launch_radius: 2.0e10 cm}
'

# refuse NAME COMMAND PATTERN: the case on standard input is refused with exit status 2 and nothing on standard output.
refuse() {
  cat > case.yaml
  expect "$1" 2 "$3" "" "$LUXGALE" "$2" case.yaml
}
# edited NAME SED PATTERN: the good case after a sed script.
edited() { printf '%s' "$good" | sed "$2" | refuse "$1" wind "$3"; }
# rows NAME PATTERN: a luminosity table on standard input.
rows() {
  cat > h.csv
  printf '%sluminosity: {kind: base, file: h.csv}\n' "$good" > case.yaml
  expect "$1" 2 "$2" "" "$LUXGALE" star case.yaml
}

printf '%s' "$good" > case.yaml
expect "the good case" 0 "" 'mass_msun: 1.0' "$LUXGALE" star case.yaml

edited "misspelt key" 's/hydrogen/hydrogne/' 'case.yaml:3:15: error: .*hydrogne.*hydrogen.*\[key-unknown\]'
edited "unknown section" '5a wheels: 4' 'case.yaml:6:[0-9]+: error: .*wheels.*\[key-unknown\]'
edited "duplicate key" '4a opacity: {formula: kramers}' 'case.yaml:5:1: error: .*opacity.*\[key-duplicate\]'
edited "two same holds" 's/launch_radius: 2.0e10 cm/base_temperature: 2e8 K/' 'case.yaml:5:.*\[key-duplicate\]'
edited "three holds" 's/2.0e10 cm/2.0e10 cm, terminal_speed: 600/' 'case.yaml:5:.*terminal_speed.*\[hold-many\]'
edited "one hold for a wind" 's/, launch_radius: 2.0e10 cm//' 'two held quantities.*\[hold-count\]'
edited "no hold at all" '/^hold/d' '\[hold-count\]'
edited "unknown held quantity" 's/launch_radius/launch_radios/' 'launch_radios.*launch_radius.*\[key-unknown\]'
edited "wrong unit" 's/2.0e10 cm/2.0e10 furlong/' 'case.yaml:5:.*furlong.*\[unit-unknown\]'
edited "unit of another dimension" 's/1.0e8 K/1.0e8 km/' 'case.yaml:5:.*km.*temperature.*\[unit-dimension\]'
edited "mass in kelvin" 's/1.0 Msun/1.0 K/' 'case.yaml:2:14: error: star.mass.*\[unit-dimension\]'
edited "launch radius inside the star" 's/2.0e10 cm/2.0e8 cm/' 'case.yaml:5:.*hold.launch_radius.*5.56.*\[hold-launch-radius\]'
edited "negative temperature" 's/1.0e8 K/-1.0e8 K/' 'base_temperature.*\[hold-value\]'
edited "zero temperature" 's/1.0e8 K/0 K/' 'base_temperature.*\[hold-value\]'
edited "not a number held" 's/1.0e8 K/nan K/' 'base_temperature.*\[quantity-number\]'
edited "overflow in CGS" 's/2.0e10 cm/1e308 Rsun/' 'launch_radius.*\[quantity-range\]'
edited "overflow in text" 's/2.0e10 cm/1e999 cm/' 'launch_radius.*\[quantity'
edited "mass above the white-dwarf limit" 's/1.0 Msun/1.5 Msun/' 'case.yaml:2:.*star.mass.*1.45.*\[star-dwarf-mass\]'
edited "negative mass" 's/1.0 Msun/-1.0 Msun/' 'star.mass.*\[value-range\]'
edited "enormous mass" 's/1.0 Msun/1e6 Msun, radius: 1 Rsun/' 'star.mass.*10000.*\[value-range\]'
edited "radius zero" 's/1.0 Msun/1.0 Msun, radius: 0 cm/' 'star.radius.*\[value-range\]'
edited "radius misspelt" 's/1.0 Msun/1.0 Msun, radius: white_dwarf/' 'star.radius.*\[quantity-number\]'
edited "mass missing" 's/mass: 1.0 Msun/radius: 1 Rsun/' 'case.yaml:2:.*star.*mass.*\[key-missing\]'
edited "star missing" '/^star/d' 'star.*\[key-missing\]'
edited "composition missing" '/^composition/d' 'composition.*\[key-missing\]'
edited "hydrogen missing" 's/hydrogen: 0.35, //' 'composition.*hydrogen.*\[key-missing\]'
edited "fractions not summing to 1" 's/0.63/0.60/' 'case.yaml:3:.*0.97.*\[composition-sum\]'
edited "fraction above 1" 's/0.35/1.35/' 'composition.hydrogen.*\[value-range\]'
edited "fraction negative" 's/cno: 0.0/cno: -0.1/' 'composition.cno.*\[value-range\]'
edited "fraction not a number" 's/0.35/.nan/' 'composition.hydrogen.*\[value-number\]'
edited "fraction is a word" 's/0.35/much/' 'composition.hydrogen = much.*\[value-number\]'
edited "fraction quoted" 's/0.35/"0.35"/' 'composition.hydrogen.*\[value-number\]'
edited "fraction octal" 's/cno: 0.0/cno: 010/' 'composition.cno.*\[value-number\]'
edited "unknown formula" 's/reference/magic/' 'opacity.formula = magic.*kramers.*\[value-word\]'
edited "sources of a law without sources" 's/reference/reference, omit: [iron]/' '\[opacity-omit\]'
edited "unknown source" 's/reference/kramers, omit: [gold]/' 'gold.*\[opacity-source\]'
edited "omit is no list" 's/reference/kramers, omit: iron/' 'opacity.omit.*\[kind-sequence\]'
edited "policy without tables" 's/reference/reference, outside: clamp/' 'opacity.outside.*\[opacity-unused\]'
edited "tables and a formula" 's/reference/reference, tables: [t.ecsv]/' 'opacity.formula.*\[opacity-unused\]'
edited "section is a number" 's/{mass: 1.0 Msun}/3/' 'star.*\[kind-mapping\]'
edited "case version" 's/case: 1/case: 7/' 'case.yaml:1:7: error: case = 7.*\[case-version\]'
edited "case version missing" '1d' 'case.*\[key-missing\]'
edited "case version a word" 's/case: 1/case: one/' 'case = one.*\[value-integer\]'
edited "porosity factor below 1" '5a porosity: {law: reduction, factor: 0.5}' '\[porosity-factor\]'
edited "porosity without its number" '5a porosity: {law: length}' 'porosity.*scale.*\[key-missing\]'
edited "porosity with a useless number" '5a porosity: {law: none, scale: 1}' 'porosity.scale.*\[porosity-unused\]'
edited "unknown setting" '5a settings: {gap_fracton: 0.1}' 'gap_fracton.*gap_fraction.*\[key-unknown\]'
edited "setting out of range" '5a settings: {gap_fraction: -1}' 'gap_fraction.*\[value-range\]'
edited "luminosity kind missing" '5a luminosity: {file: h.csv}' 'luminosity.*kind.*\[key-missing\]'
edited "luminosity kind unknown" '5a luminosity: {kind: loud, file: h.csv}' 'luminosity.kind = loud.*\[value-word\]'
edited "luminosity file missing" '5a luminosity: {kind: base}' 'luminosity.*file.*\[key-missing\]'
edited "formula with a file" '5a luminosity: {kind: formula, file: h.csv}' 'luminosity.file.*\[luminosity-unused\]'
edited "formula without an end" '5a luminosity: {kind: formula, terms: []}' 'luminosity.*end.*\[key-missing\]'
edited "formula without terms" '5a luminosity: {kind: formula, end: 9 d, terms: []}' 'luminosity.terms.*\[formula-'
edited "term law unknown" '5a luminosity: {kind: formula, end: 9 d, terms: [{law: wild}]}' 'wild.*\[value-word\]'
edited "term without its scale" '5a luminosity: {kind: formula, end: 9, terms: [{law: power, luminosity: 1 Ledd, index: 1}]}' \
  'time_scale.*\[key-missing\]'
edited "unknown isotope" '5a luminosity: {kind: formula, end: 9, terms: [{law: decay, mass: 1e-5, isotopes: {56Ni: 1}}]}' \
  '56Ni.*22Na.*\[isotope-unknown\]'
edited "magnitudes without a distance" '5a luminosity: {kind: magnitude, file: m.csv, ebv: 0.1}' 'case.yaml:6:.*\[luminosity-distance\]'
edited "magnitudes without extinction" '5a luminosity: {kind: magnitude, file: m.csv, distance: 3}' 'case.yaml:6:.*\[luminosity-extinction\]'
edited "unknown light" '5a luminosity: {kind: magnitude, file: m.csv, distance: 3, ebv: 0, light: lamp}' 'lamp.*photosphere.*\[value-word\]'
edited "errors under another name" '5a errors: {mass: 0.1}' 'errors.*mass.*\[key-unknown\]'
edited "error of what is not held" '5a errors: {hold: {envelope_mass: 1e-6}}' 'errors.hold.envelope_mass.*\[errors-unheld\]'
edited "error below zero" '5a errors: {star: {mass: -0.1}}' 'errors.star.mass.*\[errors-sigma\]'
edited "one draw" '5a errors: {draws: 1}' 'errors.draws.*\[value-range\]'
edited "anchors" 's/1.0 Msun/\&m 1.0/' 'case.yaml:2:.*\[document-refused\]'
edited "tags" 's/1.0 Msun/!!float 1.0/' 'case.yaml:2:.*\[document-refused\]'
edited "second document" '5a ---\ncase: 1' '\[document-refused\]'
edited "unclosed bracket" '5s/}//' 'case.yaml:[0-9]+:[0-9]+: error: .*\[document-syntax\]'
edited "tab as indent" '5a errors:\n\tdraws: 3' 'case.yaml:[67]:.*\[document-syntax\]'

printf '' | refuse "empty file" star '\[document-'
printf '# nothing\n' | refuse "only a comment" star '\[document-'
printf -- '- 1\n- 2\n' | refuse "a list" star '\[kind-mapping\]'
printf 'case: 1\ntitle: "\xff\xfe"\n' | refuse "not UTF-8" star 'case.yaml:2:.*\[document-'
printf 'case: 1\ntitle: "\xe9t\xe9"\n' | refuse "Latin-1" star 'case.yaml:2:.*\[document-'
printf 'case: 1\0\n' | refuse "zero byte" star 'case.yaml:1:.*\[document-'

rows "table empty" '\[table-empty\]|\[table-header\]' < /dev/null
printf 'time,luminosity\n' | rows "table without rows" 'h.csv|luminosity.file'
printf 'time,luminosity\n1,2e38\n2\n' | rows "ragged table" 'h.csv:3.*\[table-ragged\]'
printf 'time,luminosity\n1,2e38\n2,bright\n' | rows "a word among numbers" 'h.csv:3.*bright.*\[table-number\]'
printf 'time,brightness\n1,2e38\n' | rows "column missing" 'h.csv: error: no column luminosity.*\[table-column\]'
printf 'time,luminosity [parsec2]\n1,2e38\n' | rows "table unit unknown" 'parsec2.*\[unit-unknown\]'
printf 'time,luminosity [K]\n1,2e38\n' | rows "table unit of another dimension" '\[unit-dimension\]'
printf 'time,luminosity\n1,2e38\n1,3e38\n' | rows "time twice" '3.*\[history-duplicate\]'
printf 'time,luminosity\n2,2e38\n1,3e38\n' | rows "time backwards" '3.*\[history-order\]'
printf 'time,luminosity\n1,-2e38\n' | rows "negative luminosity" '\[history-luminosity\]'
printf 'time,luminosity\n1,2e38\n2,\n' | rows "missing luminosity" 'h.csv:3.*\[table-missing\]'
printf 'time,luminosity\n1,2e38\n2,nan\n' | rows "luminosity nan" 'h.csv:3.*\[table-'
printf 'time,luminosity,luminosity_error\n1,2e38,3e38\n' | rows "error above the luminosity" 'h.csv:2.*\[history-error\]'

finish
