# A 32-bit RISC-V with single precision in hardware (RV32IMAFC): riscv64-unknown-elf-g++ with picolibc.
set(CMAKE_SYSTEM_NAME Generic)
set(CMAKE_SYSTEM_PROCESSOR riscv32)
set(CMAKE_C_COMPILER riscv64-unknown-elf-gcc)
set(CMAKE_CXX_COMPILER riscv64-unknown-elf-g++)
set(CMAKE_ASM_COMPILER riscv64-unknown-elf-gcc)
set(CMAKE_TRY_COMPILE_TARGET_TYPE STATIC_LIBRARY)  # there is nothing that CMake's own test program could link with
set(CMAKE_FIND_ROOT_PATH_MODE_PROGRAM NEVER)
list(APPEND CMAKE_PREFIX_PATH /usr /usr/local /opt/homebrew)  # for Eigen, which is headers only

foreach(language IN ITEMS C CXX ASM)
  set(CMAKE_${language}_FLAGS_INIT "-march=rv32imafc -mabi=ilp32f --specs=picolibc.specs")
endforeach()

# Debian packages no C++ standard library for this compiler. wend needs the headers alone (<bit>, <concepts>, <span> and
# their like), and those of another bare-metal g++ of the same version, with a 32-bit ABI too, are the same: Arm's. They
# have to come before the C library's, which they wrap. A compiler that brings its own is left alone.
execute_process(COMMAND ${CMAKE_CXX_COMPILER} -march=rv32imafc -mabi=ilp32f -x c++ -E -include bit /dev/null
                OUTPUT_QUIET ERROR_QUIET RESULT_VARIABLE brings_no_headers)
if(brings_no_headers)
  execute_process(COMMAND ${CMAKE_CXX_COMPILER} -dumpversion OUTPUT_VARIABLE version OUTPUT_STRIP_TRAILING_WHITESPACE)
  string(REGEX MATCH "^[0-9]+" version ${version})
  file(GLOB cxx_headers /usr/include/newlib/c++/${version}*)
  if(NOT cxx_headers)
    message(FATAL_ERROR "wend: no headers of a C++ standard library ${version} for ${CMAKE_CXX_COMPILER}; install "
                        "libstdc++-arm-none-eabi-newlib")
  endif()
  list(GET cxx_headers 0 cxx_headers)
  string(APPEND CMAKE_CXX_FLAGS_INIT " -isystem ${cxx_headers} -isystem ${cxx_headers}/arm-none-eabi")
endif()
