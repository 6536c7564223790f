#pragma once
// The coarse matrix of multigrid, P^T A P, from the lower triangle alone.

#include <algorithm>
#include <new>
#include <tepor/linear/impl/aggregation.hpp>
#include <vector>

namespace tepor::detail {

/// (L + D/2) P by rows, A = L + D + L^T. Columns in no order; row i is start[i] .. end[i].
struct HalfProduct {
    Buffer<Id> start, end;
    Buffer<Id> column;
    Buffer<double> value;
};

/// P by columns.
struct RestrictionRows {
    Buffer<Id> start;
    Buffer<Id> row;
    Buffer<float> value;
};

/// What rows of P hold outside the aggregates of their own pair of blocks comes last in its column.
inline RestrictionRows transpose(const Prolongation& p, const Aggregates& aggregates, const RowBlocks& blocks,
                                 Crew* crew, const SparseMatrix& a) {
    const Index coarse = p.columns, n = p.rows;
    RestrictionRows out;
    out.start.reset(coarse + 2);
    out.row.reset(p.start[n]);
    out.value.reset(p.start[n]);
    const Id* start = p.start.data();
    const Id* column = p.column.data();
    Id* next = out.start.data() + 1; // one ahead, so that filling leaves the starts right
    for (Index c = 0; c < coarse + 2; ++c) out.start[c] = 0;
    std::vector<Id> astride; // the rows that reach into other blocks
    for (const RowBlocks::Far& f : blocks.far) {
        astride.push_back(f.row);
        astride.push_back(a.column[as_size(f.entry)]);
    }
    std::sort(astride.begin(), astride.end());
    astride.erase(std::unique(astride.begin(), astride.end()), astride.end());
    const auto first_column = [&](Index k) { return aggregates.block[as_size(2 * k)]; };
    const auto end_column = [&](Index k) { return aggregates.block[std::min(as_size(2 * k + 2), blocks.count())]; };
    // visit(row, entry) for the entries inside the own pair of blocks, in tasks, then for the others
    const auto each = [&](const auto& visit) {
        run_tasks(crew, blocks.pairs(), [&](Index k) {
            const Index begin = first_column(k), end = end_column(k);
            for (Index i = blocks.pair_begin(k); i < blocks.pair_end(k); ++i) {
                for (Index e = start[i]; e < start[i + 1]; ++e) {
                    if (column[e] >= begin && column[e] < end) visit(i, e);
                }
            }
        });
        Index k = 0;
        for (const Id i : astride) {
            while (i >= blocks.pair_end(k)) ++k;
            for (Index e = start[i]; e < start[i + 1]; ++e) {
                if (column[e] < first_column(k) || column[e] >= end_column(k)) visit(i, e);
            }
        }
    };
    each([&](Index, Index e) { ++next[column[e] + 1]; });
    for (Index c = 1; c < coarse + 1; ++c) next[c] += next[c - 1];
    each([&](Index i, Index e) {
        const Index to = next[column[e]]++;
        out.row[to] = as_id(i);
        out.value[to] = p.value[e];
    });
    return out;
}

/// Rows of a coarse matrix made by one task, and what it has for rows of later tasks.
struct CoarseRows {
    struct Mirrored {
        Id row, column;
        double value;
    };
    std::vector<Id> end; ///< of each row, within the rows of this task
    std::vector<Id> column;
    std::vector<double> value;
    std::vector<Mirrored> later;
    bool fits = true; ///< in memory
};

/// With T = (L + D/2) P the product is S + S^T, S = P^T T: half the work of a full triple product. An entry of S right of
/// the diagonal waits in a list of the row it is mirrored to, which comes later.
inline void galerkin_rows(const HalfProduct& t, const RestrictionRows& r, Index begin, Index end, RowSums<double>& sums,
                          CoarseRows& out) {
    const Id* t_column = t.column.data();
    const double* t_value = t.value.data();
    struct Waiting {
        double value;
        Id column, next;
    };
    std::vector<Waiting> waiting;
    waiting.reserve(as_size(6 * (end - begin)));
    out.end.reserve(as_size(end - begin));
    out.column.reserve(as_size(6 * (end - begin)));
    out.value.reserve(as_size(6 * (end - begin)));
    std::vector<Id> first_waiting(as_size(end - begin), Id{-1});
    std::vector<Id> list;
    Id* seen = sums.mark.data();
    double* sum = sums.total.data();
    for (Index row = begin; row < end; ++row) {
        const Id own = as_id(row);
        std::size_t room = 1;
        for (Index k = r.start[row]; k < r.start[row + 1]; ++k) room += as_size(t.end[r.row[k]] - t.start[r.row[k]]);
        for (Id w = first_waiting[as_size(row - begin)]; w >= 0; w = waiting[as_size(w)].next) ++room;
        if (list.size() < room) list.resize(2 * room);
        std::size_t count = 0;
        const auto add = [&](Id c, double v) { // without a branch: whether a column is new is hard to foretell
            list[count] = c;
            count += seen[c] != own;
            seen[c] = own;
            sum[c] += v;
        };
        for (Id w = first_waiting[as_size(row - begin)]; w >= 0; w = waiting[as_size(w)].next) {
            add(waiting[as_size(w)].column, waiting[as_size(w)].value);
        }
        for (Index k = r.start[row]; k < r.start[row + 1]; ++k) {
            const Index i = r.row[k];
            const double weight = static_cast<double>(r.value[k]);
            for (Index e = t.start[i]; e < t.end[i]; ++e) add(t_column[e], weight * t_value[e]);
        }
        const double diagonal = 2.0 * sum[row];
        for (std::size_t k = 0; k < count; ++k) {
            const Id c = list[k];
            if (c < own) {
                out.column.push_back(c);
                out.value.push_back(sum[c]);
            } else if (c >= end) {
                out.later.push_back({c, own, sum[c]});
            } else if (c > own) {
                waiting.push_back({sum[c], own, first_waiting[as_size(c - begin)]});
                first_waiting[as_size(c - begin)] = as_id(waiting.size() - 1);
            }
            sum[c] = 0.0;
        }
        out.column.push_back(own);
        out.value.push_back(diagonal);
        out.end.push_back(as_id(out.column.size()));
    }
}

/// The rows of all tasks one after the other, with what they have for each other.
inline SparseMatrix joined(std::vector<CoarseRows>& parts, Index coarse) {
    std::vector<CoarseRows::Mirrored> later;
    std::size_t entries = 0;
    for (const CoarseRows& part : parts) {
        later.insert(later.end(), part.later.begin(), part.later.end());
        entries += part.column.size() + part.later.size();
    }
    std::stable_sort(later.begin(), later.end(), [](const auto& l, const auto& r) { return l.row < r.row; });
    SparseMatrix out;
    out.rows = coarse;
    out.start.reserve(as_size(coarse) + 1);
    out.start.push_back(0);
    if (parts.size() == 1) {
        out.start.insert(out.start.end(), parts[0].end.begin(), parts[0].end.end());
        out.column = std::move(parts[0].column);
        out.lower = std::move(parts[0].value);
        return out;
    }
    out.column.reserve(entries);
    out.lower.reserve(entries);
    auto extra = later.begin();
    Id row = 0;
    for (CoarseRows& part : parts) {
        std::size_t from = 0;
        for (const Id end : part.end) {
            const std::size_t last = as_size(end) - 1; // the diagonal
            for (; from < last; ++from) {
                out.column.push_back(part.column[from]);
                out.lower.push_back(part.value[from]);
            }
            const std::size_t begin = as_size(out.start.back());
            for (; extra != later.end() && extra->row == row; ++extra) {
                std::size_t at = begin;
                while (at < out.column.size() && out.column[at] != extra->column) ++at;
                if (at == out.column.size()) {
                    out.column.push_back(extra->column);
                    out.lower.push_back(0.0);
                }
                out.lower[at] += extra->value;
            }
            out.column.push_back(part.column[last]);
            out.lower.push_back(part.value[last]);
            from = last + 1;
            out.start.push_back(as_id(out.column.size()));
            ++row;
        }
        part = CoarseRows{}; // its memory is wanted
    }
    return out;
}

/// Lower triangle by rows of P^T A P; the diagonal last in each row, other columns in no order.
inline SparseMatrix galerkin(const HalfProduct& t, const Aggregates& aggregates, const RestrictionRows& r,
                             const RowBlocks& blocks, Crew* crew) {
    std::vector<CoarseRows> parts(as_size(blocks.pairs()));
    TaskScratch<RowSums<double>> scratch(crew, blocks.pairs(), aggregates.count);
    run_tasks(crew, blocks.pairs(), [&](Index k) {
        const Index end = aggregates.block[std::min(as_size(2 * k + 2), blocks.count())];
        try {
            galerkin_rows(t, r, aggregates.block[as_size(2 * k)], end, scratch[k], parts[as_size(k)]);
        } catch (const std::bad_alloc&) { // no exception may leave a task
            parts[as_size(k)].fits = false;
        }
    });
    for (const CoarseRows& part : parts) {
        if (!part.fits) throw std::bad_alloc();
    }
    return joined(parts, aggregates.count);
}

} // namespace tepor::detail
