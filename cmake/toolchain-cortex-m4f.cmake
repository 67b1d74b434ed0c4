# An Arm Cortex-M4F: single-precision arithmetic and square roots in hardware.
include(${CMAKE_CURRENT_LIST_DIR}/toolchain-cortex-m.cmake)
foreach(language IN ITEMS C CXX ASM)
  set(CMAKE_${language}_FLAGS_INIT "-mcpu=cortex-m4 -mthumb -mfpu=fpv4-sp-d16 -mfloat-abi=hard")
endforeach()
