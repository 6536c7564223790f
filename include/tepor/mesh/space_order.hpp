#pragma once
// The order of places along Hilbert's curve: neighbours in the plane mostly become neighbours in memory.

#include <algorithm>
#include <cstdint>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <vector>

namespace tepor::detail {

/// Position along Hilbert's curve through a 2^16 x 2^16 grid.
/// Source: D. Hilbert, Math. Annalen 38 (1891) 459-460; the bitwise walk is from memory.
inline std::uint32_t hilbert_key(std::uint32_t x, std::uint32_t y) noexcept {
    std::uint32_t key = 0;
    for (std::uint32_t s = 1U << 15U; s > 0; s >>= 1U) {
        const std::uint32_t rx = (x & s) != 0 ? 1U : 0U;
        const std::uint32_t ry = (y & s) != 0 ? 1U : 0U;
        key = (key << 2U) | ((3U * rx) ^ ry);
        if (ry == 0) {
            if (rx == 1) {
                x = 0xFFFFU - x;
                y = 0xFFFFU - y;
            }
            std::swap(x, y);
        }
    }
    return key;
}

/// Sorts by the upper 32 bits, keeping the order of equal ones (radix sort); `other` is work space of the same size. What is in
/// order already costs one look.
inline void sort_by_key(std::vector<std::uint64_t>& keys, std::vector<std::uint64_t>& other) {
    std::size_t count[3][2048] = {};
    bool sorted = true;
    std::uint64_t before = 0;
    for (const std::uint64_t k : keys) {
        ++count[0][(k >> 32U) & 2047U];
        ++count[1][(k >> 43U) & 2047U];
        ++count[2][k >> 54U];
        sorted = sorted && before >> 32U <= k >> 32U;
        before = k;
    }
    if (sorted) return;
    for (unsigned pass = 0; pass < 3; ++pass) {
        const unsigned shift = 32 + 11 * pass;
        std::size_t* const place = count[pass];
        if (place[(keys.front() >> shift) & 2047U] == keys.size()) continue; // all have the same digit
        std::size_t begin = 0;
        for (int digit = 0; digit < 2048; ++digit) {
            const std::size_t here = place[digit];
            place[digit] = begin;
            begin += here;
        }
        for (const std::uint64_t k : keys) other[place[(k >> shift) & 2047U]++] = k;
        keys.swap(other);
    }
}

/// Numbers 0 .. n-1 in the order of Hilbert's curve through the places; equal keys stay in order of number.
/// Cost O(n) (radix sort).
inline std::vector<Id> space_order(const std::vector<Point>& places) {
    const std::size_t n = places.size();
    std::vector<Id> order(n);
    if (n == 0) return order;
    Point low = places.front();
    Point high = low;
    for (Point p : places) {
        low = {std::min(low.x, p.x), std::min(low.y, p.y)};
        high = {std::max(high.x, p.x), std::max(high.y, p.y)};
    }
    const double span = std::max(high.x - low.x, high.y - low.y);
    const double scale = span > 0.0 ? 65535.0 / span : 0.0;
    std::vector<std::uint64_t> keys(n);
    std::vector<std::uint64_t> other(n);
    for (std::size_t i = 0; i < n; ++i) {
        const auto x = static_cast<std::uint32_t>(scale * (places[i].x - low.x));
        const auto y = static_cast<std::uint32_t>(scale * (places[i].y - low.y));
        keys[i] = (static_cast<std::uint64_t>(hilbert_key(x, y)) << 32U) | i;
    }
    sort_by_key(keys, other);
    for (std::size_t i = 0; i < n; ++i) order[i] = static_cast<Id>(keys[i] & 0x7FFFFFFFU);
    return order;
}

} // namespace tepor::detail
