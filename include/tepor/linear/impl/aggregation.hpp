#pragma once
// Aggregates of a multigrid level and the prolongation from them.
// Source: Vanek, Mandel & Brezina, "Algebraic multigrid by smoothed aggregation" (1996).

#include <algorithm>
#include <cmath>
#include <tepor/linear/detail/multigrid_level.hpp>
#include <tepor/linear/impl/strong_graph.hpp>
#include <vector>

namespace tepor::detail {

/// aggregate[i] of every row, or -1 where a row has no strong coupling: smoothing alone settles it.
struct Aggregates {
    Buffer<Id> of;
    Index count = 0;
    std::vector<Index> block; ///< first aggregate of each block of rows, and the end
    std::vector<Id> first;    ///< the first row of each
};

/// Aggregates never cross a block of rows. They are numbered by the position of their first row, so they inherit the
/// locality of the rows.
inline Aggregates aggregate(const StrongGraph& graph, Index n, const RowBlocks& blocks, Crew* crew) {
    constexpr Id none = -1, lonely = -2;
    Aggregates out;
    out.of.reset(n);
    Id* of = out.of.data();
    const Id* start = graph.start.data();
    const Id* neighbour = graph.neighbour.data();
    Buffer<Id> rank(
        n); // number of the aggregate with this root; before that, provisional aggregates are named by their root
    std::vector<Index> count(blocks.count() + 1, 0);
    const auto form = [&](std::size_t b) {
        const Index begin = blocks.begin[b], end = blocks.begin[b + 1];
        const auto inside = [&](Index j) { return j >= begin && j < end; };
        for (Index i = begin; i < end; ++i) of[i] = none;
        for (Index i = begin; i < end; ++i) { // whole neighbourhoods that are still free
            if (of[i] != none) continue;
            bool free = true, any = false;
            for (Index e = start[i]; e < start[i + 1] && free; ++e) {
                any = any || neighbour[e] >= 0;
                if (inside(neighbour[e])) free = of[neighbour[e]] == none;
            }
            if (!free) continue;
            if (!any) {
                of[i] = lonely;
                continue;
            }
            of[i] = as_id(i);
            for (Index e = start[i]; e < start[i + 1]; ++e) {
                if (inside(neighbour[e])) of[neighbour[e]] = as_id(i);
            }
        }
        // Leftovers join the aggregate they are coupled to most; those joined in this pass do not attract others.
        for (Index i = begin; i < end; ++i) {
            if (of[i] != none) continue;
            float best = -1.0f;
            Id to = none;
            for (Index e = start[i]; e < start[i + 1]; ++e) {
                const Index j = neighbour[e];
                if (!inside(j) || of[j] < 0) continue;
                const float weight = std::abs(graph.ratio[e]);
                if (weight > best) {
                    best = weight;
                    to = of[j];
                }
            }
            if (to != none) of[i] = static_cast<Id>(-3 - to);
        }
        for (Index i = begin; i < end; ++i) {
            if (of[i] < lonely) of[i] = static_cast<Id>(-3 - of[i]);
        }
        for (Index i = begin; i < end; ++i) { // what is left has only leftovers around it
            if (of[i] != none) continue;
            of[i] = as_id(i);
            for (Index e = start[i]; e < start[i + 1]; ++e) {
                if (inside(neighbour[e]) && of[neighbour[e]] == none) of[neighbour[e]] = as_id(i);
            }
        }
        for (Index i = begin; i < end; ++i) rank[i] = none;
        Index made = 0;
        for (Index i = begin; i < end; ++i) {
            if (of[i] == lonely) {
                of[i] = none;
                continue;
            }
            Id& number = rank[of[i]];
            if (number == none) number = as_id(made++);
            of[i] = number;
        }
        count[b + 1] = made;
    };
    blocks.each(crew, form);
    for (std::size_t b = 0; b < blocks.count(); ++b) count[b + 1] += count[b];
    out.count = count.back();
    out.first.resize(as_size(out.count));
    blocks.each(crew, [&](std::size_t b) {
        Index met = 0;
        for (Index i = blocks.begin[b]; i < blocks.begin[b + 1]; ++i) {
            if (of[i] < 0) continue;
            if (of[i] == met) out.first[as_size(count[b] + met++)] = as_id(i);
            of[i] = as_id(of[i] + count[b]);
        }
    });
    out.block = std::move(count);
    return out;
}

/// Row i of (I - w D^-1 A) T: T the piecewise constant on aggregates, A with its weak couplings lumped, w D^-1 = 4/3 over
/// the row's Gershgorin bound.
inline void smooth_prolongation(const StrongGraph& graph, Index n, const Aggregates& aggregates,
                                const RowBlocks& blocks, Crew* crew, Prolongation& out) {
    out.rows = n;
    out.columns = aggregates.count;
    const Id* start = graph.start.data();
    const Id* neighbour = graph.neighbour.data();
    const float* ratio = graph.ratio.data();
    const Id* of = aggregates.of.data();
    out.start.reset(n + 1);
    out.column.reset(start[n] + n + 1); // a neighbour's aggregate each; pages that stay unused cost nothing
    out.value.reset(start[n] + n + 1);
    Id* column = out.column.data();
    float* value = out.value.data();
    // Row i written from `used` on. @return its end
    const auto write_row = [&](Index i, Id used, RowSums<float>& sums) {
        const Id begin = used;
        Id* mark = sums.mark.data();
        float* total = sums.total.data();
        out.start[i] = begin;
        float diagonal = graph.lumped[i];
        float bound = 0.0f, sum = diagonal;
        for (Index e = start[i]; e < start[i + 1]; ++e) {
            bound += std::abs(ratio[e]);
            sum += ratio[e];
        }
        const bool level = std::abs(sum) <= 1e-5f * bound; // the row takes a constant to zero
        if (!(diagonal > 0.1f * bound)) diagonal = 1.0f;   // lumping took too much: a row that is no diffusion row
        bound += diagonal;
        // a row of no aggregate takes the mean of those it leans on
        const float factor = of[i] >= 0 ? (4.0f / 3.0f) / bound : 1.0f / diagonal;
        // Without a branch, since whether an aggregate is new is hard to foretell.
        const auto add = [&](Id aggregate, float v) {
            column[used] = aggregate;
            used += mark[aggregate] != i;
            mark[aggregate] = as_id(i);
            total[aggregate] += v;
        };
        if (of[i] >= 0) add(of[i], 1.0f - factor * diagonal);
        for (Index e = start[i]; e < start[i + 1]; ++e) {
            const Id aggregate = of[neighbour[e] >= 0 ? neighbour[e] : ~neighbour[e]];
            if (aggregate >= 0) add(aggregate, -factor * ratio[e]);
        }
        for (Id k = begin; k < used; ++k) {
            value[k] = total[column[k]];
            total[column[k]] = 0.0f;
        }
        if (!level || used == begin) return used;
        // Such a row shall interpolate constants exactly, so that a body without a temperature level stays singular on
        // every level. On a grid of 2^-22 the sum is free of rounding.
        float rest = 1.0f;
        for (Id k = begin + 1; k < used; ++k) {
            value[k] = (value[k] + 3.0f) - 3.0f;
            rest -= value[k];
        }
        value[begin] = rest;
        return used;
    };
    TaskScratch<RowSums<float>> scratch(crew, blocks.pairs(), out.columns);
    if (!crew || blocks.pairs() < 2) {
        Id used = 0;
        for (Index i = 0; i < n; ++i) used = write_row(i, used, scratch[0]);
        out.start[n] = used;
        return;
    }
    std::vector<Id> end(as_size(blocks.pairs()));
    run_tasks(crew, blocks.pairs(), [&](Index k) {
        Id used = as_id(start[blocks.pair_begin(k)] + blocks.pair_begin(k)); // behind all that rows before can need
        for (Index i = blocks.pair_begin(k); i < blocks.pair_end(k); ++i) used = write_row(i, used, scratch[k]);
        end[as_size(k)] = used;
    });
    Id used = end[0]; // close the gaps
    for (Index k = 1; k < blocks.pairs(); ++k) {
        const Id from = out.start[blocks.pair_begin(k)], length = end[as_size(k)] - from;
        std::copy_n(column + from, length, column + used);
        std::copy_n(value + from, length, value + used);
        for (Index i = blocks.pair_begin(k); i < blocks.pair_end(k); ++i) out.start[i] += used - from;
        used += length;
    }
    out.start[n] = used;
}

} // namespace tepor::detail
