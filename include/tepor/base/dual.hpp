#pragma once
// Dual numbers: a value together with its derivatives by N variables, so that a law's slope is exact.

#include <array>
#include <cmath>
#include <compare>
#include <tepor/base/numbers.hpp>

namespace tepor {

/// A number and its N derivatives, carried through every operation by the chain rule (forward differentiation).
///
/// Operators mix freely with double and int, comparisons look at the values, and the functions of `cmath` are found without
/// a prefix: write `exp(x)`, `pow(x, 0.25)`, `max(x, 0.0)` in a generic law, not `std::exp(x)`.
///
/// Where a derivative is infinite or does not exist, the value is right and the slope is a choice, so that Newton's method
/// never meets a NaN that the law itself does not have:
/// - infinite slope, such as `sqrt(x)`, `cbrt(x)`, `pow(x, 0.25)` at 0 or `asin(x)` at 1: slope 0;
/// - `abs(x)` at 0: slope 0; `max`, `min` of equal values: the slope of the first argument;
/// - `pow(x, y)` with x <= 0: the derivative by y is taken as 0.
template <int N>
struct Dual {
    static_assert(N >= 1, "a Dual carries at least one derivative");

    double value = 0.0;
    std::array<double, detail::as_size(N)> slope{};

    constexpr Dual() = default;
    /// A constant.
    constexpr Dual(double number) : value(number) {} // NOLINT(google-explicit-constructor)

    /// The variable number `which` (0 .. N-1) at `number`: its slope by itself is 1.
    static constexpr Dual variable(double number, int which = 0) {
        Dual x(number);
        x.slope[detail::as_size(which)] = 1.0;
        return x;
    }

    constexpr Dual& operator+=(const Dual& b) { return *this = *this + b; }
    constexpr Dual& operator-=(const Dual& b) { return *this = *this - b; }
    constexpr Dual& operator*=(const Dual& b) { return *this = *this * b; }
    constexpr Dual& operator/=(const Dual& b) { return *this = *this / b; }
    constexpr Dual& operator+=(double b) { return *this = *this + b; }
    constexpr Dual& operator-=(double b) { return *this = *this - b; }
    constexpr Dual& operator*=(double b) { return *this = *this * b; }
    constexpr Dual& operator/=(double b) { return *this = *this / b; }

    friend constexpr Dual operator+(const Dual& a) { return a; }
    friend constexpr Dual operator-(const Dual& a) { return linear(-a.value, -1.0, a); }

    friend constexpr Dual operator+(const Dual& a, const Dual& b) { return linear(a.value + b.value, 1.0, a, 1.0, b); }
    friend constexpr Dual operator-(const Dual& a, const Dual& b) { return linear(a.value - b.value, 1.0, a, -1.0, b); }
    friend constexpr Dual operator*(const Dual& a, const Dual& b) {
        return linear(a.value * b.value, b.value, a, a.value, b);
    }
    friend constexpr Dual operator/(const Dual& a, const Dual& b) {
        const double ratio = a.value / b.value;
        return linear(ratio, 1.0 / b.value, a, -ratio / b.value, b);
    }

    friend constexpr Dual operator+(const Dual& a, double b) { return linear(a.value + b, 1.0, a); }
    friend constexpr Dual operator-(const Dual& a, double b) { return linear(a.value - b, 1.0, a); }
    friend constexpr Dual operator*(const Dual& a, double b) { return linear(a.value * b, b, a); }
    friend constexpr Dual operator/(const Dual& a, double b) { return linear(a.value / b, 1.0 / b, a); }
    friend constexpr Dual operator+(double a, const Dual& b) { return linear(a + b.value, 1.0, b); }
    friend constexpr Dual operator-(double a, const Dual& b) { return linear(a - b.value, -1.0, b); }
    friend constexpr Dual operator*(double a, const Dual& b) { return linear(a * b.value, a, b); }
    friend constexpr Dual operator/(double a, const Dual& b) {
        const double ratio = a / b.value;
        return linear(ratio, -ratio / b.value, b);
    }

    friend constexpr bool operator==(const Dual& a, const Dual& b) { return a.value == b.value; }
    friend constexpr bool operator==(const Dual& a, double b) { return a.value == b; }
    friend constexpr auto operator<=>(const Dual& a, const Dual& b) { return a.value <=> b.value; }
    friend constexpr auto operator<=>(const Dual& a, double b) { return a.value <=> b; }

    friend Dual exp(const Dual& a) {
        const double e = std::exp(a.value);
        return chain(e, e, a);
    }
    friend Dual exp2(const Dual& a) {
        const double e = std::exp2(a.value);
        return chain(e, e * ln_2, a);
    }
    friend Dual expm1(const Dual& a) { return chain(std::expm1(a.value), std::exp(a.value), a); }
    friend Dual log(const Dual& a) { return chain(std::log(a.value), 1.0 / a.value, a); }
    friend Dual log2(const Dual& a) { return chain(std::log2(a.value), 1.0 / (a.value * ln_2), a); }
    friend Dual log10(const Dual& a) { return chain(std::log10(a.value), 1.0 / (a.value * ln_10), a); }
    friend Dual log1p(const Dual& a) { return chain(std::log1p(a.value), 1.0 / (1.0 + a.value), a); }
    friend Dual sqrt(const Dual& a) {
        const double root = std::sqrt(a.value);
        return chain(root, 0.5 / root, a);
    }
    friend Dual cbrt(const Dual& a) {
        const double root = std::cbrt(a.value);
        return chain(root, 1.0 / (3.0 * root * root), a);
    }

    friend Dual sin(const Dual& a) { return chain(std::sin(a.value), std::cos(a.value), a); }
    friend Dual cos(const Dual& a) { return chain(std::cos(a.value), -std::sin(a.value), a); }
    friend Dual tan(const Dual& a) {
        const double t = std::tan(a.value);
        return chain(t, 1.0 + t * t, a);
    }
    friend Dual asin(const Dual& a) {
        return chain(std::asin(a.value), 1.0 / std::sqrt((1.0 - a.value) * (1.0 + a.value)), a);
    }
    friend Dual acos(const Dual& a) {
        return chain(std::acos(a.value), -1.0 / std::sqrt((1.0 - a.value) * (1.0 + a.value)), a);
    }
    friend Dual atan(const Dual& a) { return chain(std::atan(a.value), 1.0 / (1.0 + a.value * a.value), a); }
    friend Dual sinh(const Dual& a) { return chain(std::sinh(a.value), std::cosh(a.value), a); }
    friend Dual cosh(const Dual& a) { return chain(std::cosh(a.value), std::sinh(a.value), a); }
    friend Dual tanh(const Dual& a) {
        const double t = std::tanh(a.value);
        return chain(t, (1.0 - t) * (1.0 + t), a);
    }
    friend Dual asinh(const Dual& a) { return chain(std::asinh(a.value), 1.0 / std::hypot(1.0, a.value), a); }
    friend Dual acosh(const Dual& a) {
        return chain(std::acosh(a.value), 1.0 / std::sqrt((a.value - 1.0) * (a.value + 1.0)), a);
    }
    friend Dual atanh(const Dual& a) {
        return chain(std::atanh(a.value), 1.0 / ((1.0 - a.value) * (1.0 + a.value)), a);
    }
    friend Dual erf(const Dual& a) {
        return chain(std::erf(a.value), two_over_root_pi * std::exp(-a.value * a.value), a);
    }
    friend Dual erfc(const Dual& a) {
        return chain(std::erfc(a.value), -two_over_root_pi * std::exp(-a.value * a.value), a);
    }

    friend Dual abs(const Dual& a) {
        const double sign = a.value > 0.0 ? 1.0 : a.value < 0.0 ? -1.0 : 0.0;
        return linear(std::abs(a.value), sign, a);
    }
    friend Dual fabs(const Dual& a) { return abs(a); }

    friend Dual pow(const Dual& a, double p) {
        if (p == 0.0) return Dual(1.0);
        return chain(std::pow(a.value, p), p * std::pow(a.value, p - 1.0), a);
    }
    friend Dual pow(const Dual& a, const Dual& p) {
        const double power = std::pow(a.value, p.value);
        const double by_base = p.value == 0.0 ? 0.0 : p.value * std::pow(a.value, p.value - 1.0);
        const double by_power = a.value > 0.0 ? power * std::log(a.value) : 0.0;
        return linear(power, finite(by_base), a, finite(by_power), p);
    }
    friend Dual pow(double a, const Dual& p) {
        const double power = std::pow(a, p.value);
        return chain(power, a > 0.0 ? power * std::log(a) : 0.0, p);
    }

    friend Dual atan2(const Dual& y, const Dual& x) {
        const double square = x.value * x.value + y.value * y.value;
        return linear(std::atan2(y.value, x.value), finite(x.value / square), y, finite(-y.value / square), x);
    }
    friend Dual hypot(const Dual& a, const Dual& b) {
        const double h = std::hypot(a.value, b.value);
        return linear(h, finite(a.value / h), a, finite(b.value / h), b);
    }

    friend constexpr Dual max(const Dual& a, const Dual& b) { return a.value < b.value ? b : a; }
    friend constexpr Dual max(const Dual& a, double b) { return a.value < b ? Dual(b) : a; }
    friend constexpr Dual max(double a, const Dual& b) { return a < b.value ? b : Dual(a); }
    friend constexpr Dual min(const Dual& a, const Dual& b) { return b.value < a.value ? b : a; }
    friend constexpr Dual min(const Dual& a, double b) { return b < a.value ? Dual(b) : a; }
    friend constexpr Dual min(double a, const Dual& b) { return b.value < a ? b : Dual(a); }
    friend constexpr Dual fmax(const Dual& a, const Dual& b) { return max(a, b); }
    friend constexpr Dual fmax(const Dual& a, double b) { return max(a, b); }
    friend constexpr Dual fmax(double a, const Dual& b) { return max(a, b); }
    friend constexpr Dual fmin(const Dual& a, const Dual& b) { return min(a, b); }
    friend constexpr Dual fmin(const Dual& a, double b) { return min(a, b); }
    friend constexpr Dual fmin(double a, const Dual& b) { return min(a, b); }
    friend constexpr Dual clamp(const Dual& a, const Dual& low, const Dual& high) { return min(max(a, low), high); }

    /// Value and slopes are finite.
    friend bool isfinite(const Dual& a) {
        for (const double s : a.slope)
            if (!std::isfinite(s)) return false;
        return std::isfinite(a.value);
    }
    friend bool isnan(const Dual& a) { return std::isnan(a.value); }

    /// The value alone, for decisions a law takes without a slope.
    friend constexpr double value_of(const Dual& a) { return a.value; }

  private:
    static constexpr double ln_2 = 0.693147180559945309417232121458176568;
    static constexpr double ln_10 = 2.302585092994045684017991454684364208;
    static constexpr double two_over_root_pi = 1.128379167095512573896158903121545172;

    static double finite(double s) { return std::isfinite(s) ? s : 0.0; }

    static constexpr Dual linear(double value, double by_a, const Dual& a) {
        Dual result(value);
        for (std::size_t i = 0; i < a.slope.size(); ++i) result.slope[i] = by_a * a.slope[i];
        return result;
    }
    static constexpr Dual linear(double value, double by_a, const Dual& a, double by_b, const Dual& b) {
        Dual result(value);
        for (std::size_t i = 0; i < a.slope.size(); ++i) result.slope[i] = by_a * a.slope[i] + by_b * b.slope[i];
        return result;
    }
    static Dual chain(double value, double by_a, const Dual& a) { return linear(value, finite(by_a), a); }
};

/// The value alone; the counterpart of value_of(Dual) for generic code.
constexpr double value_of(double a) noexcept {
    return a;
}

} // namespace tepor
