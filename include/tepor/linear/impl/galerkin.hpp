#pragma once
// The coarse matrix of multigrid, P^T A P, from the lower triangle alone.

#include <tepor/linear/impl/aggregation.hpp>
#include <vector>

namespace tepor::detail {

/// (L + D/2) P by rows, A = L + D + L^T. Columns in no order.
struct HalfProduct {
    Buffer<Id> start;
    Buffer<Id> column;
    Buffer<double> value;
    Buffer<Id> mark;      ///< work
    Buffer<double> total; ///< work

    /// Room for `room` more entries (and one to write ahead).
    void grow(Index used, Index room) {
        if (column.size() > used + room) return;
        Buffer<Id> columns(used + used / 2 + room + 64);
        Buffer<double> values(columns.size());
        std::copy_n(column.data(), used, columns.data());
        std::copy_n(value.data(), used, values.data());
        column = std::move(columns);
        value = std::move(values);
    }
};

/// P by columns, in memory that is free once P is made.
struct RestrictionRows {
    Id* start = nullptr;
    Id* row = nullptr;
    float* value = nullptr;
};

inline RestrictionRows transpose(const Prolongation& p, StrongGraph& free) {
    const Index coarse = p.columns, n = p.rows;
    free.next.reserve(coarse + 2);
    free.neighbour.reserve(p.start[n]);
    free.ratio.reserve(p.start[n]);
    const RestrictionRows out{free.next.data(), free.neighbour.data(), free.ratio.data()};
    const Id* start = p.start.data();
    const Id* column = p.column.data();
    const float* value = p.value.data();
    for (Index c = 0; c < coarse + 2; ++c) out.start[c] = 0;
    for (Index k = 0; k < start[n]; ++k)
        ++out.start[column[k] + 2]; // two ahead, so that filling leaves the starts right
    for (Index c = 2; c < coarse + 2; ++c) out.start[c] += out.start[c - 1];
    for (Index i = 0; i < n; ++i) {
        for (Index k = start[i]; k < start[i + 1]; ++k) {
            const Index to = out.start[column[k] + 1]++;
            out.row[to] = as_id(i);
            out.value[to] = value[k];
        }
    }
    return out;
}

/// Lower triangle by rows of P^T A P; the diagonal last in each row, other columns in no order.
///
/// With T = (L + D/2) P the product is S + S^T, S = P^T T: half the work of a full triple product. An entry of S right of
/// the diagonal waits in a list of the row it is mirrored to, which comes later.
inline SparseMatrix galerkin(const HalfProduct& t, Index coarse, const RestrictionRows& r) {
    const Id* t_start = t.start.data();
    const Id* t_column = t.column.data();
    const double* t_value = t.value.data();
    SparseMatrix out;
    out.rows = coarse;
    out.start.resize(as_size(coarse) + 1);
    out.column.reserve(as_size(8 * coarse));
    out.lower.reserve(as_size(8 * coarse));
    struct Waiting {
        double value;
        Id column, next;
    };
    std::vector<Waiting> waiting;
    waiting.reserve(as_size(8 * coarse));
    Buffer<Id> first_waiting(coarse + 1), seen(coarse + 1), list(coarse + 1);
    Buffer<double> sum(coarse + 1);
    for (Index c = 0; c < coarse; ++c) {
        first_waiting[c] = -1;
        seen[c] = -1;
        sum[c] = 0.0;
    }
    for (Index row = 0; row < coarse; ++row) {
        const Id own = as_id(row);
        Index count = 0;
        const auto add = [&](Id c, double v) { // without a branch: whether a column is new is hard to foretell
            list[count] = c;
            count += seen[c] != own;
            seen[c] = own;
            sum[c] += v;
        };
        for (Id w = first_waiting[row]; w >= 0; w = waiting[as_size(w)].next) {
            add(waiting[as_size(w)].column, waiting[as_size(w)].value);
        }
        for (Index k = r.start[row]; k < r.start[row + 1]; ++k) {
            const Index i = r.row[k];
            const double weight = static_cast<double>(r.value[k]);
            for (Index e = t_start[i]; e < t_start[i + 1]; ++e) add(t_column[e], weight * t_value[e]);
        }
        const double diagonal = 2.0 * sum[row];
        for (Index k = 0; k < count; ++k) {
            const Id c = list[k];
            if (c < own) {
                out.column.push_back(c);
                out.lower.push_back(sum[c]);
            } else if (c > own) {
                waiting.push_back({sum[c], own, first_waiting[c]});
                first_waiting[c] = as_id(waiting.size() - 1);
            }
            sum[c] = 0.0;
        }
        out.column.push_back(own);
        out.lower.push_back(diagonal);
        out.start[as_size(row) + 1] = as_id(out.column.size());
    }
    return out;
}

} // namespace tepor::detail
