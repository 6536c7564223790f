#pragma once
// Which cell lies behind each side of each cell, with contacts and boundary sides told apart.

#include <tepor/base/config.hpp>
#include <tepor/flux/problem.hpp>
#include <vector>

namespace tepor::detail {

/// For each cell side, `sides_per_cell` per cell:
/// - `>= 0`: the side behind it, as `sides_per_cell * cell + side`;
/// - `-1`: boundary with nothing said;
/// - `<= -2`: listed in FluxProblem::sides at position `-2 - value` (contacts too: heat crosses them by
///   their law alone; and both sides of a line inside the body that is held at a temperature).
///
/// O(cells). Throws Error bad_mesh when more than two cells share a side or a listed side is not on the boundary.
std::vector<Id> side_neighbours(const FluxProblem& problem);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/neighbours.hpp>
#endif
