#pragma once
// The numbers of an example to the last bit, for who wants to compare them: written to the file named by TEPOR_NUMBERS.

#include <cstdio>
#include <cstdlib>

namespace example {

inline void number(const char* name, double value) {
    const char* path = std::getenv("TEPOR_NUMBERS");
    std::FILE* file = path ? std::fopen(path, "a") : nullptr;
    if (!file) return;
    std::fprintf(file, "%s %a\n", name, value);
    std::fclose(file);
}

} // namespace example
