#pragma once
// What an own law is told about the point it is evaluated at.

namespace tepor {

/// Where, when and at what temperature a law is evaluated. S is double or a dual number.
template <class S>
struct BasicSpot {
    S temperature{}; ///< in the body's scale [degC, or K]
    S fluid{}; ///< temperature of the fluid or surroundings on the other side of a face, same scale; 0 inside the body
    S x{};     ///< x or r [m]
    S y{};     ///< y or z [m]
    double time = 0.0; ///< [s]; 0 in a steady state
};

/// For laws written with plain doubles.
using Spot = BasicSpot<double>;

/// Where and when, for laws that do not depend on temperature. S is double or a dual number.
template <class S>
struct BasicPlace {
    S x{};             ///< x or r [m]
    S y{};             ///< y or z [m]
    double time = 0.0; ///< [s]
};

using Place = BasicPlace<double>;

/// Where alone: what generic laws of place get, so that no one has to ask whether they mind the time. For the time too, see
/// of_place_and_time.
template <class S>
struct PlaceWithoutTime {
    S x{}; ///< x or r [m]
    S y{}; ///< y or z [m]
};

/// May be returned by a law with plain doubles that knows its own slope by temperature.
struct Sloped {
    double value = 0.0;
    double slope = 0.0; ///< derivative by temperature, per kelvin
};

} // namespace tepor
