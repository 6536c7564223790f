#!/usr/bin/env bash
# Checks that every header compiles alone, header-only, twice included, side by side on all cores.
#
#   check_alone.sh INCLUDE_DIR COMPILER [FLAGS...]
#
# Prints the headers that do not, with the compiler's text; fails when there is any, or when there is no header at all.
# Files in impl/ come along with the header they belong to, and stand first in the sources of tepor::compiled.
set -euo pipefail
include_dir=$1
shift

check_one() {
    local header=$1
    shift
    local text
    if ! text=$(printf '#include <%s>\n#include <%s>\n' "$header" "$header" | "$@" -fsyntax-only -x c++ - 2>&1); then
        printf '%s does not compile alone:\n%s\n' "$header" "$text"
        return 1
    fi
    if [ -n "$text" ]; then
        printf '%s compiles alone with warnings:\n%s\n' "$header" "$text"
        return 1
    fi
}
export -f check_one

cd "$include_dir"
mapfile -t headers < <(find tepor \( -name '*.hpp' -o -name '*.h' \) -not -path '*/impl/*' | sort)
count=${#headers[@]}
if [ "$count" -eq 0 ]; then
    echo "no header found in $include_dir: nothing was checked"
    exit 1
fi
status=0
printf '%s\0' "${headers[@]}" |
    xargs -0 -P "$(nproc)" -I '{}' bash -c 'check_one "$@"' check '{}' "$@" -I "$include_dir" || status=1
[ "$status" -eq 0 ] && echo "$count headers compile alone"
exit "$status"
