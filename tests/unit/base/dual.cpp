// Dual numbers: values equal those of <cmath>, slopes equal central differences and closed forms.

#include <cmath>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/base/dual.hpp>
#include <tepor/base/numbers.hpp>

using namespace tepor;
using D1 = Dual<1>;
using D2 = Dual<2>;

namespace {

// Functions of one variable with points inside their range. The plain version is spelt with std::.
// clang-format off
#define ONE_VARIABLE(name, ...)                                                                                        \
    SUBCASE(#name) {                                                                                                   \
        for (const double x : {__VA_ARGS__}) {                                                                         \
            CAPTURE(x);                                                                                                \
            const D1 y = name(D1::variable(x));                                                                        \
            CHECK(y.value == std::name(x));                                                                            \
            const double h = 1e-5;                                                                                     \
            /* fourth-order central difference */                                                                      \
            const double d = (8.0 * (std::name(x + h) - std::name(x - h)) - (std::name(x + 2 * h) - std::name(x - 2 * h))) /\
                             (12.0 * h);                                                                               \
            CHECK(std::abs(y.slope[0] - d) <= 1e-9 * (1.0 + std::abs(d)));                                             \
        }                                                                                                              \
    }
// clang-format on

template <class F>
double difference(F f, double x) {
    const double h = 1e-5;
    return (8.0 * (f(x + h) - f(x - h)) - (f(x + 2.0 * h) - f(x - 2.0 * h))) / (12.0 * h);
}

// The law of a generic film as an engineer writes it: no prefixes, one return type.
struct FilmLaw {
    template <class Spot>
    auto operator()(const Spot& s) const {
        return 1.3 * pow(abs(s.temperature - s.fluid) + 1e-3, 0.25) +
               max(s.temperature, 0.0) * exp(-s.temperature / 300);
    }
};
struct DualSpot {
    D1 temperature;
    double fluid;
};

} // namespace

TEST_CASE("each function of a dual number has the value of <cmath> and the slope of a central difference"){
    ONE_VARIABLE(exp, -3.0, 0.0, 0.7, 4.0) ONE_VARIABLE(exp2, -3.0, 0.0, 0.7) ONE_VARIABLE(expm1, -1.0, 1e-9, 2.0)
        ONE_VARIABLE(log, 0.2, 1.0, 30.0) ONE_VARIABLE(log2, 0.2, 30.0) ONE_VARIABLE(log10, 0.2, 30.0)
            ONE_VARIABLE(log1p, -0.5, 1e-9, 3.0) ONE_VARIABLE(sqrt, 0.3, 1.0, 900.0) ONE_VARIABLE(cbrt, -8.0, 0.3, 27.0)
                ONE_VARIABLE(sin, -2.0, 0.0, 1.0) ONE_VARIABLE(cos, -2.0, 0.3, 1.0) ONE_VARIABLE(tan, -1.0, 0.0, 0.8)
                    ONE_VARIABLE(asin, -0.7, 0.0, 0.9) ONE_VARIABLE(acos, -0.7, 0.0, 0.9)
                        ONE_VARIABLE(atan, -3.0, 0.0, 0.9) ONE_VARIABLE(sinh, -2.0, 0.0, 1.0)
                            ONE_VARIABLE(cosh, -2.0, 0.0, 1.0) ONE_VARIABLE(tanh, -2.0, 0.0, 1.0)
                                ONE_VARIABLE(asinh, -2.0, 0.0, 1.0) ONE_VARIABLE(acosh, 1.4, 3.0)
                                    ONE_VARIABLE(atanh, -0.6, 0.0, 0.5) ONE_VARIABLE(erf, -1.2, 0.0, 0.4)
                                        ONE_VARIABLE(erfc, -1.2, 0.0, 0.4) ONE_VARIABLE(abs, -1.2, 0.4)
                                            ONE_VARIABLE(fabs, -1.2, 0.4)}

TEST_CASE("arithmetic follows the sum, product and quotient rules in each variable") {
    const D2 x = D2::variable(1.7, 0);
    const D2 y = D2::variable(-0.6, 1);
    const D2 f = (x * y - 3 * x + 2.0 / y) / (x + 4) - (-y) * 0.5 + (+x) / 2 - (1 - y);
    const auto plain = [](double a, double b) {
        return (a * b - 3 * a + 2.0 / b) / (a + 4) + b * 0.5 + a / 2 - (1 - b);
    };
    CHECK(std::abs(f.value - plain(1.7, -0.6)) <= 1e-15);
    CHECK(std::abs(f.slope[0] - difference([&](double a) { return plain(a, -0.6); }, 1.7)) <= 1e-9);
    CHECK(std::abs(f.slope[1] - difference([&](double b) { return plain(1.7, b); }, -0.6)) <= 1e-9);

    D2 g = x;
    g += y;
    g *= x;
    g -= 2.0;
    g /= y;
    g *= 3;
    g += 1;
    g /= 2;
    g -= x;
    const auto plain_g = [](double a, double b) { return (((a + b) * a - 2.0) / b * 3 + 1) / 2 - a; };
    CHECK(std::abs(g.value - plain_g(1.7, -0.6)) <= 1e-14);
    CHECK(std::abs(g.slope[0] - difference([&](double a) { return plain_g(a, -0.6); }, 1.7)) <= 1e-8);
    CHECK(std::abs(g.slope[1] - difference([&](double b) { return plain_g(1.7, b); }, -0.6)) <= 1e-8);
}

TEST_CASE("powers, angles and lengths of two dual numbers have both slopes") {
    const D2 x = D2::variable(1.3, 0);
    const D2 y = D2::variable(0.7, 1);
    const auto check = [](const D2& f, auto plain) {
        CHECK(std::abs(f.value - plain(1.3, 0.7)) <= 1e-15);
        CHECK(std::abs(f.slope[0] - difference([&](double a) { return plain(a, 0.7); }, 1.3)) <= 1e-9);
        CHECK(std::abs(f.slope[1] - difference([&](double b) { return plain(1.3, b); }, 0.7)) <= 1e-9);
    };
    check(pow(x, y), [](double a, double b) { return std::pow(a, b); });
    check(pow(x, 2.5) + y, [](double a, double b) { return std::pow(a, 2.5) + b; });
    check(pow(x, 3) + y, [](double a, double b) { return a * a * a + b; });
    check(pow(2.5, y) + x, [](double a, double b) { return std::pow(2.5, b) + a; });
    check(pow(2, y) + x, [](double a, double b) { return std::pow(2.0, b) + a; });
    check(atan2(x, y), [](double a, double b) { return std::atan2(a, b); });
    check(atan2(x, 2.0) + y, [](double a, double b) { return std::atan2(a, 2.0) + b; });
    check(hypot(x, y), [](double a, double b) { return std::hypot(a, b); });
    check(hypot(x, 2.0) + y, [](double a, double b) { return std::hypot(a, 2.0) + b; });
}

TEST_CASE("max, min and clamp pass on the slope of the one they choose") {
    const D1 x = D1::variable(2.0);
    CHECK(max(x, 0.0).slope[0] == 1.0);
    CHECK(max(x, 5.0).slope[0] == 0.0);
    CHECK(max(5, x).value == 5.0);
    CHECK(max(0.0, x).slope[0] == 1.0);
    CHECK(max(x, 3.0 * x).slope[0] == 3.0);
    CHECK(min(x, 0).value == 0.0);
    CHECK(min(x, 5.0).slope[0] == 1.0);
    CHECK(min(5.0, x).slope[0] == 1.0);
    CHECK(min(x, 3.0 * x).slope[0] == 1.0);
    CHECK(fmax(x, 1.0).value == 2.0);
    CHECK(fmax(1.0, x).value == 2.0);
    CHECK(fmax(x, x).value == 2.0);
    CHECK(fmin(x, 1.0).value == 1.0);
    CHECK(fmin(1.0, x).value == 1.0);
    CHECK(fmin(x, x).value == 2.0);
    CHECK(clamp(x, 0.0, 1.0).value == 1.0);
    CHECK(clamp(x, 0.0, 1.0).slope[0] == 0.0);
    CHECK(clamp(x, 0.0, 3.0).slope[0] == 1.0);
    CHECK(clamp(x, 2.5, 3.0).value == 2.5);
    // equal values: the first argument's slope
    CHECK(max(2.0 * x, x + 2.0).slope[0] == 2.0);
    CHECK(min(2.0 * x, x + 2.0).slope[0] == 2.0);
}

TEST_CASE("where a slope is infinite or undefined the value is right and the slope is 0") {
    const D1 zero = D1::variable(0.0);
    for (const D1& y : {pow(zero, 0.25), sqrt(zero), cbrt(zero), abs(zero), hypot(zero, 0.0)}) {
        CHECK(y.value == 0.0);
        CHECK(y.slope[0] == 0.0);
    }
    CHECK(pow(zero, D1(0.25)).value == 0.0);
    CHECK(pow(zero, D1(0.25)).slope[0] == 0.0);
    CHECK(pow(zero, 0.0).value == 1.0);
    CHECK(pow(zero, 0.0).slope[0] == 0.0);
    CHECK(pow(zero, 1.0).slope[0] == 1.0);
    CHECK(pow(zero, 2.0).slope[0] == 0.0);
    CHECK(pow(D1::variable(-2.0), 3.0).slope[0] == 12.0);
    CHECK(pow(D1::variable(-2.0), D1(3.0)).slope[0] == 12.0);
    CHECK(pow(0.0, D1::variable(2.0)).value == 0.0);
    CHECK(pow(0.0, D1::variable(2.0)).slope[0] == 0.0);
    CHECK(asin(D1::variable(1.0)).slope[0] == 0.0);
    CHECK(atan2(zero, zero).slope[0] == 0.0);
    // a constant argument at a singular place must not turn 0 * infinity into NaN
    CHECK(sqrt(D1(0.0)).slope[0] == 0.0);
    CHECK(std::isnan(sqrt(D1::variable(-1.0)).value));
}

TEST_CASE("comparisons look at the values, with duals, doubles and ints alike") {
    const D1 x = D1::variable(2.0);
    CHECK(x == D1(2.0));
    CHECK(x == 2);
    CHECK(x != 3.0);
    CHECK(x < 3);
    CHECK(x <= 2.0);
    CHECK(x > 1);
    CHECK(x >= D1(2.0));
    CHECK(1.0 < x);
    CHECK(3 > x);
    CHECK_FALSE(x < std::numeric_limits<double>::quiet_NaN());
    CHECK((x > 0 ? x : 0.0).slope[0] == 1.0);
    CHECK(value_of(x) == 2.0);
    CHECK(value_of(2.0) == 2.0);
}

TEST_CASE("isfinite and isnan see the value, isfinite the slopes too") {
    D1 x = D1::variable(1.0);
    CHECK(isfinite(x));
    x.slope[0] = std::numeric_limits<double>::infinity();
    CHECK_FALSE(isfinite(x));
    CHECK_FALSE(isnan(x));
    CHECK(isnan(D1(std::numeric_limits<double>::quiet_NaN())));
}

TEST_CASE("a law written without prefixes gets its exact slope") {
    const auto y = FilmLaw{}(DualSpot{D1::variable(80.0), 35.0});
    const double film = 1.3 * std::pow(45.001, 0.25);
    CHECK(std::abs(y.value - (film + 80.0 * std::exp(-80.0 / 300.0))) <= 1e-13);
    const double slope = 0.25 * film / 45.001 + (1.0 - 80.0 / 300.0) * std::exp(-80.0 / 300.0);
    CHECK(std::abs(y.slope[0] - slope) <= 1e-15);
}
