#!/bin/sh
# cmake/matrix.sh - the wider check. With no argument every step, else those named: g++, clang++-14, clang++,
# clang++-19 (all tests with that compiler), sanitizers, headers, threads, lint, tidy. Each builds in build/<step>/. What a
# machine has no tool for is skipped, and says so.
set -eu
case $0 in */*) cd "${0%/*}/.." ;; *) cd .. ;; esac

has() {
  if command -v "$1" >/dev/null; then
    return
  fi
  echo "skipped: $1 is not on this machine"
  return 1
}

# Undefined behaviour, addresses and leaks, with CXX where that is set. Eigen's own asserts are on (no NDEBUG). Warnings
# do not stop it: g++ sees ghosts in code that it has instrumented. Only tests that run instrumented code.
sanitizers() {
  WEND_CTEST='-E consumer_|must_not|layers' WEND_BUILD=build/sanitizers sh cmake/test.sh -DCMAKE_BUILD_TYPE=Debug -DCMAKE_CXX_FLAGS_DEBUG=-g1 \
    -DWEND_WERROR=OFF -DWEND_BENCH=OFF -DWEND_EXAMPLES=OFF \
    -DCMAKE_CXX_FLAGS='-O1 -fsanitize=address,undefined -fno-sanitize-recover=all -fno-omit-frame-pointer'
}

# Every header alone; those of the robot side as firmware compiles them (cmake/headers.cmake).
headers() {
  setup_for=tests
  . cmake/setup.sh
  cmake -S . -B build/headers -DWEND_TESTS=ON -DWEND_EXAMPLES=OFF -DWEND_BENCH=OFF -DCMAKE_CXX_FLAGS_RELEASE=-O1
  cmake --build build/headers --target headers
}

# Two loops in two threads, under the thread sanitizer.
threads() {
  setup_for=tests
  . cmake/setup.sh
  cmake -S . -B build/threads -DCMAKE_BUILD_TYPE=Debug -DCMAKE_CXX_FLAGS_DEBUG=-g1 -DWEND_TESTS=ON -DWEND_EXAMPLES=OFF \
    -DWEND_BENCH=OFF -DCMAKE_CXX_FLAGS='-O1 -fsanitize=thread'
  cmake --build build/threads --target alone_two_loops
  build/threads/tests/alone/alone_two_loops
}

# What reads code without running it, over all headers: seconds. Suppressions have their reasons beside them.
lint() {
  if has cppcheck; then
    find include/wend -name '*.hpp' | xargs cppcheck --enable=warning,performance,portability --std=c++20 --language=c++ \
      --suppressions-list=cmake/cppcheck.suppress --quiet --error-exitcode=1 -Iinclude
  fi
  has clang-tidy && has clang++ || return 0
  mkdir -p build/lint
  for side in robot lab; do
    find include/wend -name '*.hpp' | if [ $side = lab ]; then grep /lab/; else grep -v /lab/; fi | sort |
      sed 's|^include/\(.*\)|#include "\1"|' >build/lint/$side.cpp
    clang-tidy build/lint/$side.cpp --quiet --warnings-as-errors='*' --config-file=.clang-tidy -- -std=c++20 -Iinclude \
      -isystem "${WEND_EIGEN:-/usr/include/eigen3}"
  done
}

tidy() {
  has clang-tidy && has clang++ || return 0
  CXX=clang++ cmake -S . -B build/tidy -DWEND_TESTS=ON -DWEND_EXAMPLES=ON
  find tests examples -name '*.cpp' ! -path '*/must_not_compile/*' ! -path '*/consumers/*' ! -path '*/firmware/*' |
    xargs -n 1 -P "$(getconf _NPROCESSORS_ONLN)" clang-tidy -p build/tidy --quiet --warnings-as-errors='*'
}

if [ $# -eq 0 ]; then
  clang=clang++-14
  command -v $clang >/dev/null || clang=clang++
  set -- g++ $clang clang++-19 sanitizers headers threads lint tidy
fi
for step in "$@"; do
  printf '\n=== %s ===\n' "$step"
  case $step in
    sanitizers | headers | threads | lint | tidy) $step ;;
    *++*) if has "$step"; then CXX=$step sh cmake/test.sh; fi ;;
    *)
      echo "no such step: $step" >&2
      exit 2
      ;;
  esac
done
