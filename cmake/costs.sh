#!/bin/sh
# cmake/costs.sh - counts the instructions a tick of every method of the catalogue (valgrind's callgrind: the count
# repeats exactly), and writes bench/COSTS.md.
#
#   sh cmake/costs.sh            with the programs in build/
#   sh cmake/costs.sh --check    writes nothing; fails when a count is off by over 2 %, or a method is missing
#
# WEND_BUILD names another build folder.
set -eu
case $0 in */*) cd "${0%/*}/.." ;; *) cd .. ;; esac

build=${WEND_BUILD:-build}
program=$build/bench/bench_catalogue
scenes=256 # in one pass: see bench/catalogue.cpp
if [ ! -x "$program" ]; then
  echo "costs: no $program; run sh cmake/test.sh first" >&2
  exit 2
fi
if ! command -v valgrind >/dev/null; then
  echo "costs: valgrind is not on this machine; install it to count instructions" >&2
  exit 2
fi
work=$(mktemp -d)
trap 'rm -rf "$work"' EXIT

instructions() { # instructions <method>: a tick, in decide() and what it calls
  valgrind --tool=callgrind --callgrind-out-file="$work/counts" --toggle-collect='*decide*' "$program" --once "$1" \
    >/dev/null 2>"$work/log" || {
    cat "$work/log" >&2
    exit 2
  }
  awk -v scenes=$scenes '/^(summary|totals):/ { print int($2 / scenes + 0.5); exit }' "$work/counts"
}

{
  echo '# What a method costs'
  echo
  echo 'A tick beside eight discs, from what is known (`look`) to a course, in single precision: instructions on x86-64'
  echo '(g++ -O2, no vector unit beyond SSE2), mean over 256 scenes, each method from a fresh memory. Bytes are those of'
  echo 'the memory struct that changes from tick to tick, and of the parameters, which may live in flash. Made by'
  echo '`sh cmake/costs.sh`.'
  echo
  echo '| method | instructions a tick | memory, bytes | parameters, bytes |'
  echo '|---|---:|---:|---:|'
  "$program" --sizes >"$work/sizes"
  while read -r memory parameters name; do
    printf '| %s | %s | %s | %s |\n' "$name" "$(instructions "$name")" "$memory" "$parameters"
  done <"$work/sizes"
} >"$work/COSTS.md"

if [ "${1:-}" = --check ]; then
  awk -F ' *[|] *' '
    /^[|]/ && $3 + 0 > 0 {
      if (NR == FNR) { wanted[$2] = $3; next }
      seen[$2] = 1
      if (!($2 in wanted)) { print "costs: " $2 " is not in bench/COSTS.md"; bad = 1 }
      else if ($3 > 1.02 * wanted[$2] || $3 < 0.98 * wanted[$2]) {
        print "costs: " $2 " takes " $3 " instructions, bench/COSTS.md says " wanted[$2]; bad = 1
      }
    }
    END {
      for (name in wanted) if (!(name in seen)) { print "costs: " name " is in bench/COSTS.md and not in the catalogue"; bad = 1 }
      exit bad
    }' bench/COSTS.md "$work/COSTS.md"
  echo 'costs: bench/COSTS.md holds'
else
  cp "$work/COSTS.md" bench/COSTS.md
  echo "costs: wrote bench/COSTS.md"
fi
