#!/usr/bin/env bash
# Every block of C++ in the guide (cmake/docs/*.md) compiles, all of them in one function in the order of the pages.
# usage: guide_code.sh DOCS WORK CXX FLAGS...
set -euo pipefail
docs=$1 work=$2
shift 2
mkdir -p "$work"
{
    printf '#include <stdexcept>\n#include <tepor/output/answers.hpp>\n#include <tepor/output/svg.hpp>\n#include <tepor/tepor.hpp>\nusing namespace tepor;\nvoid guide();\nvoid guide() {\n'
    for page in grammar steady march bracket gradient size_for fit compact; do
        [ -e "$docs/$page.md" ] || { echo "no page $page.md" >&2; exit 1; }
        [ "$page" = compact ] && printf 'Body wall_linear = wall;\nwall_linear.replace("lining", Material{.conductivity = 1.2, .density = 2100, .specific_heat = 960});\n'
        awk -v page="$page" '/^```cpp/ { on = 1; print "#line " NR + 1 " \"" page ".md\""; next } /^```/ { on = 0 } on' "$docs/$page.md"
    done
    printf '}\n'
} >"$work/guide.cpp"
blocks=$(grep -c '^#line' "$work/guide.cpp")
[ "$blocks" -ge 10 ] || { echo "only $blocks blocks of code"; exit 1; }
"$@" -Wno-unused-variable -Wno-unused-but-set-variable -fsyntax-only "$work/guide.cpp"
echo "$blocks blocks of code compile"
