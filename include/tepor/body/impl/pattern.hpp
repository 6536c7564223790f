#pragma once
// One sweep over the rows finds the neighbours of each unknown and fills the scatter map.

#include <algorithm>
#include <tepor/base/error.hpp>
#include <tepor/body/pattern.hpp>

namespace tepor::detail {

TEPOR_INLINE Scatter build_pattern(Index unknowns, int nodes, const std::vector<Id>& cell_unknowns,
                                   const std::vector<std::pair<Id, Id>>& extra, SparseMatrix& matrix) {
    const auto nn = as_size(nodes);
    const std::size_t cells = cell_unknowns.size() / nn;
    const std::size_t pairs = nn * (nn + 1) / 2;
    if (cells * pairs > as_size(max_id))
        throw Error(ErrorCode::too_large, "mesh",
                    "mesh: more element matrix entries than 32-bit ids can count; use fewer cells");
    Scatter scatter;
    scatter.cells.resize(cells * pairs);
    scatter.extra.resize(extra.size());

    // incident (cell, local node) of each unknown, packed as cell * nodes + local
    std::vector<Id> begin(as_size(unknowns) + 1, 0);
    for (const Id u : cell_unknowns) ++begin[as_size(u) + 1];
    for (std::size_t i = 0; i < as_size(unknowns); ++i) begin[i + 1] += begin[i];
    std::vector<Id> incident(cell_unknowns.size());
    {
        std::vector<Id> next(begin.begin(), begin.end() - 1);
        for (std::size_t e = 0; e < cell_unknowns.size(); ++e)
            incident[as_size(next[as_size(cell_unknowns[e])]++)] = as_id(e);
    }
    std::vector<std::vector<std::pair<Id, Id>>> more; // per row: (column, position in extra)
    if (!extra.empty()) {
        more.resize(as_size(unknowns));
        for (std::size_t e = 0; e < extra.size(); ++e) {
            const auto [a, b] = std::minmax(extra[e].first, extra[e].second);
            more[as_size(b)].emplace_back(a, as_id(e));
        }
    }

    matrix.rows = unknowns;
    matrix.start.assign(as_size(unknowns) + 1, 0);
    matrix.column.clear();
    matrix.column.reserve(as_size(unknowns) * (nn <= 3 ? 4 : nn + 2));
    std::vector<Id> position(as_size(unknowns), -1); // of a column in the present row
    std::vector<Id> row;
    for (Index i = 0; i < unknowns; ++i) {
        row.clear();
        const auto see = [&](Id j) {
            if (j < i && position[as_size(j)] < 0) {
                position[as_size(j)] = 0;
                row.push_back(j);
            }
        };
        for (Id e = begin[as_size(i)]; e < begin[as_size(i) + 1]; ++e) {
            const std::size_t cell = as_size(incident[as_size(e)]) / nn;
            for (std::size_t b = 0; b < nn; ++b) see(cell_unknowns[cell * nn + b]);
        }
        if (!more.empty())
            for (const auto& [j, e] : more[as_size(i)]) see(j);
        std::sort(row.begin(), row.end());
        const std::size_t first = matrix.column.size();
        if (first + row.size() + 1 > as_size(max_id))
            throw Error(ErrorCode::too_large, "mesh",
                        "mesh: more matrix entries than 32-bit ids can count; use fewer cells");
        for (std::size_t k = 0; k < row.size(); ++k) position[as_size(row[k])] = as_id(first + k);
        position[as_size(i)] = as_id(first + row.size());
        matrix.column.insert(matrix.column.end(), row.begin(), row.end());
        matrix.column.push_back(as_id(i));
        matrix.start[as_size(i) + 1] = as_id(matrix.column.size());
        for (Id e = begin[as_size(i)]; e < begin[as_size(i) + 1]; ++e) {
            const std::size_t cell = as_size(incident[as_size(e)]) / nn;
            const std::size_t a = as_size(incident[as_size(e)]) % nn;
            for (std::size_t b = 0; b < nn; ++b) {
                const Id j = cell_unknowns[cell * nn + b];
                if (j > i) continue;
                const std::size_t high = a > b ? a : b;
                const std::size_t low = a > b ? b : a;
                scatter.cells[cell * pairs + high * (high + 1) / 2 + low] = position[as_size(j)];
            }
        }
        if (!more.empty())
            for (const auto& [j, e] : more[as_size(i)]) scatter.extra[as_size(e)] = position[as_size(j)];
        for (const Id j : row) position[as_size(j)] = -1;
        position[as_size(i)] = -1;
    }
    matrix.lower.assign(matrix.column.size(), 0.0);
    return scatter;
}

} // namespace tepor::detail
