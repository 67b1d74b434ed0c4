# Every header compiles alone: one source for each, with nothing in it but that header, twice. Those that run on a robot
# compile as firmware does: no exceptions, no RTTI, and nothing of Eigen's that prints, allocates or needs alignment.
# Minutes of it, so it is not part of `all`: `sh cmake/matrix.sh headers`.

file(GLOB_RECURSE wend_headers CONFIGURE_DEPENDS RELATIVE ${PROJECT_SOURCE_DIR}/include
     ${PROJECT_SOURCE_DIR}/include/wend/*.hpp)

set(robot_sources)
set(lab_sources)
foreach(header IN LISTS wend_headers)
  set(source ${CMAKE_CURRENT_BINARY_DIR}/headers/${header}.cpp)
  file(CONFIGURE OUTPUT ${source} CONTENT "#include \"${header}\"\n#include \"${header}\"\n")
  if(header MATCHES "^wend/lab/")
    list(APPEND lab_sources ${source})
  else()
    list(APPEND robot_sources ${source})
  endif()
endforeach()

add_custom_target(headers)
foreach(side IN ITEMS robot lab)
  if(${side}_sources)
    add_library(headers_${side} OBJECT EXCLUDE_FROM_ALL ${${side}_sources})
    target_link_libraries(headers_${side} PRIVATE wend_own)
    target_compile_options(headers_${side} PRIVATE -Werror)
    add_dependencies(headers headers_${side})
  endif()
endforeach()
target_compile_options(headers_robot PRIVATE -fno-exceptions -fno-rtti)
target_compile_definitions(headers_robot PRIVATE EIGEN_NO_IO EIGEN_NO_MALLOC EIGEN_DONT_VECTORIZE)
