#pragma once
// Kernels<E> on straight triangles of order 1, whose gradients are constant; included by kernels.hpp.
//
// With b_i = (y_j - y_k, x_k - x_j), i, j, k in turn, the gradient of N_i is b_i / D, D twice the area, and
//
//     K_ij = (integral of k over the reference triangle) b_i . b_j / D.
//
// form() takes this from the nodes; the gradients at points are for other readers.

#include <tepor/assembly/kernels.hpp>

namespace tepor {

/// Places, and with `twice` (the Jacobian) weights, of the points [from, to).
template <Element E>
void Kernels<E>::triangle_points(CellBlock& block, int from, int to, const double* TEPOR_RESTRICT twice) const {
    const double* TEPOR_RESTRICT x = block.x;
    const double* TEPOR_RESTRICT y = block.y;
    for (int q = from; q < to; ++q) {
        const double* n = shape_.data() + static_cast<Index>(q) * N;
        const double n0 = n[0];
        const double n1 = n[1];
        const double n2 = n[2];
        double* TEPOR_RESTRICT px = block.point_x + q * W;
        double* TEPOR_RESTRICT py = block.point_y + q * W;
        for (int c = 0; c < W; ++c) px[c] = n0 * x[c] + n1 * x[W + c] + n2 * x[2 * W + c];
        for (int c = 0; c < W; ++c) py[c] = n0 * y[c] + n1 * y[W + c] + n2 * y[2 * W + c];
        if (!twice) continue;
        const double w = rule_weight_[detail::as_size(q)];
        double* TEPOR_RESTRICT weight = block.weight + q * W;
        if (power_ == 0)
            for (int c = 0; c < W; ++c) weight[c] = (w * factor_) * twice[c];
        else
            for (int c = 0; c < W; ++c) weight[c] = w * twice[c] * measure(px[c]);
    }
}

template <Element E>
void Kernels<E>::map_triangles(CellBlock& block) const {
    const CellBlock::Unread unread = block.unread;
    const bool own = own_conduction_points > 0;
    const bool conduction = !unread.conduction || power_ > 0; // form() reads radii
    if (own && unread.sources && unread.gradients) {
        if (conduction) triangle_points(block, points, all_points(), nullptr);
        return;
    }
    const double* TEPOR_RESTRICT x = block.x;
    const double* TEPOR_RESTRICT y = block.y;
    const double turn = reference_turn();
    double twice[W];
    for (int c = 0; c < W; ++c)
        twice[c] = turn * ((x[W + c] - x[c]) * (y[2 * W + c] - y[c]) - (x[2 * W + c] - x[c]) * (y[W + c] - y[c]));
    triangle_points(block, own && unread.sources ? points : 0, own && !conduction ? points : all_points(), twice);
    if (unread.gradients) return;
    for (int i = 0; i < 3; ++i) {
        const double* TEPOR_RESTRICT xj = block.x + (i + 1) % 3 * W;
        const double* TEPOR_RESTRICT yj = block.y + (i + 1) % 3 * W;
        const double* TEPOR_RESTRICT xk = block.x + (i + 2) % 3 * W;
        const double* TEPOR_RESTRICT yk = block.y + (i + 2) % 3 * W;
        double* TEPOR_RESTRICT gx = block.gradient_x + i * W;
        double* TEPOR_RESTRICT gy = block.gradient_y + i * W;
        for (int c = 0; c < W; ++c) {
            const double inverse = turn / twice[c];
            gx[c] = (yj[c] - yk[c]) * inverse;
            gy[c] = (xk[c] - xj[c]) * inverse;
        }
    }
    for (int q = 1; q < all_points(); ++q)
        for (int i = 0; i < 3 * W; ++i) {
            block.gradient_x[q * 3 * W + i] = block.gradient_x[i];
            block.gradient_y[q * 3 * W + i] = block.gradient_y[i];
        }
}

/// Integral of k (at the points of conduction) times the frame's measure over the reference triangle.
template <Element E>
void Kernels<E>::integrate_on_triangle(const CellBlock& block, const double* k, double* TEPOR_RESTRICT total) const {
    const double turn = reference_turn();
    const int first = first_conduction_point();
    for (int q = 0; q < conduction_points(); ++q) {
        const double w = rule_weight_[detail::as_size(first + q)] * turn;
        const double* TEPOR_RESTRICT at = k + (block.k_uniform ? 0 : q * W);
        const auto add = [q, total](auto part) {
            if (q == 0)
                for (int c = 0; c < W; ++c) total[c] = part(c);
            else
                for (int c = 0; c < W; ++c) total[c] += part(c);
        };
        if (power_ == 0) {
            const double size = w * factor_;
            if (block.k_uniform)
                add([part = size * at[0]](int) { return part; });
            else
                add([size, at](int c) { return size * at[c]; });
        } else {
            const double* TEPOR_RESTRICT radius = block.point_x + (first + q) * W;
            const int step = block.k_uniform ? 0 : 1;
            add([this, w, at, radius, step](int c) { return w * at[c * step] * measure(radius[c]); });
        }
    }
}

template <Element E>
void Kernels<E>::form_triangle_conduction(CellBlock& block, Wanted wanted) const {
    const double* TEPOR_RESTRICT x = block.x;
    const double* TEPOR_RESTRICT y = block.y;
    double xx[W];
    integrate_on_triangle(block, block.k[0], xx);
    // the gradients of a cell add up to zero: the couplings of its nodes hold all
    double scratch[6 * W];
    double* TEPOR_RESTRICT m = wanted.matrix ? block.matrix : scratch;
    if (block.conductivities == 1) {
        for (int c = 0; c < W; ++c) {
            const double bx0 = y[W + c] - y[2 * W + c];
            const double bx1 = y[2 * W + c] - y[c];
            const double bx2 = y[c] - y[W + c];
            const double by0 = x[2 * W + c] - x[W + c];
            const double by1 = x[c] - x[2 * W + c];
            const double by2 = x[W + c] - x[c];
            const double scale = xx[c] / (bx0 * by1 - bx1 * by0);
            const double m10 = scale * (bx0 * bx1 + by0 * by1);
            const double m20 = scale * (bx0 * bx2 + by0 * by2);
            const double m21 = scale * (bx1 * bx2 + by1 * by2);
            m[W + c] = m10;
            m[3 * W + c] = m20;
            m[4 * W + c] = m21;
        }
    } else {
        double yy[W];
        double xy[W] = {};
        integrate_on_triangle(block, block.k[1], yy);
        if (block.conductivities == 3) integrate_on_triangle(block, block.k[2], xy);
        for (int c = 0; c < W; ++c) {
            const double bx0 = y[W + c] - y[2 * W + c];
            const double bx1 = y[2 * W + c] - y[c];
            const double bx2 = y[c] - y[W + c];
            const double by0 = x[2 * W + c] - x[W + c];
            const double by1 = x[c] - x[2 * W + c];
            const double by2 = x[W + c] - x[c];
            const double inverse = 1.0 / (bx0 * by1 - bx1 * by0);
            const double a = xx[c] * inverse;
            const double b = yy[c] * inverse;
            const double d = xy[c] * inverse;
            const double m10 = a * bx0 * bx1 + b * by0 * by1 + d * (bx0 * by1 + bx1 * by0);
            const double m20 = a * bx0 * bx2 + b * by0 * by2 + d * (bx0 * by2 + bx2 * by0);
            const double m21 = a * bx1 * bx2 + b * by1 * by2 + d * (bx1 * by2 + bx2 * by1);
            m[W + c] = m10;
            m[3 * W + c] = m20;
            m[4 * W + c] = m21;
        }
    }
    if (wanted.matrix)
        for (int c = 0; c < W; ++c) {
            m[c] = -(m[W + c] + m[3 * W + c]);
            m[2 * W + c] = -(m[W + c] + m[4 * W + c]);
            m[5 * W + c] = -(m[3 * W + c] + m[4 * W + c]);
        }
    if (wanted.residual) {
        const double* TEPOR_RESTRICT T = block.T;
        double* TEPOR_RESTRICT r = block.residual;
        for (int c = 0; c < W; ++c) {
            const double heat10 = m[W + c] * (T[W + c] - T[c]);
            const double heat20 = m[3 * W + c] * (T[2 * W + c] - T[c]);
            const double heat21 = m[4 * W + c] * (T[2 * W + c] - T[W + c]);
            r[c] += heat10 + heat20;
            r[W + c] += heat21 - heat10;
            r[2 * W + c] -= heat20 + heat21;
        }
    }
    if (wanted.slope) form_triangle_slope(block);
}

/// k' N_j (grad T . grad N_i): the tensor's slope on grad T, then on grad N_i.
template <Element E>
void Kernels<E>::form_triangle_slope(CellBlock& block) const {
    const double* TEPOR_RESTRICT x = block.x;
    const double* TEPOR_RESTRICT y = block.y;
    const double* TEPOR_RESTRICT T = block.T;
    const int entries = block.conductivities;
    double along[3][2 * W]; // per conductivity: what its integral changes in rows 1 and 2; all rows add up to zero
    for (int c = 0; c < W; ++c) {
        const double bx1 = y[2 * W + c] - y[c];
        const double bx2 = y[c] - y[W + c];
        const double by1 = x[c] - x[2 * W + c];
        const double by2 = x[W + c] - x[c];
        const double inverse = 1.0 / (bx1 * by2 - bx2 * by1);
        const double rise1 = T[W + c] - T[c];
        const double rise2 = T[2 * W + c] - T[c];
        const double tx = inverse * (bx1 * rise1 + bx2 * rise2);
        const double ty = inverse * (by1 * rise1 + by2 * rise2);
        if (entries == 1) {
            along[0][c] = tx * bx1 + ty * by1;
            along[0][W + c] = tx * bx2 + ty * by2;
            continue;
        }
        along[0][c] = tx * bx1;
        along[0][W + c] = tx * bx2;
        along[1][c] = ty * by1;
        along[1][W + c] = ty * by2;
        along[2][c] = tx * by1 + ty * bx1;
        along[2][W + c] = tx * by2 + ty * bx2;
    }
    const int first = first_conduction_point();
    for (int q = 0; q < conduction_points(); ++q) {
        const double* n = shape_.data() + static_cast<Index>(first + q) * N;
        const double w = rule_weight_[detail::as_size(first + q)] * reference_turn();
        const double* TEPOR_RESTRICT radius = block.point_x + (first + q) * W;
        double size[W];
        for (int c = 0; c < W; ++c) size[c] = w * (power_ == 0 ? factor_ : measure(radius[c]));
        double row[2 * W] = {};
        for (int m = 0; m < entries; ++m) {
            if (!block.k_slope[m]) continue;
            const double* TEPOR_RESTRICT rise = block.k_slope[m] + q * W;
            for (int c = 0; c < W; ++c) {
                row[c] += size[c] * rise[c] * along[m][c];
                row[W + c] += size[c] * rise[c] * along[m][W + c];
            }
        }
        for (int i = 0; i < 2; ++i)
            for (int j = 0; j < 3; ++j) {
                double* TEPOR_RESTRICT u = block.slope + ((i + 1) * 3 + j) * W;
                if (q == 0)
                    for (int c = 0; c < W; ++c) u[c] = row[i * W + c] * n[j];
                else
                    for (int c = 0; c < W; ++c) u[c] += row[i * W + c] * n[j];
            }
    }
    double* TEPOR_RESTRICT u = block.slope;
    for (int i = 0; i < 3 * W; ++i) u[i] = -(u[3 * W + i] + u[6 * W + i]);
}

} // namespace tepor
