#pragma once
// Making a level of multigrid: its entries and the product with the prolongation.

#include <algorithm>
#include <new>
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
template <class Real>
class LevelMaker {
  public:
    LevelMaker(const SparseMatrix& a, Index n, const Buffer<double>& scale, const RowBlocks& blocks,
               const Prolongation* p)
        : start_(a.start.data()), column_(a.column.data()), value_(a.lower.data()), n_(n), scale_(scale.data()),
          blocks_(blocks), p_(p), padding_(choose_padding(a, n)) {}

    /// `coarse_block` are the blocks of the next level's rows, one for each block.
    MultigridLevel<Real> make(const std::vector<Index>& coarse_block, Crew* crew, HalfProduct& t) {
        MultigridLevel<Real> level;
        level.rows = n_;
        level.columns = p_ ? p_->columns : 0;
        level.padding = padding_;
        level.block = blocks_.begin;
        collect_cross(level);
        const Index pairs = blocks_.pairs();
        const bool apart = crew && pairs > 1; // each task writes to a place of its own
        std::vector<Part> part(as_size(pairs));
        count_room(level, crew, part);
        level.entry.reset(part.back().room); // pages that stay unused cost nothing
        level.start.reset(2 * n_ + static_cast<Index>(blocks_.count()));
        level.x.reset(n_);
        if (p_) {
            t.start.reset(n_);
            t.end.reset(n_);
            t.column.reset(part.back().coarse_room); // far more than is used, as above
            t.value.reset(part.back().coarse_room);
        }
        TaskScratch<RowSums<double>> scratch(crew, pairs, level.columns);
        Index used = 0;
        Index t_used = 0;
        run_tasks(apart ? crew : nullptr, pairs, [&](Index k) {
            Part& own = part[as_size(k)];
            if (apart) used_of(part, k, own.used, own.t_used);
            Index& entries = apart ? own.used : used;
            Index& products = apart ? own.t_used : t_used;
            try {
                for (std::size_t b = as_size(2 * k); b < std::min(as_size(2 * k + 2), blocks_.count()); ++b)
                    make_block(level, b, coarse_block, own, scratch[k], entries, products, t);
            } catch (const std::bad_alloc&) { // no exception may leave a task
                own.fits = false;
            }
        });
        for (Part& own : part) {
            if (!own.fits) throw std::bad_alloc();
            level.coarse_cross.insert(level.coarse_cross.end(), own.coarse_cross.begin(), own.coarse_cross.end());
        }
        return level;
    }

  private:
    using Entry = typename MultigridLevel<Real>::Entry;
    using Apart = typename MultigridLevel<Real>::Apart;

    /// What one task needs and makes.
    struct Part {
        Index room = 0, coarse_room = 0; ///< entries of the level and of T up to the end of this part, at most
        Index used = 0, t_used = 0;
        std::vector<Apart> coarse_cross;
        bool fits = true;
    };

    /// Columns of Q that stay with the row, and where the others go.
    struct CoarseBlock {
        Index begin, end;
        std::vector<Apart>& others;
    };

    static void used_of(const std::vector<Part>& part, Index k, Index& entries, Index& products) {
        entries = k > 0 ? part[as_size(k - 1)].room : 0;
        products = k > 0 ? part[as_size(k - 1)].coarse_room : 0;
    }

    void count_room(const MultigridLevel<Real>& level, Crew* crew, std::vector<Part>& part) const {
        run_tasks(crew, blocks_.pairs(), [&](Index k) {
            Index room = 64, coarse_room = 64;
            for (Index i = blocks_.pair_begin(k); i < blocks_.pair_end(k); ++i) {
                const Index coarse = row_room(i);
                room += start_[i + 1] - start_[i] + padding_ + 2 + coarse;
                coarse_room += coarse;
            }
            part[as_size(k)].room = room;
            part[as_size(k)].coarse_room = coarse_room;
        });
        if (p_) { // entries between blocks also count in the rows of their columns
            Index k = 0;
            for (const Id e : by_column_) {
                const Apart& cross = level.cross[as_size(e)];
                while (cross.column >= blocks_.pair_end(k)) ++k;
                part[as_size(k)].room += p_->start[cross.row + 1] - p_->start[cross.row];
            }
        }
        for (std::size_t k = 1; k < part.size(); ++k) {
            part[k].room += part[k - 1].room;
            part[k].coarse_room += part[k - 1].coarse_room;
        }
    }

    void make_block(MultigridLevel<Real>& level, std::size_t b, const std::vector<Index>& coarse_block, Part& part,
                    RowSums<double>& sums, Index& used, Index& t_used, HalfProduct& t) {
        Entry* const entry = level.entry.data();
        Id* const start = level.start.data() + b;
        const auto after = [&](Id e, Index i) { return level.cross[as_size(e)].column < i; };
        const auto next = std::lower_bound(by_column_.begin(), by_column_.end(), blocks_.begin[b], after);
        std::size_t cross = as_size(next - by_column_.begin());
        for (Index i = blocks_.begin[b]; i < blocks_.begin[b + 1]; ++i) {
            start[2 * i] = as_id(used);
            used += own_row(entry + used, i, blocks_.begin[b]);
            start[2 * i + 1] = as_id(used);
            if (!p_) continue;
            t.start[i] = as_id(t_used);
            const CoarseBlock own{coarse_block[b], coarse_block[b + 1], part.coarse_cross};
            used += coarse_row(entry + used, i, own, level, cross, sums, t_used, t);
            t.end[i] = as_id(t_used);
        }
        start[2 * blocks_.begin[b + 1]] = as_id(used);
    }

    /// Most entries that row i of Q and of T can have.
    Index row_room(Index i) const {
        if (!p_) return 0;
        Index room = 0;
        for (Index e = start_[i]; e < start_[i + 1]; ++e) room += p_->start[column_[e] + 1] - p_->start[column_[e]];
        return room;
    }

    void collect_cross(MultigridLevel<Real>& level) {
        Index row = -1;
        const auto add_shift = [&](Index i) { // -s, halved since entries between blocks count on both sides
            const double own = value_[start_[i + 1] - 1] * scale_[i] * scale_[i];
            if (own < 1.0 - 1e-6) level.cross.push_back({as_id(i), as_id(i), static_cast<Real>(0.5 * (own - 1.0))});
        };
        for (const RowBlocks::Far& f : blocks_.far)
            level.cross.push_back({f.row, column_[f.entry], scaled(f.entry, f.row)});
        std::vector<Id> touched;
        for (const Apart& e : level.cross) {
            touched.push_back(e.row);
            touched.push_back(e.column);
        }
        std::sort(touched.begin(), touched.end());
        for (const Id i : touched) {
            if (i != row) add_shift(i);
            row = i;
        }
        level.cross_product.reset(2 * static_cast<Index>(level.cross.size()));
        by_column_.resize(level.cross.size());
        for (std::size_t k = 0; k < by_column_.size(); ++k) by_column_[k] = as_id(k);
        std::sort(by_column_.begin(), by_column_.end(), [&](Id l, Id r) {
            const Id cl = level.cross[as_size(l)].column, cr = level.cross[as_size(r)].column;
            return cl != cr ? cl < cr : l < r;
        });
    }

    Real scaled(Index e, Index i) const { return static_cast<Real>(value_[e] * scale_[i] * scale_[column_[e]]); }

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
            for (Index k = 0; k < padded - length; ++k) to[k] = {to[padded - length].column, Real{0}};
        }
        return padded;
    }

    /// Row i of Q, written to `to`, and of T, from `t_used` on. `cross` is the first entry between blocks whose column is not
    /// before i.
    Index coarse_row(Entry* to, Index i, const CoarseBlock& own, const MultigridLevel<Real>& level, std::size_t& cross,
                     RowSums<double>& sums, Index& t_used, HalfProduct& t) const {
        const Index begin = t_used;
        Id* column = t.column.data();
        double* value = t.value.data();
        Id* mark = sums.mark.data();
        double* total = sums.total.data();
        Index used = begin;
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
        const double scale = scale_[i];
        Index length = 0;
        const auto put = [&](Id c, double v) {
            const Real q = static_cast<Real>(v * scale);
            if (c >= own.begin && c < own.end) {
                to[length++] = {c, q};
            } else {
                own.others.push_back({as_id(i), c, q});
            }
        };
        for (Index k = begin; k < used; ++k) put(column[k], total[column[k]]);
        // Entries between blocks also count in the rows of their columns, and -s in its own; these are few.
        for (; cross < by_column_.size(); ++cross) {
            const Apart& apart = level.cross[as_size(by_column_[cross])];
            if (apart.column != i) break;
            const double both = apart.row == i ? 2.0 : 1.0;
            const double v = both * static_cast<double>(apart.value) / (scale * scale_[apart.row]);
            for (Index k = p_->start[apart.row]; k < p_->start[apart.row + 1]; ++k) {
                put(p_->column[k], v * static_cast<double>(p_->value[k]));
            }
        }
        if (length % 2 != 0) {
            to[length] = {to[0].column, Real{0}};
            ++length;
        }
        add(i, 0.5 * value_[start_[i + 1] - 1]);
        for (Index k = begin; k < used; ++k) {
            value[k] = total[column[k]];
            total[column[k]] = 0.0;
        }
        t_used = used;
        return length;
    }

    const Id* start_;
    const Id* column_;
    const double* value_;
    Index n_;
    const double* scale_;
    const RowBlocks& blocks_;
    const Prolongation* p_;
    Index padding_ = 1;
    std::vector<Id> by_column_; // entries between blocks by columns
};

/// Finishes Q once the scale of the next level is known.
template <class Real>
void scale_coarse(MultigridLevel<Real>& level, const Buffer<double>& coarse_scale, Crew* crew) noexcept {
    const double* scale = coarse_scale.data();
    auto* entry = level.entry.data();
    const Index blocks = static_cast<Index>(level.block.size()) - 1;
    run_tasks(crew, blocks, [&](Index b) {
        const Id* start = level.start.data() + b;
        for (Index i = level.block[as_size(b)]; i < level.block[as_size(b) + 1]; ++i) {
            for (Index e = start[2 * i + 1]; e < start[2 * i + 2]; ++e)
                entry[e].value = static_cast<Real>(static_cast<double>(entry[e].value) * scale[entry[e].column]);
        }
    });
    for (auto& e : level.coarse_cross) e.value = static_cast<Real>(static_cast<double>(e.value) * scale[e.column]);
}

} // namespace tepor::detail
