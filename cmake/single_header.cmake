# cmake -DFROM=include -DTO=build/single/wend.hpp -P cmake/single_header.cmake - everything that runs on a robot in one file:
# wend/wend.hpp with each header of ours put where it is first included. The same tree gives the same bytes.
cmake_minimum_required(VERSION 3.22)

set(system_includes "")
set(body "")
set(seen "")

# Takes a header apart line by line. Semicolons and brackets mean something to CMake's lists, so there are no lists here.
function(take header)
  if(" ${seen} " MATCHES " ${header} ")
    return()
  endif()
  set(seen "${seen} ${header}")
  file(READ "${FROM}/${header}" rest)
  set(body "${body}\n// --- ${header}\n")
  while(NOT rest STREQUAL "")
    string(FIND "${rest}" "\n" end)
    string(SUBSTRING "${rest}" 0 ${end} line)
    math(EXPR next "${end} + 1")
    string(SUBSTRING "${rest}" ${next} -1 rest)
    if(line MATCHES "^#include \"(wend/[^\"]*)\"")
      take("${CMAKE_MATCH_1}")
    elseif(line MATCHES "^#include <[^>]*>")
      string(FIND "${system_includes}" "${CMAKE_MATCH_0}\n" known)
      if(known EQUAL -1)
        set(system_includes "${system_includes}${CMAKE_MATCH_0}\n")
      endif()
    elseif(NOT line STREQUAL "#pragma once" AND NOT line MATCHES "^// wend/.*\\.hpp - ")
      set(body "${body}${line}\n")
    endif()
  endwhile()
  set(seen "${seen}" PARENT_SCOPE)
  set(body "${body}" PARENT_SCOPE)
  set(system_includes "${system_includes}" PARENT_SCOPE)
endfunction()

take(wend/wend.hpp)
file(READ "${FROM}/../LICENSE" license)
file(CONFIGURE OUTPUT "${TO}" @ONLY CONTENT
     "// wend.hpp - everything of wend that runs on a robot, in one file. Made from the headers: change those instead.
#pragma once

/*
@license@*/

@system_includes@@body@")
