#!/bin/sh
# cmake/demo.sh - from a bare machine to the review pages in build/review/: installs what is missing, builds one
# program and runs it. Arguments are passed on to it; WEND_BUILD names another build folder, seen from the project's.
set -eu
case $0 in */*) cd "${0%/*}/.." ;; *) cd .. ;; esac

setup_for=demo
. cmake/setup.sh

build=${WEND_BUILD:-build}
cmake -S . -B "$build" -DWEND_EXAMPLES=ON -DWEND_TESTS=OFF -DWEND_BENCH=OFF
cmake --build "$build" --target review
mkdir -p "$build/review"
"$build/examples/review" --out "$build/review" "$@"
