# The reference: `cmake --build <build> --target reference` puts it into <build>/reference/html. Where tests are, it
# is one. Both fail when a public name is not documented, or a docstring is not sound.

find_program(WEND_DOXYGEN doxygen DOC "Makes the reference; without it there is none")
mark_as_advanced(WEND_DOXYGEN)

if(WEND_DOXYGEN)
  configure_file(${PROJECT_SOURCE_DIR}/cmake/Doxyfile.in ${PROJECT_BINARY_DIR}/reference/Doxyfile @ONLY)
  # The folder goes first, so that no page is left of what is gone.
  set(wend_make_reference ${CMAKE_COMMAND} -E rm -rf ${PROJECT_BINARY_DIR}/reference/html
      COMMAND ${WEND_DOXYGEN} ${PROJECT_BINARY_DIR}/reference/Doxyfile)
  add_custom_target(reference
                    COMMAND ${wend_make_reference}
                    COMMENT "The reference, in ${PROJECT_BINARY_DIR}/reference/html"
                    VERBATIM)
  if(WEND_TESTS)
    # By the exit code, which is not 0 after a warning (WARN_AS_ERROR), and by what it says, should that be set aside.
    add_test(NAME reference COMMAND ${WEND_DOXYGEN} ${PROJECT_BINARY_DIR}/reference/Doxyfile)
    set_tests_properties(reference PROPERTIES FAIL_REGULAR_EXPRESSION "warning:;error:" TIMEOUT 300)
  endif()
else()
  add_custom_target(reference
                    COMMAND ${CMAKE_COMMAND} -E echo
                            "wend: the reference needs Doxygen, and found none; install it and configure anew"
                    COMMAND ${CMAKE_COMMAND} -E false
                    VERBATIM)
endif()
