#pragma once
// Every pair of unknowns that meet in a cell goes to the row it belongs to; each row then sorts its pairs and tells them places.

#include <algorithm>
#include <cstdint>
#include <tepor/base/detail/huge_pages.hpp>
#include <tepor/base/error.hpp>
#include <tepor/body/pattern.hpp>
#include <tepor/linear/detail/buffer.hpp>
#include <type_traits>

namespace tepor::detail {

/// Calls `run` with the number of nodes of a cell, a constant for linear triangles, so that their loops unroll.
template <class Run>
void with_corners(int nodes, Run run) {
    nodes == 3 ? run(std::integral_constant<int, 3>{}) : run(nodes);
}

/// Calls `run(row, column, position in the scatter map)` for the entries of all cell matrices below the diagonal, and for the
/// extra pairs, whose positions follow those of the cells.
template <class Run>
void each_coupling(int nodes, const std::vector<Id>& cell_unknowns, const std::vector<std::pair<Id, Id>>& extra,
                   Run run) {
    std::size_t at = 0;
    const Id* ids = cell_unknowns.data();
    const Id* const end = ids + cell_unknowns.size();
    for (; ids != end; ids += nodes) {
        for (int i = 0; i < nodes; ++i, ++at)
            for (int j = 0; j < i; ++j, ++at) run(std::max(ids[i], ids[j]), std::min(ids[i], ids[j]), at);
    }
    for (const auto& [a, b] : extra) run(std::max(a, b), std::min(a, b), at++);
}

/// Sorts few keys that differ, without a jump that could not be foretold: each goes to its rank.
inline void sort_few(const std::uint64_t* keys, std::size_t count, std::uint64_t* sorted) noexcept {
    for (std::size_t k = 0; k < count; ++k) {
        std::size_t rank = 0;
        for (std::size_t l = 0; l < count; ++l) rank += static_cast<std::size_t>(keys[l] < keys[k]);
        sorted[rank] = keys[k];
    }
}

TEPOR_INLINE Scatter build_pattern(Index unknowns, int nodes, const std::vector<Id>& cell_unknowns,
                                   const std::vector<std::pair<Id, Id>>& extra, SparseMatrix& matrix) {
    const auto nn = as_size(nodes);
    const std::size_t cells = cell_unknowns.size() / nn;
    const std::size_t pairs = nn * (nn + 1) / 2;
    if (cells * pairs + extra.size() > as_size(max_id))
        throw Error(ErrorCode::too_large, "mesh",
                    "mesh: more element matrix entries than 32-bit ids can count; use fewer cells");
    Scatter scatter;
    resize_huge(scatter.cells, cells * pairs);
    scatter.extra.resize(extra.size());

    // (column, position in the map) of the couplings, row by row; begin[i + 1] runs from the begin of row i to its end
    std::vector<Id> begin;
    resize_huge(begin, as_size(unknowns) + 2);
    Buffer<std::uint64_t> couplings(static_cast<Index>(cells * (pairs - nn) + extra.size()));
    with_corners(nodes, [&](auto n) {
        each_coupling(n, cell_unknowns, extra, [&](Id row, Id, std::size_t) { ++begin[as_size(row) + 2]; });
    });
    for (std::size_t i = 2; i < begin.size(); ++i) begin[i] += begin[i - 1];
    with_corners(nodes, [&](auto n) {
        std::uint64_t* const to = couplings.data();
        Id* const next = begin.data() + 1;
        each_coupling(n, cell_unknowns, extra, [to, next](Id row, Id column, std::size_t at) {
            to[next[row]++] = (static_cast<std::uint64_t>(column) << 32U) | at;
        });
    });

    matrix.rows = unknowns;
    resize_huge(matrix.start, as_size(unknowns) + 1);
    matrix.start[0] = 0;
    resize_huge(matrix.column, as_size(unknowns) * (nn <= 3 ? 4 : nn + 2));
    std::size_t used = 0;
    constexpr std::size_t few = 16;
    std::uint64_t sorted[few];
    for (Index i = 0; i < unknowns; ++i) {
        const std::uint64_t* row = couplings.data() + begin[as_size(i)];
        const std::size_t count = as_size(begin[as_size(i) + 1] - begin[as_size(i)]);
        if (count <= few) {
            sort_few(row, count, sorted);
            row = sorted;
        } else {
            std::sort(couplings.data() + begin[as_size(i)], couplings.data() + begin[as_size(i) + 1]);
        }
        if (used + count + 1 > as_size(max_id))
            throw Error(ErrorCode::too_large, "mesh",
                        "mesh: more matrix entries than 32-bit ids can count; use fewer cells");
        if (used + count + 1 > matrix.column.size())
            resize_huge(matrix.column, used + count + 1 + matrix.column.size() / 4);
        Id* const column = matrix.column.data();
        Id last = -1;
        std::size_t p = used - 1; // wraps at the first row and comes back at its first entry
        for (std::size_t k = 0; k < count; ++k) {
            const Id j = static_cast<Id>(row[k] >> 32U);
            const auto at = static_cast<std::size_t>(row[k] & 0xFFFFFFFFU);
            p += static_cast<std::size_t>(j != last);
            last = j;
            column[p] = j;
            if (at < scatter.cells.size())
                scatter.cells[at] = as_id(p);
            else
                scatter.extra[at - scatter.cells.size()] = as_id(p);
        }
        p += static_cast<std::size_t>(last != as_id(i)); // contacts may join an unknown to itself
        column[p] = as_id(i);
        used = p + 1;
        matrix.start[as_size(i) + 1] = as_id(used);
    }
    matrix.column.resize(used);
    matrix.column.shrink_to_fit();
    matrix.lower.clear();

    // diagonals stand last in their rows
    with_corners(nodes, [&](auto n) {
        const Id* ids = cell_unknowns.data();
        const Id* const start = matrix.start.data();
        Id* map = scatter.cells.data();
        for (std::size_t c = 0; c < cells; ++c, ids += n)
            for (int i = 0; i < n; ++i) {
                map += i;
                *map++ = start[ids[i] + 1] - 1;
            }
    });
    return scatter;
}

} // namespace tepor::detail
