# An Arm Cortex-M3: no floating-point unit, all arithmetic on floats is calls into libgcc.
include(${CMAKE_CURRENT_LIST_DIR}/toolchain-cortex-m.cmake)
foreach(language IN ITEMS C CXX ASM)
  set(CMAKE_${language}_FLAGS_INIT "-mcpu=cortex-m3 -mthumb")
endforeach()
