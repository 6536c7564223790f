#pragma once
// Solves with a matrix that differs from a factored one in few rows, without factoring again.
// Source: Woodbury, "Inverting modified matrices" (1950).

#include <tepor/base/config.hpp>
#include <tepor/base/numbers.hpp>
#include <type_traits>
#include <vector>

namespace tepor {

/// A + E D E^T from a solver for A: D is a small k x k block that adds to the rows and columns `rows`.
///
/// With Z = A^-1 E and G = the rows of Z: (A + E D E^T)^-1 b = x - Z (I + D G)^-1 D x(rows), x = A^-1 b. Z is made once by k
/// solves; then every new D, such as the film of one face in a sweep, costs O(k^3) and every right-hand side O(n k).
/// D may be singular or indefinite as long as the changed matrix is regular.
class LowRankUpdate {
  public:
    /// Solves for Z. `solve(b)` turns n values into A^-1 b in place, or `solve(b, k)` k columns of n values each, one after the
    /// other. Rows must differ from each other.
    template <class Solve>
    void prepare(Index n, const std::vector<Id>& rows, Solve&& solve) {
        size_ = n;
        rows_ = rows;
        const Index k = rank();
        columns_.assign(detail::as_size(n * k), 0.0);
        for (Index c = 0; c < k; ++c) {
            double* column = columns_.data() + c * n;
            column[rows_[detail::as_size(c)]] = 1.0;
            if constexpr (std::is_invocable_v<Solve, double*>) solve(column);
        }
        if constexpr (!std::is_invocable_v<Solve, double*>) solve(columns_.data(), k);
        block_.assign(detail::as_size(k * k), 0.0);
        factor_.assign(detail::as_size(k * k), 0.0);
        pivot_.resize(detail::as_size(k));
        for (Index i = 0; i < k; ++i) {
            factor_[detail::as_size(i * k + i)] = 1.0;
            pivot_[detail::as_size(i)] = detail::as_id(i);
        }
        small_.assign(detail::as_size(k), 0.0);
    }

    /// Takes a new D, k x k by rows. @return false when A + E D E^T is (nearly) singular; apply() then must not be used.
    [[nodiscard]] TEPOR_INLINE bool change(const double* block);

    /// x = A^-1 b becomes (A + E D E^T)^-1 b. Allocates nothing; uses work space of this object: one thread at a time.
    TEPOR_INLINE void apply(double* x) noexcept;

    /// Column c of Z, n values: A^-1 times the unit vector of rows()[c].
    [[nodiscard]] const double* column(Index c) const noexcept { return columns_.data() + c * size_; }
    [[nodiscard]] const std::vector<Id>& rows() const noexcept { return rows_; }
    [[nodiscard]] Index rank() const noexcept { return static_cast<Index>(rows_.size()); }

  private:
    Index size_ = 0;
    std::vector<Id> rows_;
    std::vector<double> columns_; // Z, column by column
    std::vector<double> block_;   // D
    std::vector<double> factor_;  // L U of I + D G by rows, the pivots inverted
    std::vector<Id> pivot_;
    std::vector<double> small_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/linear/impl/low_rank.hpp>
#endif
