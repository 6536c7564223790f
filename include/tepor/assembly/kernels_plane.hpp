#pragma once
// Kernels<E> on plane cells in general; included by kernels.hpp.
//
// In reference coordinates the conductivity of a cell is the symmetric A = w det(J) J^-1 k J^-T, w the weight of a point, J the
// derivative of the map, and
//
//     K_ij = sum over points of A_11 g_i1 g_j1 + A_12 (g_i1 g_j2 + g_i2 g_j1) + A_22 g_i2 g_j2
//
// with the reference gradients g: three numbers per point and cell, all else the same for every cell. The gradients add up to
// zero, so that the entries off the diagonal hold all.

#include <tepor/assembly/kernels.hpp>

namespace tepor {

namespace detail {

/// to[c] = sum over i < N of n[step * i] * values[i * block_width + c].
template <int N>
void combine(const double* n, int step, const double* TEPOR_RESTRICT values, double* TEPOR_RESTRICT to) {
    double by[static_cast<std::size_t>(N)];
    for (int i = 0; i < N; ++i) by[i] = n[step * i];
    for (int c = 0; c < block_width; ++c) {
        double sum = by[0] * values[c];
        for (int i = 1; i < N; ++i) sum += by[i] * values[i * block_width + c];
        to[c] = sum;
    }
}

} // namespace detail

/// The factors of A_11, A_12 and A_22 at every point, pair after pair below the diagonal.
template <Element E>
void Kernels<E>::multiply_gradients() {
    for (int i = 0; i < N; ++i)
        for (int j = 0; j < i; ++j)
            for (int q = 0; q < points; ++q) {
                const double* g = reference_gradient_.data() + static_cast<Index>(q) * 2 * N;
                gradient_products_.push_back(g[2 * i] * g[2 * j]);
                gradient_products_.push_back(g[2 * i] * g[2 * j + 1] + g[2 * i + 1] * g[2 * j]);
                gradient_products_.push_back(g[2 * i + 1] * g[2 * j + 1]);
            }
}

template <Element E>
void Kernels<E>::map_plane(CellBlock& block) const {
    const CellBlock::Unread unread = block.unread;
    const bool places = !unread.sources || !unread.conduction || power_ > 0; // form() reads radii
    const bool weights = !unread.sources || !unread.gradients;
    for (int q = 0; q < points; ++q) {
        const double* n = shape_.data() + static_cast<Index>(q) * N;
        const double* g = reference_gradient_.data() + static_cast<Index>(q) * 2 * N;
        double* TEPOR_RESTRICT px = block.point_x + q * W;
        if (places) {
            detail::combine<N>(n, 1, block.x, px);
            detail::combine<N>(n, 1, block.y, block.point_y + q * W);
        }
        double* TEPOR_RESTRICT J = block.map_slope + q * 4 * W;
        detail::combine<N>(g, 2, block.x, J);
        detail::combine<N>(g + 1, 2, block.x, J + W);
        detail::combine<N>(g, 2, block.y, J + 2 * W);
        detail::combine<N>(g + 1, 2, block.y, J + 3 * W);
        if (!weights) continue;
        double* TEPOR_RESTRICT weight = block.weight + q * W;
        const double w = rule_weight_[detail::as_size(q)];
        for (int c = 0; c < W; ++c) weight[c] = w * (J[c] * J[3 * W + c] - J[W + c] * J[2 * W + c]) * measure(px[c]);
        if (unread.gradients) continue;
        double inverse[W];
        for (int c = 0; c < W; ++c) inverse[c] = 1.0 / (J[c] * J[3 * W + c] - J[W + c] * J[2 * W + c]);
        for (int i = 0; i < N; ++i) {
            double* TEPOR_RESTRICT gx = block.gradient_x + (q * N + i) * W;
            double* TEPOR_RESTRICT gy = block.gradient_y + (q * N + i) * W;
            for (int c = 0; c < W; ++c) {
                gx[c] = (J[3 * W + c] * g[2 * i] - J[2 * W + c] * g[2 * i + 1]) * inverse[c];
                gy[c] = (J[c] * g[2 * i + 1] - J[W + c] * g[2 * i]) * inverse[c];
            }
        }
    }
}

/// A of the conductivities `k` (or of their slopes; null where there is none).
template <Element E>
void Kernels<E>::reference_conductivity(const CellBlock& block, const double* const* k, bool uniform,
                                        double* metric) const {
    const int step = uniform ? 0 : 1;
    for (int q = 0; q < points; ++q) {
        const double w = rule_weight_[detail::as_size(q)];
        const double* TEPOR_RESTRICT J = block.map_slope + q * 4 * W;
        const double* TEPOR_RESTRICT radius = block.point_x + q * W;
        double* TEPOR_RESTRICT A = metric + q * 3 * W;
        double scale[W];
        for (int c = 0; c < W; ++c) scale[c] = w / (J[c] * J[3 * W + c] - J[W + c] * J[2 * W + c]);
        if (power_ == 0)
            for (int c = 0; c < W; ++c) scale[c] *= factor_;
        else
            for (int c = 0; c < W; ++c) scale[c] *= measure(radius[c]);
        if (block.conductivities == 1) {
            const double* TEPOR_RESTRICT at = k[0] + (uniform ? 0 : q * W);
            for (int c = 0; c < W; ++c) scale[c] *= at[step * c];
            for (int c = 0; c < W; ++c) {
                const double xx = J[c];
                const double xe = J[W + c];
                const double yx = J[2 * W + c];
                const double ye = J[3 * W + c];
                A[c] = scale[c] * (ye * ye + xe * xe);
                A[W + c] = -scale[c] * (ye * yx + xe * xx);
                A[2 * W + c] = scale[c] * (yx * yx + xx * xx);
            }
            continue;
        }
        double value[3][W];
        for (int m = 0; m < 3; ++m)
            for (int c = 0; c < W; ++c) value[m][c] = k[m] ? scale[c] * k[m][uniform ? 0 : q * W + c] : 0.0;
        for (int c = 0; c < W; ++c) {
            const double xx = J[c];
            const double xe = J[W + c];
            const double yx = J[2 * W + c];
            const double ye = J[3 * W + c];
            const double a = value[0][c];
            const double b = value[1][c];
            const double d = value[2][c];
            A[c] = a * ye * ye - 2.0 * d * ye * xe + b * xe * xe;
            A[W + c] = -a * ye * yx + d * (ye * xx + xe * yx) - b * xe * xx;
            A[2 * W + c] = a * yx * yx - 2.0 * d * yx * xx + b * xx * xx;
        }
    }
}

template <Element E>
void Kernels<E>::form_plane_conduction(CellBlock& block, Wanted wanted) const {
    reference_conductivity(block, block.k, block.k_uniform, block.metric);
    if (wanted.matrix) {
        const double* factor = gradient_products_.data();
        for (int i = 0; i < N; ++i) {
            for (int j = 0; j < i; ++j) {
                double* TEPOR_RESTRICT m = block.matrix + (i * (i + 1) / 2 + j) * W;
                const double* TEPOR_RESTRICT A = block.metric;
                for (int q = 0; q < points; ++q, factor += 3, A += 3 * W) {
                    const double f0 = factor[0];
                    const double f1 = factor[1];
                    const double f2 = factor[2];
                    if (q == 0)
                        for (int c = 0; c < W; ++c) m[c] = f0 * A[c] + f1 * A[W + c] + f2 * A[2 * W + c];
                    else
                        for (int c = 0; c < W; ++c) m[c] += f0 * A[c] + f1 * A[W + c] + f2 * A[2 * W + c];
                }
            }
        }
        for (int i = 0; i < N; ++i) {
            double sum[W];
            for (int c = 0; c < W; ++c) sum[c] = 0.0;
            for (int j = 0; j < N; ++j) {
                if (j == i) continue;
                const double* TEPOR_RESTRICT m = block.matrix + (i > j ? i * (i + 1) / 2 + j : j * (j + 1) / 2 + i) * W;
                for (int c = 0; c < W; ++c) sum[c] -= m[c];
            }
            double* TEPOR_RESTRICT m = block.matrix + (i * (i + 1) / 2 + i) * W;
            for (int c = 0; c < W; ++c) m[c] = sum[c];
        }
    }
    if (wanted.residual) add_plane_residual(block);
    if (wanted.slope) form_plane_slope(block);
}

/// A grad T at point q in reference coordinates.
template <Element E>
void Kernels<E>::reference_flow(const CellBlock& block, int q, double* TEPOR_RESTRICT one,
                                double* TEPOR_RESTRICT two) const {
    const double* g = reference_gradient_.data() + static_cast<Index>(q) * 2 * N;
    const double* TEPOR_RESTRICT A = block.metric + q * 3 * W;
    detail::combine<N>(g, 2, block.T, one);
    detail::combine<N>(g + 1, 2, block.T, two);
    for (int c = 0; c < W; ++c) {
        const double by_one = A[c] * one[c] + A[W + c] * two[c];
        two[c] = A[W + c] * one[c] + A[2 * W + c] * two[c];
        one[c] = by_one;
    }
}

/// k grad T . grad N_i.
template <Element E>
void Kernels<E>::add_plane_residual(CellBlock& block) const {
    for (int q = 0; q < points; ++q) {
        const double* g = reference_gradient_.data() + static_cast<Index>(q) * 2 * N;
        double one[W];
        double two[W];
        reference_flow(block, q, one, two);
        for (int i = 0; i < N; ++i) {
            double* TEPOR_RESTRICT r = block.residual + i * W;
            for (int c = 0; c < W; ++c) r[c] += g[2 * i] * one[c] + g[2 * i + 1] * two[c];
        }
    }
}

/// k' N_j (grad T . grad N_i): the tensor's slope on grad T, then on grad N_i.
template <Element E>
void Kernels<E>::form_plane_slope(CellBlock& block) const {
    reference_conductivity(block, block.k_slope, false, block.metric);
    for (int q = 0; q < points; ++q) {
        const double* n = shape_.data() + static_cast<Index>(q) * N;
        const double* g = reference_gradient_.data() + static_cast<Index>(q) * 2 * N;
        double one[W];
        double two[W];
        reference_flow(block, q, one, two);
        for (int i = 1; i < N; ++i) {
            double along[W];
            for (int c = 0; c < W; ++c) along[c] = g[2 * i] * one[c] + g[2 * i + 1] * two[c];
            for (int j = 0; j < N; ++j) {
                double* TEPOR_RESTRICT u = block.slope + (i * N + j) * W;
                if (q == 0)
                    for (int c = 0; c < W; ++c) u[c] = along[c] * n[j];
                else
                    for (int c = 0; c < W; ++c) u[c] += along[c] * n[j];
            }
        }
    }
    // the gradients add up to zero, and so do the rows
    double* TEPOR_RESTRICT first = block.slope;
    for (int i = 0; i < N * W; ++i) first[i] = 0.0;
    for (int i = 1; i < N; ++i) {
        const double* TEPOR_RESTRICT row = block.slope + i * N * W;
        for (int j = 0; j < N * W; ++j) first[j] -= row[j];
    }
}

} // namespace tepor
