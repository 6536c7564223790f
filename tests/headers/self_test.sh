#!/usr/bin/env bash
# Proves that check_alone.sh refuses a header that leans on another, one without a guard, and an empty folder.
#
#   self_test.sh CHECK_ALONE COMPILER WORK_DIR
set -euo pipefail
check=$1
compiler=$2
work=$3
rm -rf "$work"
mkdir -p "$work/tepor/base"

expect() { # expect WHAT STATUS PATTERN
    local status=0 text
    text=$("$check" "$work" "$compiler" -std=c++20 2>&1) || status=$?
    if [ "$status" -ne "$2" ] || ! grep -q "$3" <<<"$text"; then
        printf '%s: status %s, expected %s with "%s"\n%s\n' "$1" "$status" "$2" "$3" "$text"
        exit 1
    fi
}

expect "an empty folder" 1 "nothing was checked"
printf '#pragma once\n#include <vector>\nusing numbers = std::vector<double>;\n' >"$work/tepor/base/numbers.hpp"
expect "a good header" 0 "1 headers compile alone"
printf '#pragma once\ninline numbers none() { return {}; }\n' >"$work/tepor/base/leaning.hpp"
expect "a header that leans on another" 1 "base/leaning.hpp does not compile alone"
rm "$work/tepor/base/leaning.hpp"
printf 'struct Unguarded {};\n' >"$work/tepor/base/unguarded.hpp"
expect "a header without a guard" 1 "base/unguarded.hpp does not compile alone"
rm -rf "$work"
