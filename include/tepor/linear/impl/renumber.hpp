#pragma once
// A numbering in which neighbours are near, for matrices that come without one.

#include <algorithm>
#include <cmath>
#include <tepor/linear/impl/graph.hpp>
#include <utility>
#include <vector>

namespace tepor::detail {

/// Whether entries lie so far from the diagonal that every access to a neighbour would miss the cache: their mean distance
/// exceeds many times the width of a square mesh numbered line by line.
inline bool scattered(const SparseMatrix& matrix, Index n) {
    if (n < 4000) return false;
    double sum = 0.0;
    Index count = 0;
    for (Index i = 0; i < n; i += 7) { // a sample is enough
        for (Index p = matrix.start[as_size(i)]; p < matrix.start[as_size(i) + 1] - 1; ++p, ++count) {
            sum += as_double(i - matrix.column[as_size(p)]);
        }
    }
    return count > 0 && sum > 12.0 * std::sqrt(as_double(n)) * as_double(count);
}

/// Breadth-first order of every component from a vertex far out. Source: Cuthill & McKee (1969).
inline std::vector<Id> breadth_first_order(const Graph& graph) {
    std::vector<Id> order;
    order.reserve(as_size(graph.n));
    std::vector<signed char> seen(as_size(graph.n), 0);
    const auto spread = [&](Id root, signed char mark) {
        const std::size_t begin = order.size();
        order.push_back(root);
        seen[as_size(root)] = mark;
        for (std::size_t head = begin; head < order.size(); ++head) {
            const Index v = order[head];
            for (Index e = graph.start[as_size(v)]; e < graph.start[as_size(v) + 1]; ++e) {
                const Id u = graph.neighbour[as_size(e)];
                if (seen[as_size(u)] == mark) continue;
                seen[as_size(u)] = mark;
                order.push_back(u);
            }
        }
        return begin;
    };
    for (Index v = 0; v < graph.n; ++v) {
        if (seen[as_size(v)] != 0) continue;
        const std::size_t begin = spread(as_id(v), 1);
        const Id far = order.back();
        order.resize(begin);
        spread(far, 2);
    }
    return order;
}

/// The pattern of the leading block with rows and columns in another order; source[e] is the entry of `matrix` that entry e
/// takes its value from. The values are left at zero.
inline SparseMatrix permuted(const SparseMatrix& matrix, const Graph& graph, const std::vector<Id>& order,
                             std::vector<Id>& source) {
    SparseMatrix out;
    const Index n = graph.n;
    std::vector<Id> inverse(order.size());
    for (std::size_t i = 0; i < order.size(); ++i) inverse[as_size(order[i])] = as_id(i);
    out.rows = n;
    out.start.resize(as_size(n) + 1);
    out.column.resize(graph.neighbour.size() / 2 + as_size(n));
    out.lower.resize(out.column.size());
    source.resize(out.column.size());
    std::vector<std::pair<Id, Id>> row; // column, source
    std::size_t used = 0;
    for (Index i = 0; i < n; ++i) {
        const std::size_t v = as_size(order[as_size(i)]);
        row.clear();
        for (Index e = graph.start[v]; e < graph.start[v + 1]; ++e) {
            const Id j = inverse[as_size(graph.neighbour[as_size(e)])];
            if (j < i) row.emplace_back(j, graph.entry[as_size(e)]);
        }
        std::sort(row.begin(), row.end());
        row.emplace_back(as_id(i), matrix.start[v + 1] - 1);
        for (const auto& [column, entry] : row) {
            out.column[used] = column;
            source[used++] = entry;
        }
        out.start[as_size(i) + 1] = as_id(used);
    }
    return out;
}

} // namespace tepor::detail
