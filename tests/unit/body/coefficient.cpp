// Coefficients on batches of points: tables short and long, and the values a range refuses.

#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/body/coefficient.hpp>
#include <tepor/describe/table.hpp>
#include <vector>

using namespace tepor;

namespace {

Coefficient tabled(const std::vector<TablePoint>& points) {
    return Coefficient(Table(points), std::vector<Id>(points.size(), -1), "conductivity", Range::positive);
}

} // namespace

TEST_CASE("a table reads the same whatever the number of its points") {
    // points put between on the lines of a table change nothing but its length
    const std::vector<TablePoint> few{{0.0, 1.0}, {400.0, 1.8}, {600.0, 1.2}, {1000.0, 2.4}};
    std::vector<TablePoint> many;
    for (std::size_t k = 0; k + 1 < few.size(); ++k)
        for (int part = 0; part < 8; ++part) {
            const double s = part / 8.0;
            const double a = few[k].value.number();
            many.push_back({few[k].at + s * (few[k + 1].at - few[k].at), a + s * (few[k + 1].value.number() - a)});
        }
    many.push_back(few.back());
    CHECK(many.size() > 16);
    const std::vector<double> T{-50.0, 0.0, 1e-9, 123.0, 400.0, 401.0, 599.0, 600.0, 999.0, 1000.0, 2000.0};
    const std::vector<double> zero(T.size(), 0.0);
    const Points at{static_cast<Index>(T.size()), T.data(), nullptr, zero.data(), zero.data()};
    std::vector<double> value[2], slope[2];
    for (const bool longer : {false, true}) {
        value[longer].resize(T.size());
        slope[longer].resize(T.size());
        const Coefficient k = tabled(longer ? many : few);
        CHECK_FALSE(k.evaluate(nullptr, {}, at, value[longer].data(), slope[longer].data()));
    }
    for (std::size_t i = 0; i < T.size(); ++i) {
        CAPTURE(T[i]);
        CHECK(std::abs(value[0][i] - value[1][i]) <= 1e-15 * value[1][i]);
        CHECK(std::abs(slope[0][i] - slope[1][i]) <= 1e-16);
    }
    CHECK(value[0][0] == 1.0);
    CHECK(slope[0][0] == 0.0);
    CHECK(value[0][10] == 2.4);
    CHECK(std::abs(value[0][5] - (1.8 - 0.6 / 200.0)) <= 1e-15);
}

TEST_CASE("a conductivity that is not a positive number is found wherever it stands in a batch") {
    const double infinity = std::numeric_limits<double>::infinity();
    for (const double bad : {0.0, -0.0, -1.0, -infinity, infinity, std::numeric_limits<double>::quiet_NaN(),
                             -std::numeric_limits<double>::denorm_min()})
        for (const std::size_t place : {std::size_t{0}, std::size_t{1}, std::size_t{30}, std::size_t{32}}) {
            CAPTURE(bad);
            CAPTURE(place);
            std::vector<TablePoint> points;
            std::vector<double> T;
            for (int i = 0; i < 33; ++i) {
                points.push_back({1.0 * i, 1.0});
                T.push_back(1.0 * i);
            }
            const std::vector<double> zero(T.size(), 0.0);
            std::vector<double> value(T.size());
            // the value comes in through a slot
            std::vector<Id> slots(points.size(), -1);
            slots[place] = 0;
            const Coefficient k(Table(points), slots, "conductivity", Range::positive);
            const Points at{static_cast<Index>(T.size()), T.data(), nullptr, zero.data(), zero.data()};
            const Fault fault = k.evaluate(&bad, {}, at, value.data(), nullptr);
            CHECK(fault);
            CHECK(fault.point <= static_cast<Index>(place));
        }
}
