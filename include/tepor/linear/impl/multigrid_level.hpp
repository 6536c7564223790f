#pragma once
// Making a level of multigrid, and the sweeps over it.

#include <algorithm>
#include <tepor/linear/detail/multigrid_level.hpp>
#include <tepor/linear/impl/galerkin.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor::detail {

/// The padding of L (1, 2 or 4) with the least expected time: work per entry, and a mispredicted branch where the number
/// of groups differs from the usual one. The weights are fitted to measurements.
inline Index choose_padding(const SparseMatrix& a, Index n) {
    Index count[33] = {};
    for (Index i = 0; i < n; ++i) {
        ++count[std::min<Index>(32, a.start[as_size(i) + 1] - 1 - a.start[as_size(i)])];
    }
    Index best = 1;
    double least = 0.0;
    for (const Index padding : {1, 2, 4}) {
        double entries = 0.0;
        double groups[33] = {};
        for (Index length = 0; length < 33; ++length) {
            const Index group = (length + padding - 1) / padding;
            entries += as_double(count[length] * group * padding);
            groups[group] += as_double(count[length]);
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

/// Makes a level from its matrix: the entries L, and row by row Q = L P on the way to `t` = (L + D/2) P. Q is still to be
/// scaled by scale_coarse(). Without a next level `p` is null.
class LevelMaker {
  public:
    LevelMaker(const SparseMatrix& a, Index n, const Buffer<float>& scale, const Prolongation* p)
        : start_(a.start.data()), column_(a.column.data()), value_(a.lower.data()), n_(n), scale_(scale.data()), p_(p) {
        padding_ = choose_padding(a, n);
    }

    /// `coarse_block` are the blocks of the next level's rows, one for each of `block`.
    MultigridLevel make(const std::vector<Index>& block, const std::vector<Index>& coarse_block, HalfProduct& t) {
        MultigridLevel level;
        level.rows = n_;
        level.columns = p_ ? p_->columns : 0;
        level.padding = padding_;
        level.block = block;
        collect_cross(level);
        Index room = 0;
        for (Index i = 0; i < n_; ++i) room += (start_[i + 1] - start_[i] + padding_) + row_room(i);
        for (const MultigridLevel::Apart& e : level.cross) room += p_ ? p_->start[e.row + 1] - p_->start[e.row] : 0;
        level.entry.reset(room + 2 * n_); // pages that stay unused cost nothing
        level.start.reset(2 * n_ + 1);
        level.x.reset(n_);
        if (p_) {
            t.start.reserve(n_ + 1);
            t.column.reserve(5 * n_ + 64);
            t.value.reserve(5 * n_ + 64);
            t.mark.reserve(p_->columns);
            t.total.reserve(p_->columns);
            for (Index c = 0; c < p_->columns; ++c) {
                t.mark[c] = -1;
                t.total[c] = 0.0;
            }
        }
        MultigridLevel::Entry* const entry = level.entry.data();
        Index used = 0;
        for (std::size_t b = 0; b + 1 < block.size(); ++b) {
            for (Index i = block[b]; i < block[b + 1]; ++i) {
                level.start[2 * i] = as_id(used);
                used += own_row(entry + used, i, block[b]);
                level.start[2 * i + 1] = as_id(used);
                if (p_) used += coarse_row(entry + used, i, coarse_block[b], coarse_block[b + 1], t, level);
            }
        }
        level.start[2 * n_] = as_id(used);
        if (p_) t.start[n_] = t_used_;
        return level;
    }

  private:
    using Entry = MultigridLevel::Entry;

    /// Most entries that row i of Q and of T can have.
    Index row_room(Index i) const {
        if (!p_) return 0;
        Index room = 0;
        for (Index e = start_[i]; e < start_[i + 1]; ++e) room += p_->start[column_[e] + 1] - p_->start[column_[e]];
        return room;
    }

    void collect_cross(MultigridLevel& level) {
        for (std::size_t b = 1; b + 1 < level.block.size(); ++b) {
            for (Index i = level.block[b]; i < level.block[b + 1]; ++i) {
                for (Index e = start_[i]; e < start_[i + 1] - 1; ++e) {
                    if (column_[e] < level.block[b]) level.cross.push_back({as_id(i), column_[e], scaled(e, i)});
                }
            }
        }
        level.cross_product.reset(2 * static_cast<Index>(level.cross.size()));
        by_column_.resize(level.cross.size());
        for (std::size_t k = 0; k < by_column_.size(); ++k) by_column_[k] = as_id(k);
        std::sort(by_column_.begin(), by_column_.end(), [&](Id l, Id r) {
            const Id cl = level.cross[as_size(l)].column, cr = level.cross[as_size(r)].column;
            return cl != cr ? cl < cr : l < r;
        });
    }

    float scaled(Index e, Index i) const {
        return static_cast<float>(value_[e] * static_cast<double>(scale_[i]) * static_cast<double>(scale_[column_[e]]));
    }

    /// Row i of L inside its block, sorted: what was finished last is read last, so that nothing waits for it. Padding
    /// repeats the first column with zeros.
    Index own_row(Entry* to, Index i, Index block_begin) const {
        Index length = 0;
        for (Index e = start_[i]; e < start_[i + 1] - 1; ++e) {
            const Id j = column_[e];
            if (j < block_begin) continue;
            const Entry made{j, scaled(e, i)};
            Index at = length++;
            for (; at > 0 && to[at - 1].column > j; --at) to[at] = to[at - 1];
            to[at] = made;
        }
        if (length == 0) return 0;
        const Index padded = (length + padding_ - 1) / padding_ * padding_;
        if (padded > length) {
            std::copy_backward(to, to + length, to + padded);
            for (Index k = 0; k < padded - length; ++k) to[k] = {to[padded - length].column, 0.0f};
        }
        return padded;
    }

    /// Row i of Q, written to `to`, and of T.
    Index coarse_row(Entry* to, Index i, Index coarse_begin, Index coarse_end, HalfProduct& t, MultigridLevel& level) {
        const Id begin = t_used_;
        t.start[i] = begin;
        t.grow(begin, row_room(i));
        Id* column = t.column.data();
        double* value = t.value.data();
        Id* mark = t.mark.data();
        double* total = t.total.data();
        Id used = begin;
        const auto add = [&](Index j, double v) { // row j of P, without a branch on whether a column is new
            for (Index k = p_->start[j]; k < p_->start[j + 1]; ++k) {
                const Id c = p_->column[k];
                column[used] = c;
                used += mark[c] != i;
                mark[c] = as_id(i);
                total[c] += v * static_cast<double>(p_->value[k]);
            }
        };
        for (Index e = start_[i]; e < start_[i + 1] - 1; ++e) add(column_[e], value_[e]);
        const double own = static_cast<double>(scale_[i]);
        Index length = 0;
        const auto put = [&](Id c, double v) {
            const float q = static_cast<float>(v * own);
            if (c >= coarse_begin && c < coarse_end) {
                to[length++] = {c, q};
            } else {
                level.coarse_cross.push_back({as_id(i), c, q});
            }
        };
        for (Id k = begin; k < used; ++k) put(column[k], total[column[k]]);
        // Entries between blocks also count in the rows of their columns; these are few.
        for (; next_cross_ < by_column_.size(); ++next_cross_) {
            const MultigridLevel::Apart& apart = level.cross[as_size(by_column_[next_cross_])];
            if (apart.column != i) break;
            const double v = static_cast<double>(apart.value) / (own * static_cast<double>(scale_[apart.row]));
            for (Index k = p_->start[apart.row]; k < p_->start[apart.row + 1]; ++k) {
                put(p_->column[k], v * static_cast<double>(p_->value[k]));
            }
        }
        if (length % 2 != 0) {
            to[length] = {to[0].column, 0.0f};
            ++length;
        }
        add(i, 0.5 * value_[start_[i + 1] - 1]);
        for (Id k = begin; k < used; ++k) {
            value[k] = total[column[k]];
            total[column[k]] = 0.0;
        }
        t_used_ = used;
        return length;
    }

    const Id* start_;
    const Id* column_;
    const double* value_;
    Index n_;
    const float* scale_;
    const Prolongation* p_;
    Index padding_ = 1;
    Id t_used_ = 0;
    std::vector<Id> by_column_; // entries between blocks by columns
    std::size_t next_cross_ = 0;
};

/// Finishes Q once the scale of the next level is known.
inline void scale_coarse(MultigridLevel& level, const Buffer<float>& coarse_scale) noexcept {
    const float* scale = coarse_scale.data();
    MultigridLevel::Entry* entry = level.entry.data();
    for (Index i = 0; i < level.rows; ++i) {
        for (Index e = level.start[2 * i + 1]; e < level.start[2 * i + 2]; ++e)
            entry[e].value *= scale[entry[e].column];
    }
    for (MultigridLevel::Apart& e : level.coarse_cross) e.value *= scale[e.column];
}

/// own - sum of value x[column] over a row whose length is a multiple of Padding.
template <Index Padding>
inline float gather(const MultigridLevel::Entry* e, const MultigridLevel::Entry* end, const float* x,
                    float own) noexcept {
    for (; e != end; e += Padding) {
        own -= e[0].value * x[e[0].column];
        if constexpr (Padding > 1) own -= e[1].value * x[e[1].column];
        if constexpr (Padding > 2) {
            own -= e[2].value * x[e[2].column];
            own -= e[3].value * x[e[3].column];
        }
    }
    return own;
}

/// x[column] -= value own over such a row.
template <Index Padding>
inline void scatter(const MultigridLevel::Entry* e, const MultigridLevel::Entry* end, float* x, float own) noexcept {
    for (; e != end; e += Padding) {
        x[e[0].column] -= e[0].value * own;
        if constexpr (Padding > 1) x[e[1].column] -= e[1].value * own;
        if constexpr (Padding > 2) {
            x[e[2].column] -= e[2].value * own;
            x[e[3].column] -= e[3].value * own;
        }
    }
}

template <Index Padding>
inline void forward_row(const Id* start, const MultigridLevel::Entry* entry, float* x, float* coarse,
                        Index i) noexcept {
    const MultigridLevel::Entry* middle = entry + start[2 * i + 1];
    const float own = gather<Padding>(entry + start[2 * i], middle, x, x[i]);
    x[i] = own;
    scatter<2>(middle, entry + start[2 * i + 2], coarse, own);
}

template <Index Padding>
inline void backward_row(const Id* start, const MultigridLevel::Entry* entry, float* x, const float* coarse,
                         Index i) noexcept {
    const MultigridLevel::Entry* middle = entry + start[2 * i + 1];
    const float own = gather<2>(middle, entry + start[2 * i + 2], coarse, x[i]);
    x[i] = own;
    scatter<Padding>(entry + start[2 * i], middle, x, own);
}

/// The way down over the blocks `first` and `first + 1` (if there), row by row in turn so that neither waits for itself:
/// x solves (I + L) x = x, coarse loses Q^T x.
template <Index Padding>
inline void forward_pair(MultigridLevel& level, std::size_t first, float* coarse) noexcept {
    const Id* start = level.start.data();
    const MultigridLevel::Entry* entry = level.entry.data();
    float* x = level.x.data();
    Index i = level.block[first];
    const Index i_end = level.block[first + 1];
    Index j = i_end;
    const Index j_end = first + 2 < level.block.size() ? level.block[first + 2] : j;
    for (; i < i_end && j < j_end; ++i, ++j) {
        forward_row<Padding>(start, entry, x, coarse, i);
        forward_row<Padding>(start, entry, x, coarse, j);
    }
    for (; i < i_end; ++i) forward_row<Padding>(start, entry, x, coarse, i);
    for (; j < j_end; ++j) forward_row<Padding>(start, entry, x, coarse, j);
}

/// The way up: x loses Q coarse, then x solves (I + L^T) x = x.
template <Index Padding>
inline void backward_pair(MultigridLevel& level, std::size_t first, const float* coarse) noexcept {
    const Id* start = level.start.data();
    const MultigridLevel::Entry* entry = level.entry.data();
    float* x = level.x.data();
    const Index i_begin = level.block[first];
    Index i = level.block[first + 1];
    const Index j_begin = i;
    Index j = first + 2 < level.block.size() ? level.block[first + 2] : j_begin;
    while (i > i_begin && j > j_begin) {
        backward_row<Padding>(start, entry, x, coarse, --i);
        backward_row<Padding>(start, entry, x, coarse, --j);
    }
    while (i > i_begin) backward_row<Padding>(start, entry, x, coarse, --i);
    while (j > j_begin) backward_row<Padding>(start, entry, x, coarse, --j);
}

inline void forward_blocks(MultigridLevel& level, std::size_t first, float* coarse) noexcept {
    switch (level.padding) {
    case 1: return forward_pair<1>(level, first, coarse);
    case 2: return forward_pair<2>(level, first, coarse);
    default: return forward_pair<4>(level, first, coarse);
    }
}

inline void backward_blocks(MultigridLevel& level, std::size_t first, const float* coarse) noexcept {
    switch (level.padding) {
    case 1: return backward_pair<1>(level, first, coarse);
    case 2: return backward_pair<2>(level, first, coarse);
    default: return backward_pair<4>(level, first, coarse);
    }
}

/// What lies between blocks, once all of them are down: coarse loses its part of Q^T x, and x its part of A x for the way up.
inline void forward_between(MultigridLevel& level, float* coarse) noexcept {
    float* x = level.x.data();
    for (const MultigridLevel::Apart& e : level.coarse_cross) coarse[e.column] -= e.value * x[e.row];
    float* product = level.cross_product.data();
    for (const MultigridLevel::Apart& e : level.cross) { // all products before any change
        *product++ = e.value * x[e.column];
        *product++ = e.value * x[e.row];
    }
    product = level.cross_product.data();
    for (const MultigridLevel::Apart& e : level.cross) {
        x[e.row] -= *product++;
        x[e.column] -= *product++;
    }
}

/// x loses the part of Q coarse that lies between blocks.
inline void backward_between(MultigridLevel& level, const float* coarse) noexcept {
    float* x = level.x.data();
    for (const MultigridLevel::Apart& e : level.coarse_cross) x[e.row] -= e.value * coarse[e.column];
}

/// y -= A x.
inline void subtract_product(const MultigridLevel& level, const float* x, float* y) noexcept {
    const Id* start = level.start.data();
    for (Index i = 0; i < level.rows; ++i) {
        float sum = x[i];
        for (Index e = start[2 * i]; e < start[2 * i + 1]; ++e) {
            const MultigridLevel::Entry& entry = level.entry[e];
            sum += entry.value * x[entry.column];
            y[entry.column] -= entry.value * x[i];
        }
        y[i] -= sum;
    }
    for (const MultigridLevel::Apart& e : level.cross) {
        y[e.row] -= e.value * x[e.column];
        y[e.column] -= e.value * x[e.row];
    }
}

} // namespace tepor::detail
