# SPDX-License-Identifier: GPL-3.0-or-later
# shellcheck shell=bash
# lib.sh - sourced by every tests/cli/NAME.sh; `finish` must be its last line.

shopt -s lastpipe # a test at the end of a pipe counts in this shell
passed=0 failed=0

# expect NAME EXIT STDERR STDOUT COMMAND...: exit status, and extended regular expressions that standard error and standard output
# must contain ("" means that the stream is empty, "*" anything).
expect() {
  local name=$1 status=$2 err=$3 out=$4 got
  shift 4
  "$@" > stdout.txt 2> stderr.txt < "${INPUT:-/dev/null}"
  got=$?
  local why=
  [ "$got" -eq "$status" ] || why="exit status $got, expected $status"
  matches stderr.txt "$err" || why="$why; standard error does not match '$err'"
  matches stdout.txt "$out" || why="$why; standard output does not match '$out'"
  verdict "$name" "$why"
}

matches() {
  case $2 in
    '*') true ;;
    '') [ ! -s "$1" ] ;;
    *) grep -qE -- "$2" "$1" ;;
  esac
}

# verdict NAME WHY: passed if WHY is empty.
verdict() {
  if [ -z "$2" ]; then
    passed=$((passed + 1))
  else
    failed=$((failed + 1))
    printf 'FAIL %s: %s: %s\n' "$(basename "$0" .sh)" "$1" "$2"
    head -c 600 stderr.txt
  fi
}

# same NAME FILE FILE: byte for byte.
same() {
  if cmp -s "$2" "$3"; then verdict "$1" ""; else verdict "$1" "$2 and $3 differ"; fi
}

finish() {
  echo "$(basename "$0" .sh) $passed $failed" >> "$COUNTS"
}
