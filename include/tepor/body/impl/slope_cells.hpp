#pragma once
// Derivatives of the weak form by slots and places, cell by cell: what is the same for cells and sides, and the cells.

#include <algorithm>
#include <cmath>
#include <tepor/body/gather.hpp>
#include <tepor/body/residual_slope.hpp>
#include <tepor/body/table_points.hpp>

namespace tepor::detail {

/// Goes backwards through the weak form. With p the derivative of weights . r by a coefficient at a point, every parameter
/// of the coefficient receives p dc/dparameter, and the point's place p dc/dx.
///
/// Two ways to collect: everything at once for given weights (the gradient), or one slot for each unit weight (a column of
/// dr/dslot), where the sums are kept apart for the cells of a block.
class SlopeCollector {
  public:
    SlopeCollector(const Model& model, const Values& values, Workspace& work, TimeSpan time)
        : model_(model), kernel_(*model.kernels), values_(values), slots_(values.slots.data()),
          place_(model.places_of(values)), work_(work), time_(time), power_(model.mesh->frame.power()) {}

    void collect_all(SlopeSums& sums, double factor) {
        sums_ = &sums;
        factor_ = factor;
        with_places_ = !sums.places.empty();
    }
    void collect_column(Id slot, const std::vector<Point>& velocity) {
        slot_ = slot;
        velocity_ = velocity.empty() ? nullptr : velocity.data();
        with_places_ = velocity_ != nullptr;
    }

  protected:
    static constexpr int W = block_width;

    [[nodiscard]] bool wants(const Coefficient& c) const { return c.given() && (sums_ || c.depends_on(slot_)); }

    /// p dc/dslot and p dc/dplace for one coefficient; `fluid` receives p dc/dfluid.
    void back(const Coefficient& c, const Points& at, const double* p, double* fluid = nullptr) {
        const Index n = at.count;
        switch (c.value().kind()) {
        case Value::Kind::none:
        case Value::Kind::number:
        case Value::Kind::schedule: return;
        case Value::Kind::parameter: give(c.slots()[0], p, nullptr, n); return;
        case Value::Kind::table: {
            const auto& points = c.value().table().points();
            for (Index i = 0; i < n; ++i) {
                const double t = at.temperature[i];
                const std::size_t low = table_interval(points, t);
                const bool inside = low + 1 < points.size() && t >= points[0].at;
                const double s = inside ? (t - points[low].at) / (points[low + 1].at - points[low].at) : 0.0;
                give_one(c.slots()[low], (1.0 - s) * p[i], i);
                if (inside) give_one(c.slots()[low + 1], s * p[i], i);
            }
            return;
        }
        case Value::Kind::law: {
            const Law::Uses uses = c.value().law().uses();
            const bool moves = with_places_ && uses.place;
            const bool wets = fluid && at.fluid && uses.temperature;
            if (!moves && !wets && (c.slots().empty() || !wants(c))) return;
            c.lane_derivatives(slots_, time_, at, lanes_);
            const double* lanes = lanes_.data();
            for (std::size_t j = 0; j < c.slots().size(); ++j)
                give(c.slots()[j], p, lanes + (law_parameter_lane + static_cast<Index>(j)) * n, n);
            if (moves)
                for (Index i = 0; i < n; ++i) {
                    by_x_[as_size(first_ + i)] += p[i] * lanes[law_x_lane * n + i];
                    by_y_[as_size(first_ + i)] += p[i] * lanes[law_y_lane * n + i];
                }
            if (wets)
                for (Index i = 0; i < n; ++i) fluid[i] += p[i] * lanes[law_fluid_lane * n + i];
            return;
        }
        }
    }

    /// p (times dc) at n points goes to a slot.
    void give(Id slot, const double* TEPOR_RESTRICT p, const double* TEPOR_RESTRICT dc, Index n) {
        if (sums_) {
            double part[W] = {};
            const Index whole = n / W * W;
            for (Index i = 0; i < whole; i += W)
                for (int c = 0; c < W; ++c) part[c] += dc ? p[i + c] * dc[i + c] : p[i + c];
            double sum = 0.0;
            for (int c = 0; c < W; ++c) sum += part[c];
            for (Index i = whole; i < n; ++i) sum += dc ? p[i] * dc[i] : p[i];
            sums_->slots[as_size(slot)] += factor_ * sum;
        } else if (slot == slot_) {
            for (Index i = 0; i < n; ++i) lane_[i % W] += dc ? p[i] * dc[i] : p[i];
        }
    }
    void give_one(Id slot, double value, Index point) {
        if (slot < 0) return;
        if (sums_)
            sums_->slots[as_size(slot)] += factor_ * value;
        else if (slot == slot_)
            lane_[point % W] += value;
    }

    /// The derivative by the place of an unknown, of the cell or side at place b of the block.
    void give_place(Id unknown, double x, double y, int b) {
        if (sums_) {
            Point& sum = sums_->places[as_size(unknown)];
            sum.x += factor_ * x;
            sum.y += factor_ * y;
        } else {
            const Point v = velocity_[unknown];
            lane_[b] += x * v.x + y * v.y;
        }
    }

    [[nodiscard]] double over_radius(double value, double x) const noexcept {
        return power_ == 0 || x == 0.0 ? 0.0 : power_ * value / x;
    }

    void evaluate(const Coefficient& c, const Points& at, double* value) const {
        if (const Fault fault = c.evaluate(slots_, time_, at, value, nullptr)) raise(fault);
    }

    const Model& model_;
    const CellKernels& kernel_;
    const Values& values_;
    const double* slots_;
    const Point* place_;
    Workspace& work_;
    TimeSpan time_;
    int power_;

    SlopeSums* sums_ = nullptr; // null: one column
    double factor_ = 1.0;
    Id slot_ = -1;
    const Point* velocity_ = nullptr;
    bool with_places_ = false;
    Index first_ = 0;     // of the points a coefficient is at, among those of by_x_ and by_y_
    double lane_[W] = {}; // column: sums of each cell of the block
    std::vector<double> by_x_, by_y_;
    std::vector<double> lanes_;
};

/// One block of cells with the weights at its nodes.
class CellSlopes : public SlopeCollector {
  public:
    using SlopeCollector::SlopeCollector;

  protected:
    void reserve_cells() {
        const auto entries = as_size(kernel_.all_points() * W);
        for (std::vector<double>* v : {&l_, &lx_, &ly_, &tx_, &ty_, &p_, &value_, &density_, &fluid_, &extent_,
                                       &by_fluid_, &k_[0], &k_[1], &k_[2], &by_x_, &by_y_})
            v->assign(entries, 0.0);
    }

    /// The block in work_.cells is open; `l` holds the weights at its nodes, zero where the block is padded.
    /// `generated` receives the integral of total generation times the weight over volume^2, cell by cell.
    void cell_block(const RegionModel& region, double region_volume, const Id* cells, const double* l,
                    double* generated) {
        const CellBlock& block = work_.cells;
        const Index n = static_cast<Index>(kernel_.points) * W;
        const Points at{n, block.point_T, nullptr, block.point_x, block.point_y};
        at_points(l, kernel_.all_points());
        if (with_places_)
            for (std::vector<double>* v : {&by_x_, &by_y_, &density_, &k_[0], &k_[1], &k_[2]})
                std::fill(v->begin(), v->end(), 0.0);
        conduction(region);
        for (const VolumeTerm& term : region.volume) {
            if (term.kind == VolumeTerm::Kind::side_film)
                side_film(term, at);
            else
                generation(term, at, region_volume, generated);
        }
        if (with_places_) move_cells(cells, region.conductivities, kernel_.all_points());
    }

    /// Heat stored: density times specific heat times the rise in block.T, against the weights `l`.
    void capacity_block(const RegionModel& region, const Id* cells, const double* l, double lumped_share) {
        const CellBlock& block = work_.cells;
        const auto n = as_size(kernel_.points * W);
        const Points at{static_cast<Index>(n), value_.data(), nullptr, block.point_x, block.point_y};
        at_points(l, kernel_.points);
        // what capacity per volume multiplies: at the points where consistent, node by node where lumped
        for (int q = 0; q < kernel_.points; ++q) {
            const double* shape = kernel_.shape_at(q);
            for (int c = 0; c < W; ++c) {
                const auto i = as_size(q * W + c);
                double nodal = 0.0;
                for (int a = 0; a < kernel_.nodes; ++a) nodal += shape[a] * l[a * W + c] * block.T[a * W + c];
                l_[i] = (1.0 - lumped_share) * l_[i] * block.point_T[i] + lumped_share * nodal;
                lx_[i] = ly_[i] = tx_[i] = ty_[i] = 0.0;
            }
        }
        for (std::size_t i = 0; i < n; ++i) value_[i] = by_x_[i] = by_y_[i] = 0.0;
        evaluate(region.density, at, fluid_.data());
        evaluate(region.specific_heat, at, extent_.data());
        for (std::size_t i = 0; i < n; ++i) p_[i] = block.weight[i] * l_[i] * extent_[i];
        back(region.density, at, p_.data());
        for (std::size_t i = 0; i < n; ++i) p_[i] = block.weight[i] * l_[i] * fluid_[i];
        back(region.specific_heat, at, p_.data());
        if (!with_places_) return;
        for (std::size_t i = 0; i < n; ++i) {
            density_[i] = fluid_[i] * extent_[i];
            k_[0][i] = k_[1][i] = k_[2][i] = 0.0;
        }
        move_cells(cells, 1, kernel_.points);
    }

    /// Weights, their gradient and that of the temperature at the first `count` points.
    void at_points(const double* TEPOR_RESTRICT l, int count) {
        const CellBlock& block = work_.cells;
        const int nodes = kernel_.nodes;
        const bool plane = kernel_.dim == 2;
        for (int q = 0; q < count; ++q) {
            const double* shape = kernel_.shape_at(q);
            double v[W] = {};
            double vx[W] = {};
            double vy[W] = {};
            double sx[W] = {};
            double sy[W] = {};
            for (int i = 0; i < nodes; ++i) {
                const double* TEPOR_RESTRICT gx = block.gradient_x + (q * nodes + i) * W;
                const double* TEPOR_RESTRICT gy = block.gradient_y + (q * nodes + i) * W;
                const double* TEPOR_RESTRICT T = block.T + i * W;
                const double* TEPOR_RESTRICT li = l + i * W;
                for (int c = 0; c < W; ++c) {
                    v[c] += shape[i] * li[c];
                    vx[c] += gx[c] * li[c];
                    sx[c] += gx[c] * T[c];
                }
                if (!plane) continue;
                for (int c = 0; c < W; ++c) {
                    vy[c] += gy[c] * li[c];
                    sy[c] += gy[c] * T[c];
                }
            }
            const std::size_t to = as_size(q * W);
            for (std::size_t c = 0; c < W; ++c) {
                l_[to + c] = v[c];
                lx_[to + c] = vx[c];
                ly_[to + c] = vy[c];
                tx_[to + c] = sx[c];
                ty_[to + c] = sy[c];
            }
        }
    }

    void conduction(const RegionModel& region) {
        const Points at = conduction_points(kernel_, work_.cells, work_.cells.point_T);
        const auto n = as_size(at.count);
        const std::size_t first = as_size(kernel_.first_conduction_point() * W);
        const double* TEPOR_RESTRICT w = work_.cells.weight + first;
        const double* TEPOR_RESTRICT tx = tx_.data() + first;
        const double* TEPOR_RESTRICT ty = ty_.data() + first;
        const double* TEPOR_RESTRICT lx = lx_.data() + first;
        const double* TEPOR_RESTRICT ly = ly_.data() + first;
        first_ = static_cast<Index>(first);
        for (int m = 0; m < region.conductivities; ++m) {
            if (with_places_) evaluate(region.k[m], at, k_[m].data() + first);
            if (!with_places_ && !wants(region.k[m])) continue;
            for (std::size_t i = 0; i < n; ++i) {
                const double xx = tx[i] * lx[i];
                const double yy = ty[i] * ly[i];
                p_[i] =
                    w[i] * (region.conductivities == 1 ? xx + yy
                                                       : (m == 0 ? xx : (m == 1 ? yy : tx[i] * ly[i] + ty[i] * lx[i])));
            }
            back(region.k[m], at, p_.data());
        }
        first_ = 0;
    }

    void generation(const VolumeTerm& term, const Points& at, double volume, double* generated) {
        const double* TEPOR_RESTRICT w = work_.cells.weight;
        const auto n = as_size(at.count);
        const bool total = term.kind == VolumeTerm::Kind::total;
        const double scale = total ? 1.0 / volume : 1.0;
        if (wants(term.amount) || with_places_) {
            for (std::size_t i = 0; i < n; ++i) p_[i] = -scale * w[i] * l_[i];
            back(term.amount, at, p_.data());
        }
        if (!with_places_) return;
        evaluate(term.amount, at, value_.data());
        for (std::size_t i = 0; i < n; ++i) {
            density_[i] -= scale * value_[i];
            if (total) generated[i % W] += scale * scale * w[i] * l_[i] * value_[i];
        }
    }

    void side_film(const VolumeTerm& term, const Points& at) {
        if (!with_places_ && !wants(term.amount) && !wants(term.fluid) && !wants(term.extent)) return;
        const double* TEPOR_RESTRICT w = work_.cells.weight;
        const auto n = as_size(at.count);
        evaluate(term.fluid, at, fluid_.data());
        evaluate(term.extent, at, extent_.data());
        const Points film{at.count, at.temperature, fluid_.data(), at.x, at.y};
        evaluate(term.amount, film, value_.data());
        const auto per_volume = [&](std::size_t i) {
            return term.by_thickness ? term.wet / extent_[i] : term.wet * extent_[i];
        };
        for (std::size_t i = 0; i < n; ++i) {
            by_fluid_[i] = 0.0;
            p_[i] = w[i] * l_[i] * per_volume(i) * (at.temperature[i] - fluid_[i]);
        }
        back(term.amount, film, p_.data(), by_fluid_.data());
        for (std::size_t i = 0; i < n; ++i) by_fluid_[i] -= w[i] * l_[i] * per_volume(i) * value_[i];
        back(term.fluid, at, by_fluid_.data());
        for (std::size_t i = 0; i < n; ++i) {
            const double slope = term.by_thickness ? -term.wet / (extent_[i] * extent_[i]) : term.wet;
            p_[i] = w[i] * l_[i] * slope * value_[i] * (at.temperature[i] - fluid_[i]);
        }
        back(term.extent, at, p_.data());
        if (with_places_)
            for (std::size_t i = 0; i < n; ++i)
                density_[i] += per_volume(i) * value_[i] * (at.temperature[i] - fluid_[i]);
    }

    /// The shape derivative: the measure grows by div v + n v_r / r, a gradient turns by -(grad v)^T, coefficients are met
    /// elsewhere; v = N_a e_d for node a and direction d. Over the first `count` points.
    void move_cells(const Id* cells, int conductivities, int count) {
        const CellBlock& block = work_.cells;
        const int nodes = kernel_.nodes;
        const bool plane = kernel_.dim == 2;
        sum_x_.assign(as_size(nodes * W), 0.0);
        sum_y_.assign(as_size(nodes * W), 0.0);
        for (int q = 0; q < count; ++q) {
            const double* shape = kernel_.shape_at(q);
            const std::size_t from = as_size(q * W);
            double xx[W], xy[W], yx[W], yy[W], dx[W], dy[W];
            for (std::size_t c = 0; c < W; ++c) {
                const std::size_t i = from + c;
                const double w = block.weight[i];
                const double kxx = k_[0][i];
                const double kyy = conductivities == 1 ? kxx : k_[1][i];
                const double kxy = conductivities == 3 ? k_[2][i] : 0.0;
                const double qx = kxx * tx_[i] + kxy * ty_[i];
                const double qy = kyy * ty_[i] + kxy * tx_[i];
                const double ax = kxx * lx_[i] + kxy * ly_[i];
                const double ay = kyy * ly_[i] + kxy * lx_[i];
                const double integrand = w * (qx * lx_[i] + qy * ly_[i] + density_[i] * l_[i]);
                xx[c] = integrand - w * (tx_[i] * ax + lx_[i] * qx);
                xy[c] = -w * (tx_[i] * ay + lx_[i] * qy);
                yx[c] = -w * (ty_[i] * ax + ly_[i] * qx);
                yy[c] = integrand - w * (ty_[i] * ay + ly_[i] * qy);
                dx[c] = by_x_[i] + over_radius(integrand, block.point_x[i]);
                dy[c] = by_y_[i];
            }
            for (int a = 0; a < nodes; ++a) {
                const double* TEPOR_RESTRICT gx = block.gradient_x + (q * nodes + a) * W;
                const double* TEPOR_RESTRICT gy = block.gradient_y + (q * nodes + a) * W;
                double* TEPOR_RESTRICT sx = sum_x_.data() + a * W;
                double* TEPOR_RESTRICT sy = sum_y_.data() + a * W;
                if (!plane) {
                    for (int c = 0; c < W; ++c) sx[c] += xx[c] * gx[c] + shape[a] * dx[c];
                    continue;
                }
                for (int c = 0; c < W; ++c) {
                    sx[c] += xx[c] * gx[c] + xy[c] * gy[c] + shape[a] * dx[c];
                    sy[c] += yx[c] * gx[c] + yy[c] * gy[c] + shape[a] * dy[c];
                }
            }
        }
        for (int b = 0; b < block.count; ++b) {
            const Id* ids = model_.cell(cells[b]);
            for (int a = 0; a < nodes; ++a)
                give_place(ids[a], sum_x_[as_size(a * W + b)], sum_y_[as_size(a * W + b)], b);
        }
    }

    std::vector<double> l_, lx_, ly_, tx_, ty_, p_, value_, density_, fluid_, extent_, by_fluid_, k_[3];
    std::vector<double> sum_x_, sum_y_;
};

} // namespace tepor::detail
