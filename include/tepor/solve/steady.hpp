#pragma once
// steady: the temperature field at rest.

#include <optional>
#include <tepor/base/config.hpp>
#include <tepor/body/body.hpp>
#include <tepor/field/field.hpp>
#include <tepor/linear/concept.hpp>

namespace tepor {

/// How a steady solve starts and when it stops.
struct SteadyOptions {
    double tolerance = 1e-10; ///< sum of |r| over the free unknowns, as a share of the gross heat traffic
    Index most_passes = 60;   ///< of Newton's method
    std::optional<double>
        start{};                 ///< temperature everywhere to start from; default: the mean of the temperatures given
    const Field* from = nullptr; ///< or a field of a body described alike
    std::optional<double>
        time{}; ///< [s] at which schedules and functions of time are taken; a body with such data needs it
    /// A linear solver from outside for the symmetric systems of this solve (see linear/concept.hpp); unsymmetric ones, such as
    /// the slope of a conductivity that varies with temperature, stay with the library's own. Nothing of it is kept.
    AnySolver* solver = nullptr;
    /// Threads of an iterative solve and its set-up, the caller's included (large bodies in the plane). The temperatures have the
    /// same bits at any number.
    int threads = 1;
};

/// The steady temperature field of a body at its present parameter values.
///
/// Linear bodies take one solve; where conductivity, films, sources or radiation depend on temperature, Newton's method with
/// the exact slope and a line search. Converged means: the sum of |r| over the free unknowns is below tolerance times the
/// gross heat traffic plus what rounding leaves. A factor is kept by the body and used again while no value in the matrix
/// changes; linear bodies of Segment<1> need none and are solved in one sweep. Safe from many threads on a const Body.
/// @throws Error no_level (nothing sets the temperature level of a part), not_converged (with the history and the worst place),
///         singular, outside_table, bad_law, missing (data over time and no instant), and whatever the description gets wrong
[[nodiscard]] TEPOR_INLINE Field steady(const Body& body, const SteadyOptions& options = {});

/// The same into a field of one's own, whose memory is used again: for loops that solve over and over. `options.from` may be
/// that field. After an Error the field is empty.
TEPOR_INLINE void steady(const Body& body, Field& into, const SteadyOptions& options = {});

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/solve/impl/steady.hpp>
#endif
