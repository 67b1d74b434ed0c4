#!/bin/sh
# cmake/test.sh - installs what is missing, builds the tests, examples and benchmarks, and runs the tests.
#
#   sh cmake/test.sh                 in build/, with the compiler that is found
#   CXX=clang++-14 sh cmake/test.sh  in build/clang++-14/
#
# Arguments go to CMake; WEND_BUILD names another build folder, seen from the project's; WEND_CTEST goes to ctest.
set -eu
case $0 in */*) cd "${0%/*}/.." ;; *) cd .. ;; esac

build=${WEND_BUILD:-build${CXX:+/${CXX##*/}}}
setup_for=tests
. cmake/setup.sh

cmake -S . -B "$build" -DWEND_TESTS=ON -DWEND_EXAMPLES=ON -DWEND_BENCH=ON "$@"
cmake --build "$build"
ctest --test-dir "$build" --output-on-failure --no-tests=error -j "$(getconf _NPROCESSORS_ONLN)" ${WEND_CTEST:-}
