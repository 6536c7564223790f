#pragma once
// Building the levels of multigrid, and the cycle through them.

#include <algorithm>
#include <cmath>
#include <tepor/linear/impl/level_maker.hpp>
#include <tepor/linear/impl/multigrid_sweeps.hpp>
#include <tepor/linear/impl/pivot.hpp>
#include <tepor/linear/multigrid.hpp>
#include <type_traits>

namespace tepor {

namespace detail {

/// What set-up works on, and its memory.
struct MultigridSetup {
    RowBlocks blocks;
    Buffer<double> scale;
    StrongGraph strong;
    Prolongation p;
    HalfProduct half;
    std::vector<std::vector<Id>> first; ///< a row of the level above for every row of a level

    /// A row in the numbering of the first level.
    [[nodiscard]] Index named(Index row) const {
        for (auto above = first.rbegin(); above != first.rend(); ++above) row = (*above)[as_size(row)];
        return row;
    }

    /// Aggregates of the strong couplings, of weaker ones where coarsening would stall.
    Aggregates coarsen(const SparseMatrix& a, Index rows, const MultigridOptions& options, Crew* crew) {
        double strength = rows < 1000 ? options.low_strength : options.strength;
        while (true) {
            find_strong(a, rows, strength, blocks, crew, strong);
            Aggregates out = aggregate(strong, rows, blocks, crew);
            if (out.count * 10 < rows * 6 || !(strength > options.low_strength)) return out;
            strength = std::max(options.low_strength, strength / 4.0);
        }
    }
};

} // namespace detail

TEPOR_INLINE bool Multigrid::setup(const SparseMatrix& matrix, Index n) {
    size_ = n;
    singular_row_ = -1;
    coarse_size_ = 0;
    large_.clear();
    small_.clear();
    complexity_ = 0.0;
    if (n == 0) return true;
    detail::MultigridSetup work;
    work.blocks = detail::blocks_of(matrix, n);
    detail::find_far(matrix, work.blocks);
    const Index bad_row = detail::scale_rows(matrix, n, work.blocks, work.scale);
    if (bad_row >= 0) {
        singular_row_ = bad_row;
        return false;
    }
    scale_.reset(n);
    for (Index i = 0; i < n; ++i) scale_[i] = static_cast<float>(work.scale[i]);
    SparseMatrix coarse;
    const SparseMatrix* a = &matrix;
    const double first_entries = detail::as_double(matrix.start[detail::as_size(n)]);
    for (Index rows = n;;) {
        complexity_ += detail::as_double(a->start[detail::as_size(rows)]) / first_entries;
        if (rows <= options_.coarsest) {
            const Index bad = factor_coarsest(*a, rows, work.scale);
            if (bad >= 0) singular_row_ = work.named(bad);
            return bad < 0;
        }
        const Index below =
            large_.size() < 2 ? add_level(large_, *a, rows, work, coarse) : add_level(small_, *a, rows, work, coarse);
        if (below <= 0) return below == 0;
        a = &coarse;
        rows = below;
    }
}

/// Adds the level of `a`; `next` becomes the matrix below it.
/// @return its rows, 0 where there is none, -1 when it is singular
template <class Level>
Index Multigrid::add_level(std::vector<Level>& levels, const SparseMatrix& a, Index rows, detail::MultigridSetup& work,
                           SparseMatrix& next) {
    using Real = typename Level::Real;
    detail::Crew* const crew = rows < 8000 ? nullptr : crew_.get();
    detail::Aggregates aggregates = work.coarsen(a, rows, options_, crew);
    if (aggregates.count == 0 || aggregates.count * 10 > rows * 9) { // nothing left to coarsen: the sweeps settle it
        levels.push_back(detail::LevelMaker<Real>(a, rows, work.scale, work.blocks, nullptr)
                             .make(work.blocks.begin, crew, work.half));
        return 0;
    }
    detail::smooth_prolongation(work.strong, rows, aggregates, work.blocks, crew, work.p);
    work.strong = {}; // memory is scarcest from here on
    aggregates.of = {};
    levels.push_back(
        detail::LevelMaker<Real>(a, rows, work.scale, work.blocks, &work.p).make(aggregates.block, crew, work.half));
    const Index count = aggregates.count;
    const detail::RestrictionRows restriction = detail::transpose(work.p, aggregates, work.blocks, crew, a);
    work.p = {};
    next = detail::galerkin(work.half, aggregates, restriction, work.blocks, crew);
    if constexpr (std::is_same_v<Real, double>) { // may be visited twice
        levels.back().right.reset(rows);
        levels.back().first.reset(rows);
    }
    work.first.push_back(std::move(aggregates.first));
    work.blocks.begin = std::move(aggregates.block);
    detail::merge_small(work.blocks);
    detail::find_far(next, work.blocks);
    const Index bad = detail::scale_rows(next, count, work.blocks, work.scale);
    if (bad >= 0) {
        singular_row_ = work.named(bad);
        return -1;
    }
    detail::scale_coarse(levels.back(), work.scale, crew);
    return count;
}

TEPOR_INLINE Index Multigrid::factor_coarsest(const SparseMatrix& matrix, Index n,
                                              const detail::Buffer<double>& scale) {
    Index bad = -1;
    coarse_size_ = n;
    coarse_.assign(detail::as_size(n * n), 0.0);
    coarse_x_.resize(detail::as_size(n));
    const double floor = 8.0 * detail::pivot_floor(size_); // the levels above have added their rounding
    for (Index i = 0; i < n; ++i) {
        double* row = coarse_.data() + i * n;
        for (Index p = matrix.start[detail::as_size(i)]; p < matrix.start[detail::as_size(i) + 1]; ++p) {
            const Index j = matrix.column[detail::as_size(p)];
            row[j] = matrix.lower[detail::as_size(p)] * scale[i] * scale[j];
        }
        for (Index j = 0; j < i; ++j) {
            const double* other = coarse_.data() + j * n;
            double sum = row[j];
            for (Index k = 0; k < j; ++k) sum -= row[k] * other[k];
            row[j] = sum * other[j];
        }
        double pivot = row[i];
        for (Index k = 0; k < i; ++k) pivot -= row[k] * row[k];
        if (!(pivot > floor)) {
            if (bad < 0) bad = i;
            pivot = 1.0;
        }
        row[i] = 1.0 / std::sqrt(pivot);
    }
    return bad;
}

TEPOR_INLINE void Multigrid::solve_coarsest() noexcept {
    const Index n = coarse_size_;
    double* x = coarse_x_.data();
    for (Index i = 0; i < n; ++i) {
        const double* row = coarse_.data() + i * n;
        double sum = x[i];
        for (Index j = 0; j < i; ++j) sum -= row[j] * x[j];
        x[i] = sum * row[i];
    }
    for (Index i = n - 1; i >= 0; --i) {
        const double* row = coarse_.data() + i * n;
        x[i] *= row[i];
        for (Index j = 0; j < i; ++j) x[j] -= row[j] * x[i];
    }
}

// Through the level at `depth` and all below it.
TEPOR_INLINE void Multigrid::descend(std::size_t depth) noexcept {
    const std::size_t next = depth + 1;
    if (depth < large_.size()) {
        if (next < large_.size()) return pass(large_[depth], depth, large_[next].x.data());
        return pass(large_[depth], depth, small_.empty() ? coarse_x_.data() : small_[0].x.data());
    }
    const std::size_t k = depth - large_.size();
    if (k == small_.size()) return solve_coarsest();
    pass(small_[k], depth, k + 1 < small_.size() ? small_[k + 1].x.data() : coarse_x_.data());
}

template <class Level, class Coarse>
void Multigrid::pass(Level& level, std::size_t depth, Coarse* coarse) noexcept {
    for (Index c = 0; c < level.columns; ++c) coarse[c] = Coarse{0};
    const Index pairs = static_cast<Index>(level.block.size()) / 2;
    detail::Crew* const crew = level.rows < 8000 ? nullptr : crew_.get(); // below, waking costs more than it gains
    const auto down = [&](Index pair) { detail::forward_blocks(level, detail::as_size(2 * pair), coarse); };
    detail::run_tasks(crew, pairs, down);
    detail::forward_between(level, coarse);
    if (level.columns > 0) {
        const bool last = depth + 1 == large_.size() + small_.size();
        if (depth > 0 && !last && level.columns * 5 < level.rows * 2) {
            descend_twice(depth + 1);
        } else {
            descend(depth + 1);
        }
    }
    detail::backward_between(level, coarse);
    const auto up = [&](Index pair) { detail::backward_blocks(level, detail::as_size(2 * pair), coarse); };
    detail::run_tasks(crew, pairs, up);
}

// A second visit from the residual of the first, so that convergence does not fade with the number of levels. Below the
// first coarse level it costs a few percent of the cycle.
TEPOR_INLINE void Multigrid::descend_twice(std::size_t depth) noexcept {
    detail::MultigridLevel<double>& level = small_[depth - large_.size()];
    std::copy_n(level.x.data(), level.rows, level.right.data());
    descend(depth);
    std::copy_n(level.x.data(), level.rows, level.first.data());
    std::copy_n(level.right.data(), level.rows, level.x.data());
    detail::subtract_product(level, level.first.data(), level.x.data());
    descend(depth);
    for (Index i = 0; i < level.rows; ++i) level.x[i] += level.first[i];
}

TEPOR_INLINE double Multigrid::cycle(const double* r, double* z) noexcept {
    const Index n = size_;
    if (n == 0) return 0.0;
    // Single precision has a small range: work on r over its largest value. A sample is near enough.
    const auto sample = [&](Index step) {
        double largest = 0.0;
        for (Index i = 0; i < n; i += step)
            largest = std::max(largest, std::abs(r[i] * static_cast<double>(scale_[i])));
        return largest;
    };
    double largest = sample(n < 1000 ? 1 : 13);
    if (!(largest > 0.0)) largest = sample(1);
    if (!(largest > 0.0) || !std::isfinite(largest)) {
        for (Index i = 0; i < n; ++i) z[i] = largest > 0.0 ? r[i] : 0.0;
        return largest;
    }
    const double factor = 1.0 / largest;
    const auto through = [&](auto* x) {
        using Real = std::remove_pointer_t<decltype(x)>;
        const detail::Slices slices{n};
        const auto enter = [&](Index k) {
            for (Index i = slices.begin(k); i < slices.end(k); ++i) {
                x[i] = static_cast<Real>(r[i] * static_cast<double>(scale_[i]) * factor);
            }
        };
        detail::run_tasks(crew_.get(), slices.count(), enter);
        descend(0);
        double part[detail::Slices::most];
        const auto leave = [&](Index k) {
            double even = 0.0, odd = 0.0;
            for (Index i = slices.begin(k); i < slices.end(k); ++i) {
                const double ri = r[i];
                const double zi = static_cast<double>(x[i]) * static_cast<double>(scale_[i]) * largest;
                z[i] = zi;
                (i % 2 == 0 ? even : odd) += ri * zi;
            }
            part[k] = even + odd;
        };
        detail::run_tasks(crew_.get(), slices.count(), leave);
        double sum = 0.0;
        for (Index k = 0; k < slices.count(); ++k) sum += part[k];
        return sum;
    };
    return large_.empty() ? through(coarse_x_.data()) : through(large_[0].x.data());
}

} // namespace tepor
