#pragma once
// The maps of Kernels<E>: places, weights and gradients at the quadrature points; included by kernels.hpp.

#include <tepor/assembly/kernels.hpp>

namespace tepor {

/// Place and weight of quadrature point q of straight two-node segments.
template <Element E>
void Kernels<E>::map_segment_point(int q, int count, const double* TEPOR_RESTRICT left,
                                   const double* TEPOR_RESTRICT right, double* TEPOR_RESTRICT place,
                                   double* TEPOR_RESTRICT weight) const {
    const double n0 = shape_[detail::as_size(q * N)];
    const double n1 = shape_[detail::as_size(q * N + 1)];
    const double w = rule_weight_[detail::as_size(q)];
    if (power_ == 0) {
        const double size = w * factor_;
        for (int c = 0; c < count; ++c) {
            place[c] = n0 * left[c] + n1 * right[c];
            weight[c] = size * (right[c] - left[c]);
        }
        return;
    }
    for (int c = 0; c < count; ++c) {
        place[c] = n0 * left[c] + n1 * right[c];
        weight[c] = w * (right[c] - left[c]) * measure(place[c]);
    }
}

template <Element E>
void Kernels<E>::map_segments(CellBlock& block) const {
    const double* TEPOR_RESTRICT x = block.x;
    if constexpr (constant_gradient) {
        // one division per cell; the gradients of the first point serve all
        double* TEPOR_RESTRICT left = block.gradient_x;
        double* TEPOR_RESTRICT right = block.gradient_x + W;
        for (int c = 0; c < W; ++c) {
            right[c] = 1.0 / (x[W + c] - x[c]);
            left[c] = -right[c];
        }
        for (int q = 0; q < points; ++q) {
            map_segment_point(q, W, x, x + W, block.point_x + q * W, block.weight + q * W);
            if (q > 0 && !block.unread.gradients)
                for (int i = 0; i < 2 * W; ++i) block.gradient_x[q * 2 * W + i] = block.gradient_x[i];
        }
        return;
    }
    for (int q = 0; q < points; ++q) {
        const double* n = shape_.data() + static_cast<Index>(q) * N;
        const double* g = reference_gradient_.data() + static_cast<Index>(q) * N;
        double* TEPOR_RESTRICT px = block.point_x + q * W;
        double* TEPOR_RESTRICT weight = block.weight + q * W;
        double jacobian[W];
        for (int c = 0; c < W; ++c) px[c] = jacobian[c] = 0.0;
        for (int i = 0; i < N; ++i)
            for (int c = 0; c < W; ++c) {
                px[c] += n[i] * x[i * W + c];
                jacobian[c] += g[i] * x[i * W + c];
            }
        const double w = rule_weight_[detail::as_size(q)];
        for (int c = 0; c < W; ++c) weight[c] = w * jacobian[c] * measure(px[c]);
        for (int i = 0; i < N; ++i) {
            double* TEPOR_RESTRICT gx = block.gradient_x + (q * N + i) * W;
            for (int c = 0; c < W; ++c) gx[c] = g[i] / jacobian[c];
        }
    }
}

template <Element E>
void Kernels<E>::open(CellBlock& block) const {
    if constexpr (E::dim == 1) {
        map_segments(block);
    } else if constexpr (flat_triangle) {
        map_triangles(block);
    } else {
        map_plane(block);
    }
    if (!block.unread.temperatures) profile(block, nullptr);
}

} // namespace tepor
