# The consumer's CMakeLists.txt, copied by consume.sh. HOW says how it comes by wend; WEND_SOURCE is the source tree.
cmake_minimum_required(VERSION 3.22)
project(consumer LANGUAGES CXX)

if(HOW STREQUAL "add_subdirectory")
  add_subdirectory(${WEND_SOURCE} wend)
elseif(HOW STREQUAL "fetch_content")
  include(FetchContent)
  FetchContent_Declare(wend SOURCE_DIR ${WEND_SOURCE})  # from a copy on this machine: nothing is fetched in a test
  FetchContent_MakeAvailable(wend)
else()
  set(WEND_WANTED 0.1 CACHE STRING "the version of wend that is asked for")
  find_package(wend ${WEND_WANTED} REQUIRED)
endif()

add_executable(consumer main.cpp second.cpp)
target_link_libraries(consumer PRIVATE wend::wend)

# As a guest, wend builds, tests and installs nothing of its own, and leaves the consumer's flags alone.
if(TARGET wend_tests OR TARGET quickstart OR TARGET wend_own)
  message(FATAL_ERROR "wend builds more than itself in somebody else's project")
endif()
get_target_property(options wend::wend INTERFACE_COMPILE_OPTIONS)
get_target_property(definitions wend::wend INTERFACE_COMPILE_DEFINITIONS)
if(options OR definitions)
  message(FATAL_ERROR "wend hands on flags: ${options} ${definitions}")
endif()
install(TARGETS consumer)
