# SPDX-License-Identifier: GPL-3.0-or-later
# shellcheck shell=bash
# opacity.sh - opacity at, check, tabulate, import: results, and tables that are refused with their place.
# shellcheck source=lib.sh
. "$ROOT/tests/cli/lib.sh"

cat > case.yaml <<'YAML'
case: 1
star: {mass: 1.0 Msun}
composition: {hydrogen: 0.35, helium: 0.63, metals: 0.02}
opacity: {formula: scattering}
YAML

# Electron scattering is 0.2 (1 + X) = 0.27 cm2/g everywhere: log10 = -0.5686362358.
expect "one point" 0 "" 'log_kappa: -0.56863623' "$LUXGALE" opacity at --log-t 6.0 --log-r -4 case.yaml
expect "one point, slopes" 0 "" 'dlogk_dlogt: 0.0' "$LUXGALE" opacity at --log-t 6.0 --log-r -4 case.yaml
expect "shares" 0 "" 'iron: 0\.[0-9]' "$LUXGALE" opacity at --set opacity.formula=kramers --log-t 5.2 --log-r -4 case.yaml
printf 'log_t,log_r\n5.0,-5\n6.25,-3.125\n7,-1\n' > points.csv
expect "points to standard output" 0 "" '%ECSV' "$LUXGALE" opacity at --points points.csv case.yaml
expect "points" 0 "" "" "$LUXGALE" opacity at --points points.csv -o out.ecsv case.yaml
grep -c '^[567].*-0.5686362' out.ecsv | { read -r n; verdict "three rows" "$([ "$n" = 3 ] || echo "$n rows")"; }
expect "no point" 2 'opacity-points' "" "$LUXGALE" opacity at case.yaml
expect "half a point" 2 'opacity-points' "" "$LUXGALE" opacity at --log-t 5 case.yaml
expect "point and points" 2 'opacity-points' "" "$LUXGALE" opacity at --log-t 5 --points points.csv case.yaml
expect "point no number" 2 'log-t warm.*option-value' "" "$LUXGALE" opacity at --log-t warm --log-r 1 case.yaml
expect "a range of two" 2 'option-value' "" "$LUXGALE" opacity tabulate --log-t 1:2 --log-r 1:2:0.1 case.yaml
expect "a range of four" 2 'option-value' "" "$LUXGALE" opacity tabulate --log-t 1:2:1:1 --log-r 1:2:0.1 case.yaml
expect "outside everything" 1 'no answer.*opacity-outside' 'log_kappa: null' "$LUXGALE" opacity at --log-t 40 --log-r 0 case.yaml
printf 'log_t\n5.0\n' > points.csv
expect "column missing" 2 'points.csv.*log_r.*table-column' "" "$LUXGALE" opacity at --points points.csv case.yaml
printf 'log_t,log_r\n5.0,-3\n5.1,x\n' > points.csv
expect "no number" 2 'points.csv:3:.*table-number' "" "$LUXGALE" opacity at --points points.csv case.yaml
expect "points not there" 3 'gone.ecsv.*read-open' "" "$LUXGALE" opacity at --points gone.ecsv case.yaml

# A table of the formula, read back by a case: the nodes are the formula's values.
sed -i 's/scattering/kramers/' case.yaml
expect "tabulate" 0 "" "" "$LUXGALE" opacity tabulate --log-t 4.0:6.5:0.05 --log-r -6:-2:0.5 -o made.ecsv case.yaml
expect "tabulate checked" 0 "" 'missing: 0' "$LUXGALE" opacity check made.ecsv
expect "distance to the formula it came from" 0 "" 'formula_rms_dex: (0\.0$|[0-9.]+e-1[4-9])' "$LUXGALE" opacity check made.ecsv
sed 's/{formula: kramers}/{tables: [made.ecsv]}/' case.yaml > table.yaml
printf 'log_t,log_r\n5.25,-4\n5.3,-3.5\n4.65,-5\n' > points.csv
for c in case table; do "$LUXGALE" opacity at --points points.csv -o $c.ecsv $c.yaml; grep '^[45]' $c.ecsv | cut -d' ' -f3 | cut -c1-12 > $c.txt; done
same "table node values are the formula's" case.txt table.txt
expect "outside a table" 1 'opacity-outside' 'log_kappa: null' "$LUXGALE" opacity at --set opacity.outside=refuse --log-t 8 --log-r -3 table.yaml
expect "no axis" 2 'log-t FIRST:LAST:STEP.*opacity-axis' "" "$LUXGALE" opacity tabulate --log-r -6:-2:0.5 -o t.ecsv case.yaml
expect "an axis backwards" 2 'opacity-axis' "" "$LUXGALE" opacity tabulate --log-t 6:4:0.1 --log-r -6:-2:0.5 -o t.ecsv case.yaml
expect "too many nodes" 2 'opacity-axis' "" "$LUXGALE" opacity tabulate --log-t 4:6:0.0001 --log-r -6:-2:0.5 -o t.ecsv case.yaml
expect "nothing left behind" 1 "" "" test -e t.ecsv

# Blocks as published; invented numbers.
blocks() {
  cat <<'TXT'
Invented opacities for a test
TABLE 1 X=0.7000 Z=0.0200
logT   -4.0   -3.5   -3.0   -2.5
4.50  -0.123  0.217  0.331  9.999
4.60  -0.111  0.227  0.341  0.401
4.70  -0.101  0.237  0.351  0.411
4.80  -0.091  0.247  0.361  0.421
TXT
}
blocks > published.txt
expect "import" 0 "" 'tables: 1' "$LUXGALE" opacity import --date 1996 published.txt -o tables
expect "import keeps digits" 0 "" "^4.5,-3.5,0.217\$" cat tables/x0.7000-cno0.0000-z0.0200.ecsv
expect "import keeps the hole" 0 "" "^4.5,-2.5,\$" cat tables/x0.7000-cno0.0000-z0.0200.ecsv
expect "import keeps the source" 0 "" 'source: .*Invented opacities' cat tables/x0.7000-cno0.0000-z0.0200.ecsv
expect "import keeps the date" 0 "" 'date: .*1996' cat tables/x0.7000-cno0.0000-z0.0200.ecsv
expect "check of a published layout" 0 'table-difference' 'missing: 1' "$LUXGALE" opacity check published.txt
expect "import without a folder" 2 'opacity-folder' "" "$LUXGALE" opacity import published.txt
expect "import of an own table" 2 'made.ecsv:1:1:.*opacity-own' "" "$LUXGALE" opacity import made.ecsv -o tables
expect "own table with a composition" 2 'opacity-composition' "" "$LUXGALE" opacity check --hydrogen 0.7 --metals 0.02 made.ecsv
touch occupied
expect "folder is a file" 3 'occupied' "" "$LUXGALE" opacity import published.txt -o occupied
blocks | sed '2d' > bare.txt
expect "composition missing" 2 'bare.txt:[0-9]+:[0-9]+:.*opacity-import-composition' "" "$LUXGALE" opacity import bare.txt -o bare
expect "composition half given" 2 'opacity-composition' "" "$LUXGALE" opacity import --hydrogen 0.7 bare.txt -o bare
expect "composition impossible" 2 'composition-' "" "$LUXGALE" opacity import --hydrogen 0.7 --metals 0.5 bare.txt -o bare
expect "composition given" 0 "" 'hydrogen: 0.6' "$LUXGALE" opacity import --hydrogen 0.6 --metals 0.03 --cno 0.1 bare.txt -o bare
expect "its name" 0 "" "" test -s bare/x0.6000-cno0.1000-z0.0300.ecsv

# refused NAME SED PATTERN: the edited blocks are refused.
refused() {
  blocks | sed "$2" > bad.txt
  expect "$1" 2 "$3" "" "$LUXGALE" opacity import bad.txt -o never
}
refused "temperatures backwards" 's/^4.80/4.55/' 'bad.txt:7:[0-9]+: error.*opacity-import-order'
refused "densities backwards" 's/-3.0   -2.5/-2.5   -3.0/' 'bad.txt:3:[0-9]+: error.*opacity-import-order'
refused "too many in a row" 's/0.401/0.401 0.402/' 'bad.txt:5:[0-9]+: error.*opacity-import-count'
refused "a word" 's/0.227/high/' 'bad.txt:5:[0-9]+: error.*opacity-import-number'
refused "not a number" 's/0.227/nan/' 'bad.txt:5:[0-9]+: error.*opacity-import-number'
refused "kelvin in place of log T" 's/^4.60/39811/' 'bad.txt:[56]:[0-9]+: error.*opacity-import-'
refused "no block" '3,$d' 'bad.txt.*opacity-import-empty'
{ blocks; blocks; } > bad.txt
expect "one composition twice" 2 'opacity-set-duplicate' "" "$LUXGALE" opacity import bad.txt -o never
{ echo 'X=0.7 Z=0.02'; printf 'logT'; for ((i = 0; i < 3000; i++)); do printf ' %d.%03d' $((i / 1000 - 8)) $((i % 1000)); done; echo; } > bad.txt
expect "3000 columns" 4 'opacity-import-limit' "" "$LUXGALE" opacity import bad.txt -o never
expect "nothing was made" 1 "" "" test -e never

edited() {
  sed "$2" made.ecsv > bad.ecsv
  expect "$1" 2 "$3" "" "$LUXGALE" opacity check bad.ecsv
}
edited "composition removed" 's/composition:/mixture:/' 'bad.ecsv.*opacity-table-composition'
edited "node twice" '$p' 'bad.ecsv:[0-9]+:.*opacity-table-duplicate'
edited "wrong unit" 's/"log_t",/"log_t", unit: "K",/' 'bad.ecsv.*log_t.*opacity-table-unit'
edited "no number in a node" '$s/,[^,]*$/,nan/' 'bad.ecsv:[0-9]+:.*'

expect "group alone" 2 'at, tabulate, check, import.*command-missing' "" "$LUXGALE" opacity
expect "unknown member" 2 'did you mean check.*command-unknown' "" "$LUXGALE" opacity chek made.ecsv
expect "no file" 2 'file-missing' "" "$LUXGALE" opacity check
expect "two files" 2 'operand-extra' "" "$LUXGALE" opacity check made.ecsv made.ecsv
expect "set without a case" 2 'option-command' "" "$LUXGALE" opacity check --set a=b made.ecsv
expect "help of the group" 0 "" 'luxgale opacity import' "$LUXGALE" help opacity
expect "help of a member" 0 "" 'Usage: luxgale opacity check \[OPTIONS\] FILE' "$LUXGALE" help opacity check
finish
