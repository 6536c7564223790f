#pragma once
// Neighbours of every unknown, made from the lower triangle.

#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor::detail {

/// Adjacency of the leading block without its diagonal. neighbour[start[i] .. start[i + 1]) ascends; entry[] is the
/// position of each coupling in the matrix.
struct Graph {
    Index n = 0;
    std::vector<Id> start;
    std::vector<Id> neighbour;
    std::vector<Id> entry;
};

inline Graph graph_of(const SparseMatrix& matrix, Index n) {
    Graph graph;
    graph.n = n;
    graph.start.assign(as_size(n) + 2, 0);
    Id* count = graph.start.data() + 2; // shifted by two, so that filling leaves start[] in place
    const Id* start = matrix.start.data();
    const Id* column = matrix.column.data();
    for (Index i = 0; i < n; ++i) {
        for (Index p = start[i]; p < start[i + 1] - 1; ++p) {
            if (column[p] + 1 < n) ++count[column[p]];
            if (i + 1 < n) ++count[i];
        }
    }
    for (Index i = 2; i < n; ++i) graph.start[as_size(i) + 1] += graph.start[as_size(i)];
    const Index total = n > 0 ? 2 * (static_cast<Index>(start[n]) - n) : 0;
    graph.neighbour.resize(as_size(total));
    graph.entry.resize(as_size(total));
    Id* next = graph.start.data() + 1;
    Id* neighbour = graph.neighbour.data();
    Id* entry = graph.entry.data();
    for (Index i = 0; i < n; ++i) {
        for (Index p = start[i]; p < start[i + 1] - 1; ++p) {
            const Index mine = next[i]++;
            neighbour[mine] = column[p];
            entry[mine] = as_id(p);
            const Index other = next[column[p]]++;
            neighbour[other] = as_id(i);
            entry[other] = as_id(p);
        }
    }
    graph.start.resize(as_size(n) + 1);
    return graph;
}

} // namespace tepor::detail
