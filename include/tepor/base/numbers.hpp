#pragma once
// Integer types, casts between them and the physical constants the library uses.

#include <cstddef>
#include <cstdint>

namespace tepor {

/// Signed count or position in every interface (the same type as Eigen::Index).
using Index = std::ptrdiff_t;

/// Stored node, cell, degree-of-freedom and region numbers: 32 bit, because memory traffic is speed.
using Id = std::int32_t;

/// The largest count that stored ids can hold.
inline constexpr Index max_id = 2147483647;

/// Stefan-Boltzmann constant [W/(m2 K4)]. Source: CODATA 2018 (exact since the 2019 SI).
inline constexpr double stefan_boltzmann = 5.670374419e-8;

/// 0 degC in kelvin (exact). Source: SI Brochure, 9th ed., section 2.3.1.
inline constexpr double zero_celsius = 273.15;

inline constexpr double pi = 3.141592653589793238462643383279502884;

namespace detail {

/// Index of a container from any non-negative integer; one place for the sign conversion.
template <class Integer>
constexpr std::size_t as_size(Integer i) noexcept {
    return static_cast<std::size_t>(i);
}

/// Narrow to a stored id; the caller has checked the range.
template <class Integer>
constexpr Id as_id(Integer i) noexcept {
    return static_cast<Id>(i);
}

template <class Integer>
constexpr double as_double(Integer i) noexcept {
    return static_cast<double>(i);
}

} // namespace detail
} // namespace tepor
