# Writes include/tepor/tepor.hpp anew: every public header of the numerical rooms, in the order of the house. Headers that
# have nothing in the namespace tepor itself serve the library alone; who needs them includes them.
# `cmake/run script front_door`; the test rooms.include_table says when it is due.

cmake_minimum_required(VERSION 3.24)

cmake_path(SET root NORMALIZE "${CMAKE_CURRENT_LIST_DIR}/../..")
set(text [[
#pragma once
// The front door: everything numerical. Printing and pictures are in <tepor/output/...>; this header defines nothing.

#include <tepor/version.hpp>
]])
foreach(room base quadrature element describe mesh assembly linear body flux field solve answers)
    file(GLOB headers RELATIVE "${root}/include" "${root}/include/tepor/${room}/*.hpp")
    list(SORT headers)
    if(headers)
        string(APPEND text "\n")
    endif()
    foreach(header IN LISTS headers)
        file(STRINGS "${root}/include/${header}" opens REGEX "^(namespace tepor {|#define TEPOR_)")
        if(NOT opens)
            continue()
        endif()
        string(APPEND text "#include <${header}>\n")
    endforeach()
endforeach()
file(CONFIGURE OUTPUT "${root}/include/tepor/tepor.hpp" CONTENT "${text}" @ONLY)
