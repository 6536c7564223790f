#pragma once
// Making a level of multigrid, and the sweeps over it.

#include <algorithm>
#include <tepor/linear/detail/multigrid_level.hpp>
#include <tepor/linear/impl/galerkin.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor::detail {

/// Counts of rows by length, and the padding (1, 2 or 4) with the least expected time: work per entry, and a mispredicted
/// branch where the number of groups differs from the usual one. The weights are fitted to measurements.
struct RowLengths {
    Index count[33] = {};

    void add(Index length) noexcept { ++count[std::min<Index>(32, length)]; }

    [[nodiscard]] Index padding() const noexcept {
        Index best = 1;
        double least = 0.0;
        for (const Index padding : {1, 2, 4}) {
            double entries = 0.0, rows = 0.0;
            double groups[33] = {};
            for (Index length = 0; length < 33; ++length) {
                const Index group = (length + padding - 1) / padding;
                const double here = as_double(count[length]);
                rows += here;
                entries += here * as_double(group * padding);
                groups[group] += here;
            }
            const double usual = *std::max_element(groups, groups + 33);
            const double time = entries * 1.0 + (rows - usual) * 8.0;
            if (padding == 1 || time < least) {
                least = time;
                best = padding;
            }
        }
        return best;
    }
};

/// One row under construction: sorted by column (what was finished last is read last, so nothing waits for it), padded by
/// repeating the first column with zeros.
class RowMaker {
  public:
    void clear() { row_.clear(); }
    void add(Id column, float value) { row_.push_back({column, value}); }

    Index write(MultigridLevel::Entry* to, Index padding) {
        if (row_.empty()) return 0;
        for (std::size_t k = 1; k < row_.size(); ++k) {
            const MultigridLevel::Entry moved = row_[k];
            std::size_t at = k;
            for (; at > 0 && row_[at - 1].column > moved.column; --at) row_[at] = row_[at - 1];
            row_[at] = moved;
        }
        const Index length = static_cast<Index>(row_.size());
        const Index padded = (length + padding - 1) / padding * padding;
        for (Index k = length; k < padded; ++k) *to++ = {row_[0].column, 0.0f};
        std::copy(row_.begin(), row_.end(), to);
        return padded;
    }

  private:
    std::vector<MultigridLevel::Entry> row_;
};

/// A level from its matrix, the product of half of it with the prolongation, and the scales of both levels. `t` is null
/// where there is no next level. `coarse_block` are the blocks of the next level's rows, one for each of `block`.
inline MultigridLevel make_level(const SparseMatrix& a, Index n, const std::vector<Index>& block,
                                 const Buffer<float>& scale, const HalfProduct* t, const Prolongation* p,
                                 const std::vector<Index>& coarse_block, const Buffer<float>& coarse_scale) {
    using Entry = MultigridLevel::Entry;
    MultigridLevel level;
    level.rows = n;
    level.block = block;
    level.columns = p ? p->columns : 0;
    const Id* start = a.start.data();
    const Id* column = a.column.data();
    const double* value = a.lower.data();

    // Entries between blocks, by rows and (as positions in that list) by columns.
    RowLengths lengths, coarse_lengths;
    for (std::size_t b = 0; b + 1 < block.size(); ++b) {
        for (Index i = block[b]; i < block[b + 1]; ++i) {
            const Index length = start[i + 1] - 1 - start[i];
            lengths.add(length);
            if (t) coarse_lengths.add(t->start[i + 1] - t->start[i]);
            if (length == 0 || block.size() == 2) continue;
            for (Index e = start[i]; e < start[i + 1] - 1; ++e) {
                const Index j = column[e];
                if (j >= block[b]) continue;
                level.cross.push_back(
                    {as_id(i), as_id(j),
                     static_cast<float>(value[e] * static_cast<double>(scale[i]) * static_cast<double>(scale[j]))});
            }
        }
    }
    std::vector<Id> by_column(level.cross.size());
    for (std::size_t k = 0; k < by_column.size(); ++k) by_column[k] = as_id(k);
    std::sort(by_column.begin(), by_column.end(), [&](Id l, Id r) {
        const Id cl = level.cross[as_size(l)].column, cr = level.cross[as_size(r)].column;
        return cl != cr ? cl < cr : l < r;
    });
    level.cross_product.reset(2 * static_cast<Index>(level.cross.size()));
    level.padding = lengths.padding();
    level.coarse_padding = coarse_lengths.padding();

    Index room = 0;
    const auto padded = [](Index length, Index padding) { return (length + padding - 1) / padding * padding; };
    for (Index i = 0; i < n; ++i) room += padded(start[i + 1] - 1 - start[i], level.padding);
    for (Index i = 0; i < n && t; ++i) room += padded(t->start[i + 1] - t->start[i], level.coarse_padding);
    Index extra = 0; // Q also counts entries between blocks in the rows of their columns
    for (std::size_t k = 0; k < level.cross.size() && p; ++k) {
        extra += p->start[level.cross[k].row + 1] - p->start[level.cross[k].row] + 4;
    }
    level.start.reset(2 * n + 1);
    level.entry.reset(room + extra);
    Entry* const entry = level.entry.data();
    Index used = 0;
    RowMaker row;
    std::vector<std::pair<Id, double>> wide;
    std::size_t next_cross = 0;
    for (std::size_t b = 0; b + 1 < block.size(); ++b) {
        for (Index i = block[b]; i < block[b + 1]; ++i) {
            const double own = static_cast<double>(scale[i]);
            level.start[2 * i] = as_id(used);
            row.clear();
            for (Index e = start[i]; e < start[i + 1] - 1; ++e) {
                const Index j = column[e];
                if (j < block[b]) continue;
                row.add(as_id(j), static_cast<float>(value[e] * own * static_cast<double>(scale[j])));
            }
            used += row.write(entry + used, level.padding);
            level.start[2 * i + 1] = as_id(used);
            if (!t) continue;
            // Row i of Q: that of (L + D/2) P without D/2 P, plus what the transposed entries between blocks add.
            wide.clear();
            for (Index e = t->start[i]; e < t->start[i + 1]; ++e) wide.emplace_back(t->column[e], t->value[e]);
            const auto add = [&](Id c, double v) {
                for (auto& [to, sum] : wide) {
                    if (to != c) continue;
                    sum += v;
                    return;
                }
                wide.emplace_back(c, v);
            };
            const double half = -0.5 * value[start[i + 1] - 1];
            for (Index k = p->start[i]; k < p->start[i + 1]; ++k)
                add(p->column[k], half * static_cast<double>(p->value[k]));
            for (; next_cross < by_column.size(); ++next_cross) {
                const MultigridLevel::Apart& apart = level.cross[as_size(by_column[next_cross])];
                if (apart.column != i) break;
                const Index k_row = apart.row;
                const double v = static_cast<double>(apart.value) / (own * static_cast<double>(scale[k_row]));
                for (Index k = p->start[k_row]; k < p->start[k_row + 1]; ++k) {
                    add(p->column[k], v * static_cast<double>(p->value[k]));
                }
            }
            row.clear();
            for (const auto& [c, v] : wide) {
                if (v == 0.0) continue;
                const float scaled = static_cast<float>(v * own * static_cast<double>(coarse_scale[c]));
                if (c >= coarse_block[b] && c < coarse_block[b + 1]) {
                    row.add(c, scaled);
                } else {
                    level.coarse_cross.push_back({as_id(i), c, scaled});
                }
            }
            used += row.write(entry + used, level.coarse_padding);
        }
    }
    level.start[2 * n] = as_id(used);
    level.x.reset(n);
    return level;
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

template <Index Padding, Index CoarsePadding>
inline void forward_row(const Id* start, const MultigridLevel::Entry* entry, float* x, float* coarse,
                        Index i) noexcept {
    const MultigridLevel::Entry* middle = entry + start[2 * i + 1];
    const float own = gather<Padding>(entry + start[2 * i], middle, x, x[i]);
    x[i] = own;
    scatter<CoarsePadding>(middle, entry + start[2 * i + 2], coarse, own);
}

template <Index Padding, Index CoarsePadding>
inline void backward_row(const Id* start, const MultigridLevel::Entry* entry, float* x, const float* coarse,
                         Index i) noexcept {
    const MultigridLevel::Entry* middle = entry + start[2 * i + 1];
    const float own = gather<CoarsePadding>(middle, entry + start[2 * i + 2], coarse, x[i]);
    x[i] = own;
    scatter<Padding>(entry + start[2 * i], middle, x, own);
}

/// The way down over the blocks `first` and `first + 1` (if there), row by row in turn so that neither waits for itself:
/// x solves (I + L) x = x, coarse loses Q^T x.
template <Index Padding, Index CoarsePadding>
inline void forward_pair(MultigridLevel& level, std::size_t first, float* coarse) noexcept {
    const Id* start = level.start.data();
    const MultigridLevel::Entry* entry = level.entry.data();
    float* x = level.x.data();
    Index i = level.block[first];
    const Index i_end = level.block[first + 1];
    Index j = i_end;
    const Index j_end = first + 2 < level.block.size() ? level.block[first + 2] : j;
    for (; i < i_end && j < j_end; ++i, ++j) {
        forward_row<Padding, CoarsePadding>(start, entry, x, coarse, i);
        forward_row<Padding, CoarsePadding>(start, entry, x, coarse, j);
    }
    for (; i < i_end; ++i) forward_row<Padding, CoarsePadding>(start, entry, x, coarse, i);
    for (; j < j_end; ++j) forward_row<Padding, CoarsePadding>(start, entry, x, coarse, j);
}

/// The way up: x loses Q coarse, then x solves (I + L^T) x = x.
template <Index Padding, Index CoarsePadding>
inline void backward_pair(MultigridLevel& level, std::size_t first, const float* coarse) noexcept {
    const Id* start = level.start.data();
    const MultigridLevel::Entry* entry = level.entry.data();
    float* x = level.x.data();
    const Index i_begin = level.block[first];
    Index i = level.block[first + 1];
    const Index j_begin = i;
    Index j = first + 2 < level.block.size() ? level.block[first + 2] : j_begin;
    while (i > i_begin && j > j_begin) {
        backward_row<Padding, CoarsePadding>(start, entry, x, coarse, --i);
        backward_row<Padding, CoarsePadding>(start, entry, x, coarse, --j);
    }
    while (i > i_begin) backward_row<Padding, CoarsePadding>(start, entry, x, coarse, --i);
    while (j > j_begin) backward_row<Padding, CoarsePadding>(start, entry, x, coarse, --j);
}

/// Calls work<Padding, CoarsePadding>() for the paddings of the level.
#define TEPOR_FOR_PADDING(work, ...)                                                                                   \
    switch (level.padding * 8 + level.coarse_padding) {                                                                \
    case 9: return work<1, 1>(__VA_ARGS__);                                                                            \
    case 10: return work<1, 2>(__VA_ARGS__);                                                                           \
    case 12: return work<1, 4>(__VA_ARGS__);                                                                           \
    case 17: return work<2, 1>(__VA_ARGS__);                                                                           \
    case 18: return work<2, 2>(__VA_ARGS__);                                                                           \
    case 20: return work<2, 4>(__VA_ARGS__);                                                                           \
    case 33: return work<4, 1>(__VA_ARGS__);                                                                           \
    case 34: return work<4, 2>(__VA_ARGS__);                                                                           \
    default: return work<4, 4>(__VA_ARGS__);                                                                           \
    }

inline void forward_blocks(MultigridLevel& level, std::size_t first, float* coarse) noexcept {
    TEPOR_FOR_PADDING(forward_pair, level, first, coarse)
}

inline void backward_blocks(MultigridLevel& level, std::size_t first, const float* coarse) noexcept {
    TEPOR_FOR_PADDING(backward_pair, level, first, coarse)
}

#undef TEPOR_FOR_PADDING

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
