#pragma once
// Derivatives of quantities by slots and places at fixed temperature.

#include <cmath>
#include <tepor/base/text.hpp>
#include <tepor/body/gather.hpp>
#include <tepor/body/side_tangent.hpp>
#include <tepor/field/functional_slope.hpp>
#include <tepor/quadrature/rules.hpp>

namespace tepor {

namespace detail {

class FunctionalSlope {
  public:
    FunctionalSlope(const Functional& functional, const Quantity& quantity, const Model& model, const Values& values,
                    Workspace& work, const double* T, TimeSpan time, double factor, SlopeSums& sums)
        : functional_(functional), quantity_(quantity), model_(model), kernel_(*model.kernels), values_(values),
          place_(model.places_of(values)), work_(work), T_(T), time_(time), factor_(factor), sums_(sums) {}

    void run() {
        using Kind = Quantity::Kind;
        for (const Functional::Heat& heat : functional_.heats) {
            std::vector<double> weights(as_size(model_.unknowns), 0.0);
            for (std::size_t i = 0; i < heat.weights.unknown.size(); ++i)
                weights[as_size(heat.weights.unknown[i])] += heat.weights.weight[i];
            contract_slopes(model_, values_, work_, {T_, weights.data(), time_, &heat.part, factor_}, sums_);
        }
        for (const Functional::EdgeFlux& edge : functional_.edges) edge_flux_slope(edge);
        if (quantity_.kind() == Kind::stored_in) return stored();
        if (kernel_.exact && (!functional_.inner.empty() || !functional_.contents.empty() || functional_.extreme))
            return inner_by_differences();
        if (sums_.places.empty()) return;
        switch (quantity_.kind()) {
        case Kind::at: passing_nodes(); return;
        case Kind::mean_in: {
            const RegionModel& r = model_.regions[as_size(model_.mesh->find_region(quantity_.first()))];
            mean_over(r.first_cell, r.last_cell, [](Point, Point& slope) {
                slope = {};
                return 1.0;
            });
            return;
        }
        case Kind::mean_around: {
            const Point centre = quantity_.place();
            const double rho2 = quantity_.radius() * quantity_.radius();
            mean_over(0, as_id(model_.user_cell.size()), [&](Point p, Point& slope) {
                const double s = 1.0 - dot(p - centre, p - centre) / rho2;
                slope = s > 0.0 ? (-4.0 * s / rho2) * (p - centre) : Point{};
                return s > 0.0 ? s * s : 0.0;
            });
            return;
        }
        case Kind::mean_on: mean_on(); return;
        default: return;
        }
    }

  private:
    static constexpr int W = block_width;

    /// Density, specific heat and the region's shape.
    void stored() {
        const Index r = model_.mesh->find_region(quantity_.first());
        const Enthalpy enthalpy(model_.regions[as_size(r)], values_);
        if (enthalpy.latent())
            throw Error(ErrorCode::not_supported, quantity_.label(),
                        text(quantity_.label(),
                             " is in part latent, which has kinks; derivatives are offered of the heat that "
                             "enters in its place"));
        const std::vector<double> cold(as_size(model_.unknowns), 0.0);
        const std::vector<double> weights(cold.size(), factor_);
        const double lumped = enthalpy.constant() || kernel_.order > 1 ? 0.0 : 1.0;
        contract_enthalpy(model_, values_, work_, cold.data(), T_, weights.data(), lumped, sums_, as_id(r));
    }

    void give(Id unknown, double x, double y) {
        Point& sum = sums_.places[as_size(unknown)];
        sum.x += factor_ * x;
        sum.y += factor_ * y;
    }

    /// Temperatures between the nodes of exact cells depend on every coefficient of the cell: differences of sixth order, as
    /// for the residual of such cells. An extreme stays extreme: its move does not count.
    void inner_by_differences() {
        static constexpr double weight[3] = {45.0 / 60.0, -9.0 / 60.0, 1.0 / 60.0};
        const auto value = [&](std::size_t slot, double moved_to) {
            Values moved = values_;
            moved.slots[slot] = moved_to;
            if (model_.moving) model_.update_geometry(moved);
            return evaluate(compile(model_, moved, quantity_), model_, moved, work_, T_, nullptr, time_);
        };
        for (std::size_t s = 0; s < sums_.slots.size(); ++s) {
            const SlotRole& role = model_.roles[s];
            if (!role.load && !role.matrix && !role.place) continue;
            const double centre = values_.slots[s];
            const double step =
                centre == 0.0 ? 1e-3 : 3e-3 * std::abs(centre); // the place of an inner node is iterated to 1e-13
            double sum = 0.0;
            for (int i = 0; i < 3; ++i)
                sum += weight[i] * (value(s, centre + (i + 1) * step) - value(s, centre - (i + 1) * step));
            sums_.slots[s] += factor_ * sum / step;
        }
    }

    /// J = T(x) at a fixed x: nodes that move by v carry the field along, dJ = -v . grad T.
    void passing_nodes() {
        const Index in = quantity_.first().empty() ? -1 : model_.mesh->find_region(quantity_.first());
        const ModelPlace at = locate(model_, values_, quantity_.place(), as_id(in));
        double shape[max_cell_nodes];
        double gx[max_cell_nodes];
        double gy[max_cell_nodes];
        (void)shapes_at(model_, values_, at, shape, gx, gy);
        const Id* ids = model_.cell(at.cell);
        Point slope;
        for (int i = 0; i < kernel_.nodes; ++i) slope = slope + T_[ids[i]] * Point{gx[i], gy[i]};
        for (int i = 0; i < kernel_.nodes; ++i) give(ids[i], -shape[i] * slope.x, -shape[i] * slope.y);
    }

    [[nodiscard]] double over_radius(double value, double x) const {
        const int n = model_.mesh->frame.power();
        return n == 0 || x == 0.0 ? 0.0 : n * value / x;
    }

    /// J = int weight T / int weight over cells, by the kernels' own rule.
    template <class Weight>
    void mean_over(Id first, Id last, const Weight& weight) {
        CellBlock& block = work_.cells;
        Id ids[W];
        double total = 0.0;
        double mean = 0.0;
        for (const bool counting : {true, false}) {
            block.T = work_.nodal_T;
            for (Id c = first; c < last; c += W) {
                block.count = gather_cells(model_, place_, T_, work_.nodal_T, c, last, block, ids);
                kernel_.open(block);
                for (int q = 0; q < kernel_.points; ++q)
                    for (int b = 0; b < block.count; ++b) {
                        const int i = q * W + b;
                        Point slope;
                        const double v = weight(Point{block.point_x[i], block.point_y[i]}, slope);
                        const double w = block.weight[i];
                        if (v == 0.0) continue;
                        if (counting) {
                            total += w * v;
                            mean += w * v * block.point_T[i];
                            continue;
                        }
                        const double share = w * (block.point_T[i] - mean) / total;
                        const double* shape = kernel_.shape_at(q);
                        for (int a = 0; a < kernel_.nodes; ++a) {
                            const double gx = block.gradient_x[(q * kernel_.nodes + a) * W + b];
                            const double gy =
                                kernel_.dim == 2 ? block.gradient_y[(q * kernel_.nodes + a) * W + b] : 0.0;
                            give(model_.cell(ids[b])[a],
                                 share * (v * gx + shape[a] * (over_radius(v, block.point_x[i]) + slope.x)),
                                 share * (v * gy + shape[a] * slope.y));
                        }
                    }
            }
            if (counting) mean /= total;
        }
    }

    void mean_on() {
        const SideList& sides = model_.faces[as_size(model_.mesh->find_face(quantity_.first()))].sides;
        SideBlock& block = work_.sides;
        const int m = kernel_.side_nodes;
        Id ids[W];
        double total = 0.0;
        double mean = 0.0;
        for (const bool counting : {true, false}) {
            block.T = work_.side_nodal_T;
            for (Index s = 0; s < sides.count(); s += W) {
                block.count = gather_sides(model_, place_, T_, work_.side_nodal_T, sides, s, block, ids);
                kernel_.open_side(block, false);
                for (int q = 0; q < kernel_.side_points; ++q)
                    for (int b = 0; b < block.count; ++b) {
                        const int i = q * W + b;
                        const double w = block.weight[i];
                        if (w == 0.0) continue;
                        if (counting) {
                            total += w;
                            mean += w * block.point_T[i];
                            continue;
                        }
                        const double share = w * (block.point_T[i] - mean) / total;
                        const Id* on = sides.unknowns.data() + (s + b) * m;
                        move_side(sides.side[as_size(s + b)].side, on, q, share, over_radius(share, block.point_x[i]),
                                  b);
                    }
            }
            if (counting) mean /= total;
        }
    }

    /// share = integrand of a side integral at a point: what the side's length and radius do to it.
    void move_side(int side, const Id* on, int q, double share, double by_radius, int b) {
        if (kernel_.dim == 1) {
            give(on[0], by_radius, 0.0);
            return;
        }
        const SideBlock& block = work_.sides;
        const int m = kernel_.side_nodes;
        double slope[16];
        side_tangent(kernel_, side, kernel_.side_shape_at(q, false), slope);
        double tx = 0.0;
        double ty = 0.0;
        for (int j = 0; j < m; ++j) {
            tx += slope[j] * block.x[j * W + b];
            ty += slope[j] * block.y[j * W + b];
        }
        const double per_length = share / (tx * tx + ty * ty);
        for (int j = 0; j < m; ++j)
            give(on[j], per_length * slope[j] * tx + kernel_.side_shape_at(q, false)[j] * by_radius,
                 per_length * slope[j] * ty);
    }

    /// Derivatives of edge_flux(): -k grad T . n N_j integrated over a straight side.
    void edge_flux_slope(const Functional::EdgeFlux& edge) {
        const RegionModel& region = model_.regions[as_size(model_.region_of_cell(edge.side.cell))];
        const Id* ids = model_.cell(edge.side.cell);
        const int n = kernel_.nodes;
        const bool line = kernel_.dim == 1;
        const int from_node = kernel_.side_node(edge.side.side, 0);
        const int to_node = kernel_.side_node(edge.side.side, line ? 0 : 1);
        double ends[2][2] = {{0.0, 0.0}, {0.0, 0.0}};
        kernel_.reference_node(from_node, ends[0]);
        kernel_.reference_node(to_node, ends[1]);
        const Point along = place_[ids[to_node]] - place_[ids[from_node]];
        const Rule<1> rule = line_rule(2 * kernel_.order + 2);
        const int local = kernel_.side_node(edge.side.side, edge.node);
        const Frame& frame = model_.mesh->frame;
        for (Index q = 0; q < (line ? 1 : rule.size()); ++q) {
            const double s = line ? 0.0 : rule.point(q)[0];
            ModelPlace at;
            at.cell = edge.side.cell;
            for (int d = 0; d < 2; ++d) at.xi[d] = ends[0][d] + s * (ends[1][d] - ends[0][d]);
            double shape[max_cell_nodes];
            double gx[max_cell_nodes];
            double gy[max_cell_nodes];
            const Point p = shapes_at(model_, values_, at, shape, gx, gy);
            double t = 0.0;
            Point slope;
            for (int i = 0; i < n; ++i) {
                t += shape[i] * T_[ids[i]];
                slope = slope + T_[ids[i]] * Point{gx[i], gy[i]};
            }
            const Points here{1, &t, nullptr, &p.x, &p.y};
            const Point normal = line ? Point{edge.side.side == 0 ? -1.0 : 1.0, 0.0} : Point{along.y, -along.x};
            double measure = frame.factor(kernel_.dim);
            for (int power = 0; power < frame.power(); ++power) measure *= p.x;
            const double weight = -edge.factor * (line ? 1.0 : rule.weight(q)) * measure * shape[local];
            // value = weight * (k0 sx nx + k1 sy ny + k2 (sy nx + sx ny))
            const double by_k[3] = {slope.x * normal.x + (region.conductivities == 1 ? slope.y * normal.y : 0.0),
                                    slope.y * normal.y, slope.y * normal.x + slope.x * normal.y};
            double k[3] = {0.0, 0.0, 0.0};
            Point by_place;
            for (int m = 0; m < region.conductivities; ++m) {
                const Coefficient& c = region.k[m];
                if (const Fault fault = c.evaluate(values_.slots.data(), time_, here, &k[m], nullptr)) raise(fault);
                for (std::size_t j = 0; j < c.slots().size(); ++j) {
                    const Id slot = c.slots()[j];
                    bool seen = slot < 0;
                    for (std::size_t i = 0; i < j; ++i) seen = seen || c.slots()[i] == slot;
                    if (seen) continue;
                    double d = 0.0;
                    c.slot_derivative(slot, values_.slots.data(), time_, here, &d);
                    sums_.slots[as_size(slot)] += factor_ * weight * by_k[m] * d;
                }
                double d = 0.0;
                c.lane_derivative(law_x_lane, values_.slots.data(), time_, here, &d);
                by_place.x += weight * by_k[m] * d;
                c.lane_derivative(law_y_lane, values_.slots.data(), time_, here, &d);
                by_place.y += weight * by_k[m] * d;
            }
            if (sums_.places.empty()) continue;
            if (region.conductivities == 1) k[1] = k[0];
            const Point q_at{k[0] * slope.x + k[2] * slope.y, k[1] * slope.y + k[2] * slope.x};
            const Point turned{k[0] * normal.x + k[2] * normal.y, k[1] * normal.y + k[2] * normal.x};
            const double radius = over_radius(weight * dot(q_at, normal), p.x);
            for (int a = 0; a < n; ++a) {
                const double turn = -weight * (gx[a] * turned.x + gy[a] * turned.y);
                give(ids[a], turn * slope.x + shape[a] * (by_place.x + radius), turn * slope.y + shape[a] * by_place.y);
            }
            if (line) continue;
            // the normal is (along.y, -along.x)
            give(ids[to_node], -weight * q_at.y, weight * q_at.x);
            give(ids[from_node], weight * q_at.y, -weight * q_at.x);
        }
    }

    const Functional& functional_;
    const Quantity& quantity_;
    const Model& model_;
    const CellKernels& kernel_;
    const Values& values_;
    const Point* place_;
    Workspace& work_;
    const double* T_;
    TimeSpan time_;
    double factor_;
    SlopeSums& sums_;
};

} // namespace detail

TEPOR_INLINE void explicit_slope(const Functional& functional, const Quantity& quantity, const Model& model,
                                 const Values& values, Workspace& work, const double* T, TimeSpan time, double factor,
                                 SlopeSums& sums) {
    detail::FunctionalSlope(functional, quantity, model, values, work, T, time, factor, sums).run();
}

TEPOR_INLINE std::vector<double> reaction_weights(const Functional& functional, const Model& model) {
    std::vector<double> weights(detail::as_size(model.unknowns), 0.0);
    for (std::size_t i = 0; i < functional.reaction.unknown.size(); ++i)
        weights[detail::as_size(functional.reaction.unknown[i])] += functional.reaction.weight[i];
    return weights;
}

} // namespace tepor
