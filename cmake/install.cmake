# Install rules: headers, and packages for find_package(wend) and pkg-config. Nothing in them depends on the processor,
# hence share/. Also cpack's packages, and the single header.

include(GNUInstallDirs)
include(CMakePackageConfigHelpers)

file(GLOB_RECURSE wend_robot_headers CONFIGURE_DEPENDS ${PROJECT_SOURCE_DIR}/include/wend/*.hpp)
list(FILTER wend_robot_headers EXCLUDE REGEX "/wend/lab/")

set(WEND_PACKAGE_DIR ${CMAKE_INSTALL_DATADIR}/cmake/wend)
write_basic_package_version_file(${PROJECT_BINARY_DIR}/wend-config-version.cmake COMPATIBILITY SameMinorVersion
                                 ARCH_INDEPENDENT)
install(DIRECTORY ${PROJECT_SOURCE_DIR}/include/wend DESTINATION ${CMAKE_INSTALL_INCLUDEDIR})
install(TARGETS wend EXPORT wend-targets INCLUDES DESTINATION ${CMAKE_INSTALL_INCLUDEDIR})
install(EXPORT wend-targets NAMESPACE wend:: DESTINATION ${WEND_PACKAGE_DIR})
install(FILES ${PROJECT_SOURCE_DIR}/cmake/wend-config.cmake ${PROJECT_BINARY_DIR}/wend-config-version.cmake
        DESTINATION ${WEND_PACKAGE_DIR})
configure_file(${PROJECT_SOURCE_DIR}/cmake/wend.pc.in ${PROJECT_BINARY_DIR}/wend.pc @ONLY)
install(FILES ${PROJECT_BINARY_DIR}/wend.pc DESTINATION ${CMAKE_INSTALL_DATADIR}/pkgconfig)
install(FILES ${PROJECT_SOURCE_DIR}/LICENSE DESTINATION ${CMAKE_INSTALL_DATADIR}/licenses/wend)

# Packages: `cpack -G TGZ` and `cpack -G DEB` in the build folder.
set(CPACK_PACKAGE_VENDOR "the wend authors")
set(CPACK_PACKAGE_CONTACT "the wend authors <see README.md>")
set(CPACK_PACKAGE_DESCRIPTION_SUMMARY "${PROJECT_DESCRIPTION}: a header-only C++20 library")
set(CPACK_PACKAGE_FILE_NAME wend-${PROJECT_VERSION})
set(CPACK_RESOURCE_FILE_LICENSE ${PROJECT_SOURCE_DIR}/LICENSE)
set(CPACK_DEBIAN_PACKAGE_NAME libwend-dev)
set(CPACK_DEBIAN_PACKAGE_ARCHITECTURE all)
set(CPACK_DEBIAN_PACKAGE_SECTION libdevel)
set(CPACK_DEBIAN_PACKAGE_DEPENDS "libeigen3-dev (>= 3.4)")
set(CPACK_DEBIAN_FILE_NAME libwend-dev_${PROJECT_VERSION}_all.deb)
include(CPack)

# Everything that runs on a robot in one file: `cmake --build <build> --target single_header`.
add_custom_command(
  OUTPUT ${PROJECT_BINARY_DIR}/single/wend.hpp
  COMMAND ${CMAKE_COMMAND} -DFROM=${PROJECT_SOURCE_DIR}/include -DTO=${PROJECT_BINARY_DIR}/single/wend.hpp -P
          ${PROJECT_SOURCE_DIR}/cmake/single_header.cmake
  DEPENDS ${wend_robot_headers} ${PROJECT_SOURCE_DIR}/cmake/single_header.cmake
  COMMENT "Putting wend/wend.hpp into one file")
add_custom_target(single_header DEPENDS ${PROJECT_BINARY_DIR}/single/wend.hpp)
