#!/bin/sh
# cmake/coverage.sh - which branches of the robot side do the tests take? Builds the tests in build/coverage with clang,
# counting, runs them, and prints for each header how many branches were taken, all instantiations of a
# template together; then each that was never taken. Those that cannot be, and why, are in cmake/coverage.keep. The tests
# of lab/ are left out: they take long, and are not about it. Takes clang, llvm-cov and python3.
set -eu
case $0 in */*) cd "${0%/*}/.." ;; *) cd .. ;; esac

version=${WEND_LLVM:-14}
for tool in clang++-"$version" llvm-cov-"$version" llvm-profdata-"$version" python3; do
  if ! command -v "$tool" >/dev/null; then
    echo "coverage: takes $tool (Debian: clang-$version llvm-$version libclang-rt-$version-dev python3)" >&2
    exit 2
  fi
done
build=build/coverage
CXX=clang++-$version
export CXX
setup_for=tests
. cmake/setup.sh
cmake -S . -B $build -DCMAKE_BUILD_TYPE=Debug -DWEND_TESTS=ON -DWEND_EXAMPLES=OFF -DWEND_BENCH=OFF -DWEND_WERROR=OFF \
  -DCMAKE_CXX_FLAGS_DEBUG='-O1 -w -fprofile-instr-generate -fcoverage-mapping' >/dev/null
cmake --build $build --target wend_tests
LLVM_PROFILE_FILE=$build/raw $build/tests/wend_tests -m "--source-file-exclude=*/tests/lab/*,*mpfi_test*" >/dev/null ||
  { echo 'coverage: a test fails' >&2; exit 1; }
llvm-profdata-"$version" merge -sparse $build/raw -o $build/merged
llvm-cov-"$version" export $build/tests/wend_tests -instr-profile=$build/merged -ignore-filename-regex='/(tests|lab)/' \
  >$build/coverage.json
python3 cmake/coverage.py $build/coverage.json cmake/coverage.keep
