#pragma once
// The chi-square distribution.

#include <cmath>

namespace tepor::detail {

/// Upper tail of the chi-square distribution by the incomplete gamma function: series and continued fraction.
/// Source: DLMF 8.11.4 and 8.9.2.
inline double chi_square_tail(double x, double degrees) {
    const double a = 0.5 * degrees;
    const double z = 0.5 * x;
    if (!(z > 0.0)) return 1.0;
    const double front = std::exp(a * std::log(z) - z - std::lgamma(a));
    if (z < a + 1.0) {
        double term = 1.0 / a;
        double sum = term;
        for (int k = 1; k < 10000 && term > 1e-16 * sum; ++k) {
            term *= z / (a + k);
            sum += term;
        }
        return 1.0 - front * sum;
    }
    // modified Lentz for 1 / (z + 1 - a - 1 (1 - a) / (z + 3 - a - ...))
    double b = z + 1.0 - a;
    double c = 1e300;
    double d = 1.0 / b;
    double h = d;
    for (int k = 1; k < 10000; ++k) {
        const double an = -k * (k - a);
        b += 2.0;
        d = 1.0 / (an * d + b);
        c = b + an / c;
        h *= d * c;
        if (std::abs(d * c - 1.0) < 1e-15) break;
    }
    return front * h;
}

} // namespace tepor::detail
