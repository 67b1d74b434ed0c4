# Flags of wend's own programs. They hang on targets that are never exported, so no consumer sees them.

if(PROJECT_IS_TOP_LEVEL)
  set(CMAKE_EXPORT_COMPILE_COMMANDS ON)
  if(NOT CMAKE_BUILD_TYPE AND NOT CMAKE_CONFIGURATION_TYPES)
    set(CMAKE_BUILD_TYPE Release CACHE STRING "Debug, Release, RelWithDebInfo or MinSizeRel" FORCE)
    set(CMAKE_CXX_FLAGS_RELEASE "-O2 -DNDEBUG" CACHE STRING "-O2 as firmware is built, and it compiles faster" FORCE)
  endif()
endif()
set(CMAKE_CXX_EXTENSIONS OFF)
find_package(Threads REQUIRED)  # the laptop side may run on several cores

add_library(wend_warnings INTERFACE)
# -Wno-psabi: g++ 12 remarks that rows of lanes are passed in another way than in g++ 4; nothing here is that old.
target_compile_options(wend_warnings INTERFACE -Wall -Wextra -Wpedantic -Wconversion -Wsign-conversion -Wshadow
                                               -Wdouble-promotion -Wold-style-cast $<$<CXX_COMPILER_ID:GNU>:-Wno-psabi>
                                               $<$<BOOL:${WEND_WERROR}>:-Werror>)

# The same bits on every machine: no a * b + c fused into one rounding where the processor happens to be able to
# (-ffp-contract), and no branch into the C library beside each square root (-fmath-errno).
add_library(wend_same_bits INTERFACE)
target_compile_options(wend_same_bits INTERFACE -ffp-contract=off -fno-math-errno)

add_library(wend_own INTERFACE)
target_link_libraries(wend_own INTERFACE wend::wend wend_warnings wend_same_bits Threads::Threads)

# MPFI, a general-purpose interval library, to compare with in one test and one benchmark. Without it they say that they
# left that out.
add_library(wend_mpfi INTERFACE)
find_path(WEND_MPFI_INCLUDE_DIR mpfi.h)
find_library(WEND_MPFI_LIBRARY mpfi)
find_library(WEND_MPFR_LIBRARY mpfr)
find_library(WEND_GMP_LIBRARY gmp)
mark_as_advanced(WEND_MPFI_INCLUDE_DIR WEND_MPFI_LIBRARY WEND_MPFR_LIBRARY WEND_GMP_LIBRARY)
if(WEND_MPFI_INCLUDE_DIR AND WEND_MPFI_LIBRARY AND WEND_MPFR_LIBRARY AND WEND_GMP_LIBRARY)
  target_compile_definitions(wend_mpfi INTERFACE WEND_HAS_MPFI)
  target_include_directories(wend_mpfi SYSTEM INTERFACE ${WEND_MPFI_INCLUDE_DIR})
  target_link_libraries(wend_mpfi INTERFACE ${WEND_MPFI_LIBRARY} ${WEND_MPFR_LIBRARY} ${WEND_GMP_LIBRARY})
endif()
