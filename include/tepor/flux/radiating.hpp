#pragma once
// Sides that radiate: the heat they let out at a temperature, the slope of that law, and guaranteed bounds of both.

#include <tepor/flux/problem.hpp>
#include <vector>

namespace tepor {

/// A side with `q.n = strength t^4 - given`, t the absolute temperature. Films and fluxes of the side are in FluxProblem::sides.
struct RadiatingSide {
    Id side = 0;           ///< position in FluxProblem::sides
    double strength = 0.0; ///< emissivity times the Stefan-Boltzmann constant [W/(m2 K4)]
    double given = 0.0;    ///< what the surroundings send [W/m2]
};

/// The radiating sides of a body, and between which temperatures its exact field lies.
///
/// Without heat given anywhere the exact temperature stays between the lowest and the highest temperature held or found outside
/// (maximum principle: D. Gilbarg and N. S. Trudinger, Elliptic Partial Differential Equations of Second Order, section 3.1).
struct Radiating {
    std::vector<RadiatingSide> sides;
    double offset = 0.0;  ///< added to a temperature of the body it is absolute [K]
    double coldest = 0.0; ///< [K]
    double hottest = 0.0; ///< [K]

    [[nodiscard]] bool any() const noexcept { return !sides.empty(); }
};

namespace detail {

/// Sets a trace on every radiating side: the heat at the temperature, its moments by a Gauss rule of `points` points (those of
/// the solve, or enough to be exact), what the projection loses, and the least slope between the temperatures possible.
/// Throws Error not_certifiable where the field comes down to absolute zero, or nothing makes the law of a side rise.
void set_radiation(FluxProblem& problem, const Radiating& radiating, const double* temperature, int points);

/// The linearised law for the adjoint: `slope(Th) (z - chi)` with chi = 1 on the sides `weighed` (one entry per radiating side);
/// z = null stands for zero. Least slopes are those of set_radiation, so that both fluxes are bounded in one norm.
void set_radiation_adjoint(FluxProblem& adjoint, const Radiating& radiating, const FluxProblem& primal,
                           const double* temperature, const double* z, const std::vector<char>& weighed, int points);

/// Moments to rounding: law of degree 8 times polynomials of degree 3 and squares of them.
inline constexpr int exact_radiation_points = 12;

/// Integral over the weighed sides of what radiates at Th less slope(Th) Th; the first exactly, the second by `points` points as
/// the load of the adjoint has it.
double radiated_offset(const FluxProblem& primal, const Radiating& radiating, const double* temperature,
                       const std::vector<char>& weighed, int points, double& absolute);

/// Bounds of the integral of `rho (chi - z)` per square of the energy bound, rho = g(T) - g(Th) - g'(Th) (T - Th) >= 0:
/// rho is at most 6 strength hottest^2 (T - Th)^2, and (film + least slope) (T - Th)^2 integrates to the bound's square at most.
struct Remainder {
    double least = 0.0; ///< <= 0
    double most = 0.0;  ///< >= 0
};
Remainder radiation_remainder(const FluxProblem& primal, const Radiating& radiating, const double* temperature,
                              const double* z, const std::vector<char>& weighed);

} // namespace detail
} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/radiating.hpp>
#endif
