// The order of places in strips.
#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/mesh/strip_order.hpp>
#include <vector>

using namespace tepor;

TEST_CASE("a lattice given in any order is numbered line by line across its longer side") {
    std::vector<Point> places;
    for (int k = 0; k < 30 * 12; ++k) {
        const int shuffled = (k * 77 + 5) % (30 * 12); // 77 and 360 share no factor
        places.push_back({0.1 * (shuffled % 30), 0.1 * (shuffled / 30)});
    }
    const std::vector<Id> order = detail::strip_order(places);
    REQUIRE(order.size() == places.size());
    for (std::size_t i = 0; i < order.size(); ++i) {
        const Point p = places[static_cast<std::size_t>(order[i])];
        CAPTURE(i);
        CHECK(std::lround(p.x / 0.1) == static_cast<long>(i) / 12);
        CHECK(std::lround(p.y / 0.1) == static_cast<long>(i) % 12);
    }
}

TEST_CASE("every place comes once, also where all of them coincide or lie on a line") {
    for (const int kind : {0, 1, 2, 3}) {
        CAPTURE(kind);
        std::vector<Point> places;
        for (int k = 0; k < 500; ++k) {
            const double t = std::fmod(k * 0.618033988749895, 1.0);
            places.push_back({kind == 0 || kind == 2 ? 1.0 : t, kind == 0 || kind == 1 ? 2.0 : std::pow(t, 9.0)});
        }
        std::vector<Id> order = detail::strip_order(places);
        std::sort(order.begin(), order.end());
        for (std::size_t i = 0; i < order.size(); ++i) CHECK(order[i] == static_cast<Id>(i));
    }
    CHECK(detail::strip_order({}).empty());
}

TEST_CASE("keys are sorted by their upper half and equal ones keep their order, whatever digits they share") {
    for (const int kind : {0, 1, 2, 3, 4, 5}) {
        CAPTURE(kind);
        std::vector<std::uint64_t> keys;
        for (std::uint64_t k = 0; k < 3000; ++k) {
            const std::uint64_t mixed = (k * 2654435761U) & 0xFFFFFFFFU; // Knuth's multiplicative hash
            const std::uint64_t key = kind == 0   ? mixed                // all digits differ
                                      : kind == 1 ? mixed & 0x7FFU       // the lowest only
                                      : kind == 2 ? mixed & 0xFFC00000U  // the highest only
                                      : kind == 3 ? 77U                  // none
                                      : kind == 4 ? k / 3                // in order already
                                                  : mixed & (k % 4 == 3 ? 0xFFFFFFFFU : 0x7FFU); // most the same above
            keys.push_back((key << 32U) | k);
        }
        std::vector<std::uint64_t> expected = keys;
        std::stable_sort(expected.begin(), expected.end(),
                         [](std::uint64_t a, std::uint64_t b) { return a >> 32U < b >> 32U; });
        std::vector<std::uint64_t> other(keys.size());
        detail::sort_by_key(keys, other);
        CHECK(keys == expected);
    }
}
