#pragma once
// One pass of a bracket of the conductance between two faces.

#include <algorithm>
#include <cmath>
#include <tepor/answers/impl/bracket_level.hpp>
#include <tepor/base/text.hpp>
#include <tepor/describe/quantity.hpp>
#include <tepor/flux/conductance.hpp>
#include <utility>

namespace tepor::detail {

/// Heat per kelvin between two faces: the energies of one field and its flux (no adjoint).
inline LevelAnswer answer_conductance(BracketLevel& level, const Quantity& quantity) {
    FluxProblem problem = level.primal().problem;
    const ModelProblem& primal = level.primal();
    const Model& model = level.model();
    const auto refuse = [&](const std::string& why) {
        throw Error(ErrorCode::not_certifiable, quantity.label(),
                    text(quantity.label(), ": no guaranteed bound exists, ", why, "; use estimate"));
    };
    if (!problem.sink.empty()) refuse("because of the side film");
    std::fill(problem.source.begin(), problem.source.end(), 0.0); // heat per kelvin does not depend on what is given
    problem.spread.clear();
    for (FluxSide& side : problem.sides) side.flux = side.fluid = 0.0;
    std::vector<char> hot(problem.sides.size(), 0), named(problem.sides.size(), 0);
    std::vector<double> held(as_size(model.unknowns - model.free), 0.0);
    for (const bool first : {true, false}) {
        const std::string& name = first ? quantity.first() : quantity.second();
        const Index f = primal.mesh->find_face(name);
        if (f < 0) throw Error(ErrorCode::bad_name, name, text(quantity.label(), ": no face \"", name, "\""));
        Index count = 0;
        for (Id e = primal.face_side_start[as_size(f)]; e < primal.face_side_start[as_size(f) + 1]; ++e) {
            const Id at = primal.face_side[as_size(e)];
            if (at < 0) continue;
            FluxSide& side = problem.sides[as_size(at)];
            if (named[as_size(at)]) refuse("because the two faces overlap");
            if (side.kind == SideKind::contact) refuse(text("because \"", name, "\" lies on a contact"));
            if (side.kind == SideKind::open && side.film == 0.0) continue;
            named[as_size(at)] = 1;
            hot[as_size(at)] = first ? 1 : 0;
            ++count;
            if (!first) continue;
            side.fluid = 1.0;
            if (side.kind == SideKind::fixed) {
                std::vector<Id> on(as_size(model.kernels->side_nodes));
                model.side_unknowns({model.model_cell(side.side.cell), side.side.side}, on.data());
                for (const Id u : on) held[as_size(u - model.free)] = 1.0;
            }
        }
        if (count == 0) refuse(text("because \"", name, "\" has neither a film nor a prescribed temperature"));
    }
    for (std::size_t i = 0; i < problem.sides.size(); ++i) {
        const FluxSide& side = problem.sides[i];
        if (named[i] || side.kind == SideKind::contact) continue;
        if (side.kind == SideKind::fixed || side.film > 0.0) refuse("because heat can leave through a third face");
    }
    for (std::size_t i = 0; i < problem.sides.size(); ++i) { // faces of 1 and 0 that meet
        if (hot[i] || problem.sides[i].kind != SideKind::fixed) continue;
        const Id* dof = problem.dof.data() + as_size(problem.sides[i].side.cell) * as_size(primal.mesh->nodes_per_cell);
        const Id s = problem.sides[i].side.side;
        for (const Id v : {s, primal.mesh->dim == 1 ? s : s == 2 ? 0 : s + 1})
            if (held[as_size(dof[v] - model.free)] != 0.0) refuse("because the two faces meet");
    }
    level.factor();
    const std::vector<double> field = level.solve(problem, held);
    const Equilibrated flux = equilibrate(problem, field.data());
    LevelAnswer out;
    const TwoSided bounds = conductance_bounds(problem, field.data(), flux, hot);
    out.lower = primal.factor * bounds.lower;
    out.upper = primal.factor * bounds.upper;
    out.value = std::sqrt(out.lower * out.upper);
    out.share = shares(flux);
    return out;
}

} // namespace tepor::detail
