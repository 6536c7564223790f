#pragma once
// The pattern of the system matrix and the map that scatters element matrices into it, made once per mesh.

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <utility>
#include <vector>

namespace tepor::detail {

/// Where entries of element matrices go.
struct Scatter {
    /// Per cell, per pair (i, j <= i) of its nodes packed at i (i + 1) / 2 + j: position in SparseMatrix::lower.
    std::vector<Id> cells;
    /// Per extra pair of unknowns, in the order given: its position.
    std::vector<Id> extra;
};

/// Pattern of the lower triangle, without values, from cells of `nodes` unknowns each and extra coupled pairs (contacts).
/// Cost O(cells nodes^2) time and memory.
/// @throws Error too_large  more entries than 32-bit ids can count
TEPOR_INLINE Scatter build_pattern(Index unknowns, int nodes, const std::vector<Id>& cell_unknowns,
                                   const std::vector<std::pair<Id, Id>>& extra, SparseMatrix& matrix);

} // namespace tepor::detail

#ifndef TEPOR_COMPILED
#include <tepor/body/impl/pattern.hpp>
#endif
