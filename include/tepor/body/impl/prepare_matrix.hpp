#pragma once
// The room of a matrix: the pattern of a model, values zero.

#include <tepor/base/detail/huge_pages.hpp>
#include <tepor/body/assemble.hpp>

namespace tepor {

TEPOR_INLINE void prepare_matrix(const Model& model, SparseMatrix& matrix) {
    matrix.rows = model.unknowns;
    const SparseMatrix& pattern = model.pattern;
    detail::reserve_huge(matrix.start, pattern.start.size());
    detail::reserve_huge(matrix.column, pattern.column.size());
    detail::reserve_huge(matrix.lower, pattern.column.size());
    matrix.start = pattern.start;
    matrix.column = pattern.column;
    matrix.lower.assign(pattern.column.size(), 0.0);
    matrix.upper.clear();
    if (model.slope) matrix.upper.assign(pattern.column.size(), 0.0);
}

} // namespace tepor
