// Graded runs of cells.

#include <cmath>
#include <doctest/doctest.h>
#include <tepor/mesh/grading.hpp>

using namespace tepor;

namespace {

double length(const std::vector<double>& at, std::size_t k) {
    return at[k + 1] - at[k];
}

} // namespace

TEST_CASE("a graded run has the stated ratio of its last cell to its first and equal ratios between neighbours") {
    for (const double ratio : {1e-3, 0.2, 1.0, 1.0 + 1e-9, 3.0, 500.0})
        for (const Index cells : {2, 3, 7, 40}) {
            CAPTURE(ratio);
            CAPTURE(cells);
            const auto at = detail::graded_fractions(cells, ratio);
            const auto n = static_cast<std::size_t>(cells);
            REQUIRE(at.size() == n + 1);
            CHECK(at.front() == 0.0);
            CHECK(at.back() == 1.0);
            CHECK(std::abs(length(at, n - 1) / length(at, 0) - ratio) <= 1e-11 * ratio);
            for (std::size_t k = 0; k + 1 < n; ++k)
                CHECK(std::abs(length(at, k + 1) / length(at, k) - std::pow(ratio, 1.0 / static_cast<double>(n - 1))) <=
                      1e-9);
        }
}

TEST_CASE("equal cells are equal fractions") {
    const auto at = detail::graded_fractions(8, Grading{});
    for (std::size_t k = 0; k <= 8; ++k) CHECK(at[k] == static_cast<double>(k) / 8.0);
}

TEST_CASE("finer_at_start and finer_at_end put the short cells where they say") {
    const auto start = detail::graded_fractions(5, finer_at_start(6.0));
    const auto end = detail::graded_fractions(5, finer_at_end(6.0));
    CHECK(std::abs(length(start, 4) / length(start, 0) - 6.0) <= 1e-12);
    CHECK(std::abs(length(end, 0) / length(end, 4) - 6.0) <= 1e-12);
    for (std::size_t k = 0; k <= 5; ++k) CHECK(std::abs(start[k] + end[5 - k] - 1.0) <= 4e-16);
}

TEST_CASE("the second half of a symmetric run mirrors the first, with the stated ratio of middle to end") {
    for (const Index cells : {3, 4, 5, 10, 11}) {
        CAPTURE(cells);
        const auto n = static_cast<std::size_t>(cells);
        const auto at = detail::graded_fractions(cells, finer_at_both_ends(4.0));
        const auto middle = detail::graded_fractions(cells, finer_in_the_middle(4.0));
        for (std::size_t k = 0; k <= n / 2; ++k) CHECK(at[n - k] == 1.0 - at[k]);
        CHECK(std::abs(length(at, n / 2) / length(at, 0) - 4.0) <= 1e-12);
        CHECK(std::abs(length(middle, 0) / length(middle, n / 2) - 4.0) <= 1e-12);
        for (std::size_t k = 0; k < n; ++k) CHECK(length(at, k) > 0.0);
    }
}

TEST_CASE("one or two symmetric cells cannot be graded and are equal") {
    CHECK(detail::graded_fractions(1, finer_at_start(9.0)) == std::vector<double>{0.0, 1.0});
    CHECK(detail::graded_fractions(2, finer_at_both_ends(9.0)) == std::vector<double>{0.0, 0.5, 1.0});
}
