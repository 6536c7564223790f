#pragma once
// From patches to the bound: checks, sweep, defects cell by cell, what the solver left over.

#include <algorithm>
#include <limits>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/flux/defect.hpp>
#include <tepor/flux/equilibrate.hpp>
#include <tepor/flux/line.hpp>
#include <tepor/flux/neighbours.hpp>
#include <tepor/flux/residual.hpp>
#include <tepor/flux/round.hpp>
#include <tepor/flux/sweep.hpp>

namespace tepor {
namespace detail {

inline void check_flux_problem(const FluxProblem& problem) {
    const MeshData& mesh = *problem.mesh;
    if (mesh.shape == CellShape::quadrilateral)
        throw Error(ErrorCode::not_certifiable, "mesh",
                    "no guaranteed bound for quadrilaterals; use triangles (tiles can make them) or estimate");
    if (mesh.dim == 2 && mesh.order > 2)
        throw Error(ErrorCode::not_certifiable, "mesh",
                    text("no guaranteed bound for triangles of order ", mesh.order, "; use order 1 or 2, or estimate"));
    if (mesh.dim == 2 && mesh.frame.power() > 0) {
        if (mesh.order > 1)
            throw Error(ErrorCode::not_certifiable, "mesh",
                        "no guaranteed bound for triangles of order 2 in r-z; use order 1, or estimate");
        if (!problem.sink.empty() || !problem.spread.empty() || !problem.stretch.empty() || !problem.traces.empty())
            throw Error(
                ErrorCode::not_certifiable, "frame",
                "no guaranteed bound in r-z with side films, spots, conductivity tensors or radiation; use estimate");
    }
    for (std::size_t c = 0; c < problem.conductivity.size(); ++c)
        if (!(problem.conductivity[c] > 0.0))
            throw Error(ErrorCode::bad_value, "conductivity",
                        text("conductivity ", problem.conductivity[c], ", expected > 0"), static_cast<Index>(c));
    for (std::size_t c = 0; c < problem.sink.size(); ++c)
        if (!(problem.sink[c] >= 0.0))
            throw Error(ErrorCode::not_certifiable, "sink",
                        text("a source that grows with the temperature (sink ", problem.sink[c],
                             " W/(m3 K)) has no guaranteed bound; use estimate"),
                        static_cast<Index>(c));
}

/// A body of revolution in the r-z plane.
inline bool is_round(const FluxProblem& problem) noexcept {
    return problem.mesh->dim == 2 && problem.mesh->frame.power() > 0;
}

inline FluxWork prepare_flux(const FluxProblem& problem, const double* temperature) {
    return {problem, temperature, side_neighbours(problem), side_moments(problem, temperature),
            is_round(problem) ? round_loads(problem) : source_loads(problem, temperature)};
}

/// Largest ratio |integral of (g - mean g) v| / (|g - mean g| |||v|||) on a cell: L. E. Payne and H. F. Weinberger, Arch. Rational
/// Mech. Anal. 5 (1960) 286 (convex cell), or the sink alone.
inline double oscillation_factor(const FluxProblem& problem, Index c) noexcept {
    const Id* n = problem.mesh->cell(c);
    const auto& x = problem.mesh->nodes;
    double longest = 0.0; // squared, in the coordinates in which the cell is isotropic
    for (int i = 0; i < 3; ++i) {
        const Point e = stretched(problem, as_id(c), x[as_size(n[i == 2 ? 0 : i + 1])] - x[as_size(n[i])]);
        longest = std::max(longest, dot(e, e));
    }
    const double k = problem.stretch.empty() ? problem.conductivity[as_size(c)] : 1.0;
    const double factor = std::sqrt(longest / k) / pi;
    const double sink = problem.sink.empty() ? 0.0 : problem.sink[as_size(c)];
    return sink > 0.0 ? std::min(factor, 1.0 / std::sqrt(sink)) : factor;
}

} // namespace detail

TEPOR_INLINE Equilibrated equilibrate(const FluxProblem& problem, const double* temperature) {
    using namespace detail;
    check_flux_problem(problem);
    const MeshData& mesh = *problem.mesh;
    if (mesh.dim == 1) return equilibrate_line(problem, temperature);
    const std::size_t cells = as_size(mesh.cell_count());
    const FluxWork work = prepare_flux(problem, temperature);
    Equilibrated flux;
    const bool round = is_round(problem);
    flux.per_side = round ? 3 : mesh.order + 1;
    flux.outflow.assign(cells * 3 * as_size(flux.per_side), 0.0);
    if (flux.per_side == 2) {
        sweep_order1(work, flux.outflow.data());
    } else {
        flux.bubble.assign(cells, 0.0);
        if (round)
            sweep_round(work, flux.outflow.data(), flux.bubble.data());
        else
            sweep_order2(work, flux.outflow.data(), flux.bubble.data());
    }
    flux.squared.resize(cells);
    std::vector<LeftOver> left_over(cells);
    double size_squared = 0.0;
    bool breach = false; // of the condition on the axis: the energy would be infinite
    for (std::size_t c = 0; c < cells; ++c) {
        if (flux.per_side == 2) {
            const Defect1 d = defect_order1(work, flux.outflow.data(), static_cast<Index>(c));
            flux.squared[c] = Defect1::product(d, d);
            left_over[c] = {d.left_over, rounding_unit * d.traffic};
            size_squared += d.area / d.k * d.size * d.size;
        } else {
            const Index q = static_cast<Index>(c);
            const Defect2 d = round ? defect_round(work, flux, q) : defect_order2(work, flux, q);
            flux.squared[c] = round ? round_product(problem, q, d, d) : Defect2::product(d, d);
            if (round && !vanishes_on_axis(problem, q, d, 1e-9 * std::sqrt(d.size_squared / (d.gxx + d.gyy))))
                breach = true;
            left_over[c] = {d.left_over, rounding_unit * d.traffic};
            size_squared += d.size_squared;
        }
    }
    flux.flow.resize(problem.sides.size());
    for (std::size_t i = 0; i < problem.sides.size(); ++i) {
        const FluxSide& side = problem.sides[i];
        flux.flow[i] = side_total(flux, side.side);
        double start = 0.0, end = 0.0;
        const double length = side_length(mesh, side.side, start, end);
        if (side.trace >= 0) {
            const SideTrace& trace = problem.traces[as_size(side.trace)];
            flux.squared[as_size(side.side.cell)] += length * trace.lost_squared / (trace.least_slope + side.film);
            size_squared += 4.0 * length * trace.size * trace.size / (trace.least_slope + side.film);
        }
        if (side.kind != SideKind::fixed &&
            side.film > 0.0) { // the two sides of a law agree to the rounding of its terms
            double t = std::abs(side.fluid);
            for (const double v : values_along(problem, temperature, side.side)) t = std::max(t, std::abs(v));
            if (side.kind == SideKind::contact)
                for (const double v : values_along(problem, temperature, problem.sides[as_size(side.partner)].side))
                    t = std::max(t, std::abs(v));
            size_squared += 4.0 * side.film * length * std::max(start, end) * t * t;
        }
    }
    double mixed = 0.0, lost = 0.0;
    if (!work.loads.lost.empty()) flux.lost.resize(cells);
    for (std::size_t c = 0; c < cells; ++c) {
        const double osc =
            flux.lost.empty() ? 0.0 : oscillation_factor(problem, static_cast<Index>(c)) * work.loads.lost[c];
        if (!flux.lost.empty()) flux.lost[c] = osc;
        flux.squared_total += flux.squared[c];
        lost += osc * osc;
        mixed += osc > 0.0 ? (std::sqrt(flux.squared[c]) + osc) * (std::sqrt(flux.squared[c]) + osc) : flux.squared[c];
    }
    flux.lost_total = std::sqrt(lost);
    flux.mixed_total = std::sqrt(mixed);
    const CarriedNorms carried = carry_left_over(work, left_over);
    flux.residual = breach ? std::numeric_limits<double>::infinity() : carried.residual;
    flux.rounding = carried.rounding + rounding_unit * std::sqrt(size_squared);
    return flux;
}

TEPOR_INLINE PairBound pair_bound(const FluxProblem& primal, const double* temperature, const Equilibrated& flux,
                                  const FluxProblem& adjoint, const double* influence,
                                  const Equilibrated& adjoint_flux) {
    using namespace detail;
    const MeshData& mesh = *primal.mesh;
    double product = 0.0;
    if (mesh.dim == 1) {
        product = line_product(primal, temperature, flux, adjoint, influence, adjoint_flux);
    } else {
        const bool round = is_round(primal);
        const auto loads = [&](const FluxProblem& p, const double* t) {
            return round ? round_loads(p) : source_loads(p, t);
        };
        const FluxWork first{primal, temperature, {}, {}, loads(primal, temperature)};
        const FluxWork second{adjoint, influence, {}, {}, loads(adjoint, influence)};
        for (Index c = 0; c < mesh.cell_count(); ++c) {
            if (flux.per_side == 2)
                product += Defect1::product(defect_order1(first, flux.outflow.data(), c),
                                            defect_order1(second, adjoint_flux.outflow.data(), c));
            else if (round)
                product +=
                    round_product(primal, c, defect_round(first, flux, c), defect_round(second, adjoint_flux, c));
            else
                product += Defect2::product(defect_order2(first, flux, c), defect_order2(second, adjoint_flux, c));
        }
    }
    // With inexact balances the two parts of a defect are not orthogonal: |e|^2 + |s|^2 <= eta^2 + 2 |e| lost.
    const double extra_t = flux.residual + flux.rounding, extra_z = adjoint_flux.residual + adjoint_flux.rounding;
    const double eta_t = std::sqrt(flux.squared_total) + extra_t,
                 eta_z = std::sqrt(adjoint_flux.squared_total) + extra_z;
    const double e_t = flux.bound(), e_z = adjoint_flux.bound();
    const double both_t = std::sqrt(eta_t * eta_t + 2.0 * e_t * flux.lost_total);
    const double both_z = std::sqrt(eta_z * eta_z + 2.0 * e_z * adjoint_flux.lost_total);
    PairBound out;
    out.correction = 0.5 * product;
    out.half_width = 0.5 * both_t * both_z + 0.5 * (e_t * adjoint_flux.lost_total + e_z * flux.lost_total) +
                     0.5 * (eta_t * extra_z + extra_t * eta_z + extra_t * extra_z);
    return out;
}

} // namespace tepor
