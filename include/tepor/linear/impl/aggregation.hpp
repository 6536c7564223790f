#pragma once
// Coarsening of multigrid: strong couplings, aggregates, and the smoothed prolongation.
// Source: Vanek, Mandel & Brezina, "Algebraic multigrid by smoothed aggregation" (1996).

#include <algorithm>
#include <cmath>
#include <tepor/linear/detail/multigrid_level.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <vector>

namespace tepor::detail {

/// Strong couplings of every row, both sides; values relative to the diagonal of the row.
struct StrongGraph {
    Buffer<Id> start;       ///< n + 1
    Buffer<Id> neighbour;   ///< ascending in each row
    Buffer<float> ratio;    ///< a_ij / a_ii
    Buffer<double> inverse; ///< 1 / a_ii
    Buffer<Id> next;        ///< work
    Buffer<float> lumped;   ///< 1 + sum of the weak a_ij / a_ii: the diagonal with the weak couplings lumped to it
};

/// a_ij is strong when a_ij^2 >= strength^2 a_ii a_jj.
inline void find_strong(const SparseMatrix& a, Index n, double strength, StrongGraph& out) {
    out.start.reserve(n + 1);
    out.lumped.reserve(n);
    out.inverse.reserve(n);
    out.next.reserve(n + 1);
    double* inverse = out.inverse.data();
    Id* next = out.next.data();
    const Id* start = a.start.data();
    const Id* column = a.column.data();
    const double* value = a.lower.data();
    for (Index i = 0; i < n; ++i) inverse[i] = 1.0 / value[start[i + 1] - 1];
    for (Index i = 0; i <= n; ++i) next[i] = 0;
    const double least = strength * strength;
    for (Index i = 0; i < n; ++i) {
        out.lumped[i] = 1.0f;
        const double own = inverse[i];
        for (Index p = start[i]; p < start[i + 1] - 1; ++p) {
            const Index j = column[p];
            const double v = value[p];
            if ((v * own) * (v * inverse[j]) >= least) {
                ++next[i];
                ++next[j];
            } else {
                out.lumped[i] += static_cast<float>(v * own);
                out.lumped[j] += static_cast<float>(v * inverse[j]);
            }
        }
    }
    Id sum = 0;
    for (Index i = 0; i <= n; ++i) {
        const Id count = i < n ? next[i] : 0;
        next[i] = out.start[i] = sum;
        sum += count;
    }
    out.neighbour.reserve(sum);
    out.ratio.reserve(sum);
    for (Index i = 0; i < n; ++i) {
        const double own = inverse[i];
        for (Index p = start[i]; p < start[i + 1] - 1; ++p) {
            const Index j = column[p];
            const double v = value[p];
            if (!((v * own) * (v * inverse[j]) >= least)) continue;
            const Index mine = next[i]++;
            out.neighbour[mine] = as_id(j);
            out.ratio[mine] = static_cast<float>(v * own);
            const Index other = next[j]++;
            out.neighbour[other] = as_id(i);
            out.ratio[other] = static_cast<float>(v * inverse[j]);
        }
    }
}

/// aggregate[i] of every row, or -1 where a row has no strong coupling: smoothing alone settles it.
struct Aggregates {
    Buffer<Id> of;
    Index count = 0;
    std::vector<Index> block; ///< aggregates by block, as the rows are
    std::vector<Id> first;    ///< the first row of each
};

/// Aggregates never cross a block of rows. They are numbered by the position of their first row, so they inherit the
/// locality of the rows.
inline Aggregates aggregate(const StrongGraph& graph, Index n, const std::vector<Index>& block) {
    constexpr Id none = -1, lonely = -2;
    Aggregates out;
    out.of.reset(n);
    Id* of = out.of.data();
    const Id* start = graph.start.data();
    const Id* neighbour = graph.neighbour.data();
    out.block.assign(1, 0);
    Buffer<Id> rank(
        n); // of the first row of each aggregate; before that, provisional aggregates are named by their root
    for (std::size_t b = 0; b + 1 < block.size(); ++b) {
        const Index begin = block[b], end = block[b + 1];
        const auto inside = [&](Index j) { return j >= begin && j < end; };
        for (Index i = begin; i < end; ++i) of[i] = none;
        for (Index i = begin; i < end; ++i) { // whole neighbourhoods that are still free
            if (of[i] != none) continue;
            bool free = true, any = false;
            for (Index e = start[i]; e < start[i + 1] && free; ++e) {
                if (!inside(neighbour[e])) continue;
                any = true;
                free = of[neighbour[e]] == none;
            }
            if (!free) continue;
            if (!any && start[i] == start[i + 1]) {
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
        for (Index i = begin; i < end; ++i) {
            if (of[i] == lonely) {
                of[i] = none;
                continue;
            }
            Id& number = rank[of[i]];
            if (number == none) {
                number = as_id(out.count++);
                out.first.push_back(as_id(i));
            }
            of[i] = number;
        }
        out.block.push_back(out.count);
    }
    return out;
}

/// Row i of (I - w D^-1 A) T: T the piecewise constant on aggregates, A with its weak couplings lumped, w D^-1 = 4/3 over
/// the row's Gershgorin bound.
inline void smooth_prolongation(const StrongGraph& graph, Index n, const Aggregates& aggregates, Prolongation& out) {
    out.rows = n;
    out.columns = aggregates.count;
    const Id* start = graph.start.data();
    const Id* neighbour = graph.neighbour.data();
    const float* ratio = graph.ratio.data();
    const Id* of = aggregates.of.data();
    out.start.reserve(n + 1);
    out.column.reserve(start[n] + n + 1); // a neighbour's aggregate each; pages that stay unused cost nothing
    out.value.reserve(start[n] + n + 1);
    out.mark.reserve(out.columns + 1);
    out.total.reserve(out.columns + 1);
    Id* column = out.column.data();
    float* value = out.value.data();
    Id* mark = out.mark.data();
    float* total = out.total.data();
    for (Index c = 0; c <= out.columns; ++c) {
        mark[c] = -1;
        total[c] = 0.0f;
    }
    Id used = 0;
    for (Index i = 0; i < n; ++i) {
        const Id begin = used;
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
        const float factor = (4.0f / 3.0f) / bound;
        // Without a branch, since whether an aggregate is new is hard to foretell.
        const auto add = [&](Id aggregate, float v) {
            column[used] = aggregate;
            used += mark[aggregate] != i;
            mark[aggregate] = as_id(i);
            total[aggregate] += v;
        };
        if (of[i] >= 0) add(of[i], 1.0f - factor * diagonal);
        for (Index e = start[i]; e < start[i + 1]; ++e) {
            const Id aggregate = of[neighbour[e]];
            if (aggregate >= 0) add(aggregate, -factor * ratio[e]);
        }
        for (Id k = begin; k < used; ++k) {
            value[k] = total[column[k]];
            total[column[k]] = 0.0f;
        }
        if (!level || used == begin) continue;
        // Such a row shall interpolate constants exactly, so that a body without a temperature level stays singular on
        // every level. On a grid of 2^-22 the sum is free of rounding.
        float rest = 1.0f;
        for (Id k = begin + 1; k < used; ++k) {
            value[k] = (value[k] + 3.0f) - 3.0f;
            rest -= value[k];
        }
        value[begin] = rest;
    }
    out.start[n] = used;
}

} // namespace tepor::detail
