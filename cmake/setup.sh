#!/bin/sh
# cmake/setup.sh - installs what is missing on this machine, and nothing else. With nothing missing it calls no package
# manager, so it may be run again at will. Exit code 2, with a list on stderr: it could not.
#
#   sh cmake/setup.sh                   everything: also doctest and Google Benchmark
#   setup_for=demo sh cmake/setup.sh    what the demo needs: compiler, CMake, Ninja, Eigen
#   setup_for=firmware sh cmake/setup.sh   that, and cross compilers for Arm and RISC-V with their C libraries, and QEMU
#
# demo.sh, test.sh and firmware.sh source it, so that they get CXX, the compiler that was found (a CXX that is set
# already is kept), and CMAKE_GENERATOR. Homebrew, apt-get, dnf and pacman are known.
set -eu

# g++ 12 or clang++ 14, with a standard library of C++20.
compiles() {
  printf '%s\n' '#if defined __clang__ && __clang_major__ < 14 || !defined __clang__ && __GNUC__ < 12' \
    '#error too old' '#endif' '#include <bit>' '#include <concepts>' '#include <numbers>' |
    $1 -std=c++20 -fsyntax-only -x c++ - >/dev/null 2>&1
}

find_compiler() {
  if [ -n "${CXX:-}" ]; then
    compiles "$CXX"
    return
  fi
  for cxx in c++ g++ clang++ g++-15 g++-14 g++-13 g++-12 clang++-19 clang++-18 clang++-17 clang++-16 clang++-15 \
    clang++-14; do
    if compiles "$cxx"; then
      CXX=$cxx
      export CXX
      return
    fi
  done
  return 1
}

has_cmake() {
  found=$(cmake --version 2>/dev/null) || return 1
  found=${found#cmake version }
  major=${found%%.*}
  minor=${found#*.}
  minor=${minor%%.*}
  [ "$major" -gt 3 ] || { [ "$major" -eq 3 ] && [ "$minor" -ge 22 ]; }
}

has_ninja() {
  command -v ninja >/dev/null || command -v ninja-build >/dev/null
}

# A header under any prefix where CMake looks. Files are looked for, not compiled: there may be no compiler yet.
has_header() {
  prefixes=$(printf '%s' "${CMAKE_PREFIX_PATH:-}:${HOMEBREW_PREFIX:-}:/usr/local:/usr:/opt/homebrew:/opt/local")
  old_ifs=$IFS
  IFS=':;'
  for prefix in $prefixes; do
    if [ -n "$prefix" ] && [ -f "$prefix/include/$1" ]; then
      IFS=$old_ifs
      return
    fi
  done
  IFS=$old_ifs
  return 1
}

# A cross compiler, and the headers it has to find.
has_cross() {
  cross=$1
  shift
  printf '#include <%s>\n' "$@" | $cross -std=c++20 -fsyntax-only -x c++ - >/dev/null 2>&1
}

find_missing() {
  missing=
  find_compiler || missing="$missing compiler"
  has_cmake || missing="$missing cmake"
  has_ninja || missing="$missing ninja"
  has_header eigen3/Eigen/src/Core/Reshaped.h || missing="$missing eigen"  # this file is new in Eigen 3.4
  case ${setup_for:-tests} in
    demo) ;;
    firmware)
      has_cross arm-none-eabi-g++ bit math.h || missing="$missing arm"
      has_cross 'riscv64-unknown-elf-g++ --specs=picolibc.specs' math.h || missing="$missing riscv"
      command -v qemu-system-arm >/dev/null || missing="$missing qemu-arm"
      command -v qemu-system-riscv32 >/dev/null || missing="$missing qemu-riscv"
      ;;
    *)
      has_header doctest/doctest.h || missing="$missing doctest"
      has_header benchmark/benchmark.h || missing="$missing benchmark"
      ;;
  esac
}

give_up() {
  echo "wend: $1 Please install:" >&2
  for item in $missing; do
    case $item in
      compiler) echo "  - a C++20 compiler: g++ 12 or clang++ 14, or later${CXX:+ (CXX is $CXX, and will not do)}" ;;
      cmake) echo "  - CMake 3.22 or later" ;;
      ninja) echo "  - Ninja" ;;
      eigen) echo "  - Eigen 3.4 or later, headers under <prefix>/include/eigen3 (CMAKE_PREFIX_PATH names prefixes)" ;;
      doctest) echo "  - doctest, header <prefix>/include/doctest/doctest.h (for the tests only)" ;;
      benchmark) echo "  - Google Benchmark (for the benchmarks only)" ;;
      arm) echo "  - arm-none-eabi-g++ 12 or later, with newlib and its C++ headers" ;;
      riscv) echo "  - riscv64-unknown-elf-g++ 12 or later, with picolibc" ;;
      qemu-arm) echo "  - qemu-system-arm" ;;
      qemu-riscv) echo "  - qemu-system-riscv32" ;;
    esac >&2
  done
  exit 2
}

find_manager() {
  for manager in apt-get dnf pacman brew; do
    if command -v "$manager" >/dev/null; then
      return
    fi
  done
  give_up "no package manager that this script knows is here."
}

package_names() {
  for item in $missing; do
    case $manager-$item in
      apt-get-compiler) echo g++ ;;
      apt-get-ninja | dnf-ninja) echo ninja-build ;;
      apt-get-eigen) echo libeigen3-dev ;;
      apt-get-doctest) echo doctest-dev ;;
      apt-get-benchmark) echo libbenchmark-dev ;;
      apt-get-arm) echo gcc-arm-none-eabi libnewlib-arm-none-eabi libstdc++-arm-none-eabi-newlib ;;
      apt-get-riscv) echo gcc-riscv64-unknown-elf picolibc-riscv64-unknown-elf ;;
      apt-get-qemu-arm) echo qemu-system-arm ;;
      apt-get-qemu-riscv) echo qemu-system-misc ;;
      brew-qemu-*) echo qemu ;;
      *-qemu-arm) echo qemu-system-arm ;;
      *-qemu-riscv) echo qemu-system-riscv ;;
      *-arm | *-riscv) ;; # no name that is known to bring all of it
      dnf-compiler) echo gcc-c++ ;;
      dnf-eigen) echo eigen3-devel ;;
      dnf-doctest) echo doctest-devel ;;
      dnf-benchmark) echo google-benchmark-devel ;;
      pacman-compiler | brew-compiler) echo gcc ;;
      brew-benchmark) echo google-benchmark ;;
      *) echo "$item" ;;
    esac
  done
}

as_root() {
  if [ "$(id -u)" -eq 0 ]; then
    "$@"
  else
    sudo "$@"
  fi
}

# What comes of it is checked afterwards, so a failure here (a list that could not be fetched) is not the end.
install_packages() {
  case $manager in
    apt-get)
      as_root apt-get update || true  # a fresh machine has no lists
      as_root env DEBIAN_FRONTEND=noninteractive apt-get install -y --no-install-recommends "$@" || true
      ;;
    dnf) as_root dnf install -y "$@" || true ;;
    pacman) as_root pacman -Sy --needed --noconfirm "$@" || true ;;
    brew) brew install "$@" || true ;;
  esac
}

find_missing
if [ -n "$missing" ]; then
  find_manager
  if [ "$manager" != brew ] && [ "$(id -u)" -ne 0 ] && ! command -v sudo >/dev/null; then
    give_up "installing with $manager takes root or sudo."
  fi
  echo "wend: missing:$missing; installing with $manager" >&2
  install_packages $(package_names)
  find_missing
  case "$manager $missing" in
    "apt-get "*compiler*) # where g++ alone is older
      install_packages g++-12
      find_missing
      ;;
  esac
  if [ -n "$missing" ]; then
    give_up "$manager could not bring everything."
  fi
fi

: "${CMAKE_GENERATOR:=Ninja}"
export CMAKE_GENERATOR
