#pragma once
// Kernels<E> on lines of two-node cells; included by kernels.hpp.

#include <tepor/assembly/kernels.hpp>

namespace tepor {

template <Element E>
void Kernels<E>::open_chain(ChainBlock& block) const {
    if constexpr (E::dim == 1 && constant_gradient) {
        for (int q = 0; q < points; ++q)
            map_segment_point(q, block.count, block.x, block.x + 1, block.point_x + q * block.count,
                              block.weight + q * block.count);
    } else {
        CellKernels::open_chain(block);
    }
}

template <Element E>
void Kernels<E>::form_chain(ChainBlock& block) const {
    if constexpr (E::dim == 1 && constant_gradient) {
        const int n = block.count;
        double total[chain_width];
        sum_conductivity(n, block.weight, n, block.k, block.k_value, total);
        // the matrix of the cell is total / h^2 [1 -1; -1 1]
        const double* TEPOR_RESTRICT x = block.x;
        double* TEPOR_RESTRICT resistance = block.resistance;
        for (int c = 0; c < n; ++c) {
            const double h = x[c + 1] - x[c];
            resistance[c] = h * h / total[c];
        }
        if (!block.source) return;
        double* TEPOR_RESTRICT left = block.load_left;
        double* TEPOR_RESTRICT right = block.load_right;
        for (int q = 0; q < points; ++q) {
            const double* shape = shape_.data() + static_cast<Index>(q) * N;
            const double n0 = shape[0];
            const double n1 = shape[1];
            const double* TEPOR_RESTRICT weight = block.weight + q * n;
            const double* TEPOR_RESTRICT source = block.source + q * n;
            if (q == 0)
                for (int c = 0; c < n; ++c) {
                    const double heat = weight[c] * source[c];
                    left[c] = heat * n0;
                    right[c] = heat * n1;
                }
            else
                for (int c = 0; c < n; ++c) {
                    const double heat = weight[c] * source[c];
                    left[c] += heat * n0;
                    right[c] += heat * n1;
                }
        }
    } else {
        CellKernels::form_chain(block);
    }
}

} // namespace tepor
