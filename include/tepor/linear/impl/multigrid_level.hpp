#pragma once
// Making a level of multigrid, and the sweeps over it.

#include <algorithm>
#include <cmath>
#include <tepor/linear/detail/multigrid_level.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor::detail {

/// Padding (1, 2 or 4) with the least expected time: work per entry, and a mispredicted branch where the number of groups
/// differs from the usual one. The weights are fitted to measurements.
inline Index choose_padding(const SparseMatrix& a, Index n) {
    Index lengths[33] = {};
    for (Index i = 0; i < n; ++i) {
        ++lengths[std::min<Index>(32, a.start[as_size(i) + 1] - 1 - a.start[as_size(i)])];
    }
    Index best = 1;
    double least = 0.0;
    for (const Index padding : {1, 2, 4}) {
        double entries = 0.0;
        double groups[33] = {};
        for (Index length = 0; length < 33; ++length) {
            const Index count = (length + padding - 1) / padding;
            entries += as_double(lengths[length] * count * padding);
            groups[count] += as_double(lengths[length]);
        }
        const double usual = *std::max_element(groups, groups + 33);
        const double time = entries * 1.0 + (as_double(n) - usual) * 8.0;
        if (padding == 1 || time < least) {
            least = time;
            best = padding;
        }
    }
    return best;
}

inline MultigridLevel make_level(const SparseMatrix& a, Index n, const std::vector<Index>& block,
                                 const Buffer<float>& scale) {
    MultigridLevel level;
    level.rows = n;
    level.block = block;
    level.padding = choose_padding(a, n);
    level.start.reset(n + 1);
    const Id* start = a.start.data();
    const Id* column = a.column.data();
    const double* value = a.lower.data();
    Index room = 0;
    for (Index i = 0; i < n; ++i) {
        const Index length = start[i + 1] - 1 - start[i];
        room += (length + level.padding - 1) / level.padding * level.padding;
    }
    level.column.reset(room);
    level.value.reset(room);
    Index used = 0;
    struct Pair {
        Id column;
        float value;
    };
    std::vector<Pair> row;
    for (std::size_t b = 0; b + 1 < block.size(); ++b) {
        for (Index i = block[b]; i < block[b + 1]; ++i) {
            level.start[i] = as_id(used);
            row.clear();
            const double own = static_cast<double>(scale[i]);
            for (Index p = start[i]; p < start[i + 1] - 1; ++p) {
                const Index j = column[p];
                const float v = static_cast<float>(value[p] * own * static_cast<double>(scale[j]));
                if (j >= block[b]) {
                    row.push_back({as_id(j), v});
                } else {
                    level.cross_row.push_back(as_id(i));
                    level.cross_column.push_back(as_id(j));
                    level.cross_value.push_back(v);
                }
            }
            if (row.empty()) continue;
            // The nearest row last: it was finished last, so nothing else waits for it. Padding repeats the first column.
            for (std::size_t k = 1; k < row.size(); ++k) {
                const Pair moved = row[k];
                std::size_t to = k;
                for (; to > 0 && row[to - 1].column > moved.column; --to) row[to] = row[to - 1];
                row[to] = moved;
            }
            const Index length = static_cast<Index>(row.size());
            const Index padded = (length + level.padding - 1) / level.padding * level.padding;
            for (Index k = length; k < padded; ++k, ++used) {
                level.column[used] = row[0].column;
                level.value[used] = 0.0f;
            }
            for (const Pair& entry : row) {
                level.column[used] = entry.column;
                level.value[used++] = entry.value;
            }
        }
    }
    level.start[n] = as_id(used);
    level.x.reset(n);
    level.right.reset(n);
    level.residual.reset(n);
    for (Index i = 0; i < n; ++i) level.x[i] = 0.0f;
    return level;
}

template <Index Padding>
inline void forward_row(const Id* start, const Id* column, const float* value, const float* right, float* x,
                        float* residual, Index i) noexcept {
    const Index begin = start[i], end = start[i + 1];
    float own = right[i];
    for (Index p = begin; p < end; p += Padding) {
        for (Index k = 0; k < Padding; ++k) own -= value[p + k] * x[column[p + k]];
    }
    x[i] = own;
    residual[i] = 0.0f;
    for (Index p = begin; p < end; p += Padding) {
        for (Index k = 0; k < Padding; ++k) residual[column[p + k]] -= value[p + k] * own;
    }
}

template <Index Padding>
inline void backward_row(const Id* start, const Id* column, const float* value, float* right, float* x,
                         Index i) noexcept {
    const Index begin = start[i], end = start[i + 1];
    float own = right[i];
    for (Index p = begin; p < end; p += Padding) {
        for (Index k = 0; k < Padding; ++k) own -= value[p + k] * x[column[p + k]];
    }
    x[i] = own;
    for (Index p = begin; p < end; p += Padding) {
        for (Index k = 0; k < Padding; ++k) right[column[p + k]] -= value[p + k] * own;
    }
}

/// Gauss-Seidel from zero over the blocks `first` and `first + 1` (if there), row by row in turn: x solves
/// (I + lower) x = right inside each block, residual = right - A x without the entries between blocks.
template <Index Padding>
inline void forward_blocks(MultigridLevel& level, std::size_t first) noexcept {
    const Id* start = level.start.data();
    const Id* column = level.column.data();
    const float* value = level.value.data();
    const float* right = level.right.data();
    float* x = level.x.data();
    float* residual = level.residual.data();
    Index i = level.block[first];
    const Index i_end = level.block[first + 1];
    Index j = i_end;
    const Index j_end = first + 2 < level.block.size() ? level.block[first + 2] : j;
    for (; i < i_end && j < j_end; ++i, ++j) {
        forward_row<Padding>(start, column, value, right, x, residual, i);
        forward_row<Padding>(start, column, value, right, x, residual, j);
    }
    for (; i < i_end; ++i) forward_row<Padding>(start, column, value, right, x, residual, i);
    for (; j < j_end; ++j) forward_row<Padding>(start, column, value, right, x, residual, j);
}

/// One backward Gauss-Seidel sweep from the present x; `right` is used up.
template <Index Padding>
inline void backward_blocks(MultigridLevel& level, std::size_t first) noexcept {
    const Id* start = level.start.data();
    const Id* column = level.column.data();
    const float* value = level.value.data();
    float* right = level.right.data();
    float* x = level.x.data();
    const Index i_begin = level.block[first];
    Index i = level.block[first + 1];
    const Index j_begin = i;
    Index j = first + 2 < level.block.size() ? level.block[first + 2] : j_begin;
    while (i > i_begin && j > j_begin) {
        backward_row<Padding>(start, column, value, right, x, --i);
        backward_row<Padding>(start, column, value, right, x, --j);
    }
    while (i > i_begin) backward_row<Padding>(start, column, value, right, x, --i);
    while (j > j_begin) backward_row<Padding>(start, column, value, right, x, --j);
}

inline void forward_blocks(MultigridLevel& level, std::size_t first) noexcept {
    switch (level.padding) {
    case 1: return forward_blocks<1>(level, first);
    case 2: return forward_blocks<2>(level, first);
    default: return forward_blocks<4>(level, first);
    }
}

inline void backward_blocks(MultigridLevel& level, std::size_t first) noexcept {
    switch (level.padding) {
    case 1: return backward_blocks<1>(level, first);
    case 2: return backward_blocks<2>(level, first);
    default: return backward_blocks<4>(level, first);
    }
}

/// target -= (entries between blocks) x, both ways.
inline void subtract_cross(const MultigridLevel& level, const float* x, float* target) noexcept {
    const std::size_t count = level.cross_value.size();
    const Id* row = level.cross_row.data();
    const Id* column = level.cross_column.data();
    const float* value = level.cross_value.data();
    for (std::size_t k = 0; k < count; ++k) {
        target[row[k]] -= value[k] * x[column[k]];
        target[column[k]] -= value[k] * x[row[k]];
    }
}

/// coarse = P^T fine.
inline void restrict_to(const Prolongation& p, const float* fine, float* coarse) noexcept {
    for (Index c = 0; c < p.columns; ++c) coarse[c] = 0.0f;
    const Id* start = p.start.data();
    const Id* column = p.column.data();
    const float* value = p.value.data();
    for (Index i = 0; i < p.rows; ++i) {
        const float v = fine[i];
        for (Index k = start[i]; k < start[i + 1]; ++k) coarse[column[k]] += value[k] * v;
    }
}

/// fine += P coarse.
inline void prolong_from(const Prolongation& p, const float* coarse, float* fine) noexcept {
    const Id* start = p.start.data();
    const Id* column = p.column.data();
    const float* value = p.value.data();
    for (Index i = 0; i < p.rows; ++i) {
        float v = fine[i];
        for (Index k = start[i]; k < start[i + 1]; ++k) v += value[k] * coarse[column[k]];
        fine[i] = v;
    }
}

} // namespace tepor::detail
