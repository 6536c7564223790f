#!/usr/bin/env bash
# Runs ctest in a build folder and ends with the closing line `N passed, M failed`, alone on its line.
#
#   count_tests.sh BUILD_DIR [CTEST ARGUMENTS...]
#
# Fails when a test failed and when no test ran.
set -euo pipefail
here=$(cd "$(dirname "${BASH_SOURCE[0]}")" && pwd)
dir=$1
shift

status=0 passed=0 failed=0
rm -f "$dir/results.xml"
ctest --test-dir "$dir" -j "$(nproc 2>/dev/null || echo 2)" --output-on-failure --no-tests=error \
    --output-junit "$dir/results.xml" --test-output-size-passed 1000000 --test-output-size-failed 1000000 \
    "$@" </dev/null || status=$?
if [ -e "$dir/results.xml" ]; then
    read -r passed failed < <(awk -f "$here/count_tests.awk" "$dir/results.xml")
fi
[ "$status" -eq 0 ] || [ "$failed" -gt 0 ] || failed=1
if [ "$passed" -eq 0 ] && [ "$failed" -eq 0 ]; then
    echo "no test ran" >&2
    failed=1
fi
echo
echo "$passed passed, $failed failed"
[ "$failed" -eq 0 ]
