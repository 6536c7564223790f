#pragma once
// The state a linear body comes to under data that repeat.

#include <tepor/base/config.hpp>
#include <tepor/solve/march.hpp>

namespace tepor {

/// Lowest and highest value of a quantity over a period, when they are met, and its mean over time.
struct Swing {
    Moment low;
    Moment high;
    double mean = 0.0;
    [[nodiscard]] double amplitude() const noexcept { return 0.5 * (high.value - low.value); }
};

/// A march that stands at the start of its periodic state, at time 0: advancing it by the period brings it back.
struct Periodic {
    March march;
    double period = 0.0;
    Index marches = 0;     ///< over one period each, to find the state
    double mismatch = 0.0; ///< largest difference between start and end of the period [K]

    /// The swing of a quantity, by step ends of one more period. The march then stands at time 0 again.
    [[nodiscard]] TEPOR_INLINE Swing swing(const Quantity& quantity);
};

/// The periodic state of a linear body: the temperatures that come back after a period of the data, found by shooting. A period maps
/// the start linearly on the end; GMRES (Saad & Schultz 1986) solves for the start that stays, in far fewer periods than a body
/// takes to settle. The state is that of Theta's own steps, as a long march of them would find it. The data are read from 0 to
/// `period` and taken to repeat; their start is not damped, jumps inside the period are.
/// @throws Error bad_value (period not a whole number of steps), not_supported (something depends on temperature), no_level,
///         not_converged, and as March
[[nodiscard]] TEPOR_INLINE Periodic periodic_steady(const Body& body, double period, const Theta& theta);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/periodic.hpp>
#endif
