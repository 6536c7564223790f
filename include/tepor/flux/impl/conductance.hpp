#pragma once
// Energies of a field and of a flux, cell by cell and over films and contacts.

#include <algorithm>
#include <tepor/base/error.hpp>
#include <tepor/flux/conductance.hpp>
#include <tepor/flux/defect.hpp>
#include <tepor/flux/loads.hpp>

namespace tepor {

TEPOR_INLINE TwoSided conductance_bounds(const FluxProblem& problem, const double* temperature,
                                         const Equilibrated& flux, const std::vector<char>& hot) {
    using namespace detail;
    const MeshData& mesh = *problem.mesh;
    const auto not_zero = [](double v) { return v != 0.0; };
    if (!problem.spread.empty() || std::any_of(problem.source.begin(), problem.source.end(), not_zero) ||
        std::any_of(problem.sink.begin(), problem.sink.end(), not_zero))
        throw Error(ErrorCode::not_certifiable, "source",
                    "a conductance is bracketed for bodies without sources and sinks; ask for a heat flow");
    for (const FluxSide& side : problem.sides)
        if (side.flux != 0.0 || side.trace >= 0)
            throw Error(ErrorCode::not_certifiable, "flux",
                        "a conductance is bracketed for bodies without given heat flows; ask for a heat flow");
    if (mesh.dim == 1 || mesh.frame.power() > 0)
        throw Error(ErrorCode::not_certifiable, "frame",
                    "a conductance is bracketed for plane sections; ask for a heat flow");
    // The energies of the field alone and of the flux alone are defects of one with the other set to zero.
    const FluxWork work{problem, temperature, {}, {}, {}};
    Equilibrated still;
    still.per_side = flux.per_side;
    still.outflow.assign(flux.outflow.size(), 0.0);
    still.bubble.assign(flux.bubble.size(), 0.0);
    const std::vector<double> level(as_size(*std::max_element(problem.dof.begin(), problem.dof.end())) + 1, 0.0);
    const FluxWork flat{problem, level.data(), {}, {}, {}};
    double upper = 0.0, energy = 0.0, flow = 0.0, left_over = 0.0;
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        if (mesh.order == 1) {
            const Defect1 t = defect_order1(work, still.outflow.data(), c),
                          s = defect_order1(flat, flux.outflow.data(), c);
            upper += Defect1::product(t, t);
            energy += Defect1::product(s, s);
            left_over += std::abs(s.left_over) + rounding_unit * s.traffic;
        } else {
            const Defect2 t = defect_order2(work, still, c), s = defect_order2(flat, flux, c);
            upper += Defect2::product(t, t);
            energy += Defect2::product(s, s);
            left_over += std::abs(s.left_over) + rounding_unit * s.traffic;
        }
    }
    for (std::size_t i = 0; i < problem.sides.size(); ++i) {
        const FluxSide& side = problem.sides[i];
        if (hot[i]) flow -= flux.flow[i];
        if (side.kind == SideKind::fixed || side.film == 0.0) continue;
        double start = 1.0, end = 1.0;
        const double length = side_length(mesh, side.side, start, end);
        auto t = values_along(problem, temperature, side.side);
        double share = 1.0; // both sides of a contact are listed
        if (side.kind == SideKind::contact) {
            share = 0.5;
            const auto other = values_along(problem, temperature, problem.sides[as_size(side.partner)].side);
            for (std::size_t n = 0; n < 3; ++n) t[n] -= other[2 - n];
        }
        for (double& v : t) v -= side.fluid;
        // integral of the square of the quadratic through t
        const double square =
            (4.0 * (t[0] * t[0] + t[2] * t[2]) + 16.0 * t[1] * t[1] + 4.0 * t[1] * (t[0] + t[2]) - 2.0 * t[0] * t[2]) /
            30.0;
        upper += share * side.film * length * square;
        const double* out =
            flux.outflow.data() + as_size(flux.per_side) * (3 * as_size(side.side.cell) + as_size(side.side.side));
        const double squared = flux.per_side == 2 ? (out[0] * out[0] + out[0] * out[1] + out[1] * out[1]) / 3.0
                                                  : out[0] * out[0] + 3.0 * out[1] * out[1] + 5.0 * out[2] * out[2];
        energy += share * squared / (side.film * length);
    }
    const double extra = flux.residual + flux.rounding;
    const double s = (std::sqrt(energy) + extra) * (std::sqrt(energy) + extra);
    const double l = std::max(0.0, std::abs(flow) - left_over);
    TwoSided out;
    out.upper = upper * (1.0 + rounding_unit);
    out.lower = std::max(l * l / s, upper - flux.bound() * flux.bound()) * (1.0 - rounding_unit);
    return out;
}

} // namespace tepor
