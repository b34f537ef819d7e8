# SPDX-License-Identifier: GPL-3.0-or-later
# shellcheck shell=bash
# people.sh - starter cases, help of codes, text on a terminal, colours, progress, signals, pictures and the page.
# shellcheck source=lib.sh
. "$ROOT/tests/cli/lib.sh"

quick=$ROOT/examples/quickstart.yaml
for reader in theorist spectroscopist observer; do
  command=outburst
  [ $reader = spectroscopist ] && command=wind
  expect "starter for a $reader" 0 "" "" "$LUXGALE" new --for $reader -o $reader.yaml
  expect "it runs" 0 "*" 'verdict: "solved"' "$LUXGALE" $command --quiet $reader.yaml
done
expect "starter to standard output" 0 "" '^case: 1' "$LUXGALE" new --for theorist
expect "no reader" 2 'option-value' "" "$LUXGALE" new
expect "unknown reader" 2 'spectroscopist, theorist or observer.*option-value' "" "$LUXGALE" new --for everyone
expect "nothing overwritten" 2 'file-exists' "" "$LUXGALE" new --for theorist -o theorist.yaml
expect "new takes no case" 2 'operand-extra' "" "$LUXGALE" new --for theorist theorist.yaml
expect "--for is for new" 2 'option-command' "" "$LUXGALE" star --for theorist "$quick"

expect "help of a reason" 0 "" 'the star rests' "$LUXGALE" help reason below-thin-end
expect "help of a near reason" 2 'did you mean below-thin-end' "" "$LUXGALE" help reason below-thinend
expect "help of a near key" 2 'did you mean base_temperature' "" "$LUXGALE" help base_temprature
expect "help of a key by its last part" 0 "" '^hold.base_temperature' "$LUXGALE" help base_temperature
expect "help of a report's key" 0 "" 'int Mdot dt' "$LUXGALE" help ejecta.mass_msun
expect "help of an option's command" 0 "" '--plots FOLDER' "$LUXGALE" help outburst
expect "every reason of a wind is explained" 0 "" 'no-critical-point' "$LUXGALE" help reasons
for reason in $(grep -oE 'LXG_WIND_[A-Z_]+, "[a-z-]+"' "$ROOT/include/luxgale/wind.h" | cut -d'"' -f2); do
  expect "reason $reason" 0 "" . "$LUXGALE" help reason "$reason"
done

expect "text" 0 "" '^  mass  +1.05 Msun$' "$LUXGALE" star --format text "$quick"
terminal() { script -qec "$*" /dev/null < /dev/null | tr -d '\r'; }
expect "text on a terminal" 0 "" '^  escape speed  +7335.8 km/s$' terminal "'$LUXGALE' star '$quick'"
expect "yaml elsewhere" 0 "" 'escape_speed_km_s: 7335.8' "$LUXGALE" star "$quick"
bell=$(printf '\033')
expect "colour on a terminal" 0 "" "$bell\[1;31merror" terminal "TERM=xterm '$LUXGALE' wimd x"
plain() { ! terminal "$@" | grep -q "$bell"; }
expect "no colour with NO_COLOR" 0 "" "" plain "TERM=xterm NO_COLOR=1 '$LUXGALE' wimd x"
expect "no colour on a dumb terminal" 0 "" "" plain "TERM=dumb '$LUXGALE' wimd x"
expect "no colour in a file" 2 '^luxgale: error: wimd' "" "$LUXGALE" wimd x

# Signals end the program as a shell expects, and nothing stays behind. A job of a script ignores SIGINT; Python sets it back.
stopped() {
  /usr/bin/python3 - "$1" "$LUXGALE" "$quick" << 'PY'
import signal, subprocess, sys, time
number = getattr(signal, sys.argv[1])
child = subprocess.Popen([sys.argv[2], "outburst", "--plots", "stopped", "-o", "stopped.yaml", sys.argv[3]],
                         preexec_fn=lambda: signal.signal(signal.SIGINT, signal.SIG_DFL))
time.sleep(0.2)
child.send_signal(number)
sys.exit(0 if child.wait() == -number else 1)
PY
}
expect "SIGINT" 0 "" "" stopped SIGINT
expect "SIGTERM" 0 "" "" stopped SIGTERM
verdict "nothing left after a signal" "$(find . -name '.luxgale*' -o -name stopped.yaml)"

expect "pictures and page" 0 "*" "" "$LUXGALE" outburst --quiet --plots pictures --html page.html -o r.yaml "$quick"
for name in luminosity mass-loss speed photosphere ejected-mass family; do
  for form in gp svg pdf png; do
    verdict "$name.$form" "$([ -s "pictures/$name.$form" ] || echo missing)"
  done
done
expect "pictures of a wind" 0 "*" "" "$LUXGALE" wind --quiet --plots wind -o w.yaml "$ROOT/examples/wind.yaml"
verdict "structure and opacity map" "$([ -s wind/structure.svg ] && [ -s wind/opacity-map.svg ] || echo missing)"
redraw() { (cd pictures && rm speed.svg && gnuplot -d speed.gp && [ -s speed.svg ]); }
expect "a script redraws its picture" 0 "*" "" redraw
without() { PATH=/nowhere "$LUXGALE" star "$quick" > /dev/null && PATH=/nowhere "$LUXGALE" wind --plots bare -o b.yaml "$ROOT/examples/wind.yaml"; }
expect "without gnuplot: a warning" 0 'pictures-missing' "" without
verdict "the report says so" "$(grep -q pictures-missing b.yaml || echo no)"
expect "folder of pictures cannot be made" 3 'plots-folder' "" "$LUXGALE" wind --plots no/where "$ROOT/examples/wind.yaml"
expect "page and report in one place" 2 'output-twice' "" "$LUXGALE" wind -o a --html a "$ROOT/examples/wind.yaml"

finish
