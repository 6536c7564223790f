#pragma once
// The resistance cell: its capacity, the temperature between its ends, its sides.

#include <algorithm>
#include <cmath>
#include <tepor/assembly/exact_kernels.hpp>

namespace tepor {

TEPOR_INLINE void Kernels<ExactSegment>::form_capacity(CellBlock& block, const double* amount, bool lumped) const {
    const double sink = block.sink;
    block.sink = 0.0; // functions that sum to 1, so that no heat is lost between them
    block.unresolved = -1;
    for (int c = 0; c < block.count; ++c) {
        Cell cell;
        shape_cell(block, c, cell);
        double m[3] = {0.0, 0.0, 0.0};
        for (int q = 0; q < points; ++q) {
            const double s = block.weight[q * W + c] * amount[q * W + c];
            const double own[2] = {lumped ? 1.0 : cell.phi[0][q], lumped ? 1.0 : cell.phi[1][q]};
            m[0] += s * cell.phi[0][q] * own[0];
            m[1] += lumped ? 0.0 : s * cell.phi[0][q] * cell.phi[1][q];
            m[2] += s * cell.phi[1][q] * own[1];
        }
        for (int pair = 0; pair < 3; ++pair) block.matrix[pair * W + c] = m[pair];
    }
    block.sink = sink;
}

TEPOR_INLINE void Kernels<ExactSegment>::profile(CellBlock& block, double* shape) const {
    block.unresolved = -1;
    for (int c = 0; c < block.count; ++c) {
        Cell cell;
        shape_cell(block, c, cell);
        if (shape)
            for (int q = 0; q < points; ++q)
                for (int i = 0; i < 2; ++i) shape[(q * 2 + i) * W + c] = cell.phi[i][q];
        if (!block.T) continue;
        const double first = block.k_mean ? 0.0 : block.T[c];
        const double second = block.k_mean ? block.k_mean[c] * (block.T[W + c] - block.T[c]) : block.T[W + c];
        double T[most_points];
        for (int q = 0; q < points; ++q) T[q] = cell.phi[0][q] * first + cell.phi[1][q] * second;
        if (block.source) {
            double source[most_points];
            source_of(block, c, cell, source);
            if (cell.centre && !block.source_slope) {
                // the centre node has its own share of the source already: take the course from the outer node
                double rise[most_points + 1];
                centre_rise(cell, source, rise);
                for (int q = 0; q < points; ++q)
                    T[q] = second - rise[q] + cell.phi[0][q] * (first - second + rise[points]);
            } else if (!cell.centre) {
                // T = - integral of s w G, with G(x, r) = phi_1(min) phi_0(max) times a constant
                const double constant = cell.fin ? source[0] : 0.0;
                const double scale =
                    cell.fin ? std::sinh(cell.decay) * std::tanh(0.5 * cell.decay) / cell.loss : 1.0 / cell.conductance;
                double density[most_points];
                double before[most_points];
                double after[most_points];
                double total = 0.0;
                bool any = false;
                for (int q = 0; q < points; ++q) {
                    const double s = (source[q] - constant) * cell.jacobian[q] * cell.measure[q];
                    any = any || s != 0.0;
                    density[q] = s * cell.phi[1][q];
                    after[q] = s * cell.phi[0][q];
                    total += weight_[detail::as_size(q)] * after[q];
                }
                if (any) {
                    running(density, before);
                    for (int q = 0; q < points; ++q) density[q] = after[q];
                    running(density, after);
                    for (int q = 0; q < points; ++q)
                        T[q] -= scale * (cell.phi[0][q] * before[q] + cell.phi[1][q] * (total - after[q]));
                }
                if (cell.fin)
                    for (int q = 0; q < points; ++q) {
                        // 1 - phi_0 - phi_1 without cancellation
                        const double left = cell.decay * place_[detail::as_size(q)];
                        const double apart = std::expm1(-left) * std::expm1(left - cell.decay);
                        T[q] -= constant / block.sink * apart / (1.0 + std::exp(-cell.decay));
                    }
            }
        }
        for (int q = 0; q < points; ++q) block.point_T[q * W + c] = T[q];
    }
}

TEPOR_INLINE void Kernels<ExactSegment>::open_side(SideBlock& block, bool /*lumped*/) const {
    for (int c = 0; c < W; ++c) {
        block.point_x[c] = block.x[c];
        block.point_y[c] = 0.0;
        block.weight[c] = measure(block.x[c]);
        if (block.T) block.point_T[c] = block.T[c];
    }
}

TEPOR_INLINE void Kernels<ExactSegment>::form_side(SideBlock& block, Wanted wanted, bool /*lumped*/) const {
    for (int c = 0; c < W; ++c) {
        if (wanted.residual) block.residual[c] = block.weight[c] * block.flux[c];
        if (wanted.matrix) block.matrix[c] = block.flux_slope ? block.weight[c] * block.flux_slope[c] : 0.0;
    }
}

} // namespace tepor
