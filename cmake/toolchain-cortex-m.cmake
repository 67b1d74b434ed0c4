# What the Arm toolchain files share: arm-none-eabi-g++ with newlib, no operating system.
set(CMAKE_SYSTEM_NAME Generic)
set(CMAKE_SYSTEM_PROCESSOR arm)
set(CMAKE_C_COMPILER arm-none-eabi-gcc)
set(CMAKE_CXX_COMPILER arm-none-eabi-g++)
set(CMAKE_ASM_COMPILER arm-none-eabi-gcc)
set(CMAKE_TRY_COMPILE_TARGET_TYPE STATIC_LIBRARY)  # there is nothing that CMake's own test program could link with
set(CMAKE_FIND_ROOT_PATH_MODE_PROGRAM NEVER)

# Eigen is headers only, so the laptop's will do.
list(APPEND CMAKE_PREFIX_PATH /usr /usr/local /opt/homebrew)
