#pragma once
// The side integrals of Kernels<E>; included by kernels.hpp.

#include <tepor/assembly/kernels.hpp>

namespace tepor {

template <Element E>
void Kernels<E>::open_side(SideBlock& block, bool lumped) const {
    if constexpr (E::dim == 1) {
        for (int c = 0; c < W; ++c) {
            block.point_x[c] = block.x[c];
            block.point_y[c] = 0.0;
            block.weight[c] = measure(block.x[c]);
            if (block.T) block.point_T[c] = block.T[c];
        }
    } else {
        constexpr int M = Side::nodes;
        const SideTable& table = lumped ? lumped_side_ : side_;
        const int count = static_cast<int>(table.weight.size());
        for (int q = 0; q < count; ++q) {
            const double* n = table.shape.data() + static_cast<Index>(q) * M;
            const double* g = table.gradient.data() + static_cast<Index>(q) * M;
            for (int c = 0; c < W; ++c) {
                double x = 0.0;
                double y = 0.0;
                double tx = 0.0;
                double ty = 0.0;
                double T = 0.0;
                for (int i = 0; i < M; ++i) {
                    x += n[i] * block.x[i * W + c];
                    y += n[i] * block.y[i * W + c];
                    tx += g[i] * block.x[i * W + c];
                    ty += g[i] * block.y[i * W + c];
                    if (block.T) T += n[i] * block.T[i * W + c];
                }
                const double length = std::sqrt(tx * tx + ty * ty);
                block.point_x[q * W + c] = x;
                block.point_y[q * W + c] = y;
                block.weight[q * W + c] = table.weight[detail::as_size(q)] * length * measure(x);
                block.normal_x[q * W + c] = ty / length;
                block.normal_y[q * W + c] = -tx / length;
                if (block.T) block.point_T[q * W + c] = T;
            }
        }
        // a rule with fewer points than the block holds: the rest weighs nothing
        for (int q = count; q < side_points; ++q)
            for (int c = 0; c < W; ++c) {
                const int last = (count - 1) * W + c;
                block.point_x[q * W + c] = block.point_x[last];
                block.point_y[q * W + c] = block.point_y[last];
                block.normal_x[q * W + c] = block.normal_x[last];
                block.normal_y[q * W + c] = block.normal_y[last];
                block.weight[q * W + c] = 0.0;
                if (block.T) block.point_T[q * W + c] = block.point_T[last];
            }
    }
}

template <Element E>
void Kernels<E>::form_side(SideBlock& block, Wanted wanted, bool lumped) const {
    constexpr int M = Side::nodes;
    constexpr int pairs = M * (M + 1) / 2;
    if (wanted.residual)
        for (int i = 0; i < M * W; ++i) block.residual[i] = 0.0;
    if (wanted.matrix)
        for (int i = 0; i < pairs * W; ++i) block.matrix[i] = 0.0;
    const int count = E::dim == 1 ? 1 : static_cast<int>((lumped ? lumped_side_ : side_).weight.size());
    for (int q = 0; q < count; ++q) {
        const double* n = side_shape_at(q, lumped);
        const double* TEPOR_RESTRICT weight = block.weight + q * W;
        if (wanted.residual)
            for (int i = 0; i < M; ++i)
                for (int c = 0; c < W; ++c) block.residual[i * W + c] += weight[c] * block.flux[q * W + c] * n[i];
        if (!wanted.matrix || !block.flux_slope) continue;
        int pair = 0;
        for (int i = 0; i < M; ++i)
            for (int j = 0; j <= i; ++j, ++pair)
                for (int c = 0; c < W; ++c)
                    block.matrix[pair * W + c] += weight[c] * block.flux_slope[q * W + c] * (n[i] * n[j]);
    }
}

} // namespace tepor
