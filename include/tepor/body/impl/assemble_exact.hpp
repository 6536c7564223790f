#pragma once
// What a pass does for exact cells: fins, conductivities of temperature, the content of a region.

#include <cmath>
#include <tepor/body/impl/assemble.hpp>

namespace tepor::detail {

/// A side film that an exact cell takes into its functions.
inline bool Assembler::linear_sink(const RegionModel& region, const VolumeTerm& term) const {
    return kernel_.exact && term.kind == VolumeTerm::Kind::side_film && model_.mesh->frame.power() == 0 &&
           region.k[0].uniform() && term.amount.uniform() && term.extent.uniform();
}

inline double Assembler::sink_of(const VolumeTerm& term) const {
    const double extent = term.extent.uniform_value(slots_, pass_.time);
    const double per_volume = term.by_thickness ? term.wet / extent : term.wet * extent;
    return term.amount.uniform_value(slots_, pass_.time) * per_volume;
}

/// Mean of k over temperature between the nodes of each cell, and k at them.
inline bool Assembler::mean_conductivity(const Coefficient& k, const Id* ids) {
    const CellBlock& block = work_.cells;
    double* TEPOR_RESTRICT mean = work_.coefficient[1];
    double* TEPOR_RESTRICT low = work_.coefficient[2];
    double* TEPOR_RESTRICT high = work_.coefficient[4];
    const double* first = block.T;
    const double* second = block.T + W;
    const auto at = [&](const double* T, int q) {
        return Points{W, T, nullptr, block.point_x + q * W, block.point_y + q * W};
    };
    if (!evaluate(k, at(first, 0), low, nullptr, ids, block.count)) return false;
    if (!evaluate(k, at(second, 0), high, nullptr, ids, block.count)) return false;
    if (k.value().kind() == Value::Kind::law)
        for (const int q : {kernel_.points / 2, kernel_.points - 1}) {
            if (!evaluate(k, at(first, q), mean, nullptr, ids, block.count)) return false;
            for (int c = 0; c < block.count; ++c)
                if (std::abs(mean[c] - low[c]) > 1e-12 * std::abs(low[c]))
                    return refuse(Fault::Kind::place_and_temperature, k, c, ids);
        }
    for (int c = 0; c < block.count; ++c)
        mean[c] = first[c] == second[c]
                      ? low[c]
                      : k.integral_over_temperature(slots_, pass_.time, first[c], second[c]) / (second[c] - first[c]);
    return true;
}

inline bool Assembler::refuse(Fault::Kind kind, const Coefficient& which, int c, const Id* ids) {
    Fault fault;
    fault.kind = kind;
    fault.coefficient = &which;
    fault.cell = model_.user_cell[as_size(ids[c])];
    fault.x = work_.cells.x[c];
    fault.temperature = work_.cells.T ? work_.cells.T[c] : 0.0;
    fault.time = pass_.time.to;
    pass_.fault = fault;
    return false;
}

inline bool Assembler::unresolved(const RegionModel& region, const Id* ids) {
    const Coefficient* which = &region.k[0];
    if (work_.cells.unresolved_source)
        for (const VolumeTerm& term : region.volume) {
            which = term.kind == VolumeTerm::Kind::side_film ? &term.fluid : &term.amount;
            if (!which->uniform()) break;
        }
    return refuse(Fault::Kind::unresolved, *which, work_.cells.unresolved, ids);
}

/// Integral of T over the block, as the cells themselves have it.
inline bool Assembler::add_content(const RegionPass& pass, Id first, const Id* ids) {
    if (work_.cells.divided) return add_divided_content(pass, first, ids);
    CellBlock& block = work_.cells;
    const int n = kernel_.nodes;
    shape_.resize(as_size(kernel_.points * n * W));
    kernel_.profile(block, shape_.data());
    if (kernel_.exact && block.unresolved >= 0) return unresolved(model_.regions[pass.region], ids);
    const Coefficient& k = model_.regions[pass.region].k[0];
    for (int c = 0; c < block.count; ++c)
        for (int q = 0; q < kernel_.points; ++q) {
            const int at = q * W + c;
            double k_here = 1.0;
            if (pass.own_mean) block.point_T[at] = temperature_of(k, block.T[c], block.point_T[at], &k_here);
            pass_.content[pass.region] += block.weight[at] * block.point_T[at];
            if (!pass_.content_slope) continue;
            for (int i = 0; i < n; ++i) {
                const double k_node = pass.own_mean ? block.k_end[i][c] : 1.0;
                pass_.content_slope[model_.cell(first + c)[i]] +=
                    block.weight[at] * shape_[as_size((q * n + i) * W + c)] * (k_node / k_here);
            }
        }
    return true;
}

/// The temperature at which the integral of k from T is `rise`: Newton on a rising function, its steps kept in the bracket.
inline double Assembler::temperature_of(const Coefficient& k, double T, double rise, double* k_there) {
    const double nowhere = 0.0;
    const auto value = [&](double t) {
        double v = 1.0;
        if (const Fault fault = k.evaluate(slots_, pass_.time, {1, &t, nullptr, &nowhere, &nowhere}, &v, nullptr))
            pass_.fault = fault;
        return v;
    };
    double t = T;
    double left = rise;
    for (int step = 0; step < 60 && !pass_.fault; ++step) {
        *k_there = value(t);
        double change = left / *k_there;
        double next = left;
        for (int halving = 0; halving < 40; ++halving, change *= 0.5) {
            next = rise - k.integral_over_temperature(slots_, pass_.time, T, t + change);
            if (!(std::abs(next) > std::abs(left))) break;
        }
        t += change;
        left = next;
        if (std::abs(change) <= 1e-14 * (1.0 + std::abs(t))) break;
    }
    return t;
}

} // namespace tepor::detail
