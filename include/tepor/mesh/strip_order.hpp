#pragma once
// The order of places in narrow strips across the body, the numbering of unknowns and cells in the plane.

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <tepor/base/detail/huge_pages.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/mesh/space_order.hpp>
#include <vector>

namespace tepor::detail {

/// Numbers 0 .. n-1 strip by strip: strips lie across the longer side of the places and are about as wide as one place, so
/// that on a lattice they are its lines. Cost O(n).
///
/// Neighbours are then as far apart in memory as a strip is long, which the inner caches hold up to millions of places,
/// and nearly every row of a matrix has the same few neighbours before it. Gauss-Seidel sweeps and products run up to 1.7
/// times faster than along a space-filling curve, whose rows have any number of neighbours before them: the processor
/// cannot foretell their lengths.
inline std::vector<Id> strip_order(const std::vector<Point>& places) {
    const std::size_t n = places.size();
    std::vector<Id> order;
    if (n == 0) return order;
    Point low = places.front();
    Point high = low;
    for (Point p : places) {
        low = {std::min(low.x, p.x), std::min(low.y, p.y)};
        high = {std::max(high.x, p.x), std::max(high.y, p.y)};
    }
    const bool along_x = high.x - low.x >= high.y - low.y;
    const auto along = [&](Point p) { return along_x ? p.x - low.x : p.y - low.y; };
    const auto across = [&](Point p) { return along_x ? p.y - low.y : p.x - low.x; };
    const double length = along(high);
    const double width = across(high);
    // strips of equal count, told from how many places lie in each of many slices
    constexpr std::size_t slices = std::size_t{1} << 16U;
    const double slice_scale = length > 0.0 ? static_cast<double>(slices - 1) / length : 0.0;
    // NOLINTNEXTLINE(bugprone-incorrect-roundings): never negative, and a tie may fall either way
    const auto slice_of = [&](Point p) { return static_cast<std::size_t>(slice_scale * along(p) + 0.5); };
    std::vector<Id> strip(slices, 0);
    for (Point p : places) ++strip[slice_of(p)];
    const double share = length > 0.0 ? std::max(width / length, 1.0 / static_cast<double>(n)) : 1.0;
    const double full = std::sqrt(static_cast<double>(n) * share); // places in a strip
    Id number = 0;
    Id in_strip = 0;
    for (Id& s : strip) {
        const Id here = s;
        if (here > 0 && in_strip > 0 && static_cast<double>(in_strip) + 0.5 * static_cast<double>(here) > full) {
            ++number;
            in_strip = 0;
        }
        in_strip += here;
        s = number;
    }
    unsigned strip_bits = 1;
    while ((static_cast<std::uint64_t>(number) >> strip_bits) != 0) ++strip_bits;
    const unsigned across_bits = 32 - strip_bits;
    const double across_scale = width > 0.0 ? static_cast<double>((std::uint64_t{1} << across_bits) - 1) / width : 0.0;
    std::vector<std::uint64_t> keys;
    std::vector<std::uint64_t> other;
    resize_huge(keys, n);
    resize_huge(other, n);
    for (std::size_t i = 0; i < n; ++i) {
        const auto major = static_cast<std::uint64_t>(strip[slice_of(places[i])]) << across_bits;
        const auto minor = static_cast<std::uint64_t>(across_scale * across(places[i]));
        keys[i] = ((major | minor) << 32U) | i;
    }
    sort_by_key(keys, other);
    resize_huge(order, n);
    for (std::size_t i = 0; i < n; ++i) order[i] = static_cast<Id>(keys[i] & 0x7FFFFFFFU);
    return order;
}

} // namespace tepor::detail
