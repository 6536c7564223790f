#pragma once
// Pictures of a demonstration: written to the folder named by TEPOR_PICTURES, which `cmake/run demo` sets; else left out.

#include <cstdlib>
#include <fmt/core.h>
#include <string>
#include <tepor/output/svg.hpp>

namespace demo {

inline void picture(const std::string& name, const std::string& svg) {
    const char* folder = std::getenv("TEPOR_PICTURES");
    if (!folder || !*folder) return;
    const std::string path = fmt::format("{}/{}.svg", folder, name);
    tepor::write_svg(path, svg);
    fmt::print("picture: {}\n", path);
}

} // namespace demo
