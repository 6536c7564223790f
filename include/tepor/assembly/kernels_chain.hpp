#pragma once
// Kernels<E> on lines of two-node cells; included by kernels.hpp.

#include <cmath>
#include <tepor/assembly/kernels.hpp>
#include <tepor/base/memory.hpp>
#include <tepor/base/processor.hpp>

namespace tepor {

namespace detail {

/// Resistances and loads of the cells of a block with Q points a cell, or `points` where Q is 0.
template <int Q>
TEPOR_IN_BOTH void form_cells(ChainBlock& block, const double* TEPOR_RESTRICT shape, int points) noexcept {
    const int n = block.count;
    const int all = Q > 0 ? Q : points;
    const double* TEPOR_RESTRICT x = block.x;
    const double* TEPOR_RESTRICT end = block.x + block.next;
    const double* TEPOR_RESTRICT weight = block.weight;
    double* TEPOR_RESTRICT resistance = block.resistance;
    // the matrix of the cell is total / h^2 [1 -1; -1 1]
    if (const double* TEPOR_RESTRICT k = block.k)
        for (int c = 0; c < n; ++c) {
            double total = weight[c] * k[c];
            for (int q = 1; q < all; ++q) total += weight[q * n + c] * k[q * n + c];
            const double h = end[c] - x[c];
            resistance[c] = h * h / total;
        }
    else
        for (int c = 0; c < n; ++c) {
            double total = weight[c];
            for (int q = 1; q < all; ++q) total += weight[q * n + c];
            const double h = end[c] - x[c];
            resistance[c] = h * h / (total * block.k_value);
        }
    const double* TEPOR_RESTRICT source = block.source;
    if (!source) return;
    double* TEPOR_RESTRICT left = block.load_left;
    double* TEPOR_RESTRICT right = block.load_right;
    for (int c = 0; c < n; ++c) {
        double to_left = 0.0;
        double to_right = 0.0;
        for (int q = 0; q < all; ++q) {
            const double heat = weight[q * n + c] * source[q * n + c];
            to_left += heat * shape[2 * q];
            to_right += heat * shape[2 * q + 1];
        }
        left[c] = to_left;
        right[c] = to_right;
    }
    // sums side by side, so that they vectorise in a fixed order
    constexpr int W = 8;
    double sum[W] = {};
    int c = 0;
    for (; c + W <= n; c += W)
        for (int i = 0; i < W; ++i) sum[i] += std::abs(left[c + i] + right[c + i]);
    for (; c < n; ++c) sum[0] += std::abs(left[c] + right[c]);
    block.traffic = ((sum[0] + sum[1]) + (sum[2] + sum[3])) + ((sum[4] + sum[5]) + (sum[6] + sum[7]));
}

template <int Q>
TEPOR_WIDE void form_cells_wide(ChainBlock& block, const double* shape) noexcept {
    form_cells<Q>(block, shape, Q);
}

/// Places and weights of one point of each cell where the measure is the same everywhere.
TEPOR_IN_BOTH void map_cells(const ChainBlock& block, double n0, double n1, double size, double* TEPOR_RESTRICT place,
                             double* TEPOR_RESTRICT weight) noexcept {
    const double* TEPOR_RESTRICT x = block.x;
    const double* TEPOR_RESTRICT end = block.x + block.next;
    for (int c = 0; c < block.count; ++c) {
        place[c] = n0 * x[c] + n1 * end[c];
        weight[c] = size * (end[c] - x[c]);
    }
}

TEPOR_WIDE inline void map_cells_wide(const ChainBlock& block, double n0, double n1, double size, double* place,
                                      double* weight) noexcept {
    map_cells(block, n0, n1, size, place, weight);
}

template <int Q>
void form_chain(ChainBlock& block, const double* shape) noexcept {
    if (wide_processor())
        form_cells_wide<Q>(block, shape);
    else
        form_cells<Q>(block, shape, Q);
}

} // namespace detail

template <Element E>
void Kernels<E>::open_chain(ChainBlock& block) const {
    if constexpr (E::dim == 1 && constant_gradient) {
        for (int q = 0; q < points; ++q) {
            double* place = block.point_x + q * block.count;
            double* weight = block.weight + q * block.count;
            if (power_ > 0 || !detail::wide_processor())
                map_segment_point(q, block.count, block.x, block.x + block.next, place, weight);
            else
                detail::map_cells_wide(block, shape_[detail::as_size(2 * q)], shape_[detail::as_size(2 * q + 1)],
                                       rule_weight_[detail::as_size(q)] * factor_, place, weight);
        }
    } else {
        CellKernels::open_chain(block);
    }
}

template <Element E>
void Kernels<E>::form_chain(ChainBlock& block) const {
    if constexpr (E::dim == 1 && constant_gradient) {
        switch (points) {
        case 1: return detail::form_chain<1>(block, shape_.data());
        case 2: return detail::form_chain<2>(block, shape_.data());
        case 3: return detail::form_chain<3>(block, shape_.data());
        case 4: return detail::form_chain<4>(block, shape_.data());
        default: detail::form_cells<0>(block, shape_.data(), points);
        }
    } else {
        CellKernels::form_chain(block);
    }
}

} // namespace tepor
