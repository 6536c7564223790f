#pragma once
// Strong couplings of a multigrid level.
// Source: Vanek, Mandel & Brezina, "Algebraic multigrid by smoothed aggregation" (1996); the couplings of one row alone, of
// positive sign and of rows that belong together are common practice, no source.

#include <algorithm>
#include <tepor/linear/impl/row_blocks.hpp>
#include <tepor/linear/sparse_matrix.hpp>

namespace tepor::detail {

/// Strong couplings of every row; values relative to the diagonal of the row.
///
/// A coupling of both rows is stored in both, as j. A coupling that only row i leans on, because the diagonal of row j is far
/// larger (a poor conductor beside a good one), is stored in row i alone, as ~j: it joins no aggregate, but row i interpolates
/// from it. Without these, the jump at the border of two conductors stays one cell wide on all levels and weakens each.
struct StrongGraph {
    Buffer<Id> start;       ///< n + 1
    Buffer<Id> neighbour;   ///< j or ~j; the j ascend in each row
    Buffer<float> ratio;    ///< a_ij / a_ii
    Buffer<double> inverse; ///< 1 / a_ii
    Buffer<Id> next;        ///< work
    Buffer<float> cut;      ///< work: couplings of the row below this share of a_ii are weak
    Buffer<float> lumped;   ///< 1 + sum of the weak a_ij / a_ii: the diagonal with the weak couplings lumped to it
};

/// a_ij < 0 is strong for both rows when a_ij^2 >= strength^2 a_ii a_jj, and for row i when |a_ij| >= strength a_ii. Positive
/// couplings, which blunt angles and consistent face terms leave, are never strong: smooth errors differ across them.
///
/// A row with most of its weight on one neighbour, such as the other side of a tight contact, is one with it: what else it is
/// coupled to is weak, so that the two make an aggregate of their own. The sweeps move them together too slowly for more.
inline void find_strong(const SparseMatrix& a, Index n, double strength, const RowBlocks& blocks, Crew* crew,
                        StrongGraph& out) {
    out.start.reserve(n + 1);
    out.lumped.reserve(n);
    out.cut.reserve(n);
    out.inverse.reserve(n);
    out.next.reserve(n + 1);
    double* inverse = out.inverse.data();
    float* lumped = out.lumped.data();
    float* cut = out.cut.data();
    Id* next = out.next.data();
    const Id* start = a.start.data();
    const Id* column = a.column.data();
    const double* value = a.lower.data();
    const auto each_row = [&](const auto& work) { // work(i, first column of the block of row i)
        blocks.each(crew, [&](std::size_t b) {
            for (Index i = blocks.begin[b]; i < blocks.begin[b + 1]; ++i) work(i, blocks.begin[b]);
        });
    };
    each_row([&](Index i, Index) {
        inverse[i] = 1.0 / value[start[i + 1] - 1];
        lumped[i] = 1.0f;
        cut[i] = 0.0f;
        next[i] = 0;
    });
    next[n] = 0;
    // What concerns row j of an entry (i, j) is written by the block of row i where that is the block of j as well, and after
    // all blocks where it is not.
    const auto widen = [&](Index j, double v) {
        const float share = static_cast<float>(-v * inverse[j]);
        cut[j] = std::max(cut[j], share);
    };
    each_row([&](Index i, Index begin) {
        float most = cut[i];
        for (Index p = start[i]; p < start[i + 1] - 1; ++p) {
            most = std::max(most, static_cast<float>(-value[p] * inverse[i]));
            if (column[p] >= begin) widen(column[p], value[p]);
        }
        cut[i] = most;
    });
    for (const RowBlocks::Far& f : blocks.far) widen(column[f.entry], value[f.entry]);
    each_row([&](Index i, Index) { cut[i] = cut[i] > 0.8f ? 0.5f * cut[i] : 0.0f; });

    const double least = strength * strength;
    struct Strong {
        double mine, other;
        bool both, here, there;
    };
    const auto judge = [&](double v, Index i, Index j) {
        Strong s{v * inverse[i], v * inverse[j], false, false, false};
        const bool i_open = -s.mine >= static_cast<double>(cut[i]), j_open = -s.other >= static_cast<double>(cut[j]);
        s.both = v < 0.0 && s.mine * s.other >= least && (i_open || j_open);
        s.here = s.both || (v < 0.0 && i_open && s.mine * s.mine >= least);
        s.there = s.both || (v < 0.0 && j_open && s.other * s.other >= least);
        return s;
    };
    const auto count = [&](Index row, bool strong, double ratio) {
        next[row] += strong;
        if (!strong) lumped[row] += static_cast<float>(ratio);
    };
    each_row([&](Index i, Index begin) {
        for (Index p = start[i]; p < start[i + 1] - 1; ++p) {
            const Strong s = judge(value[p], i, column[p]);
            count(i, s.here, s.mine);
            if (column[p] >= begin) count(column[p], s.there, s.other);
        }
    });
    for (const RowBlocks::Far& f : blocks.far) {
        const Strong s = judge(value[f.entry], f.row, column[f.entry]);
        count(column[f.entry], s.there, s.other);
    }
    Id sum = 0;
    for (Index i = 0; i <= n; ++i) {
        const Id entries = i < n ? next[i] : 0;
        next[i] = out.start[i] = sum;
        sum += entries;
    }
    out.neighbour.reserve(sum);
    out.ratio.reserve(sum);
    const auto put = [&](Index row, Index neighbour, bool both, double ratio) {
        const Index to = next[row]++;
        out.neighbour[to] = as_id(both ? neighbour : ~neighbour);
        out.ratio[to] = static_cast<float>(ratio);
    };
    each_row([&](Index i, Index begin) {
        for (Index p = start[i]; p < start[i + 1] - 1; ++p) {
            const Strong s = judge(value[p], i, column[p]);
            if (s.here) put(i, column[p], s.both, s.mine);
            if (s.there && column[p] >= begin) put(column[p], i, s.both, s.other);
        }
    });
    for (const RowBlocks::Far& f : blocks.far) {
        const Strong s = judge(value[f.entry], f.row, column[f.entry]);
        if (s.there) put(column[f.entry], f.row, s.both, s.other);
    }
}

} // namespace tepor::detail
