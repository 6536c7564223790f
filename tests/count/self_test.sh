#!/usr/bin/env bash
# Proves that cmake/scripts/count_tests.sh counts what ctest reports: run on a small project of known outcome.
#
#   self_test.sh COUNT_TESTS WORK_DIR
set -euo pipefail
count=$1
work=$2

# A test is a line of CMake; `say` prints what doctest would print.
plant() {
    rm -rf "$work"
    mkdir -p "$work/source"
    {
        echo 'cmake_minimum_required(VERSION 3.24)'
        echo 'project(count NONE)'
        echo 'enable_testing()'
        printf '%s\n' "$@"
    } >"$work/source/CMakeLists.txt"
    cmake -S "$work/source" -B "$work/build" >/dev/null
}
cases() { # cases NAME PASSED FAILED STATUS
    local line="[doctest] test cases: $(($2 + $3)) | $2 passed | $3 failed | 0 skipped"
    echo "add_test(NAME $1 COMMAND bash -c \"echo '$line'; exit $4\")"
}
expect() { # expect WHAT LAST_LINE STATUS
    local status=0 last
    last=$(bash "$count" "$work/build" 2>/dev/null | tail -n 1) || status=$?
    if [ "$last" != "$2" ] || [ "$status" -ne "$3" ]; then
        echo "$1: last line '$last', status $status; expected '$2', $3"
        exit 1
    fi
}

plain_good='add_test(NAME plain_good COMMAND ${CMAKE_COMMAND} -E true)'
plain_bad='add_test(NAME plain_bad COMMAND ${CMAKE_COMMAND} -E false)'

plant "$plain_good" "$(cases unit.a 12 0 0)" "$(cases unit.b 3 0 0)"
expect "all good" "16 passed, 0 failed" 0
plant "$plain_good" "$(cases unit.a 12 2 1)"
expect "two cases fail" "13 passed, 2 failed" 1
plant "$plain_good" "$plain_bad"
expect "a plain test fails" "1 passed, 1 failed" 1
plant "$(cases unit.a 12 0 139)"
expect "a crash after good cases" "12 passed, 1 failed" 1
plant "$(cases unit.a 0 0 0)"
expect "an executable without cases" "0 passed, 1 failed" 1
plant "$plain_good" 'add_test(NAME absent COMMAND /nonexistent/program)'
expect "a program that is not there" "1 passed, 1 failed" 1
plant ''
expect "no test at all" "0 passed, 1 failed" 1
rm -rf "$work"
