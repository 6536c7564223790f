#pragma once
// Cost over size as a picture with logarithmic axes, drawn with the library's own picture parts.

#if __has_include(<fmt/format.h>)
#define TEPOR_BENCH_PICTURES 1
#include <tepor/output/picture_style.hpp>
#include <tepor/output/svg.hpp>
#endif
#include <algorithm>
#include <cmath>
#include <string>
#include <utility>
#include <vector>

namespace bodies {

#if defined(TEPOR_BENCH_PICTURES)
/// `cost` pairs sizes with milliseconds. @return whether the file was written
inline bool draw_cost(const std::string& path, const std::vector<std::pair<double, double>>& cost) {
    if (cost.empty()) return false;
    constexpr double width = 720.0, height = 460.0, left = 80.0, right = 690.0, top = 50.0, bottom = 400.0;
    double low = 1e300, high = 0.0;
    for (const auto& [n, ms] : cost) {
        low = std::min(low, ms);
        high = std::max(high, ms);
    }
    const double x0 = std::floor(std::log10(cost.front().first) + 1e-9), x1 = std::ceil(std::log10(cost.back().first));
    const double y0 = std::floor(std::log10(low)), y1 = std::ceil(std::log10(high));
    const auto x = [&](double n) { return left + (right - left) * (std::log10(n) - x0) / (x1 - x0); };
    const auto y = [&](double ms) { return bottom - (bottom - top) * (std::log10(ms) - y0) / (y1 - y0); };
    tepor::detail::Svg svg(width, height, "steady(body), linear triangles: processor time over size");
    for (double e = x0; e <= x1 + 0.5; e += 1.0) {
        svg.line(x(std::pow(10.0, e)), top, x(std::pow(10.0, e)), bottom, "#dddddd", 1.0);
        svg.text(x(std::pow(10.0, e)), bottom + 20.0, tepor::detail::tick_text(std::pow(10.0, e)), "middle", 13.0);
    }
    for (double e = y0; e <= y1 + 0.5; e += 1.0) {
        svg.line(left, y(std::pow(10.0, e)), right, y(std::pow(10.0, e)), "#dddddd", 1.0);
        svg.text(left - 8.0, y(std::pow(10.0, e)) + 5.0, tepor::detail::tick_text(std::pow(10.0, e)), "end", 13.0);
    }
    svg.text(0.5 * (left + right), bottom + 44.0, "unknowns", "middle", 14.0);
    svg.text(left, top - 10.0, "ms", "end", 14.0);
    std::string curve;
    for (const auto& [n, ms] : cost) curve += fmt::format("{}{:.1f} {:.1f}", curve.empty() ? 'M' : 'L', x(n), y(ms));
    svg.path(curve, "none", tepor::detail::stroke_of(0).colour, 2.0);
    for (const auto& [n, ms] : cost) svg.rect(x(n) - 3.0, y(ms) - 3.0, 6.0, 6.0, tepor::detail::stroke_of(0).colour);
    const auto& [n, ms] = cost.back();
    svg.label(x(n) - 8.0, y(ms) - 10.0, fmt::format("{:.1f} s at {:.1f} million unknowns", 1e-3 * ms, 1e-6 * n), "end",
              13.0);
    tepor::write_svg(path, std::move(svg).done());
    return true;
}
#else
inline bool draw_cost(const std::string&, const std::vector<std::pair<double, double>>&) {
    return false; // pictures need fmt
}
#endif

} // namespace bodies
