#!/bin/sh
# consume.sh HOW SOURCE BUILD WORK COMPILER EIGEN - builds and runs a small program that comes by wend in one of the ways in:
# add_subdirectory, fetch_content, find_package, pkg_config, include, single_header, tar, deb. SOURCE is the source tree,
# BUILD a configured build of it, EIGEN Eigen's include folder.
set -eu
how=$1 source=$2 build=$3 work=$4/$1 cxx=$5 eigen=$6
here=$source/tests/consumers
rm -rf "$work"
mkdir -p "$work/program"
cp "$here/main.cpp" "$here/second.cpp" "$work/program"
cp "$here/project.cmake" "$work/program/CMakeLists.txt"
cd "$work/program"

# The strictest warnings there are, and wend by -I: as one's own code, not as a system header.
strict='-std=c++20 -Wall -Wextra -Wpedantic -Wconversion -Wsign-conversion -Wshadow -Wdouble-promotion -Wold-style-cast -Werror'

by_cmake() { # by_cmake <more options>
  cmake -S . -B ../build -DHOW="$how" -DCMAKE_CXX_COMPILER="$cxx" -DWEND_SOURCE="$source" -DCMAKE_INSTALL_PREFIX=../root "$@"
  cmake --build ../build
  cmake --install ../build
  [ ! -e ../root/include/wend ] || { echo 'a consumer installs wend along with itself'; exit 1; }
  program=../root/bin/consumer
}

by_hand() { # by_hand <options>
  "$cxx" $strict "$@" -isystem "$eigen" main.cpp second.cpp -o consumer
  program=./consumer
}

case $how in
  add_subdirectory | fetch_content) by_cmake ;;
  find_package)
    cmake --install "$build" --prefix ../installed
    by_cmake -DCMAKE_PREFIX_PATH="$work/installed"
    # A project for a processor with pointers of another size may use it: headers fit any.
    printf '%s\n' 'cmake_minimum_required(VERSION 3.22)' 'set(CMAKE_SIZEOF_VOID_P 4)' 'set(PACKAGE_FIND_VERSION 0.1)' 'set(PACKAGE_FIND_VERSION_MAJOR 0)' \
      'set(PACKAGE_FIND_VERSION_MINOR 1)' "include($work/installed/share/cmake/wend/wend-config-version.cmake)" \
      'if(PACKAGE_VERSION_UNSUITABLE OR NOT PACKAGE_VERSION_COMPATIBLE)' 'message(FATAL_ERROR "refused")' 'endif()' \
      >../small.cmake
    cmake -P ../small.cmake
    if cmake -S . -B ../newer -DHOW="$how" -DWEND_WANTED=0.99 -DCMAKE_PREFIX_PATH="$work/installed" \
      -DCMAKE_CXX_COMPILER="$cxx" >../newer.log 2>&1; then
      echo 'a request for another minor version was granted'
      exit 1
    fi
    grep -q 'requested version "0.99"' ../newer.log
    ;;
  pkg_config)
    cmake --install "$build" --prefix "$work/installed"
    sed -i "s|^prefix=.*|prefix=$work/installed|" ../installed/share/pkgconfig/wend.pc
    flags=$(PKG_CONFIG_PATH="$work/installed/share/pkgconfig" pkg-config --cflags wend)
    by_hand $flags
    ;;
  include) by_hand -I "$source/include" ;;
  single_header)
    cmake -DFROM="$source/include" -DTO="$work/one/wend.hpp" -P "$source/cmake/single_header.cmake"
    cmake -DFROM="$source/include" -DTO="$work/again/wend.hpp" -P "$source/cmake/single_header.cmake"
    cmp ../one/wend.hpp ../again/wend.hpp
    by_hand -DWEND_SINGLE_HEADER -I "$work/one"
    ;;
  tar)
    (cd "$build" && cpack -G TGZ -B "$work/package")
    mkdir ../unpacked
    tar -xzf ../package/wend-*.tar.gz -C ../unpacked --strip-components=1
    by_hand -I "$work/unpacked/include"
    ;;
  deb)
    (cd "$build" && cpack -G DEB -B "$work/package")
    dpkg-deb --extract ../package/libwend-dev_*_all.deb ../unpacked
    dpkg-deb --field ../package/libwend-dev_*_all.deb Depends | grep -q libeigen3-dev
    by_hand -I "$(dirname "$(find "$work/unpacked" -type d -path '*/include/wend')")"
    ;;
  *)
    echo "no such way in: $how"
    exit 2
    ;;
esac

said=$("$program")
echo "$said"
[ "$said" = 'ok, no course: 5.352 -3.648' ] || { echo "expected another answer"; exit 1; }
