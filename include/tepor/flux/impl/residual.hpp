#pragma once
// Breadth-first tree over the cells and lowest-order fluxes along it.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/flux/residual.hpp>

namespace tepor::detail {

TEPOR_INLINE CarriedNorms carry_left_over(const FluxWork& work, const std::vector<LeftOver>& left_over) {
    const FluxProblem& problem = work.problem;
    const MeshData& mesh = *problem.mesh;
    const std::size_t cells = as_size(mesh.cell_count());
    // Exit of each cell: one of its sides (the way to its parent or out of the body), 3 for a sink, or -1 while not reached.
    std::vector<signed char> exit(cells, -1);
    std::vector<Id> order;
    order.reserve(cells);
    const auto sink = [&](std::size_t c) { return !problem.sink.empty() && problem.sink[c] > 0.0; };
    const bool round = mesh.frame.power() > 0;
    double widest = 0.0;
    if (round)
        for (const Point& p : mesh.nodes) widest = std::max(widest, p.x);
    const auto on_axis = [&](Id n) { return mesh.nodes[as_size(n)].x <= 1e-12 * widest; };
    const auto lets_out = [&](const FluxSide& side) {
        return side.kind == SideKind::fixed ||
               (side.kind == SideKind::open &&
                (side.film > 0.0 || (side.trace >= 0 && problem.traces[as_size(side.trace)].least_slope > 0.0)));
    };
    const auto film_of = [&](const FluxSide& side) {
        return side.film + (side.trace >= 0 ? problem.traces[as_size(side.trace)].least_slope : 0.0);
    };
    for (const FluxSide& side : problem.sides)
        if (lets_out(side) && exit[as_size(side.side.cell)] < 0) {
            exit[as_size(side.side.cell)] = static_cast<signed char>(side.side.side);
            order.push_back(side.side.cell);
        }
    // The cell behind a side, -1 at the boundary; `back` receives its local side.
    const auto behind = [&](std::size_t slot, Id& back) -> Id {
        Id n = work.neighbours[slot];
        if (n <= -2) {
            const FluxSide& side = problem.sides[as_size(-2 - n)];
            if (side.kind != SideKind::contact) return -1;
            const CellSide other = problem.sides[as_size(side.partner)].side;
            back = other.side;
            return other.cell;
        }
        if (n < 0) return -1;
        back = n % 3;
        return n / 3;
    };
    std::size_t done = 0;
    const auto spread_out = [&] {
        for (; done < order.size(); ++done) {
            const std::size_t c = as_size(order[done]);
            for (std::size_t s = 0; s < 3; ++s) {
                Id back = 0;
                const Id other = behind(3 * c + s, back);
                if (other < 0 || exit[as_size(other)] >= 0) continue;
                exit[as_size(other)] = static_cast<signed char>(back);
                order.push_back(other);
            }
        }
    };
    spread_out();
    CarriedNorms out;
    if (order.size() < cells) { // bodies held by their sinks alone
        for (std::size_t c = 0; c < cells; ++c)
            if (exit[c] < 0 && sink(c)) {
                exit[c] = 3;
                order.push_back(as_id(c));
            }
        spread_out();
        for (std::size_t c = 0; c < cells; ++c)
            if (exit[c] < 0 && left_over[c].value != 0.0) out.residual = std::numeric_limits<double>::infinity();
    }
    // Children before parents: what each cell sends to its exit.
    std::vector<LeftOver> sent = left_over;
    for (std::size_t i = order.size(); i-- > 0;) {
        const std::size_t c = as_size(order[i]);
        if (exit[c] == 3) continue;
        Id back = 0;
        const Id parent = behind(3 * c + as_size(exit[c]), back);
        if (parent < 0) continue;
        sent[as_size(parent)].value += sent[c].value;
        sent[as_size(parent)].doubt += sent[c].doubt;
    }
    double residual = 0.0, rounding = 0.0;
    for (std::size_t c = 0; c < cells; ++c) { // in memory order
        if (exit[c] < 0) continue;
        const Id cell = as_id(c);
        const Id* node = mesh.cell(cell);
        const Point place[3] = {mesh.nodes[as_size(node[0])], mesh.nodes[as_size(node[1])],
                                mesh.nodes[as_size(node[2])]};
        const Point x[3] = {
            {0.0, 0.0}, stretched(problem, cell, place[1] - place[0]), stretched(problem, cell, place[2] - place[0])};
        const double twice = cross(x[1] - x[0], x[2] - x[0]);
        double leaves[3], doubts[3];
        for (std::size_t s = 0; s < 3; ++s) {
            leaves[s] = doubts[s] = 0.0;
            Id back = 0;
            const Id other = behind(3 * c + s, back);
            if (exit[c] == static_cast<signed char>(s)) {
                leaves[s] = sent[c].value;
                doubts[s] = sent[c].doubt;
            } else if (other >= 0 && exit[as_size(other)] == static_cast<signed char>(back)) {
                leaves[s] = -sent[as_size(other)].value;
                doubts[s] = sent[as_size(other)].doubt;
            }
        }
        const double r[3] = {round && on_axis(node[0]) ? 0.0 : place[0].x, round && on_axis(node[1]) ? 0.0 : place[1].x,
                             round && on_axis(node[2]) ? 0.0 : place[2].x};
        double least = std::numeric_limits<double>::infinity(); // of the radii off the axis
        for (const double radius : r)
            if (radius > 0.0) least = std::min(least, radius);
        // Linear field whose flux is constant along a side, or in r-z falls to zero towards an end on the axis: its vertex values
        double sum = 0.0, sx = 0.0, sy = 0.0, largest = 0.0, doubt = 0.0; // doubt: squared
        for (std::size_t i = 0; i < 3; ++i) {
            const std::size_t before = (i + 2) % 3, after = (i + 1) % 3;
            const auto at_vertex = [&](std::size_t other) {
                return !round ? 1.0 : r[i] == 0.0 ? 0.0 : r[other] == 0.0 ? 2.0 : 1.0;
            };
            const Point t1 = x[after] - x[i], t2 = x[before] - x[i];
            const double enter = -leaves[i] * at_vertex(after), leave = leaves[before] * at_vertex(before);
            const double vx = enter * t2.x - leave * t1.x, vy = enter * t2.y - leave * t1.y;
            const double a = doubts[i] * doubts[i] * dot(t2, t2), b = doubts[before] * doubts[before] * dot(t1, t1);
            doubt = std::max(doubt, 8.0 * (a + b)); // (2 |a| + 2 |b|)^2 at most
            largest = std::max(largest, vx * vx + vy * vy);
            sum += vx * vx + vy * vy, sx += vx, sy += vy;
        }
        const double weight = 0.5 / (twice * problem.conductivity[c]);
        // In r-z |tau|^2/r is at most its largest vertex value over the least radius off the axis, since tau is zero on it.
        residual += round ? weight * largest / least : weight / 12.0 * (sum + sx * sx + sy * sy);
        rounding += weight * doubt / (round ? least : 1.0);
        if (exit[c] == 3) {
            const double share = 2.0 / (cross(place[1] - place[0], place[2] - place[0]) * problem.sink[c]);
            residual += share * sent[c].value * sent[c].value;
            rounding += share * sent[c].doubt * sent[c].doubt;
        } else if (const Id n = work.neighbours[3 * c + as_size(exit[c])]; n <= -2) {
            const FluxSide& side = problem.sides[as_size(-2 - n)];
            if (side.kind != SideKind::fixed) { // mismatch with the law of the film, the radiation or the contact
                const Point d = place[(as_size(exit[c]) + 1) % 3] - place[as_size(exit[c])];
                double share = 1.0 / (film_of(side) * std::sqrt(dot(d, d)));
                if (round) share *= 2.0 / least; // constant over r, or linear towards the axis
                residual += share * sent[c].value * sent[c].value;
                rounding += share * sent[c].doubt * sent[c].doubt;
            }
        }
    }
    out.residual += std::sqrt(residual);
    out.rounding = std::sqrt(rounding);
    return out;
}

} // namespace tepor::detail
