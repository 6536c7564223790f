// Cell borders along one axis of tiles.

#include <algorithm>
#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/base/error.hpp>
#include <tepor/mesh/tile_axis.hpp>
#include <tests/support/refused.hpp>
#include <vector>

using namespace tepor;
using detail::tile_borders;
using detail::TileAxis;
using test::check_refused;

namespace {

double length(const detail::TileBorders& b, Index k) {
    return b.at[static_cast<std::size_t>(k) + 1] - b.at[static_cast<std::size_t>(k)];
}

} // namespace

TEST_CASE("without anything said the cells are the fewest equal ones no longer than the size") {
    const auto b = tile_borders({{0.0, 0.3}, {}, {}}, 0.0, 1.0, 0.1, 1.3, "x");
    REQUIRE(b.cells() == 10);
    CHECK(b.at[3] == 0.3);
    CHECK(b.at.front() == 0.0);
    CHECK(b.at.back() == 1.0);
    for (Index k = 0; k < 10; ++k) CHECK(length(b, k) <= 0.1 + 1e-15);
    CHECK(tile_borders({{}, {}, {}}, 0.0, 1.0, 0.0999, 1.3, "x").cells() == 11);
    CHECK(tile_borders({{}, {}, {}}, 0.0, 1.0, 5.0, 1.3, "x").cells() == 1);
}

TEST_CASE(
    "cells beside a finer line are at most its size and grow by no more than the factor, across other lines too") {
    for (const double growth : {1.1, 1.3, 2.0}) {
        CAPTURE(growth);
        const auto b = tile_borders({{0.35, 0.72}, {}, {{.at = 0.3, .size = 0.002}}}, 0.0, 1.0, 0.05, growth, "x");
        const Index line = b.nearest(0.3);
        CHECK(b.at[static_cast<std::size_t>(line)] == 0.3);
        CHECK(b.at[static_cast<std::size_t>(b.nearest(0.35))] == 0.35);
        CHECK(length(b, line) <= 0.002 + 1e-15);
        CHECK(length(b, line - 1) <= 0.002 + 1e-15);
        for (Index k = 0; k < b.cells(); ++k) {
            CHECK(length(b, k) > 0.0);
            CHECK(length(b, k) <= 0.05 + 1e-14);
            // No cell is longer than the geometric growth from the line allows, but for the one that reaches the full size.
            const double away =
                k >= line ? b.at[static_cast<std::size_t>(k)] - 0.3 : 0.3 - b.at[static_cast<std::size_t>(k) + 1];
            CHECK(length(b, k) <= (0.002 + (growth - 1.0) * away) * 1.06);
        }
        CHECK(length(b, 0) > 0.05 / 2.0); // far away the full size is used
    }
}

TEST_CASE("a run between two finer lines mirrors itself") {
    const auto b = tile_borders({{}, {}, {{0.0, 0.01}, {1.0, 0.01}}}, 0.0, 1.0, 0.2, 1.4, "x");
    const auto n = b.at.size();
    for (std::size_t k = 0; k < n; ++k) CHECK(std::abs(b.at[k] + b.at[n - 1 - k] - 1.0) <= 4e-16);
    CHECK(length(b, 0) <= 0.01 + 1e-16);
    CHECK(length(b, 0) > 0.005);
}

TEST_CASE("a split has its own count and grading, and lines on its borders are kept exactly") {
    const auto b = tile_borders({{0.25, 0.5}, {{.from = 0.0, .to = 0.5, .cells = 4}}, {}}, 0.0, 1.0, 0.3, 1.3, "x");
    REQUIRE(b.cells() == 6);
    CHECK(b.at[1] == 0.125);
    CHECK(b.at[2] == 0.25);
    CHECK(b.at[4] == 0.5);
    const auto graded = tile_borders({{}, {{.from = 0.0, .to = 1.0, .cells = 5, .grading = finer_at_end(4.0)}}, {}},
                                     0.0, 1.0, 0.0, 1.3, "y");
    CHECK(std::abs(length(graded, 0) / length(graded, 4) - 4.0) <= 1e-12);
}

TEST_CASE("lines closer than a billionth of the box are one") {
    const auto b = tile_borders({{0.3, 0.3 + 1e-12, 0.1 + 0.2}, {}, {}}, 0.0, 1.0, 1.0, 1.3, "x");
    CHECK(b.cells() == 2);
}

TEST_CASE("contradictory or impossible axes are refused by name, value and remedy") {
    constexpr double nan = std::numeric_limits<double>::quiet_NaN();
    const auto make = [](TileAxis axis, double size = 0.1, double growth = 1.3) {
        return [=] { (void)tile_borders(axis, 0.0, 1.0, size, growth, "x"); };
    };
    check_refused(make({}, 0.0), ErrorCode::missing, "size", "give .size or a split_x");
    check_refused(make({}, -1.0), ErrorCode::bad_value, "size", "size = -1 m");
    check_refused(make({}, nan), ErrorCode::bad_value, "size", "size");
    check_refused(make({}, 0.1, 1.0), ErrorCode::bad_value, "growth", "1.01 <= growth");
    check_refused(make({{1.2}, {}, {}}), ErrorCode::outside, "the line x", "1.2 m lies outside the body");
    check_refused(make({{nan}, {}, {}}), ErrorCode::bad_value, "the line x", "not finite");
    check_refused(make({{}, {}, {{-0.5, 0.1}}}), ErrorCode::outside, "finer_x: at", "-0.5 m");
    check_refused(make({{}, {}, {{0.5, 0.0}}}), ErrorCode::bad_value, "finer_x", "expected > 0");
    check_refused(make({{}, {{0.0, 2.0, 3}}, {}}), ErrorCode::outside, "split_x: to", "2 m");
    check_refused(make({{}, {{0.5, 0.2, 3}}, {}}), ErrorCode::bad_value, "split_x", "expected from < to");
    check_refused(make({{}, {{0.0, 0.5, 0}}, {}}), ErrorCode::bad_value, "split_x", "at least 1");
    check_refused(make({{}, {{0.0, 0.5, 3, -2.0}}, {}}), ErrorCode::bad_value, "split_x", "grading");
    check_refused(make({{0.3}, {{0.0, 0.5, 4}}, {}}), ErrorCode::contradiction, "split_x", "x = 0.3 m lies inside");
    check_refused(make({{}, {{0.0, 0.5, 4}, {0.25, 1.0, 3}}, {}}), ErrorCode::contradiction, "split_x", "overlap");
    check_refused(make({{}, {{0.0, 0.5, 4}, {0.0, 0.5, 4}}, {}}), ErrorCode::contradiction, "split_x", "overlap");
    check_refused(make({{}, {}, {}}, 1e-12), ErrorCode::too_large, "tiles", "longer ones");
}
