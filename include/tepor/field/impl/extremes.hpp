#pragma once
// Hottest and coldest places of the finite element function, inside cells too.

#include <cmath>
#include <limits>
#include <tepor/body/gather.hpp>
#include <tepor/field/functional.hpp>
#include <tepor/field/impl/inner_place.hpp>

namespace tepor {

namespace detail {

/// Keeps reference coordinates in the cell (on the line from its middle when they left it).
inline void clamp_to_cell(CellShape shape, double* xi) {
    const auto clamp = [](double v) { return v < 0.0 ? 0.0 : (v > 1.0 ? 1.0 : v); };
    xi[0] = clamp(xi[0]);
    if (shape == CellShape::segment) return;
    xi[1] = clamp(xi[1]);
    if (shape == CellShape::triangle && xi[0] + xi[1] > 1.0) {
        const double over = 0.5 * (xi[0] + xi[1] - 1.0);
        xi[0] = clamp(xi[0] - over);
        xi[1] = clamp(1.0 - xi[0]);
    }
}

/// Higher by more than rounding: where a field is flat, its node stays the place that is named.
inline bool exceeds(double value, double best) noexcept {
    return value > best + 4.0 * std::numeric_limits<double>::epsilon() * std::abs(best);
}

/// Climbs inside one cell from its best node: a pattern search whose step is halved until it is lost in rounding.
/// `along` restricts it to a side (from node 0 to node 1 of it) when not null.
inline Extreme climb(const Model& model, const Values& values, const double* T, Id cell, double direction,
                     const double (*along)[2]) {
    const CellKernels& kernel = *model.kernels;
    const int n = kernel.nodes;
    double shape[max_cell_nodes];
    double gradient[2 * max_cell_nodes];
    const Id* ids = model.cell(cell);
    Workspace work;
    if (kernel.exact) work = kernel.workspace();
    const auto value = [&](const double* xi) {
        if (kernel.exact) {
            ModelPlace at;
            at.cell = cell;
            at.xi[0] = xi[0];
            return direction * inner_place(model, values, work, T, at, {}).temperature;
        }
        kernel.shape(xi, shape, gradient);
        double sum = 0.0;
        for (int i = 0; i < n; ++i) sum += shape[i] * T[ids[i]];
        return direction * sum;
    };
    double best_xi[2] = {0.0, 0.0};
    double best = -1e300;
    constexpr int lattice = 6;
    const int rows = kernel.dim == 1 || along ? 0 : lattice;
    for (int b = 0; b <= rows; ++b)
        for (int a = 0; a <= lattice; ++a) {
            double xi[2] = {static_cast<double>(a) / lattice, static_cast<double>(b) / lattice};
            if (along)
                for (int d = 0; d < 2; ++d) xi[d] = along[0][d] + (along[1][d] - along[0][d]) * a / lattice;
            clamp_to_cell(model.mesh->shape, xi);
            const double v = value(xi);
            if (v > best) {
                best = v;
                best_xi[0] = xi[0];
                best_xi[1] = xi[1];
            }
        }
    for (double step = 0.5 / lattice; step > 1e-8;) {
        bool moved = false;
        static constexpr double way[8][2] = {{1, 0}, {-1, 0}, {0, 1}, {0, -1}, {1, -1}, {-1, 1}, {1, 1}, {-1, -1}};
        const int ways = kernel.dim == 1 || along ? 2 : 8;
        for (int w = 0; w < ways; ++w) {
            double xi[2] = {best_xi[0] + step * way[w][0], best_xi[1] + step * way[w][1]};
            if (along)
                for (int d = 0; d < 2; ++d) xi[d] = best_xi[d] + step * way[w][0] * (along[1][d] - along[0][d]);
            clamp_to_cell(model.mesh->shape, xi);
            const double v = value(xi);
            if (exceeds(v, best)) {
                best = v;
                best_xi[0] = xi[0];
                best_xi[1] = xi[1];
                moved = true;
            }
        }
        if (!moved) step *= 0.5;
    }
    Extreme found;
    found.at.cell = cell;
    found.at.xi[0] = best_xi[0];
    found.at.xi[1] = best_xi[1];
    found.value = direction * best;
    found.place = shapes_at(model, values, found.at, shape, nullptr, nullptr);
    return found;
}

/// Node values bound what a cell of order 1 can reach; above it, this share of their spread may be added inside.
inline double overshoot(int order) noexcept {
    return order == 1 ? 0.0 : 1.0;
}

/// Exact cells: the extreme lies at a node, or inside a cell through both of whose ends heat leaves (enters, for the coldest);
/// where the source varies in a cell every course is possible.
inline void climb_exact(const Model& model, const Values& values, const double* T, Id region, double direction,
                        Extreme& best) {
    Workspace work = model.kernels->workspace();
    CellBlock& block = work.cells;
    block.T = work.nodal_T;
    Wanted wanted;
    wanted.residual = true;
    Id ids[block_width];
    const RegionModel& in = model.regions[as_size(region)];
    for (Id c = in.first_cell; c < in.last_cell; c += block_width) {
        block.count = gather_cells(model, model.places_of(values), T, work.nodal_T, c, in.last_cell, block, ids);
        if (const Fault fault = form_cells(model, values, work, {}, region, ids, wanted)) raise(fault);
        for (int b = 0; b < block.count; ++b) {
            bool possible = direction * block.residual[b] < 0.0 && direction * block.residual[block_width + b] < 0.0;
            possible = possible || (block.source && block.divided);
            if (block.source)
                for (int q = 1; q < model.kernels->points; ++q)
                    possible = possible || block.source[q * block_width + b] != block.source[b];
            if (!possible) continue;
            const Extreme inside = climb(model, values, T, c + b, direction, nullptr);
            if (exceeds(direction * inside.value, direction * best.value)) best = inside;
        }
    }
}

} // namespace detail

TEPOR_INLINE Extreme extreme_in(const Model& model, const Values& values, const double* T, Id region,
                                double direction) {
    const int n = model.kernels->nodes;
    const Id first = region < 0 ? 0 : model.regions[detail::as_size(region)].first_cell;
    const Id last =
        region < 0 ? static_cast<Id>(model.user_cell.size()) : model.regions[detail::as_size(region)].last_cell;
    const auto reach = [&](Id c, double& high, int& where) {
        const Id* ids = model.cell(c);
        high = -1e300;
        double low = 1e300;
        for (int i = 0; i < n; ++i) {
            const double v = direction * T[ids[i]];
            low = v < low ? v : low;
            if (v > high) {
                high = v;
                where = i;
            }
        }
        return high + detail::overshoot(model.kernels->order) * (high - low);
    };
    Extreme best;
    double top = -1e300;
    for (Id c = first; c < last; ++c) {
        double high = 0.0;
        int i = 0;
        (void)reach(c, high, i);
        if (high > top) {
            top = high;
            best.at.cell = c;
            model.kernels->reference_node(i, best.at.xi);
            best.value = T[model.cell(c)[i]];
            best.place = model.places_of(values)[model.cell(c)[i]];
        }
    }
    if (model.kernels->exact) {
        for (std::size_t r = 0; r < model.regions.size(); ++r)
            if (region < 0 || detail::as_id(r) == region)
                detail::climb_exact(model, values, T, detail::as_id(r), direction, best);
        return best;
    }
    if (model.kernels->order == 1) return best;
    for (Id c = first; c < last; ++c) {
        double high = 0.0;
        int i = 0;
        if (reach(c, high, i) <= direction * best.value) continue;
        const Extreme inside = detail::climb(model, values, T, c, direction, nullptr);
        if (detail::exceeds(direction * inside.value, direction * best.value)) best = inside;
    }
    return best;
}

TEPOR_INLINE Extreme extreme_on(const Model& model, const Values& values, const double* T, Id face, double direction) {
    const SideList& sides = model.faces[detail::as_size(face)].sides;
    const CellKernels& kernel = *model.kernels;
    Extreme best;
    bool any = false;
    for (Index s = 0; s < sides.count(); ++s) {
        const CellSide side = sides.side[detail::as_size(s)];
        double ends[2][2] = {{0.0, 0.0}, {0.0, 0.0}};
        kernel.reference_node(kernel.side_node(side.side, 0), ends[0]);
        kernel.reference_node(kernel.side_node(side.side, kernel.dim == 1 ? 0 : 1), ends[1]);
        const Extreme here = detail::climb(model, values, T, side.cell, direction, ends);
        if (!any || detail::exceeds(direction * here.value, direction * best.value)) best = here;
        any = true;
    }
    return best;
}

} // namespace tepor
