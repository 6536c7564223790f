#!/usr/bin/env bash
# What the headers cost to include: user time of the compiler over benchmarks/include_cost/*.cpp, beside a unit that
# includes and uses Eigen's sparse Cholesky.
#
#   benchmarks/include_cost.sh [CSV]        CXX, EIGEN (include folder) and RUNS (3) may be set
set -euo pipefail
root=$(cd "$(dirname "${BASH_SOURCE[0]}")/.." && pwd)
cxx=${CXX:-g++} eigen=${EIGEN:-/usr/include/eigen3} runs=${RUNS:-3} csv=${1:-}
object=$(mktemp) && folder=$(mktemp -d) && trap 'rm -rf "$object" "$folder"' EXIT

least() { # least SOURCE FLAGS...: user seconds, the least of the runs
    local source=$1 best='' took
    shift
    for ((run = 0; run < runs; run++)); do
        took=$( { TIMEFORMAT=%U; time "$cxx" -std=c++20 -O2 "$@" -isystem "$eigen" -I "$root/include" -c \
            "$root/benchmarks/include_cost/$source.cpp" -o "$object" 2>/dev/null; } 2>&1 )
        best=$(awk -v a="$took" -v b="${best:-$took}" 'BEGIN { print a < b ? a : b }')
    done
    echo "$best"
}

precompile() { # precompile FLAGS...: <tepor/tepor.hpp> read once into the folder; user seconds
    echo '#include <tepor/tepor.hpp>' >"$folder/all.hpp"
    { TIMEFORMAT=%U; time "$cxx" -std=c++20 -O2 "$@" -isystem "$eigen" -I "$root/include" -x c++-header \
        "$folder/all.hpp" -o "$folder/all.hpp.$suffix" 2>/dev/null; } 2>&1
}
case $("$cxx" --version) in *clang*) suffix=pch ;; *) suffix=gch ;; esac

bare=$(least bare)
[ -z "$csv" ] || echo 'topic,entry,unknowns,least_ms,median_ms,times_of_bare_unit,asked' >"$csv"
printf '\ninclude cost, %s -O2, user seconds; a unit with Eigen'"'"'s sparse Cholesky: %s\n' "$cxx" "$bare"
row() { # row NAME ASKED SOURCE FLAGS...
    local name=$1 asked=$2 seconds
    shift 2
    seconds=$(least "$@")
    awk -v n="$name" -v s="$seconds" -v b="$bare" -v a="$asked" \
        'BEGIN { printf "  %-50s %7.2f s %6.2f x   (to reach: %s)\n", n, s, s / b, a }'
    [ -z "$csv" ] || awk -v n="$name" -v s="$seconds" -v b="$bare" -v a="$asked" \
        'BEGIN { printf "\"include cost\",\"%s\",,%.0f,,%.2f,%s\n", n, 1000 * s, s / b, a }' >>"$csv"
}
row 'a wall in 1D' 1.0 line
row 'umbrella and a body in 2D' 1.5 plane
row 'umbrella and every verb' 2.0 verbs
row 'a wall in 1D, tepor::compiled' 0.5 line -DTEPOR_COMPILED
row 'umbrella and a body in 2D, tepor::compiled' 0.5 plane -DTEPOR_COMPILED
row 'umbrella and every verb, tepor::compiled' 0.5 verbs -DTEPOR_COMPILED
once=$(precompile -DTEPOR_COMPILED)
printf '  with tepor_precompile(), which takes %s s once for all sources of a target:\n' "$once"
row 'a wall in 1D, compiled, precompiled' 0.5 line -DTEPOR_COMPILED -include "$folder/all.hpp"
row 'umbrella and a body in 2D, compiled, precompiled' 0.5 plane -DTEPOR_COMPILED -include "$folder/all.hpp"
row 'umbrella and every verb, compiled, precompiled' 0.5 verbs -DTEPOR_COMPILED -include "$folder/all.hpp"
