#!/usr/bin/env bash
# SPDX-License-Identifier: GPL-3.0-or-later
# install.sh MAKE BUILD: installs into an empty folder and uses what is there as a stranger would: program, pages, completion, C and
# Python examples; then removes it and looks for remains. The last line is a summary.
set -u
make=$1 build=$2
work=$(mktemp -d) || exit 1
trap 'rm -rf "$work"' EXIT
passed=0 failed=0
check() { # NAME COMMAND...
  local name=$1
  shift
  if "$@" > "$work/out" 2>&1; then
    passed=$((passed + 1))
  else
    failed=$((failed + 1))
    echo "FAIL install: $name"
    head -20 "$work/out"
  fi
}
tree=$work/usr
deep=$work/stage
run() { "$make" --no-print-directory -s BUILD="$build" "$@"; }
export PKG_CONFIG_PATH=$tree/lib/pkgconfig LD_LIBRARY_PATH=$tree/lib LUXGALE_LIBRARY=$tree/lib/libluxgale.so.0
set -o pipefail

check "install" run install PREFIX="$tree"
check "program runs" "$tree/bin/luxgale" star "$tree/share/doc/luxgale/examples/quickstart.yaml"
exported() { nm -D --defined-only "$tree/lib/libluxgale.so" | awk '{ print $3 }' | sort; }
foreign() { ! exported | grep -v '^lxg_'; }
check "only lxg_ symbols" foreign
private() { ! exported | grep -xE 'lxg_(run_begin|report_unit|plots_script)' && exported | grep -x lxg_wind_solve > /dev/null; }
check "private functions are not exported" private
soname() { objdump -p "$tree/lib/libluxgale.so" | grep -q 'SONAME *libluxgale.so.0$'; }
check "soname" soname
c_example() {
  "${CC:-cc}" -std=c11 -Wall -Wextra -Werror "$tree/share/doc/luxgale/examples/c/one_wind.c" $(pkg-config --cflags --libs luxgale gsl) -o "$work/one_wind" \
    && "$work/one_wind" > "$work/c.txt" && grep -qE 'all sources of opacity: [0-9.]+e-0[0-9] Msun/yr, [0-9]+ km/s' "$work/c.txt" \
    && grep -q 'without iron: ' "$work/c.txt"
}
check "C example builds and runs" c_example
headers() {
  local h
  for h in "$tree"/include/luxgale/*.h; do
    echo "#include <luxgale/${h##*/}>" | "${CC:-cc}" -std=c11 -Wall -Werror -I"$tree/include" -fsyntax-only -x c - || return 1
  done
}
check "every header stands alone" headers
check "Python example" /usr/bin/python3 tests/python/use_library.py "$tree" "$PWD"
pages() { # a page that refers to the other is told as long as they are not installed where mandoc looks
  command -v mandoc > /dev/null || return 0
  ! mandoc -T lint "$tree/share/man/man1/luxgale.1" "$tree/share/man/man5/luxgale-case.5" 2> /dev/null | grep -v 'referenced manual not found'
}
check "manual pages lint clean" pages
completes() { # WORDS EXPECTED
  bash -c '. "$1"; COMP_WORDS=($2); COMP_CWORD=$((${#COMP_WORDS[@]} - 1)); _luxgale; printf "%s\n" "${COMPREPLY[@]}"' _ \
    "$tree/share/bash-completion/completions/luxgale" "$1" | grep -qx -- "$2"
}
check "completion of a command" completes "luxgale outb" outburst
check "completion of an option" completes "luxgale wind --struc" --structure
check "completion of a second word" completes "luxgale opacity tab" tabulate
check "completion of an option of two words" completes "luxgale opacity import --da" --date
check "completion of a word" completes "luxgale wind --branch thi" thin
zsh_reads() { ! command -v zsh > /dev/null || zsh -n "$tree/share/zsh/site-functions/_luxgale"; }
fish_reads() { ! command -v fish > /dev/null || fish -n "$tree/share/fish/vendor_completions.d/luxgale.fish"; }
check "zsh reads its completion" zsh_reads
check "fish reads its completion" fish_reads
check "uninstall" run uninstall PREFIX="$tree"
nothing() { [ -z "$(find "$1" -mindepth 1 2> /dev/null)" ]; }
check "nothing left" nothing "$tree"
check "install with DESTDIR" run install PREFIX=/opt/luxgale DESTDIR="$deep"
prefix() { grep -qx 'prefix=/opt/luxgale' "$deep/opt/luxgale/lib/pkgconfig/luxgale.pc"; }
check "pkg-config file names the final place" prefix
check "uninstall with DESTDIR" run uninstall PREFIX=/opt/luxgale DESTDIR="$deep"
check "nothing left there" nothing "$deep/opt/luxgale"
archive() {
  git rev-parse > /dev/null 2>&1 || return 0
  run dist && tar -tzf "$build"/luxgale-*.tar.gz | grep '/Makefile$' > /dev/null
}
check "archive" archive
echo "install: $passed passed, $failed failed"
[ "$failed" -eq 0 ]
