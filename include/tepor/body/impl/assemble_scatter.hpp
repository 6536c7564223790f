#pragma once
// Cell arrays into the residual, the matrix and the functionals of a pass.

#include <tepor/body/gather.hpp>
#include <tepor/body/impl/assemble.hpp>

namespace tepor::detail {

/// The first `count` matrices of a block to their places in one triangle.
template <class N>
void add_packed(N nodes, int count, const Id* TEPOR_RESTRICT map, const double* TEPOR_RESTRICT from,
                double* TEPOR_RESTRICT to) {
    const int pairs = nodes * (nodes + 1) / 2;
    for (int b = 0; b < count; ++b, map += pairs)
        for (int p = 0; p < pairs; ++p) to[map[p]] += from[p * block_width + b];
}

/// The same with what the slope of the conductivity adds: its rows and columns differ, so that both triangles are written.
template <class N>
void add_sloped(N nodes, const CellBlock& block, const Id* TEPOR_RESTRICT ids, const Id* TEPOR_RESTRICT map,
                double* TEPOR_RESTRICT lower, double* TEPOR_RESTRICT upper) {
    const int n = nodes;
    for (int b = 0; b < block.count; ++b, ids += n, map += n * (n + 1) / 2) {
        const double* TEPOR_RESTRICT matrix = block.matrix + b;
        const double* TEPOR_RESTRICT slope = block.slope + b;
        int p = 0;
        for (int i = 0; i < n; ++i) {
            for (int j = 0; j < i; ++j, ++p) {
                const bool as_stored = ids[i] > ids[j]; // row i, column j is below the diagonal
                const int below = as_stored ? i * n + j : j * n + i;
                const int above = as_stored ? j * n + i : i * n + j;
                lower[map[p]] += matrix[p * block_width] + slope[below * block_width];
                upper[map[p]] += matrix[p * block_width] + slope[above * block_width];
            }
            const double both = matrix[p * block_width] + slope[(i * n + i) * block_width];
            lower[map[p]] += both;
            upper[map[p]] += both;
            ++p;
        }
    }
}

inline void Assembler::scatter(const CellBlock& block, Id first, Wanted wanted) {
    const int n = kernel_.nodes;
    const int pairs = n * (n + 1) / 2;
    if (pass_.residual)
        with_nodes(n, [&](auto nodes) {
            const int N = nodes;
            double* residual = pass_.residual;
            const double* TEPOR_RESTRICT from = block.residual;
            const Id* TEPOR_RESTRICT ids = model_.cell(first);
            for (int b = 0; b < block.count; ++b, ids += N)
                for (int i = 0; i < N; ++i) residual[ids[i]] += from[i * W + b];
        });
    if (pass_.weights) weigh_cells(block, first, wanted);
    if (!pass_.matrix) return;
    const Id* map = model_.scatter.data() + static_cast<Index>(first) * pairs;
    double* lower = pass_.matrix->lower.data();
    double* upper = pass_.matrix->upper.data();
    if (wanted.slope) {
        const Id* ids = model_.cell(first);
        return with_nodes(n, [&](auto nodes) { add_sloped(nodes, block, ids, map, lower, upper); });
    }
    add_matrices(block, map, lower);
    if (!pass_.matrix->upper.empty()) add_matrices(block, map, upper);
}

inline void Assembler::add_matrices(const CellBlock& block, const Id* TEPOR_RESTRICT map, double* to) const {
    with_nodes(kernel_.nodes, [&](auto nodes) { add_packed(nodes, block.count, map, block.matrix, to); });
}

inline void Assembler::weigh_cells(const CellBlock& block, Id first, Wanted wanted) {
    const int n = kernel_.nodes;
    for (int b = 0; b < block.count; ++b) {
        const Id* ids = model_.cell(first + b);
        for (int i = 0; i < n; ++i) {
            const double w = pass_.weights[ids[i]];
            if (w == 0.0) continue;
            pass_.weighted += w * block.residual[i * W + b];
            if (!pass_.transposed) continue;
            for (int j = 0; j < n; ++j) {
                const int pair = i > j ? i * (i + 1) / 2 + j : j * (j + 1) / 2 + i;
                double J = block.matrix[pair * W + b];
                if (wanted.slope) J += block.slope[(i * n + j) * W + b];
                pass_.transposed[ids[j]] += w * J;
            }
        }
    }
}

} // namespace tepor::detail
