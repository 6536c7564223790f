#pragma once
// Integration along the line, cell by cell from the left.

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <tepor/base/error.hpp>
#include <tepor/flux/line.hpp>
#include <tepor/flux/line_cell.hpp>
#include <tepor/flux/neighbours.hpp>

namespace tepor::detail {

/// Law at an end or a contact: film strength times r^n, and the heat times r^n it lets out at the temperature.
struct LineLaw {
    double film = 0.0;
    double out = 0.0;
};

inline LineLaw line_law(const FluxProblem& problem, const double* temperature, std::size_t side) noexcept {
    const MeshData& mesh = *problem.mesh;
    const FluxSide& s = problem.sides[side];
    const auto at = [&](CellSide where) {
        return temperature[problem.dof[as_size(where.cell) * as_size(mesh.nodes_per_cell) + as_size(where.side)]];
    };
    const double area = radius_power(mesh.frame.power(), mesh.nodes[as_size(mesh.cell(s.side.cell)[s.side.side])].x);
    double t = at(s.side) - s.fluid;
    if (s.kind == SideKind::contact) t -= at(problem.sides[as_size(s.partner)].side);
    LineLaw law{area * s.film, area * (s.flux + s.film * t)};
    if (s.trace >= 0) {
        law.out += area * problem.traces[as_size(s.trace)].moment[0];
        law.film += area * problem.traces[as_size(s.trace)].least_slope;
    }
    return law;
}

/// A maximal run of cells between ends of the body or places held at a temperature.
struct LinePiece {
    std::vector<Index> cells; ///< from left to right
    Id first = -1;            ///< what lies behind the ends, see side_neighbours
    Id last = -1;
};

inline std::vector<LinePiece> line_pieces(const FluxProblem& problem) {
    const MeshData& mesh = *problem.mesh;
    const std::vector<Id> behind = side_neighbours(problem);
    std::vector<Index> order(as_size(mesh.cell_count()));
    std::iota(order.begin(), order.end(), Index{0});
    const auto middle = [&](Index c) {
        return mesh.nodes[as_size(mesh.cell(c)[0])].x + mesh.nodes[as_size(mesh.cell(c)[1])].x;
    };
    std::sort(order.begin(), order.end(), [&](Index a, Index b) { return middle(a) < middle(b); });
    std::vector<LinePiece> pieces;
    const auto passes = [&](Id b) {
        return b >= 0 || (b <= -2 && problem.sides[as_size(-2 - b)].kind == SideKind::contact);
    };
    for (const Index c : order) {
        const bool forward = mesh.nodes[as_size(mesh.cell(c)[1])].x > mesh.nodes[as_size(mesh.cell(c)[0])].x;
        const Id before = behind[as_size(2 * c + (forward ? 0 : 1))],
                 after = behind[as_size(2 * c + (forward ? 1 : 0))];
        if (!passes(before)) {
            pieces.emplace_back();
            pieces.back().first = before;
        }
        if (pieces.empty()) throw Error(ErrorCode::internal, "", "flux: a 1D mesh without a left end");
        pieces.back().cells.push_back(c);
        pieces.back().last = after;
    }
    return pieces;
}

/// The laws a piece obeys inside: contacts after its cells, by position in FluxProblem::sides (-1: none).
inline std::vector<Id> contacts_after(const FluxProblem& problem) {
    std::vector<Id> found(as_size(2 * problem.mesh->cell_count()), -1);
    for (std::size_t i = 0; i < problem.sides.size(); ++i)
        if (problem.sides[i].kind == SideKind::contact)
            found[as_size(2 * problem.sides[i].side.cell + problem.sides[i].side.side)] = as_id(i);
    return found;
}

TEPOR_INLINE Equilibrated equilibrate_line(const FluxProblem& problem, const double* temperature) {
    const MeshData& mesh = *problem.mesh;
    const std::size_t cells = as_size(mesh.cell_count());
    const std::vector<Id> contact = contacts_after(problem);
    Equilibrated flux;
    flux.per_side = 1;
    flux.outflow.assign(2 * cells, 0.0);
    flux.squared.assign(cells, 0.0);
    double carried = 0.0, size = 0.0;
    for (const LinePiece& piece : line_pieces(problem)) {
        const auto law_at = [&](Id behind) {
            return behind <= -2 ? line_law(problem, temperature, as_size(-2 - behind)) : LineLaw{};
        };
        const auto held = [&](Id behind) {
            return behind <= -2 && problem.sides[as_size(-2 - behind)].kind == SideKind::fixed;
        };
        const LineLaw first = law_at(piece.first), last = law_at(piece.last);
        const bool first_given = !held(piece.first) && first.film == 0.0,
                   last_given = !held(piece.last) && last.film == 0.0;
        // Entering heat at the left end is C; `start` is what the sources add before each cell.
        std::vector<double> start(piece.cells.size() + 1, 0.0);
        double traffic = std::abs(first.out) + std::abs(last.out);
        for (std::size_t j = 0; j < piece.cells.size(); ++j) {
            const LineCell cell(problem, temperature, piece.cells[j]);
            const double generated = cell.generated(cell.right());
            start[j + 1] = start[j] + generated;
            traffic += std::abs(generated);
        }
        const auto side_after = [&](std::size_t j, const LineCell& cell) {
            return contact[as_size(2 * piece.cells[j]) + (cell.forward ? 1 : 0)];
        };
        double c = first_given ? -first.out : last_given ? last.out - start.back() : 0.0;
        double sinks = 0.0, left_over = 0.0;
        if (first_given && last_given) { // nothing but sinks can take what the solver left over
            left_over = c + start.back() - last.out;
            for (const Index q : piece.cells) {
                const LineCell cell(problem, temperature, q);
                cell.points([&](double w, double, double rn) { sinks += w * rn * cell.sink; });
            }
            if (sinks > 0.0)
                flux.residual += std::abs(left_over) / std::sqrt(sinks);
            else if (std::abs(left_over) > rounding_unit * traffic)
                flux.residual = std::numeric_limits<double>::infinity();
        }
        const double share = sinks > 0.0 ? left_over / sinks : 0.0;
        double taken = 0.0; // by the sinks up to the cell, of what was left over
        if (!first_given && !last_given) {
            // minimise the sum of (C + b)^2 / weight over cells, films and contacts
            double a = 0.0, b = 0.0;
            const auto add = [&](double inverse, double value) {
                a += inverse;
                b += inverse * value;
            };
            for (std::size_t j = 0; j < piece.cells.size(); ++j) {
                const LineCell cell(problem, temperature, piece.cells[j]);
                cell.points([&](double w, double x, double rn) {
                    double value = 0.0, slope = 0.0;
                    cell.temperature(x, value, slope);
                    add(w / (cell.k * rn), start[j] + cell.generated(x) + cell.k * rn * slope);
                });
                if (const Id s = side_after(j, cell); s >= 0) {
                    const LineLaw law = line_law(problem, temperature, as_size(s));
                    add(1.0 / law.film, start[j + 1] - law.out);
                }
            }
            if (first.film > 0.0) add(1.0 / first.film, first.out);
            if (last.film > 0.0) add(1.0 / last.film, start.back() - last.out);
            c = -b / a;
        }
        for (std::size_t j = 0; j < piece.cells.size(); ++j) {
            const Index q = piece.cells[j];
            const LineCell cell(problem, temperature, q);
            double taken_here = 0.0;
            const double entering = c + start[j] - taken;
            double squared = 0.0;
            cell.points([&](double w, double x, double rn) {
                double value = 0.0, slope = 0.0;
                cell.temperature(x, value, slope);
                const double s = entering + cell.generated(x), g = cell.k * rn * slope;
                squared += w / (cell.k * rn) * (s + g) * (s + g);
                size += w / (cell.k * rn) * (std::abs(s) + std::abs(g)) * (std::abs(s) + std::abs(g));
                taken_here += w * rn * cell.sink * share;
            });
            taken += taken_here;
            const double leaving = c + start[j + 1] - taken;
            double* out = flux.outflow.data() + 2 * as_size(q);
            out[cell.forward ? 0 : 1] = -entering;
            out[cell.forward ? 1 : 0] = leaving;
            if (const Id s = side_after(j, cell); s >= 0) {
                const LineLaw law = line_law(problem, temperature, as_size(s));
                squared += (leaving - law.out) * (leaving - law.out) / law.film;
            }
            if (j == 0 && first.film > 0.0) squared += (-c - first.out) * (-c - first.out) / first.film;
            if (j + 1 == piece.cells.size() && last.film > 0.0)
                squared += (leaving - last.out) * (leaving - last.out) / last.film;
            flux.squared[as_size(q)] = squared;
            flux.squared_total += squared;
            // rounding of the sources added up so far, as heat through this cell
            double resistance = 0.0;
            cell.points([&](double w, double, double rn) { resistance += w / (cell.k * rn); });
            if (left_over == 0.0 || sinks == 0.0)
                carried += traffic * traffic * (std::isfinite(resistance) ? resistance : 0.0);
        }
    }
    flux.flow.resize(problem.sides.size());
    for (std::size_t i = 0; i < problem.sides.size(); ++i) {
        const FluxSide& side = problem.sides[i];
        flux.flow[i] = flux.outflow[as_size(2 * side.side.cell + side.side.side)];
        if (side.kind == SideKind::fixed) continue;
        const LineLaw law = line_law(problem, temperature, i);
        if (law.film > 0.0) size += 4.0 * (law.out * law.out + flux.flow[i] * flux.flow[i]) / law.film;
        if (side.trace >= 0 && law.film > 0.0) {
            const SideTrace& trace = problem.traces[as_size(side.trace)];
            size += 4.0 * trace.size * trace.size * law.film /
                    ((trace.least_slope + side.film) * (trace.least_slope + side.film));
        }
    }
    flux.mixed_total = std::sqrt(flux.squared_total);
    flux.rounding = rounding_unit * (std::sqrt(size) + std::sqrt(carried));
    return flux;
}

TEPOR_INLINE double line_product(const FluxProblem& primal, const double* temperature, const Equilibrated& flux,
                                 const FluxProblem& adjoint, const double* influence,
                                 const Equilibrated& adjoint_flux) {
    double product = 0.0;
    for (Index c = 0; c < primal.mesh->cell_count(); ++c) {
        const LineCell first(primal, temperature, c), second(adjoint, influence, c);
        const std::size_t left = as_size(2 * c) + (first.forward ? 0 : 1);
        first.points([&](double w, double x, double rn) {
            double value = 0.0, t = 0.0, z = 0.0;
            first.temperature(x, value, t);
            second.temperature(x, value, z);
            product += w / (first.k * rn) * (first.generated(x) - flux.outflow[left] + first.k * rn * t) *
                       (second.generated(x) - adjoint_flux.outflow[left] + second.k * rn * z);
        });
    }
    for (std::size_t i = 0; i < primal.sides.size(); ++i) {
        if (primal.sides[i].kind == SideKind::fixed) continue;
        const LineLaw first = line_law(primal, temperature, i), second = line_law(adjoint, influence, i);
        if (first.film == 0.0) continue;
        const double share = primal.sides[i].kind == SideKind::contact ? 0.5 : 1.0; // listed on both sides
        product += share * (flux.flow[i] - first.out) * (adjoint_flux.flow[i] - second.out) / first.film;
    }
    return product;
}

} // namespace tepor::detail
