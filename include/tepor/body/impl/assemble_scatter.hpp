#pragma once
// Where the arrays of a block of cells go: residual, matrix, weighted sums.

#include <tepor/body/impl/assemble.hpp>

namespace tepor::detail {

inline void Assembler::scatter(const CellBlock& block, Id first, Wanted wanted) {
    const int n = kernel_.nodes;
    const int pairs = n * (n + 1) / 2;
    if (pass_.residual)
        for (int b = 0; b < block.count; ++b) {
            const Id* ids = model_.cell(first + b);
            for (int i = 0; i < n; ++i) pass_.residual[ids[i]] += block.residual[i * W + b];
        }
    if (pass_.weights) weigh_cells(block, first, wanted);
    if (!pass_.matrix) return;
    double* lower = pass_.matrix->lower.data();
    const Id* map = model_.scatter.data() + static_cast<Index>(first) * pairs;
    for (int b = 0; b < block.count; ++b)
        for (int p = 0; p < pairs; ++p) lower[map[b * pairs + p]] += block.matrix[p * W + b];
    if (pass_.matrix->upper.empty()) return;
    double* upper = pass_.matrix->upper.data();
    for (int b = 0; b < block.count; ++b)
        for (int p = 0; p < pairs; ++p) upper[map[b * pairs + p]] += block.matrix[p * W + b];
    if (!wanted.slope) return;
    for (int b = 0; b < block.count; ++b) {
        const Id* ids = model_.cell(first + b);
        int p = 0;
        for (int i = 0; i < n; ++i)
            for (int j = 0; j <= i; ++j, ++p) {
                const double ij = block.slope[(i * n + j) * W + b];
                const double ji = block.slope[(j * n + i) * W + b];
                const Id at = map[b * pairs + p];
                if (i == j) {
                    lower[at] += ij;
                    upper[at] += ij;
                    continue;
                }
                const bool as_stored = ids[i] > ids[j]; // row i, column j is below the diagonal
                lower[at] += as_stored ? ij : ji;
                upper[at] += as_stored ? ji : ij;
            }
    }
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
