#pragma once
// Derivatives of stored heat by slots and places where density or specific heat depend on temperature, and of latent heat.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/body/enthalpy.hpp>
#include <tepor/body/impl/slope_cells.hpp>

namespace tepor::detail {

class EnthalpySlopes : public CellSlopes {
  public:
    EnthalpySlopes(const Model& model, const Values& values, Workspace& work) : CellSlopes(model, values, work, {}) {}

    void contract(const double* from, const double* to, const double* weights, double lumped_share, SlopeSums& sums,
                  Id only) {
        start(sums);
        for (const RegionModel& region : model_.regions) {
            if (only >= 0 && &region != &model_.regions[as_size(only)]) continue;
            const Enthalpy enthalpy(region, values_);
            kinks_.clear();
            for (const Coefficient* c : {&region.density, &region.specific_heat})
                if (c->value().kind() == Value::Kind::table)
                    for (const auto& point : c->value().table().points()) kinks_.push_back(point.at);
            std::sort(kinks_.begin(), kinks_.end());
            kinks_.push_back(std::numeric_limits<double>::infinity());
            each_block(region, weights, [&](const Id* cell) {
                CellBlock& block = work_.cells;
                gather(from, cell, from_nodes_);
                gather(to, cell, to_nodes_);
                if (enthalpy.constant()) {
                    for (std::size_t i = 0; i < as_size(kernel_.nodes * W); ++i)
                        block.T[i] = to_nodes_[i] - from_nodes_[i];
                    kernel_.open(block);
                    capacity_block(region, cell, l_nodes_.data(), lumped_share);
                    return;
                }
                kernel_.open(block);
                if (lumped_share > 0.0) heat_at_nodes(region, enthalpy, cell, lumped_share);
                if (lumped_share < 1.0) heat_at_points(region, enthalpy, cell, 1.0 - lumped_share);
            });
        }
    }

    void contract_latent(Id r, const double* weighted_share, SlopeSums& sums) {
        start(sums);
        const RegionModel& region = model_.regions[as_size(r)];
        const Enthalpy enthalpy(region, values_);
        each_block(region, weighted_share, [&](const Id* cell) {
            CellBlock& block = work_.cells;
            kernel_.open(block);
            const auto n = as_size(kernel_.points * W);
            to_shape(l_nodes_.data());
            for (std::size_t i = 0; i < n; ++i) extent_[i] = enthalpy.solidus();
            const Points at{static_cast<Index>(n), extent_.data(), nullptr, block.point_x, block.point_y};
            evaluate(region.density, at, density_.data());
            double by_heat = 0.0;
            for (std::size_t i = 0; i < n; ++i) {
                p_[i] = block.weight[i] * l_[i] * enthalpy.latent_heat();
                by_heat += block.weight[i] * l_[i] * density_[i];
                by_x_[i] = by_y_[i] = 0.0;
                density_[i] *= enthalpy.latent_heat();
            }
            back(region.density, at, p_.data());
            if (region.latent.value().kind() == Value::Kind::parameter) give_one(region.latent.slots()[0], by_heat, 0);
            move(cell);
        });
    }

  private:
    void start(SlopeSums& sums) {
        collect_all(sums, 1.0);
        reserve_cells();
        const auto nodes = as_size(kernel_.nodes * W);
        const std::size_t most = std::max(nodes, as_size(kernel_.points * W));
        for (std::vector<double>* v : {&l_nodes_, &from_nodes_, &to_nodes_}) v->assign(nodes, 0.0);
        for (std::vector<double>* v : {&from_points_, &late_, &low_, &span_, &warm_, &rise_, &place_x_, &place_y_,
                                       &by_density_, &by_heat_, &p_, &value_, &density_, &by_x_, &by_y_})
            v->assign(most, 0.0);
    }

    /// Every block of a region's cells with the weights at its nodes in l_nodes_ (zero where it is padded).
    template <class Run>
    void each_block(const RegionModel& region, const double* weights, const Run& run) {
        CellBlock& block = work_.cells;
        Id cell[W];
        for (Id c = region.first_cell; c < region.last_cell; c += W) {
            block.T = work_.nodal_T;
            block.count = gather_cells(model_, place_, weights, work_.nodal_T, c, region.last_cell, block, cell);
            bool any = false;
            for (int i = 0; i < kernel_.nodes; ++i)
                for (int b = 0; b < W; ++b) {
                    const auto at = as_size(i * W + b);
                    l_nodes_[at] = b < block.count ? block.T[at] : 0.0;
                    any = any || l_nodes_[at] != 0.0;
                }
            if (any) run(cell);
        }
    }

    void gather(const double* of, const Id* cell, std::vector<double>& nodal) const {
        for (int b = 0; b < W; ++b)
            for (int i = 0; i < kernel_.nodes; ++i) nodal[as_size(i * W + b)] = of[model_.cell(cell[b])[i]];
    }
    void interpolate(const double* nodal, std::vector<double>& out) const {
        for (int q = 0; q < kernel_.points; ++q) {
            const double* shape = kernel_.shape_at(q);
            for (int b = 0; b < W; ++b) {
                double sum = 0.0;
                for (int i = 0; i < kernel_.nodes; ++i) sum += shape[i] * nodal[i * W + b];
                out[as_size(q * W + b)] = sum;
            }
        }
    }
    /// The values at the nodes as a function of place that nothing is conducted by.
    void to_shape(const double* nodal) {
        interpolate(nodal, l_);
        for (std::size_t i = 0; i < as_size(kernel_.points * W); ++i)
            lx_[i] = ly_[i] = tx_[i] = ty_[i] = k_[0][i] = k_[1][i] = k_[2][i] = 0.0;
    }
    void move(const Id* cell) {
        if (with_places_) move_cells(cell, 1, kernel_.points);
    }

    /// Heat at the points: the integral of weight times the rise of the heat content.
    void heat_at_points(const RegionModel& region, const Enthalpy& enthalpy, const Id* cell, double share) {
        const CellBlock& block = work_.cells;
        const auto n = as_size(kernel_.points * W);
        to_shape(l_nodes_.data());
        interpolate(from_nodes_.data(), from_points_);
        interpolate(to_nodes_.data(), late_);
        for (std::size_t i = 0; i < n; ++i) {
            p_[i] = share * block.weight[i] * l_[i];
            by_x_[i] = by_y_[i] = 0.0;
        }
        const Points at{static_cast<Index>(n), from_points_.data(), nullptr, block.point_x, block.point_y};
        back_through(region, at);
        if (!with_places_) return;
        if (const Fault fault = enthalpy.sensible(slots_, at, late_.data(), rise_.data(), nullptr)) raise(fault);
        for (std::size_t i = 0; i < n; ++i) density_[i] = share * rise_[i];
        move(cell);
    }

    /// Heat at the nodes: the volume of each times the rise of its heat content.
    void heat_at_nodes(const RegionModel& region, const Enthalpy& enthalpy, const Id* cell, double share) {
        const CellBlock& block = work_.cells;
        const int nodes = kernel_.nodes;
        const auto n = as_size(nodes * W);
        std::fill(p_.begin(), p_.end(), 0.0);
        for (int q = 0; q < kernel_.points; ++q)
            for (int i = 0; i < nodes; ++i)
                for (int b = 0; b < W; ++b)
                    p_[as_size(i * W + b)] += share * block.weight[q * W + b] * kernel_.shape_at(q)[i];
        for (std::size_t i = 0; i < n; ++i) {
            p_[i] *= l_nodes_[i];
            place_x_[i] = block.x[i];
            place_y_[i] = kernel_.dim == 2 ? block.y[i] : 0.0;
            from_points_[i] = from_nodes_[i];
            late_[i] = to_nodes_[i];
            by_x_[i] = by_y_[i] = 0.0;
        }
        const Points at{static_cast<Index>(n), from_points_.data(), nullptr, place_x_.data(), place_y_.data()};
        back_through(region, at);
        if (!with_places_) return;
        for (int b = 0; b < block.count; ++b)
            for (int i = 0; i < nodes; ++i)
                give_place(model_.cell(cell[b])[i], by_x_[as_size(i * W + b)], by_y_[as_size(i * W + b)], b);
        if (const Fault fault = enthalpy.sensible(slots_, at, late_.data(), rise_.data(), nullptr)) raise(fault);
        for (std::size_t i = 0; i < n; ++i) rise_[i] *= share * l_nodes_[i];
        to_shape(rise_.data());
        for (std::size_t i = 0; i < as_size(kernel_.points * W); ++i) {
            density_[i] = 1.0;
            by_x_[i] = by_y_[i] = 0.0;
        }
        move(cell);
    }

    /// p_ times the derivative of the integral of density times specific heat from at.temperature to late_: piece by piece
    /// between the points of tables, five Gauss points each (DLMF 3.5(v)).
    void back_through(const RegionModel& region, const Points& at) {
        static constexpr double place[5] = {0.046910077030668, 0.230765344947158, 0.5, 0.769234655052842,
                                            0.953089922969332};
        static constexpr double weight[5] = {0.118463442528095, 0.239314335249683, 0.284444444444444, 0.239314335249683,
                                             0.118463442528095};
        const auto n = as_size(at.count);
        Points here = at;
        here.temperature = warm_.data();
        double below = -std::numeric_limits<double>::infinity();
        for (const double above : kinks_) {
            bool any = false;
            for (std::size_t i = 0; i < n; ++i) {
                const double a = at.temperature[i];
                const double b = late_[i];
                low_[i] = std::clamp(std::min(a, b), below, above);
                span_[i] = std::clamp(std::max(a, b), below, above) - low_[i];
                any = any || span_[i] != 0.0;
            }
            below = above;
            if (!any) continue;
            for (int g = 0; g < 5; ++g) {
                for (std::size_t i = 0; i < n; ++i) warm_[i] = low_[i] + place[g] * span_[i];
                evaluate(region.density, here, by_heat_.data());
                evaluate(region.specific_heat, here, by_density_.data());
                for (std::size_t i = 0; i < n; ++i) {
                    const double sign = late_[i] < at.temperature[i] ? -weight[g] : weight[g];
                    by_density_[i] *= sign * span_[i] * p_[i];
                    by_heat_[i] *= sign * span_[i] * p_[i];
                }
                back(region.density, here, by_density_.data());
                back(region.specific_heat, here, by_heat_.data());
            }
        }
    }

    std::vector<double> kinks_; // of the region's tables, and infinity
    std::vector<double> l_nodes_, from_nodes_, to_nodes_, from_points_, late_, low_, span_, warm_, rise_;
    std::vector<double> place_x_, place_y_, by_density_, by_heat_;
};

} // namespace tepor::detail
