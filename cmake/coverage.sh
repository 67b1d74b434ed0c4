#!/bin/sh
# cmake/coverage.sh - which branches of the robot side do the tests take? Builds the tests in build/coverage, unoptimised and
# counting, runs them, and prints the share of branches taken a header (all instantiations of a template together), then
# each branch that was never taken. Takes g++ and gcovr (Debian: gcovr). Branches that cannot be reached, and why, are
# in cmake/coverage.keep: file:line's text, a tab, the reason.
set -eu
case $0 in */*) cd "${0%/*}/.." ;; *) cd .. ;; esac

if ! command -v gcovr >/dev/null; then
  echo 'coverage: takes gcovr (Debian: gcovr)' >&2
  exit 2
fi
build=build/coverage
CXX=${CXX:-g++}
export CXX
setup_for=tests
. cmake/setup.sh
cmake -S . -B $build -DCMAKE_BUILD_TYPE=Debug -DWEND_TESTS=ON -DWEND_EXAMPLES=OFF -DWEND_BENCH=OFF -DWEND_WERROR=OFF \
  -DCMAKE_CXX_FLAGS_DEBUG='-O0 -w --coverage -fno-inline -fprofile-abs-path' >/dev/null
cmake --build $build --target wend_tests
find $build -name '*.gcda' -delete
$build/tests/wend_tests -m >/dev/null || { echo 'coverage: a test fails' >&2; exit 1; }
gcovr --root . --filter 'include/wend/' --exclude 'include/wend/lab/' --branches --exclude-throw-branches \
  --exclude-unreachable-branches --merge-mode-functions=merge-use-line-0 --sort-percentage \
  --json $build/coverage.json --txt $build/coverage.txt "$build"
cat $build/coverage.txt
