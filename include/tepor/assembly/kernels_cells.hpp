#pragma once
// The cell integrals of Kernels<E>; included by kernels.hpp.

#include <tepor/assembly/kernels.hpp>

namespace tepor {

template <Element E>
void Kernels<E>::form(CellBlock& block, Wanted wanted) const {
    if (wanted.residual)
        for (int i = 0; i < N * W; ++i) block.residual[i] = 0.0;
    // what comes first is set, not added to
    const bool plane = E::dim == 2 && block.conductivities > 0;
    const bool resistance = E::dim == 1 && constant_gradient && block.conductivities == 1 && !wanted.slope;
    if (wanted.matrix && !plane && !resistance)
        for (int i = 0; i < N * (N + 1) / 2 * W; ++i) block.matrix[i] = 0.0;
    if (wanted.slope && !plane)
        for (int i = 0; i < N * N * W; ++i) block.slope[i] = 0.0;
    if (block.conductivities > 0) {
        if constexpr (flat_triangle)
            form_triangle_conduction(block, wanted);
        else if constexpr (E::dim == 2)
            form_plane_conduction(block, wanted);
        else if (resistance)
            form_segment_conduction(block, wanted);
        else
            add_conduction(block, wanted);
    }
    if (block.source) add_source(block, wanted);
}

/// Integral of k over each of `count` cells; point q of cell c stands at [q * stride + c], a null k is k_value everywhere.
template <Element E>
void Kernels<E>::sum_conductivity(int count, const double* weight, int stride, const double* k, double k_value,
                                  double* TEPOR_RESTRICT total) const {
    for (int q = 0; q < points; ++q) {
        const double* TEPOR_RESTRICT w = weight + q * stride;
        const double* TEPOR_RESTRICT at = k + (k ? q * stride : 0);
        if (k && q == 0)
            for (int c = 0; c < count; ++c) total[c] = w[c] * at[c];
        else if (k)
            for (int c = 0; c < count; ++c) total[c] += w[c] * at[c];
        else if (q == 0)
            for (int c = 0; c < count; ++c) total[c] = w[c] * k_value;
        else
            for (int c = 0; c < count; ++c) total[c] += w[c] * k_value;
    }
}

/// Two-node segments: the matrix is total / h^2 [1 -1; -1 1], and the heat that flows comes from the difference of two temperatures.
template <Element E>
void Kernels<E>::form_segment_conduction(CellBlock& block, Wanted wanted) const {
    double total[W];
    sum_conductivity(W, block.weight, W, block.k_uniform ? nullptr : block.k[0], block.k[0][0], total);
    const double* TEPOR_RESTRICT left = block.gradient_x;
    const double* TEPOR_RESTRICT right = block.gradient_x + W;
    if (wanted.matrix) {
        double* TEPOR_RESTRICT m = block.matrix;
        for (int c = 0; c < W; ++c) {
            const double coupling = total[c] * (left[c] * right[c]);
            m[c] = -coupling;
            m[W + c] = coupling;
            m[2 * W + c] = -coupling;
        }
    }
    if (wanted.residual) {
        double* TEPOR_RESTRICT r = block.residual;
        for (int c = 0; c < W; ++c) {
            const double slope = left[c] * block.T[c] + right[c] * block.T[W + c];
            r[c] += total[c] * (left[c] * slope);
            r[W + c] += total[c] * (right[c] * slope);
        }
    }
}

/// Segments in general.
template <Element E>
void Kernels<E>::add_conduction(CellBlock& block, Wanted wanted) const {
    double a[detail::as_size(N * W)]; // k grad N_i at a point, times its weight
    double slope[W];                  // of the temperature
    for (int q = 0; q < points; ++q) {
        const double* TEPOR_RESTRICT weight = block.weight + q * W;
        const double* TEPOR_RESTRICT g = block.gradient_x + (constant_gradient ? 0 : q * N * W);
        double k[W];
        for (int c = 0; c < W; ++c) k[c] = weight[c] * block.k[0][block.k_uniform ? 0 : q * W + c];
        for (int i = 0; i < N; ++i)
            for (int c = 0; c < W; ++c) a[i * W + c] = k[c] * g[i * W + c];
        if (wanted.matrix) {
            int pair = 0;
            for (int i = 0; i < N; ++i)
                for (int j = 0; j <= i; ++j, ++pair) {
                    double* TEPOR_RESTRICT m = block.matrix + pair * W;
                    for (int c = 0; c < W; ++c) m[c] += a[i * W + c] * g[j * W + c];
                }
        }
        if (!wanted.residual && !wanted.slope) continue;
        for (int c = 0; c < W; ++c) slope[c] = 0.0;
        for (int i = 0; i < N; ++i)
            for (int c = 0; c < W; ++c) slope[c] += g[i * W + c] * block.T[i * W + c];
        if (wanted.residual)
            for (int i = 0; i < N; ++i) {
                double* TEPOR_RESTRICT r = block.residual + i * W;
                for (int c = 0; c < W; ++c) r[c] += a[i * W + c] * slope[c];
            }
        if (!wanted.slope || !block.k_slope[0]) continue;
        // k' N_j (dT/dx dN_i/dx)
        const double* n = shape_.data() + static_cast<Index>(q) * N;
        double change[W];
        for (int c = 0; c < W; ++c) change[c] = weight[c] * block.k_slope[0][q * W + c] * slope[c];
        for (int i = 0; i < N; ++i) {
            double along[W];
            for (int c = 0; c < W; ++c) along[c] = change[c] * g[i * W + c];
            for (int j = 0; j < N; ++j) {
                double* TEPOR_RESTRICT u = block.slope + (i * N + j) * W;
                for (int c = 0; c < W; ++c) u[c] += along[c] * n[j];
            }
        }
    }
}

template <Element E>
void Kernels<E>::add_source(CellBlock& block, Wanted wanted) const {
    for (int q = 0; q < points; ++q) {
        const double* n = shape_.data() + static_cast<Index>(q) * N;
        const double* TEPOR_RESTRICT weight = block.weight + q * W;
        if (wanted.residual)
            for (int i = 0; i < N; ++i) {
                double* TEPOR_RESTRICT r = block.residual + i * W;
                for (int c = 0; c < W; ++c) r[c] += weight[c] * block.source[q * W + c] * n[i];
            }
        if (!wanted.matrix || !block.source_slope) continue;
        double s[W];
        for (int c = 0; c < W; ++c) s[c] = weight[c] * block.source_slope[q * W + c];
        int pair = 0;
        for (int i = 0; i < N; ++i)
            for (int j = 0; j <= i; ++j, ++pair) {
                const double nn = n[i] * n[j];
                double* TEPOR_RESTRICT m = block.matrix + pair * W;
                for (int c = 0; c < W; ++c) m[c] += s[c] * nn;
            }
    }
}

template <Element E>
void Kernels<E>::form_capacity(CellBlock& block, const double* amount, bool lumped) const {
    for (int i = 0; i < N * (N + 1) / 2 * W; ++i) block.matrix[i] = 0.0;
    for (int q = 0; q < points; ++q) {
        const double* n = shape_.data() + static_cast<Index>(q) * N;
        const double* TEPOR_RESTRICT weight = block.weight + q * W;
        double s[W];
        for (int c = 0; c < W; ++c) s[c] = weight[c] * amount[q * W + c];
        int pair = 0;
        for (int i = 0; i < N; ++i)
            for (int j = 0; j <= i; ++j, ++pair) {
                if (lumped && j != i) continue;
                const double nn = lumped ? n[i] : n[i] * n[j]; // the functions of a row sum to 1
                double* TEPOR_RESTRICT m = block.matrix + pair * W;
                for (int c = 0; c < W; ++c) m[c] += s[c] * nn;
            }
    }
}

template <Element E>
void Kernels<E>::profile(CellBlock& block, double* shape) const {
    if (shape)
        for (int q = 0; q < points; ++q)
            for (int i = 0; i < N; ++i)
                for (int c = 0; c < W; ++c) shape[(q * N + i) * W + c] = shape_[detail::as_size(q * N + i)];
    if (!block.T) return;
    const bool own = own_conduction_points > 0;
    const int first = own && block.unread.sources ? points : 0;
    const int last = own && block.unread.conduction ? points : all_points();
    for (int q = first; q < last; ++q) {
        const double* n = shape_.data() + static_cast<Index>(q) * N;
        double* TEPOR_RESTRICT T = block.point_T + q * W;
        for (int c = 0; c < W; ++c) T[c] = 0.0;
        for (int i = 0; i < N; ++i)
            for (int c = 0; c < W; ++c) T[c] += n[i] * block.T[i * W + c];
    }
}

} // namespace tepor
