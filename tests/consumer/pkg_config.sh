#!/usr/bin/env bash
# A C program built by what pkg-config says of the installed, moved folder: against the shared library, and against the static one.
# usage: pkg_config.sh WORK CC SOURCE
set -euo pipefail
work=$1 cc=$2 source=$3
pc=$(find "$work/moved" -name tepor.pc -print -quit)
[ -n "$pc" ] || { echo "no tepor.pc was installed"; exit 1; }
folder=$(dirname "$pc")
library=$(dirname "$folder")
export PKG_CONFIG_PATH=$folder
mkdir -p "$work/pkg_config"
echo "version $(pkg-config --modversion tepor)"
eval "flags=($(pkg-config --cflags --libs tepor))" # pkg-config escapes the blank in the folder's name
"$cc" -std=c99 "$source" -o "$work/pkg_config/shared" "${flags[@]}" -lm
LD_LIBRARY_PATH=$library "$work/pkg_config/shared"
[ -e "$library/libtepor.so.1" ] || { echo "no libtepor.so.1 beside libtepor.so"; exit 1; }
eval "flags=($(pkg-config --cflags tepor))"
eval "private=($(pkg-config --static --libs-only-l tepor))"
static=()
for flag in "${private[@]}"; do [ "$flag" = -ltepor ] && static+=("$library/libtepor.a") || static+=("$flag"); done
"$cc" -std=c99 "$source" -o "$work/pkg_config/static" "${flags[@]}" "${static[@]}"
"$work/pkg_config/static"
