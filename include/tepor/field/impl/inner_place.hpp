#pragma once
// The temperature between the nodes of an exact cell: a node put at the place, its neighbours held.

#include <cmath>
#include <tepor/body/assemble.hpp>
#include <tepor/field/functional.hpp>

namespace tepor::detail {

/// What a place inside an exact cell has.
struct InnerPlace {
    double temperature = 0.0;
    double slope[2] = {0.0, 0.0}; ///< by the temperatures of the cell's two nodes
    double flow = 0.0;            ///< heat passing in the direction of x [W]
};

/// Divides the cell at the place and solves for the new node: as exact as the cells themselves.
inline InnerPlace inner_place(const Model& model, const Values& values, Workspace& work, const double* T,
                              const ModelPlace& at, TimeSpan time) {
    constexpr int W = block_width;
    const Point* place = model.places_of(values);
    const Id* ids = model.cell(at.cell);
    const double a = place[ids[0]].x;
    const double b = place[ids[1]].x;
    const Id region = model.region_of_cell(at.cell);
    Id cells[W];
    for (Id& cell : cells) cell = at.cell;
    CellBlock& block = work.cells;
    block.T = work.nodal_T;
    const auto form = [&](bool matrix) {
        Wanted wanted;
        wanted.residual = true;
        wanted.matrix = matrix;
        if (const Fault fault = form_cells(model, values, work, time, region, cells, wanted)) raise(fault);
    };
    const double x = a + at.xi[0] * (b - a);
    InnerPlace found;
    if (!(x > a && x < b && at.xi[0] > 1e-12 && at.xi[0] < 1.0 - 1e-12)) {
        const int end = at.xi[0] < 0.5 ? 0 : 1;
        for (int c = 0; c < W; ++c)
            for (int i = 0; i < 2; ++i) {
                block.x[i * W + c] = i == 0 ? a : b;
                block.y[i * W + c] = 0.0;
                block.T[i * W + c] = T[ids[i]];
            }
        block.count = 1;
        form(false);
        found.temperature = T[ids[end]];
        found.slope[end] = 1.0;
        found.flow = end == 0 ? block.residual[0] : -block.residual[W];
        return found;
    }
    double t = T[ids[0]] + at.xi[0] * (T[ids[1]] - T[ids[0]]);
    // Close to a solid centre the outer part is hard to integrate and not needed: the row of the centre node of the inner part
    // gives its outer temperature.
    const bool from_centre = model.mesh->frame.power() > 0 && a == 0.0 && at.xi[0] < 0.05;
    const auto put = [&](double middle) {
        block.count = from_centre ? 1 : 2;
        for (int c = 0; c < block.count; ++c) {
            block.x[c] = c == 0 ? a : x;
            block.x[W + c] = c == 0 ? x : b;
            block.y[c] = block.y[W + c] = 0.0;
            block.T[c] = c == 0 ? T[ids[0]] : middle;
            block.T[W + c] = c == 0 ? middle : T[ids[1]];
        }
        for (int c = block.count; c < W; ++c) // padding
            for (double* v : {block.x, block.x + W, block.y, block.y + W, block.T, block.T + W})
                v[c] = v[block.count - 1];
        form(true);
    };
    const bool sloped = model.regions[as_size(region)].k[0].depends_on_temperature();
    const auto derivative = [&](int c, int i, int j) {
        const int pair = i > j ? i * (i + 1) / 2 + j : j * (j + 1) / 2 + i;
        return block.matrix[pair * W + c] + (sloped ? block.slope[(i * 2 + j) * W + c] : 0.0);
    };
    const auto mismatch = [&] { return from_centre ? block.residual[0] : block.residual[W] + block.residual[1]; };
    const auto pivot = [&] { return from_centre ? derivative(0, 0, 1) : derivative(0, 1, 1) + derivative(1, 0, 0); };
    put(t);
    double left = mismatch();
    for (int step = 0; step < 50 && left != 0.0; ++step) {
        const double full = -left / pivot();
        const bool last = std::abs(full) <= 1e-13 * (1.0 + std::abs(t));
        double share = 1.0;
        double next = left;
        for (int halving = 0; halving < 40; ++halving, share *= 0.5) {
            put(t + share * full);
            next = mismatch();
            if (last || std::abs(next) < std::abs(left)) break;
        }
        t += share * full;
        left = next;
        if (last) break;
    }
    found.temperature = t;
    found.slope[0] = (from_centre ? -derivative(0, 0, 0) : -derivative(0, 1, 0)) / pivot();
    found.slope[1] = from_centre ? 0.0 : -derivative(1, 0, 1) / pivot();
    found.flow = from_centre ? -block.residual[W] : 0.5 * (block.residual[1] - block.residual[W]);
    return found;
}

} // namespace tepor::detail
