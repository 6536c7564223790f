#pragma once
// Heat given on a side, shared between the hats of its two ends.

#include <tepor/flux/loads.hpp>

namespace tepor::detail {

/// Given outflow of a listed side times the hat of one of its ends: Legendre moments along the side away from that end.
struct GivenTrace2 {
    double moment[3];

    GivenTrace2(const SideMoments& g, bool hat_at_start) noexcept {
        double i[3]; // integrals against hat t^l
        for (std::size_t l = 0; l < 3; ++l) i[l] = hat_at_start ? g[l] - g[l + 1] : g[l + 1];
        moment[0] = i[0];
        moment[1] = hat_at_start ? 2.0 * i[1] - i[0] : i[0] - 2.0 * i[1];
        moment[2] = 6.0 * i[2] - 6.0 * i[1] + i[0];
    }
};

} // namespace tepor::detail
