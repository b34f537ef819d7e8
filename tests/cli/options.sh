# SPDX-License-Identifier: GPL-3.0-or-later
# shellcheck shell=bash
# options.sh - the command line itself, help, files that cannot be read or written, and what is left of old output.
# shellcheck source=lib.sh
. "$ROOT/tests/cli/lib.sh"

cat > case.yaml <<'YAML'
case: 1
star: {mass: 1.0 Msun}
composition: {hydrogen: 0.35, helium: 0.63, metals: 0.02}
opacity: {formula: reference}
hold: {base_temperature: 1.0e8 K, launch_radius: 2.0e10 cm}
YAML

expect "no command" 2 'command-missing' "" "$LUXGALE"
expect "unknown command" 2 'did you mean wind.*command-unknown' "" "$LUXGALE" wimd case.yaml
expect "no case" 2 'case-missing' "" "$LUXGALE" wind
expect "two cases" 2 'operand-extra' "" "$LUXGALE" wind case.yaml case.yaml
expect "unknown option" 2 '--formta.*did you mean --format.*option-unknown' "" "$LUXGALE" star --formta json case.yaml
expect "unknown letter" 2 'option-unknown' "" "$LUXGALE" star -z case.yaml
expect "argument missing" 2 'option-argument' "" "$LUXGALE" star case.yaml -o
expect "bad format" 2 'yaml.json.*option-value' "" "$LUXGALE" star --format xml case.yaml
expect "bad branch" 2 'thin.thick.*option-value' "" "$LUXGALE" wind --branch middle case.yaml
expect "bad threads" 2 'option-value' "" "$LUXGALE" star --threads 0 case.yaml
expect "bad seed" 2 'option-value' "" "$LUXGALE" star --seed -3 case.yaml
expect "option of another command" 2 'option-command' "" "$LUXGALE" star --structure s.ecsv case.yaml
expect "two results in one place" 2 'output-twice' "" "$LUXGALE" wind -o a.yaml --structure a.ecsv --structure a.yaml case.yaml
expect "help" 0 "" 'Usage: luxgale COMMAND' "$LUXGALE" help
expect "--help" 0 "" 'Exit status' "$LUXGALE" --help
expect "help of a command" 0 "" '--branch' "$LUXGALE" wind --help
expect "help case" 0 "" 'base_temperature' "$LUXGALE" help case
expect "help of a key" 0 "" 'bare number is in Msun' "$LUXGALE" help star.mass
expect "help of a section" 0 "" 'composition.metals' "$LUXGALE" help composition
expect "help settings" 0 "" 'gap_fraction = ' "$LUXGALE" help settings
expect "help units" 0 "" 'Msun/yr' "$LUXGALE" help units
expect "help reasons" 0 "" 'below-thin-end' "$LUXGALE" help reasons
expect "help of nothing" 2 'help-unknown' "" "$LUXGALE" help wombats
expect "version" 0 "" '^luxgale [0-9]+\.[0-9]+\.[0-9]+' "$LUXGALE" --version

expect "missing file" 3 'nowhere.yaml.*\[read-open\]' "" "$LUXGALE" star nowhere.yaml
expect "a folder" 3 '\[read-' "" "$LUXGALE" star .
expect "missing table" 3 'none.ecsv.*\[read-open\]' "" "$LUXGALE" star --set luminosity='{kind: base, file: none.ecsv}' case.yaml
INPUT=case.yaml expect "standard input" 0 "" 'mass_msun: 1.0' "$LUXGALE" star -
expect "json" 0 "" '"mass_msun": 1.0' "$LUXGALE" star --format json case.yaml
expect "set" 0 "" 'mass_msun: 1.25' "$LUXGALE" star --set star.mass='1.25 Msun' case.yaml
expect "set twice, last wins" 0 "" 'mass_msun: 0.75' "$LUXGALE" star --set star.mass=1.25 --set star.mass=0.75 case.yaml
expect "set without a value" 2 'override-syntax' "" "$LUXGALE" star --set star.mass case.yaml
expect "set of a bad key" 2 '--set.*maas.*key-unknown' "" "$LUXGALE" star --set star.maas=1 case.yaml

expect "report to a file" 0 "" "" "$LUXGALE" star -o old.yaml case.yaml
cp old.yaml keep.yaml
expect "bad input after a good run" 2 'key-unknown' "" "$LUXGALE" star --set star.maas=1 -o old.yaml case.yaml
same "old report untouched by bad input" old.yaml keep.yaml
expect "folder missing" 3 'nowhere/out.yaml.*\[write-' "" "$LUXGALE" star -o nowhere/out.yaml case.yaml
expect "output is a folder" 3 '\[write-' "" "$LUXGALE" star -o . case.yaml
expect "full device" 3 '/dev/full.*\[write-' "" "$LUXGALE" star -o /dev/full case.yaml
full() { "$LUXGALE" star case.yaml > /dev/full; }
expect "full standard output" 3 '\[write-' "*" full
limited() { (ulimit -f 0; exec "$LUXGALE" star -o old.yaml case.yaml); }
expect "no room for any file" 3 "" "" limited # the limit holds for the message too
same "old report untouched by a full disk" old.yaml keep.yaml
left=$(find . -name '.luxgale*' | wc -l)
verdict "no temporary files left" "$([ "$left" -eq 0 ] || echo "$left left")"
quiet_pipe() { set -o pipefail; "$LUXGALE" help case | true; [ "${PIPESTATUS[0]}" -ne 70 ]; }
expect "reader leaves early" 0 "" "" quiet_pipe

expect "a wind" 0 "*" 'verdict: "solved"' "$LUXGALE" wind --structure s.ecsv -o - case.yaml
verdict "structure is ECSV" "$(head -1 s.ecsv | grep -qF '# %ECSV 1.0' || echo no)"
"$LUXGALE" wind --quiet case.yaml > one.yaml
"$LUXGALE" wind --quiet case.yaml > two.yaml
same "same input, same bytes" one.yaml two.yaml
LC_ALL=de_DE.UTF-8 TZ=Asia/Kathmandu "$LUXGALE" wind --quiet case.yaml > two.yaml
same "same bytes elsewhere" one.yaml two.yaml
expect "no wind" 1 'no answer: .*\[' 'verdict: "none"' "$LUXGALE" wind --set hold.launch_radius='6e8 cm' case.yaml
expect "no wind has a reason" 1 '*' 'reason_code: "[a-z-]+"' "$LUXGALE" wind --set hold.launch_radius='6e8 cm' case.yaml

finish
