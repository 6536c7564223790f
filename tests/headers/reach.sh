#!/usr/bin/env bash
# Code that only some bodies need stays out of programs that have none of them: a wall in 1D compiles no solver of 2D
# systems, header-only. A plate in 2D does, or the names below would be looked for in vain.
#
#   reach.sh SOURCES COMPILER FLAGS...      SOURCES holds line.cpp and plane.cpp
set -euo pipefail
sources=$1 compiler=$2
shift 2
object=$(mktemp) && trap 'rm -f "$object"' EXIT

solvers='tepor::(Multigrid|SparseCholesky|detail::NestedDissection|detail::OwnPlaneSolver)::'
failed=0
for source in line plane; do
    "$compiler" "$@" -O0 -c "$sources/$source.cpp" -o "$object"
    found=$(nm -C "$object" | grep -E "$solvers" || true)
    if [ "$source" = line ] && [ -n "$found" ]; then
        printf 'a wall in 1D compiles solvers of 2D systems:\n%s\n' "$(head -5 <<<"$found")"
        failed=1
    elif [ "$source" = plane ] && [ -z "$found" ]; then
        echo 'a plate in 2D seems to do without a solver: the names in this script are out of date'
        failed=1
    fi
done
exit $failed
