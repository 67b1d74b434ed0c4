# Install rules: headers, and a package for find_package(wend). Nothing in it depends on the processor, hence share/.

include(GNUInstallDirs)
include(CMakePackageConfigHelpers)

set(WEND_PACKAGE_DIR ${CMAKE_INSTALL_DATADIR}/cmake/wend)
write_basic_package_version_file(${PROJECT_BINARY_DIR}/wend-config-version.cmake COMPATIBILITY SameMinorVersion
                                 ARCH_INDEPENDENT)
install(DIRECTORY ${PROJECT_SOURCE_DIR}/include/wend DESTINATION ${CMAKE_INSTALL_INCLUDEDIR})
install(TARGETS wend EXPORT wend-targets INCLUDES DESTINATION ${CMAKE_INSTALL_INCLUDEDIR})
install(EXPORT wend-targets NAMESPACE wend:: DESTINATION ${WEND_PACKAGE_DIR})
install(FILES ${PROJECT_SOURCE_DIR}/cmake/wend-config.cmake ${PROJECT_BINARY_DIR}/wend-config-version.cmake
        DESTINATION ${WEND_PACKAGE_DIR})
install(FILES ${PROJECT_SOURCE_DIR}/LICENSE DESTINATION ${CMAKE_INSTALL_DATADIR}/licenses/wend)
