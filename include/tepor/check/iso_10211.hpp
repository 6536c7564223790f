#pragma once
// The two-dimensional validation cases of EN ISO 10211, Annex A: bodies and published values.

#include <array>
#include <tepor/base/config.hpp>
#include <tepor/base/point.hpp>
#include <tepor/body/body.hpp>

namespace tepor {

/// A point at which the standard publishes a temperature.
struct IsoPoint {
    const char* name = "";
    Point place;            ///< [m]
    double published = 0.0; ///< [degC], rounded to 0.1 in the standard
};

/// Largest difference the standard allows from its published values: 0.1 K and 0.1 W/m.
inline constexpr double iso_10211_tolerance = 0.1;

/// Case 1: half a square column, top at 20 degC, the other sides at 0 degC, middle plane adiabatic.
/// 0 <= x <= 0.4, 0 <= y <= 0.8 [m] (the standard leaves the size open; the result has no scale).
[[nodiscard]] TEPOR_INLINE Body iso_10211_case_1();
/// The 28 points of its grid, row by row from the top. Values from memory, all confirmed by the exact series.
[[nodiscard]] TEPOR_INLINE std::array<IsoPoint, 28> iso_10211_case_1_points();

/// Case 2: facing on insulation and a metal sheet, with a metal profile under a strip of wood. Geometry, conductivities and
/// surface resistances from memory; with them an independent control-volume solution rounds to every published value.
///
///     y = 0.0475  A ------------------------------------------------------- B   0 degC, 0.06 m2 K/W
///                 |  facing, 6 mm, 1.15 W/(m K)                             |
///     y = 0.0415  C --- D ------------------------------------------------- E
///                 |wood |   5 mm, 0.12                                      |
///     y = 0.0365  F --- G                                                   |
///                 |flange 1.5 mm, aluminium 230                             |   left and right adiabatic
///                 |web                 insulation, 0.029                    |
///     y = 0.0015  |---------------------------------------------------------|
///     y = 0       H  sheet, 1.5 mm, aluminium 230 ------------------------- I   20 degC, 0.11 m2 K/W
///                 x = 0, 0.0015 (web), 0.015 (wood, flange)                 x = 0.5
///
/// The face "top" is the cold side, "bottom" the warm one; watts per metre of depth.
/// @param size  longest cell edge far from the profile [m]
[[nodiscard]] TEPOR_INLINE Body iso_10211_case_2(double size = 0.02);
/// Points A to I.
[[nodiscard]] TEPOR_INLINE std::array<IsoPoint, 9> iso_10211_case_2_points();
/// Heat flow from warm to cold [W/m].
inline constexpr double iso_10211_case_2_heat_flow = 9.5;

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/check/impl/iso_10211.hpp>
#endif
