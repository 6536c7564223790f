#pragma once
// Products of a SparseMatrix with a vector, and the check of its rules.

#include <tepor/base/detail/huge_pages.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/linear/sparse_matrix.hpp>

namespace tepor {
namespace detail {

// One pass over the lower triangle. Row i gathers its own entries and scatters the mirrored ones upwards; y[i] is first
// written at row i, since only later rows scatter into it.
inline void multiply_lower(Index rows, const Id* start, const Id* column, const double* own, const double* mirrored,
                           const double* diagonal, const double* x, double* y) noexcept {
    for (Index i = 0; i < rows; ++i) {
        const Index last = start[i + 1] - 1;
        const double xi = x[i];
        double sum = 0.0;
        for (Index p = start[i]; p < last; ++p) {
            const Index j = column[p];
            sum += own[p] * x[j];
            y[j] += mirrored[p] * xi;
        }
        y[i] = sum + diagonal[last] * xi;
    }
}

} // namespace detail

TEPOR_INLINE void multiply(const SparseMatrix& matrix, Index rows, const double* x, double* y) noexcept {
    const double* lower = matrix.lower.data();
    const double* upper = matrix.symmetric() ? lower : matrix.upper.data();
    detail::multiply_lower(rows, matrix.start.data(), matrix.column.data(), lower, upper, lower, x, y);
}

TEPOR_INLINE void multiply_transposed(const SparseMatrix& matrix, Index rows, const double* x, double* y) noexcept {
    const double* lower = matrix.lower.data();
    const double* upper = matrix.symmetric() ? lower : matrix.upper.data();
    detail::multiply_lower(rows, matrix.start.data(), matrix.column.data(), upper, lower, lower, x, y);
}

namespace detail {

/// Whether an entry is zero up to rounding beside the diagonals of its row and column.
inline bool vanishes(double value, double own, double other) noexcept {
    return value * value <= 1e-30 * (own * other);
}

/// A sample of the rows: an eighth of the entries at least are zero.
inline bool many_zeros(const SparseMatrix& matrix, Index n) {
    Index seen = 0, zeros = 0;
    for (Index i = 0; i < n; i += n < 10000 ? 1 : 61)
        for (Index p = matrix.start[as_size(i)]; p < matrix.start[as_size(i) + 1]; ++p, ++seen) {
            const Index j = matrix.column[as_size(p)];
            zeros += j != i && vanishes(matrix.lower[as_size(p)], matrix.diagonal(i), matrix.diagonal(j));
        }
    return seen > 0 && zeros * 8 >= seen;
}

} // namespace detail

TEPOR_INLINE bool drop_zeros(SparseMatrix& matrix, Index n) {
    if (!detail::many_zeros(matrix, n)) return false;
    Id* start = matrix.start.data();
    Id* column = matrix.column.data();
    double* value = matrix.lower.data();
    Id used = 0;
    Id from = 0; // start[i] is that of the shorter row already
    for (Index i = 0; i < matrix.rows; ++i) {
        const Id to = start[i + 1];
        const double own = value[to - 1];
        for (Id p = from; p < to; ++p) {
            const Id j = column[p];
            if (i < n && j != i && detail::vanishes(value[p], own, value[start[j + 1] - 1])) continue;
            column[used] = j;
            value[used++] = value[p];
        }
        from = to;
        start[i + 1] = used;
    }
    matrix.column.resize(detail::as_size(used));
    matrix.lower.resize(detail::as_size(used));
    return true;
}

TEPOR_INLINE bool without_zeros(const SparseMatrix& matrix, Index n, SparseMatrix& out) {
    if (!detail::many_zeros(matrix, n)) return false;
    const Id* start = matrix.start.data();
    const Id* column = matrix.column.data();
    const double* value = matrix.lower.data();
    const auto zero = [&](Index i, Id p, double own) {
        return column[p] != i && detail::vanishes(value[p], own, value[start[column[p] + 1] - 1]);
    };
    Index kept = 0;
    for (Index i = 0; i < n; ++i) {
        const double own = value[start[i + 1] - 1];
        for (Id p = start[i]; p < start[i + 1]; ++p) kept += !zero(i, p, own);
    }
    out.rows = n;
    out.upper.clear();
    detail::resize_huge(out.start, detail::as_size(n) + 1);
    detail::resize_huge(out.column, detail::as_size(kept));
    detail::resize_huge(out.lower, detail::as_size(kept));
    out.start[0] = 0;
    Id used = 0;
    for (Index i = 0; i < n; ++i) {
        const double own = value[start[i + 1] - 1];
        for (Id p = start[i]; p < start[i + 1]; ++p) {
            if (zero(i, p, own)) continue;
            out.column[detail::as_size(used)] = column[p];
            out.lower[detail::as_size(used++)] = value[p];
        }
        out.start[detail::as_size(i) + 1] = used;
    }
    return true;
}

TEPOR_INLINE void verify(const SparseMatrix& matrix, Index n) {
    const auto fail = [](Index row, const char* rule) {
        throw Error(ErrorCode::bad_value, "matrix", detail::text("matrix: row ", row, " ", rule));
    };
    if (!(n >= 0 && n <= matrix.rows)) {
        throw Error(ErrorCode::bad_value, "matrix",
                    detail::text("matrix: leading block of ", n, " rows, expected 0 to ", matrix.rows));
    }
    if (matrix.start.size() != detail::as_size(matrix.rows) + 1)
        fail(matrix.rows, "has no end: start must hold rows + 1 positions");
    if (matrix.start[0] != 0) fail(0, "does not start at 0");
    if (matrix.lower.size() != matrix.column.size()) fail(0, "cannot be read: lower and column differ in length");
    if (!matrix.upper.empty() && matrix.upper.size() != matrix.column.size()) {
        fail(0, "cannot be read: upper and column differ in length");
    }
    for (Index i = 0; i < n; ++i) {
        const Index first = matrix.start[detail::as_size(i)];
        const Index end = matrix.start[detail::as_size(i) + 1];
        if (!(end > first)) fail(i, "is empty; every row holds at least its diagonal");
        if (end > matrix.entries()) fail(i, "ends beyond the stored entries");
        for (Index p = first; p < end; ++p) {
            const Index j = matrix.column[detail::as_size(p)];
            if (j < 0 || (p > first && j <= matrix.column[detail::as_size(p) - 1])) fail(i, "has columns out of order");
        }
        if (matrix.column[detail::as_size(end) - 1] != i) fail(i, "does not end with its diagonal");
    }
}

} // namespace tepor
