#pragma once
// Building the levels of multigrid, and the cycle through them.

#include <algorithm>
#include <cmath>
#include <tepor/linear/impl/galerkin.hpp>
#include <tepor/linear/impl/multigrid_level.hpp>
#include <tepor/linear/impl/pivot.hpp>
#include <tepor/linear/multigrid.hpp>

namespace tepor {
namespace detail {

/// Rows in blocks fixed by their number alone. Few rows, or neighbours in other blocks for more than one row in twenty: one
/// block, since entries between blocks weaken the sweeps.
inline std::vector<Index> blocks_of(const SparseMatrix& a, Index rows) {
    const Index count = rows < 4000 ? 1 : rows < 50000 ? 2 : rows < 500000 ? 8 : 16;
    std::vector<Index> block;
    for (Index b = 0; b <= count; ++b) block.push_back(rows * b / count);
    Index astride = 0;
    for (std::size_t b = 1; b + 1 < block.size(); ++b) {
        for (Index i = block[b]; i < block[b + 1]; ++i) {
            bool any = false;
            for (Index e = a.start[as_size(i)]; e < a.start[as_size(i) + 1]; ++e)
                any = any || a.column[as_size(e)] < block[b];
            astride += any;
        }
    }
    if (astride * 20 > rows) return {0, rows};
    return block;
}

/// Every other border, for levels that have become small.
inline std::vector<Index> merged_blocks(const std::vector<Index>& block) {
    std::vector<Index> out;
    for (std::size_t b = 0; b + 1 < block.size(); b += 2) out.push_back(block[b]);
    out.push_back(block.back());
    return out;
}

} // namespace detail

TEPOR_INLINE bool Multigrid::setup(const SparseMatrix& matrix, Index n) {
    size_ = n;
    singular_row_ = -1;
    coarse_size_ = 0;
    level_.clear();
    complexity_ = 0.0;
    if (n == 0) return true;
    std::vector<Index> block = detail::blocks_of(matrix, n);
    SparseMatrix coarse;
    const SparseMatrix* a = &matrix;
    detail::Buffer<float> scale;
    detail::StrongGraph strong;
    detail::Prolongation p;
    detail::HalfProduct half;
    std::vector<std::vector<Id>> first; // a row of the level above for every row of a level
    const auto name = [&](Index row) {  // in the numbering of the first level
        for (auto above = first.rbegin(); above != first.rend(); ++above) row = (*above)[detail::as_size(row)];
        singular_row_ = row;
    };
    double first_entries = 1.0;
    for (Index rows = n;;) {
        const double entries = detail::as_double(a->start[detail::as_size(rows)]);
        if (level_.empty()) first_entries = entries;
        complexity_ += entries / first_entries;
        scale.reset(rows);
        for (Index i = 0; i < rows; ++i) {
            const double diagonal = a->diagonal(i);
            if (!(diagonal > 0.0) || !std::isfinite(diagonal)) {
                name(i);
                return false;
            }
            scale[i] = static_cast<float>(1.0 / std::sqrt(diagonal));
        }
        if (level_.empty()) scale_ = scale;
        if (rows <= options_.coarsest) {
            const Index bad = factor_coarsest(*a, rows, scale);
            if (bad >= 0) name(bad);
            return bad < 0;
        }
        double strength = rows < 1000 ? options_.low_strength : options_.strength;
        detail::Aggregates aggregates;
        while (true) {
            detail::find_strong(*a, rows, strength, strong);
            aggregates = detail::aggregate(strong, rows, block);
            if (aggregates.count * 10 < rows * 6 || !(strength > options_.low_strength)) break;
            strength = std::max(options_.low_strength, strength / 4.0);
        }
        if (aggregates.count == 0 ||
            aggregates.count * 10 > rows * 9) { // nothing left to coarsen: the sweeps settle it
            level_.push_back(detail::LevelMaker(*a, rows, scale, nullptr).make(block, block, half));
            return true;
        }
        detail::smooth_prolongation(strong, rows, aggregates, p);
        level_.push_back(detail::LevelMaker(*a, rows, scale, &p).make(block, aggregates.block, half));
        const Index count = aggregates.count;
        SparseMatrix next = detail::galerkin(half, count, detail::transpose(p, strong));
        detail::Buffer<float> below(count);
        for (Index c = 0; c < count; ++c) below[c] = static_cast<float>(1.0 / std::sqrt(next.diagonal(c)));
        detail::scale_coarse(level_.back(), below);
        if (level_.size() > 2) { // may be visited twice
            level_.back().right.reset(rows);
            level_.back().first.reset(rows);
        }
        coarse = std::move(next);
        a = &coarse;
        block = std::move(aggregates.block);
        first.push_back(std::move(aggregates.first));
        rows = count;
        while (block.size() > 2 && rows / static_cast<Index>(block.size() - 1) < 2000)
            block = detail::merged_blocks(block);
    }
}

TEPOR_INLINE Index Multigrid::factor_coarsest(const SparseMatrix& matrix, Index n, const detail::Buffer<float>& scale) {
    Index bad = -1;
    coarse_size_ = n;
    coarse_.assign(detail::as_size(n * n), 0.0);
    coarse_x_.resize(detail::as_size(n));
    coarse_right_.resize(detail::as_size(n));
    const double floor = 8.0 * detail::pivot_floor(size_); // the levels above have added their rounding
    for (Index i = 0; i < n; ++i) {
        double* row = coarse_.data() + i * n;
        for (Index p = matrix.start[detail::as_size(i)]; p < matrix.start[detail::as_size(i) + 1]; ++p) {
            const Index j = matrix.column[detail::as_size(p)];
            row[j] = matrix.lower[detail::as_size(p)] * static_cast<double>(scale[i]) * static_cast<double>(scale[j]);
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

TEPOR_INLINE void Multigrid::descend(std::size_t depth) noexcept {
    if (depth == level_.size()) { // the coarsest
        const Index n = coarse_size_;
        double* x = coarse_x_.data();
        for (Index i = 0; i < n; ++i) {
            const double* row = coarse_.data() + i * n;
            double sum = static_cast<double>(coarse_right_[detail::as_size(i)]);
            for (Index j = 0; j < i; ++j) sum -= row[j] * x[j];
            x[i] = sum * row[i];
        }
        for (Index i = n - 1; i >= 0; --i) {
            const double* row = coarse_.data() + i * n;
            x[i] *= row[i];
            for (Index j = 0; j < i; ++j) x[j] -= row[j] * x[i];
        }
        for (Index i = 0; i < n; ++i) coarse_right_[detail::as_size(i)] = static_cast<float>(x[i]);
        return;
    }
    detail::MultigridLevel& level = level_[depth];
    const bool last = depth + 1 == level_.size();
    float* coarse = last ? coarse_right_.data() : level_[depth + 1].x.data();
    for (Index c = 0; c < level.columns; ++c) coarse[c] = 0.0f;
    const Index pairs = static_cast<Index>(level.block.size()) / 2;
    detail::Crew* const crew = level.rows < 8000 ? nullptr : crew_.get(); // below, waking costs more than it gains
    const auto down = [&](Index pair) { detail::forward_blocks(level, detail::as_size(2 * pair), coarse); };
    detail::run_tasks(crew, pairs, down);
    detail::forward_between(level, coarse);
    if (level.columns > 0) {
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
    detail::MultigridLevel& level = level_[depth];
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
    float* x = level_.empty() ? coarse_right_.data() : level_[0].x.data();
    const detail::Slices slices{n};
    const auto enter = [&](Index k) {
        for (Index i = slices.begin(k); i < slices.end(k); ++i) {
            x[i] = static_cast<float>(r[i] * static_cast<double>(scale_[i]) * factor);
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
}

} // namespace tepor
