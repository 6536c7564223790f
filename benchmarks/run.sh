#!/usr/bin/env bash
# Runs every benchmark of a build folder, prints their tables and gathers their CSV files in one.
#
#   benchmarks/run.sh FOLDER_OF_PROGRAMS [CSV]       the default CSV is FOLDER/ratios.csv
set -euo pipefail
root=$(cd "$(dirname "${BASH_SOURCE[0]}")/.." && pwd)
programs=$1
csv=${2:-$programs/ratios.csv}
parts=$programs/csv
mkdir -p "$parts"
rm -f "$parts"/*.csv
for source in "$root"/benchmarks/*.cpp; do
    name=$(basename "$source" .cpp)
    printf '\n==== %s\n' "$name"
    case $name in
    assembly | bodies | sweep | transient) "$programs/bench-$name" --csv "$parts/$name.csv" ;;
    *) "$programs/bench-$name" ;;
    esac
done
"$programs/bench-bodies" --picture "$programs/cost.svg" --memory 0 >/dev/null
"$root/benchmarks/include_cost.sh" "$parts/include_cost.csv"
{
    echo 'topic,entry,unknowns,least_ms,median_ms,ratio,asked'
    for part in "$parts"/*.csv; do tail -n +2 "$part"; done
} >"$csv"
printf '\nall figures are in %s, cost over size in %s\n' "$csv" "$programs/cost.svg"
