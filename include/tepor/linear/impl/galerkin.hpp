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

    void grow(Index used, Index room) {
        if (column.size() >= used + room) return;
        Buffer<Id> columns(used + used / 2 + room);
        Buffer<double> values(columns.size());
        std::copy_n(column.data(), used, columns.data());
        std::copy_n(value.data(), used, values.data());
        column = std::move(columns);
        value = std::move(values);
    }
};

inline HalfProduct half_product(const SparseMatrix& a, Index n, const Prolongation& p) {
    const Id* a_start = a.start.data();
    const Id* a_column = a.column.data();
    const double* a_value = a.lower.data();
    const Id* p_start = p.start.data();
    const Id* p_column = p.column.data();
    const float* p_value = p.value.data();
    HalfProduct t;
    t.start.reset(n + 1);
    t.column.reset(5 * n + 64);
    t.value.reset(5 * n + 64);
    Buffer<Id> mark(p.columns + 1);
    for (Index c = 0; c < p.columns; ++c) mark[c] = -1;
    Index used = 0;
    for (Index i = 0; i < n; ++i) {
        const Index begin = used;
        t.start[i] = as_id(begin);
        Index room = 0;
        for (Index e = a_start[i]; e < a_start[i + 1]; ++e) room += p_start[a_column[e] + 1] - p_start[a_column[e]];
        t.grow(used, room);
        Id* column = t.column.data();
        double* value = t.value.data();
        for (Index e = a_start[i]; e < a_start[i + 1]; ++e) {
            const Index j = a_column[e];
            const double v = j == i ? 0.5 * a_value[e] : a_value[e];
            for (Index k = p_start[j]; k < p_start[j + 1]; ++k) {
                const Index c = p_column[k];
                const double term = v * static_cast<double>(p_value[k]);
                if (mark[c] < begin) {
                    mark[c] = as_id(used);
                    column[used] = as_id(c);
                    value[used++] = term;
                } else {
                    value[mark[c]] += term;
                }
            }
        }
    }
    t.start[n] = as_id(used);
    return t;
}

/// Lower triangle by rows of P^T A P; the diagonal last in each row, other columns in no order.
///
/// With T = (L + D/2) P the product is S + S^T, S = P^T T: half the work of a full triple product. An entry of S right of
/// the diagonal waits in a list of the row it is mirrored to, which comes later.
inline SparseMatrix galerkin(const HalfProduct& t, Index n, const Prolongation& p) {
    const Index coarse = p.columns;
    const Id* p_start = p.start.data();
    const Id* p_column = p.column.data();
    const float* p_value = p.value.data();
    const Id* t_start = t.start.data();
    const Id* t_column = t.column.data();
    const double* t_value = t.value.data();

    // P^T by rows.
    Buffer<Id> r_start(coarse + 2), r_row(p_start[n]);
    Buffer<float> r_value(p_start[n]);
    for (Index c = 0; c < coarse + 2; ++c) r_start[c] = 0;
    for (Index k = 0; k < p_start[n]; ++k) ++r_start[p_column[k] + 2];
    for (Index c = 2; c < coarse + 2; ++c) r_start[c] += r_start[c - 1];
    for (Index i = 0; i < n; ++i) {
        for (Index k = p_start[i]; k < p_start[i + 1]; ++k) {
            const Index to = r_start[p_column[k] + 1]++;
            r_row[to] = as_id(i);
            r_value[to] = p_value[k];
        }
    }

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
    Buffer<Id> first_waiting(coarse + 1);
    Buffer<double> sum(coarse + 1);
    Buffer<Id> seen(coarse + 1);
    std::vector<Id> list;
    for (Index c = 0; c < coarse; ++c) {
        first_waiting[c] = -1;
        seen[c] = -1;
    }
    for (Index row = 0; row < coarse; ++row) {
        list.clear();
        seen[row] = as_id(row);
        sum[row] = 0.0;
        for (Id w = first_waiting[row]; w >= 0; w = waiting[as_size(w)].next) {
            const Index c = waiting[as_size(w)].column;
            seen[c] = as_id(row);
            sum[c] = waiting[as_size(w)].value;
            list.push_back(as_id(c));
        }
        for (Index k = r_start[row]; k < r_start[row + 1]; ++k) {
            const Index i = r_row[k];
            const double weight = static_cast<double>(r_value[k]);
            for (Index e = t_start[i]; e < t_start[i + 1]; ++e) {
                const Index c = t_column[e];
                const double term = weight * t_value[e];
                if (seen[c] != row) {
                    seen[c] = as_id(row);
                    sum[c] = term;
                    list.push_back(as_id(c));
                } else {
                    sum[c] += term;
                }
            }
        }
        for (const Id c : list) {
            if (c < row) {
                out.column.push_back(c);
                out.lower.push_back(sum[c]);
            } else {
                waiting.push_back({sum[c], as_id(row), first_waiting[c]});
                first_waiting[c] = as_id(waiting.size() - 1);
            }
        }
        out.column.push_back(as_id(row));
        out.lower.push_back(2.0 * sum[row]);
        out.start[as_size(row) + 1] = as_id(out.column.size());
    }
    return out;
}

} // namespace tepor::detail
