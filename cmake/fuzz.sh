#!/bin/sh
# cmake/fuzz.sh [RUNS [TARGET...]] - builds the fuzz targets with clang and its sanitizers, and runs each of those named
# (all, when none is) RUNS times (default 200000), starting from the committed corpus. What a target finds is left in
# build/fuzz/found/. With WEND_FUZZ_JOBS=N, N processes a target share the runs; WEND_FUZZ_LENGTH is the most bytes of
# an input (default 512).
#
#   WEND_FUZZ_JOBS=2 WEND_FUZZ_LENGTH=128 sh cmake/fuzz.sh 100000000 loop    the long run: about a tick an input
#   sh cmake/fuzz.sh --keep             folds what was found new into the committed corpus, as small as it gets
set -eu
case $0 in */*) cd "${0%/*}/.." ;; *) cd .. ;; esac

clang=${CXX:-clang++-14}
command -v "$clang" >/dev/null || clang=clang++
if ! command -v "$clang" >/dev/null; then
  echo 'fuzz: takes clang and its fuzzer (Debian: clang-14 libclang-rt-14-dev)' >&2
  exit 2
fi
keep=
if [ "${1:-}" = --keep ]; then
  keep=yes
  shift
fi
runs=${1:-200000}
[ $# -eq 0 ] || shift

build=build/fuzz
CXX=$clang
export CXX
setup_for=tests
. cmake/setup.sh
cmake -S . -B $build -DWEND_TESTS=ON -DWEND_EXAMPLES=OFF -DWEND_BENCH=OFF -DWEND_FUZZ=ON >/dev/null
if [ $# -eq 0 ]; then
  set -- $(ls tests/fuzz/*_fuzz.cpp | sed 's:.*/::; s:_fuzz.cpp::')
fi
cmake --build $build --target $(printf 'fuzz_%s ' "$@")

for target in "$@"; do
  corpus=tests/fuzz/corpus/$target
  new=$build/new/$target
  found=$build/found/$target
  mkdir -p "$new" "$found"
  if [ -n "$keep" ]; then
    smaller=$(mktemp -d)
    $build/tests/fuzz/fuzz_"$target" -merge=1 "$smaller" "$corpus" "$new" 2>/dev/null
    rm -rf "$corpus"
    mv "$smaller" "$corpus"
    chmod 755 "$corpus"
    echo "fuzz: $target keeps $(ls "$corpus" | wc -l) inputs, $(du -sb "$corpus" | cut -f 1) bytes"
    continue
  fi
  echo "fuzz: $target, $runs runs"
  jobs=${WEND_FUZZ_JOBS:-1}
  i=1
  pids=
  while [ $i -le "$jobs" ]; do
    $build/tests/fuzz/fuzz_"$target" -runs=$((runs / jobs)) -seed=$i -max_len="${WEND_FUZZ_LENGTH:-512}" -artifact_prefix="$found/" \
      -print_final_stats=1 -verbosity=0 "$new" "$corpus" >"$build/$target.$i.log" 2>&1 &
    pids="$pids $!"
    i=$((i + 1))
  done
  for pid in $pids; do
    if ! wait "$pid"; then
      tail -n 40 $build/"$target".*.log
      echo "fuzz: $target found something: see $found" >&2
      exit 1
    fi
  done
  cat $build/"$target".*.log | awk '/number_of_executed_units/ { n += $2 } END { print "fuzz: " n " runs without a finding" }'
done
