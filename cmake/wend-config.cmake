# find_package(wend) gives the target wend::wend.
include(CMakeFindDependencyMacro)
find_dependency(Eigen3)
include(${CMAKE_CURRENT_LIST_DIR}/wend-targets.cmake)
