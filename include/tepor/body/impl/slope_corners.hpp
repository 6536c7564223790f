#pragma once
// Derivatives of the weak form on straight triangles of three nodes with uniform data, in closed form: no quadrature points.

#include <tepor/body/impl/slope_cells.hpp>

namespace tepor::detail {

/// Gradients are constant on such a cell and the sources' part is linear, so that one value stands for each. The same sums as
/// CellSlopes::cell_block() makes over its points.
class CornerSlopes : public CellSlopes {
  public:
    using CellSlopes::CellSlopes;

  protected:
    /// The region can be done this way.
    [[nodiscard]] bool by_corners(const RegionModel& region) const {
        if (!sums_ || kernel_.dim != 2 || kernel_.nodes != 3 || kernel_.side_nodes != 2 || kernel_.order != 1)
            return false;
        if (power_ != 0) return false;
        bool uniform = true;
        for (int m = 0; m < region.conductivities; ++m) uniform = uniform && region.k[m].uniform();
        for (const VolumeTerm& term : region.volume)
            uniform = uniform && term.kind != VolumeTerm::Kind::side_film && term.amount.uniform();
        return uniform;
    }

    /// The block in work_.cells is gathered (it need not be open), block.T the temperature; else as cell_block().
    void corner_block(const RegionModel& region, double region_volume, const Id* cells, const double* TEPOR_RESTRICT l,
                      double* TEPOR_RESTRICT generated) {
        const CellBlock& block = work_.cells;
        const double* TEPOR_RESTRICT x = block.x;
        const double* TEPOR_RESTRICT y = block.y;
        const double* TEPOR_RESTRICT T = block.T;
        const double size = 0.5 * model_.mesh->frame.factor(2);
        double area[W], gx[3][W], gy[3][W], lx[W], ly[W], tx[W], ty[W], mean[W], energy[W];
        double k[3] = {0.0, 0.0, 0.0};
        for (int m = 0; m < region.conductivities; ++m) k[m] = region.k[m].uniform_value(slots_, time_);
        if (region.conductivities == 1) k[1] = k[0];
        for (int c = 0; c < W; ++c) {
            const double ax = x[W + c] - x[c];
            const double ay = y[W + c] - y[c];
            const double bx = x[2 * W + c] - x[c];
            const double by = y[2 * W + c] - y[c];
            const double twice = ax * by - bx * ay;
            area[c] = size * twice;
            const double over = 1.0 / twice;
            gx[1][c] = by * over;
            gy[1][c] = -bx * over;
            gx[2][c] = -ay * over;
            gy[2][c] = ax * over;
            gx[0][c] = -(gx[1][c] + gx[2][c]);
            gy[0][c] = -(gy[1][c] + gy[2][c]);
            lx[c] = l[c] * gx[0][c] + l[W + c] * gx[1][c] + l[2 * W + c] * gx[2][c];
            ly[c] = l[c] * gy[0][c] + l[W + c] * gy[1][c] + l[2 * W + c] * gy[2][c];
            tx[c] = T[c] * gx[0][c] + T[W + c] * gx[1][c] + T[2 * W + c] * gx[2][c];
            ty[c] = T[c] * gy[0][c] + T[W + c] * gy[1][c] + T[2 * W + c] * gy[2][c];
            mean[c] = (l[c] + l[W + c] + l[2 * W + c]) / 3.0;
        }
        for (int m = 0; m < region.conductivities; ++m) {
            if (region.k[m].slots().empty()) continue;
            double sum = 0.0;
            for (int c = 0; c < W; ++c) {
                const double xx = tx[c] * lx[c];
                const double yy = ty[c] * ly[c];
                sum += area[c] * (region.conductivities == 1
                                      ? xx + yy
                                      : (m == 0 ? xx : (m == 1 ? yy : tx[c] * ly[c] + ty[c] * lx[c])));
            }
            give_one(region.k[m].slots()[0], sum, 0);
        }
        double density = 0.0;
        for (const VolumeTerm& term : region.volume) {
            const bool total = term.kind == VolumeTerm::Kind::total;
            const double scale = total ? 1.0 / region_volume : 1.0;
            const double amount = term.amount.uniform_value(slots_, time_);
            density -= scale * amount;
            double sum = 0.0;
            for (int c = 0; c < W; ++c) sum += area[c] * mean[c];
            if (term.amount.value().kind() == Value::Kind::parameter) give_one(term.amount.slots()[0], -scale * sum, 0);
            if (total)
                for (int c = 0; c < W; ++c) generated[c] += scale * scale * area[c] * mean[c] * amount;
        }
        if (!with_places_) return;
        double px[3][W], py[3][W];
        for (int c = 0; c < W; ++c) {
            const double qx = k[0] * tx[c] + k[2] * ty[c];
            const double qy = k[1] * ty[c] + k[2] * tx[c];
            const double ax = k[0] * lx[c] + k[2] * ly[c];
            const double ay = k[1] * ly[c] + k[2] * lx[c];
            energy[c] = qx * lx[c] + qy * ly[c] + density * mean[c];
            const double xx = energy[c] - (tx[c] * ax + lx[c] * qx);
            const double xy = -(tx[c] * ay + lx[c] * qy);
            const double yx = -(ty[c] * ax + ly[c] * qx);
            const double yy = energy[c] - (ty[c] * ay + ly[c] * qy);
            for (int a = 0; a < 3; ++a) {
                px[a][c] = area[c] * (xx * gx[a][c] + xy * gy[a][c]);
                py[a][c] = area[c] * (yx * gx[a][c] + yy * gy[a][c]);
            }
        }
        for (int b = 0; b < block.count; ++b) {
            const Id* ids = model_.cell(cells[b]);
            for (int a = 0; a < 3; ++a) give_place(ids[a], px[a][b], py[a][b], b);
        }
    }
};

} // namespace tepor::detail
