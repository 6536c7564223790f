#pragma once
// A slope from two solves.

#include <cmath>
#include <tepor/solve/steady.hpp>

namespace tepor::test {

/// The central difference of a quantity over a parameter, in a step that is a share of its value.
inline double difference_of_solves(Body& body, const Quantity& quantity, const Parameter& parameter, double share) {
    const double here = body.value(parameter), h = share * std::abs(here);
    body.set(parameter, here + h);
    const double above = steady(body)[quantity];
    body.set(parameter, here - h);
    const double below = steady(body)[quantity];
    body.set(parameter, here);
    return (above - below) / (2.0 * h);
}

} // namespace tepor::test
