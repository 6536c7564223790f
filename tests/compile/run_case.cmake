# One case of what may not compile.
#
#   cmake -D CXX=<compiler> -D FLAGS=<a;list> -D CASE=<file.cpp> -P run_case.cmake
#
# The first line of the file is `// expect: <regular expression>`. The file must compile as it stands; with TEPOR_WRONG
# defined it must be refused, and the compiler's text must match the pattern, so that a typo does not count as success.
# `|` parts alternatives, for compilers word things differently.

cmake_minimum_required(VERSION 3.24)

file(STRINGS "${CASE}" first LIMIT_COUNT 1)
if(NOT first MATCHES "^// expect: (.+)$")
    message(FATAL_ERROR "${CASE}: the first line is not `// expect: <pattern>`")
endif()
set(pattern "${CMAKE_MATCH_1}")

file(READ "${CASE}" text)
if(NOT text MATCHES "TEPOR_WRONG")
    message(FATAL_ERROR "${CASE}: no TEPOR_WRONG branch")
endif()

set(compile "${CXX}" -std=c++20 -fsyntax-only ${FLAGS})
execute_process(COMMAND ${compile} "${CASE}" RESULT_VARIABLE right OUTPUT_VARIABLE out ERROR_VARIABLE err)
if(NOT right EQUAL 0)
    message(FATAL_ERROR "${CASE}: the right branch does not compile\n${out}${err}")
endif()

execute_process(COMMAND ${compile} -DTEPOR_WRONG "${CASE}" RESULT_VARIABLE wrong OUTPUT_VARIABLE out ERROR_VARIABLE err)
if(wrong EQUAL 0)
    message(FATAL_ERROR "${CASE}: the wrong branch compiles")
endif()
if(NOT "${out}${err}" MATCHES "${pattern}")
    message(FATAL_ERROR "${CASE}: refused, but the compiler's text does not match '${pattern}'\n${out}${err}")
endif()
