#pragma once
// A factor that serves a matrix with a few changed rows, such as the film of a small face in a sweep.

#include <algorithm>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/low_rank.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor::detail {

/// The values of a factored matrix and the low-rank update from them to the present ones.
class FewRows {
  public:
    /// @return whether they were not known before
    bool keep_base(const SparseMatrix& matrix) {
        if (!base_.empty()) return false;
        base_ = matrix.lower;
        return true;
    }
    void restore_base(SparseMatrix& matrix) {
        matrix.lower = base_;
        active_ = false;
    }
    /// The matrix was factored anew.
    void forget() {
        base_.clear();
        active_ = false;
        woodbury_ = LowRankUpdate{};
    }
    /// A solution with the base's factor becomes one of the present matrix.
    void apply(double* x) noexcept {
        if (active_) woodbury_.apply(x);
    }

    /// Makes `factor`, that of the base, serve `matrix`, which differs from it in at most `most` rows. @return see
    /// PlaneSolver::update
    Index update(const SparseMatrix& matrix, Index n, const SparseCholesky& factor, Index most) {
        std::vector<Id> rows;
        std::vector<Id> place(as_size(n), Id{-1}); // in rows
        const auto note = [&](Index row) {
            if (place[as_size(row)] >= 0) return;
            place[as_size(row)] = as_id(rows.size());
            rows.push_back(as_id(row));
        };
        std::vector<Index> changed; // entries
        std::vector<Index> changed_row;
        for (Index i = 0; i < n; ++i) {
            for (Index e = matrix.start[as_size(i)]; e < matrix.start[as_size(i) + 1]; ++e) {
                if (matrix.lower[as_size(e)] == base_[as_size(e)]) continue;
                note(i);
                note(matrix.column[as_size(e)]);
                changed.push_back(e);
                changed_row.push_back(i);
            }
            if (static_cast<Index>(rows.size()) > std::max<Index>(most, 256) && i + 1 < n)
                return n; // no matter how many more
        }
        active_ = false;
        if (rows.empty()) return 0;
        if (static_cast<Index>(rows.size()) > most) return static_cast<Index>(rows.size());
        const std::vector<Id>& known = woodbury_.rows();
        std::fill(place.begin(), place.end(), Id{-1});
        for (std::size_t k = 0; k < known.size(); ++k) place[as_size(known[k])] = as_id(k);
        const auto is_known = [&](Id row) { return place[as_size(row)] >= 0; };
        if (!std::all_of(rows.begin(), rows.end(), is_known)) {
            woodbury_.prepare(n, rows, [&factor](double* b, Index count) { factor.solve(b, count); });
            for (std::size_t k = 0; k < rows.size(); ++k) place[as_size(rows[k])] = as_id(k);
        }
        const std::size_t rank = woodbury_.rows().size();
        std::vector<double> block(rank * rank, 0.0);
        for (std::size_t k = 0; k < changed.size(); ++k) {
            const std::size_t e = as_size(changed[k]);
            const std::size_t i = as_size(place[as_size(changed_row[k])]);
            const std::size_t j = as_size(place[as_size(matrix.column[e])]);
            block[i * rank + j] = block[j * rank + i] = matrix.lower[e] - base_[e];
        }
        active_ = woodbury_.change(block.data());
        return active_ ? 0 : static_cast<Index>(rank);
    }

  private:
    std::vector<double> base_;
    LowRankUpdate woodbury_;
    bool active_ = false;
};

} // namespace tepor::detail
