// Signs of the predicates against integer arithmetic, where the answer is exact.

#include <cstdint>
#include <doctest/doctest.h>
#include <random>
#include <tepor/mesh/predicates.hpp>
#include <tests/support/scale.hpp>

using namespace tepor;

namespace {
__extension__ typedef __int128 Wide;

int sign(Wide v) {
    return v > 0 ? 1 : v < 0 ? -1 : 0;
}
int sign(double v) {
    return v > 0.0 ? 1 : v < 0.0 ? -1 : 0;
}

struct Whole {
    std::int64_t x;
    std::int64_t y;
};

int exact_orient(Whole a, Whole b, Whole c) {
    return sign(static_cast<Wide>(a.x - c.x) * (b.y - c.y) - static_cast<Wide>(a.y - c.y) * (b.x - c.x));
}

/// Exact for differences below 2^29.
int exact_in_circle(Whole a, Whole b, Whole c, Whole d) {
    const auto lift = [&](Whole p) {
        return static_cast<Wide>(p.x - d.x) * (p.x - d.x) + static_cast<Wide>(p.y - d.y) * (p.y - d.y);
    };
    const auto area = [&](Whole p, Whole q) {
        return static_cast<Wide>(p.x - d.x) * (q.y - d.y) - static_cast<Wide>(q.x - d.x) * (p.y - d.y);
    };
    return sign(lift(a) * area(b, c) + lift(b) * area(c, a) + lift(c) * area(a, b));
}

/// whole numbers times 2^-k plus an offset that keeps them exact doubles but makes their differences cancel
Point place(Whole p, double scale) {
    return {static_cast<double>(p.x) * scale, static_cast<double>(p.y) * scale};
}
} // namespace

TEST_CASE("orientation of nearly collinear points has the exact sign") {
    std::mt19937_64 random(11);
    std::uniform_int_distribution<std::int64_t> big(-(1LL << 50), 1LL << 50);
    std::uniform_int_distribution<std::int64_t> small(-2, 2);
    int zeros = 0;
    for (long i = 0; i < test::scaled(20000, 1000); ++i) {
        const Whole a{big(random), big(random)};
        const Whole b{big(random), big(random)};
        // near the line through a and b
        const Whole c{(a.x + b.x) / 2 + small(random), (a.y + b.y) / 2 + small(random)};
        const int exact = exact_orient(a, b, c);
        zeros += exact == 0 ? 1 : 0;
        CHECK(sign(detail::orient(place(a, 0x1p-50), place(b, 0x1p-50), place(c, 0x1p-50))) == exact);
        CHECK(sign(detail::orient(place(b, 1.0), place(a, 1.0), place(c, 1.0))) == -exact);
    }
    CHECK(zeros > 0);
}

TEST_CASE("in-circle of nearly cocircular points has the exact sign") {
    std::mt19937_64 random(12);
    std::uniform_int_distribution<std::int64_t> centre(-(1LL << 27), 1LL << 27);
    std::uniform_int_distribution<std::int64_t> part(1, 4000);
    std::uniform_int_distribution<int> nudge(-1, 1);
    int zeros = 0;
    int count = 0;
    for (long i = 0; i < test::scaled(20000, 1000); ++i) {
        // Four of the eight whole points (+-u, +-v), (+-v, +-u) on one circle, the last one nudged.
        const std::int64_t u = part(random) * 30000;
        const std::int64_t v = part(random) * 30000;
        const Whole m{centre(random), centre(random)};
        const Whole a{m.x + u, m.y + v};
        const Whole b{m.x - v, m.y + u};
        const Whole c{m.x - u, m.y - v};
        Whole d{m.x + v, m.y - u};
        d.x += nudge(random);
        d.y += nudge(random);
        if (exact_orient(a, b, c) <= 0) continue;
        const int exact = exact_in_circle(a, b, c, d);
        zeros += exact == 0 ? 1 : 0;
        ++count;
        CHECK(sign(detail::in_circle(place(a, 1.0), place(b, 1.0), place(c, 1.0), place(d, 1.0))) == exact);
        CHECK(sign(detail::in_circle(place(b, 0x1p-40), place(c, 0x1p-40), place(a, 0x1p-40), place(d, 0x1p-40))) ==
              exact);
    }
    CHECK(zeros > 10);
    CHECK(count > 100);
}

TEST_CASE("in-circle is exact when the differences of the coordinates themselves round") {
    // Corners of rectangles with decimal coordinates are cocircular as doubles whatever their rounding.
    for (double w : {0.1, 0.3, 0.7})
        for (double h : {1e-9, 0.013, 123.456})
            for (double x : {-0.6, 1e-17, 0.2, 1e3}) {
                const Point a{x, -0.1};
                const Point b{x + w, -0.1};
                const Point c{x + w, -0.1 + h};
                const Point d{x, -0.1 + h};
                CHECK(detail::in_circle(a, b, c, d) == 0.0);
                const Point in{std::nextafter(d.x, d.x + 1.0), d.y};
                const Point out{std::nextafter(d.x, d.x - 1.0), d.y};
                CHECK(detail::in_circle(a, b, c, in) > 0.0);
                CHECK(detail::in_circle(a, b, c, out) < 0.0);
            }
}
