#pragma once
// Rows of a multigrid level in blocks that are worked on independently, and what passes between them.

#include <algorithm>
#include <cmath>
#include <tepor/linear/detail/buffer.hpp>
#include <tepor/linear/detail/crew.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor::detail {

/// Borders of the blocks and the entries astride them. All set-up works pair by pair, each pair in one task, and adds what
/// passes between pairs afterwards in a fixed order: the same bits at any number of threads.
struct RowBlocks {
    struct Far {
        Id row;   ///< in a later block than its column
        Id entry; ///< position in the matrix
    };
    std::vector<Index> begin; ///< first row of each block, and the end
    std::vector<Far> far;     ///< by rows

    [[nodiscard]] std::size_t count() const noexcept { return begin.size() - 1; }
    [[nodiscard]] Index pairs() const noexcept { return static_cast<Index>(begin.size()) / 2; }
    [[nodiscard]] Index pair_begin(Index k) const noexcept { return begin[as_size(2 * k)]; }
    [[nodiscard]] Index pair_end(Index k) const noexcept { return begin[std::min(as_size(2 * k + 2), count())]; }

    /// task(b) for every block, pair by pair.
    template <class Task>
    void each(Crew* crew, const Task& task) const noexcept {
        run_tasks(crew, pairs(), [&](Index k) {
            task(as_size(2 * k));
            if (as_size(2 * k + 1) < count()) task(as_size(2 * k + 1));
        });
    }
};

/// Rows in blocks fixed by their number alone. Few rows, or neighbours in other blocks for more than one row in twenty: one
/// block, since entries between blocks weaken the sweeps.
inline RowBlocks blocks_of(const SparseMatrix& a, Index rows) {
    const Index count = rows < 4000 ? 1 : rows < 50000 ? 2 : rows < 500000 ? 8 : 16;
    RowBlocks out;
    for (Index b = 0; b <= count; ++b) out.begin.push_back(rows * b / count);
    Index astride = 0;
    for (std::size_t b = 1; b < out.count(); ++b) {
        for (Index i = out.begin[b]; i < out.begin[b + 1]; ++i) {
            bool any = false;
            for (Index e = a.start[as_size(i)]; e < a.start[as_size(i) + 1]; ++e)
                any = any || a.column[as_size(e)] < out.begin[b];
            astride += any;
        }
    }
    if (astride * 20 > rows) out.begin = {0, rows};
    return out;
}

/// Every other border, for levels that have become small.
inline void merge_small(RowBlocks& blocks) {
    while (blocks.count() > 1 && blocks.begin.back() / static_cast<Index>(blocks.count()) < 2000) {
        std::vector<Index> kept;
        for (std::size_t b = 0; b < blocks.count(); b += 2) kept.push_back(blocks.begin[b]);
        kept.push_back(blocks.begin.back());
        blocks.begin = std::move(kept);
    }
}

inline void find_far(const SparseMatrix& a, RowBlocks& blocks) {
    blocks.far.clear();
    const Id* start = a.start.data();
    const Id* column = a.column.data();
    for (std::size_t b = 1; b < blocks.count(); ++b) {
        const Index begin = blocks.begin[b];
        for (Index i = begin; i < blocks.begin[b + 1]; ++i) {
            for (Index e = start[i]; e < start[i + 1] - 1; ++e) {
                if (column[e] < begin) blocks.far.push_back({as_id(i), as_id(e)});
            }
        }
    }
}

/// scale[i] = 1 / sqrt(a_ii + s_i), s_i where entries between blocks outweigh half the diagonal; see MultigridLevel.
/// @return a row whose diagonal is not positive, or -1
inline Index scale_rows(const SparseMatrix& a, Index rows, const RowBlocks& blocks, Buffer<double>& scale) {
    scale.reset(rows);
    for (Index i = 0; i < rows; ++i) scale[i] = 0.0;
    for (const RowBlocks::Far& f : blocks.far) {
        const double v = std::abs(a.lower[as_size(f.entry)]);
        scale[f.row] += v;
        scale[a.column[as_size(f.entry)]] += v;
    }
    for (Index i = 0; i < rows; ++i) {
        const double diagonal = a.diagonal(i), between = scale[i];
        if (!(diagonal > 0.0) || !std::isfinite(diagonal)) return i;
        const double more = between > 0.5 * diagonal ? between - 0.49 * diagonal : 0.0;
        scale[i] = 1.0 / std::sqrt(diagonal + more);
    }
    return -1;
}

/// Work space for tasks, made before they start: one for each task with threads, else one for all.
template <class Scratch>
class TaskScratch {
  public:
    TaskScratch(const Crew* crew, Index tasks, Index size) {
        shared_ = !crew || tasks < 2;
        all_.resize(as_size(shared_ ? Index{1} : tasks));
        for (Scratch& one : all_) one.prepare(size);
    }
    Scratch& operator[](Index task) noexcept { return all_[as_size(shared_ ? Index{0} : task)]; }

  private:
    bool shared_ = true;
    std::vector<Scratch> all_;
};

/// Sums by column of one sparse row: which columns have been met in the row, and their sums.
template <class Real>
struct RowSums {
    Buffer<Id> mark;
    Buffer<Real> total;

    void prepare(Index columns) {
        mark.reset(columns + 1);
        total.reset(columns + 1);
        for (Index c = 0; c <= columns; ++c) {
            mark[c] = -1;
            total[c] = Real{0};
        }
    }
};

} // namespace tepor::detail
