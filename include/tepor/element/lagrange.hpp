#pragma once
// Lagrange polynomials on equispaced nodes, in any scalar, and their derivatives: the one formula behind all our elements.

namespace tepor::detail {

template <class Scalar>
struct ValueSlope {
    Scalar value;
    Scalar slope;
};

/// Polynomial of degree P that is 1 at m / P and 0 at the other k / P, k = 0..P, at x.
template <int P, class Scalar>
constexpr Scalar lagrange(int m, const Scalar& x) {
    Scalar value(1.0);
    for (int k = 0; k <= P; ++k)
        if (k != m)
            value = value * ((x * static_cast<double>(P) - static_cast<double>(k)) / static_cast<double>(m - k));
    return value;
}

/// The same with its derivative by x (product rule, factor after factor).
template <int P>
constexpr ValueSlope<double> lagrange_slope(int m, double x) {
    double value = 1.0;
    double slope = 0.0;
    for (int k = 0; k <= P; ++k) {
        if (k == m) continue;
        const double factor = (P * x - k) / (m - k);
        slope = slope * factor + value * P / (m - k);
        value *= factor;
    }
    return {value, slope};
}

/// Polynomial of degree m in the area coordinate a that is 1 at a = m / P and 0 at k / P, k < m. Products of three of them
/// are the shape functions of the triangle.
/// Source: Silvester, Int. J. Engineering Science 7 (1969) 849-861.
template <int P, class Scalar>
constexpr Scalar silvester(int m, const Scalar& a) {
    Scalar value(1.0);
    for (int k = 0; k < m; ++k)
        value = value * ((a * static_cast<double>(P) - static_cast<double>(k)) / static_cast<double>(k + 1));
    return value;
}

/// The same with its derivative by a.
template <int P>
constexpr ValueSlope<double> silvester_slope(int m, double a) {
    double value = 1.0;
    double slope = 0.0;
    for (int k = 0; k < m; ++k) {
        const double factor = (P * a - k) / (k + 1);
        slope = slope * factor + value * P / (k + 1);
        value *= factor;
    }
    return {value, slope};
}

} // namespace tepor::detail
