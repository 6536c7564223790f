#pragma once
// Adaptive: marching with a step chosen by its error.

#include <limits>
#include <tepor/solve/capacity.hpp>

namespace tepor {

/// TR-BDF2 with error control: L-stable, order 2, one matrix per step size (Bank et al. 1985; Hosea & Shampine 1996).
///
/// The largest estimated error of any node in one step is kept below `tolerance`. That is an error per step: the error of the
/// result goes like tolerance^(2/3) to tolerance. Steps double or halve, so that factors are used again; a step that fails, also
/// in Newton's method, is tried again with half its size. Temperatures between step ends follow the parabola through the start,
/// the stage and the end. After a jump of a prescribed temperature the first step may overshoot by about 1 %.
struct Adaptive {
    double tolerance = 0.01; ///< [K]
    double first_step = 0.0; ///< [s]; 0: chosen from the rate of change at the start
    double largest_step = std::numeric_limits<double>::infinity(); ///< [s]
    double smallest_step = 0.0; ///< [s]; 0: 1e-12 of the time reached, at least 1e-9 s
    Capacity capacity = Capacity::automatic;
    double newton_tolerance = 1e-10; ///< sum of |r| as a share of the gross heat traffic
};

} // namespace tepor
