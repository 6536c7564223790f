#pragma once
// Solve, bound, mark, bisect.

#include <algorithm>
#include <chrono>
#include <cmath>
#include <limits>
#include <memory>
#include <tepor/answers/bracket.hpp>
#include <tepor/answers/linear_quantity.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/flux/conductance.hpp>
#include <tepor/flux/equilibrate.hpp>
#include <tepor/flux/flux_load.hpp>
#include <tepor/flux/model_problem.hpp>
#include <tepor/flux/weak_form.hpp>
#include <tepor/mesh/bisect.hpp>
#include <tepor/mesh/refine.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor {
namespace detail {

/// One mesh of a bracket: its model, one factor, and the fields asked for.
class BracketLevel {
  public:
    explicit BracketLevel(Body body)
        : body_(std::move(body)), model_(body_.model()), values_(body_.values()),
          primal_(model_problem(*model_, values_)), engine_(model_) {}

    [[nodiscard]] const Model& model() const noexcept { return *model_; }
    [[nodiscard]] const Values& values() const noexcept { return values_; }
    [[nodiscard]] ModelProblem& primal() noexcept { return primal_; }

    void factor() {
        Pass pass;
        pass.matrix = &engine_.matrix;
        std::vector<double> zero(as_size(model_->unknowns), 0.0);
        pass.T = zero.data();
        assemble(*model_, values_, engine_.work, pass);
        if (pass.fault) raise(pass.fault);
        if (!engine_.factor(Purpose::many_solves))
            throw Error(ErrorCode::singular, "",
                        "bracket: the system has no unique solution; check conductivities and films");
    }

    /// The field of a problem with this body's matrix; `held` are the values of the prescribed unknowns.
    [[nodiscard]] std::vector<double> solve(const FluxProblem& problem, const std::vector<double>& held) {
        const Index all = model_->unknowns, free = model_->free;
        const std::vector<double> load = flux_load(problem, all);
        std::vector<double> field(as_size(all), 0.0), product(as_size(all)), right(as_size(free));
        std::copy(held.begin(), held.end(), field.begin() + free);
        // A second solve for what the first left over brings an iterative or badly scaled one down to rounding.
        for (int round = 0; round < 2; ++round) {
            multiply(engine_.matrix, all, field.data(), product.data());
            double size = 0.0;
            for (Index u = 0; u < free; ++u) {
                right[as_size(u)] = primal_.factor * load[as_size(u)] - product[as_size(u)];
                size += std::abs(right[as_size(u)]);
            }
            if (!engine_.solve(right.data(), 1e-13 * size))
                break; // the residual term of the bound pays for what is left
            for (Index u = 0; u < free; ++u) field[as_size(u)] += right[as_size(u)];
        }
        return field;
    }

  private:
    Body body_;
    std::shared_ptr<const Model> model_;
    Values values_;
    ModelProblem primal_;
    Engine engine_;
};

/// The interval of one pass and the share of each cell in its width.
struct LevelAnswer {
    double lower = 0.0, value = 0.0, upper = 0.0;
    std::vector<double> share;
};

inline std::vector<double> shares(const Equilibrated& flux) {
    std::vector<double> share(flux.squared.size());
    double total = 0.0;
    for (std::size_t c = 0; c < share.size(); ++c) {
        const double eta = std::sqrt(flux.squared[c]) + (flux.lost.empty() ? 0.0 : flux.lost[c]);
        share[c] = eta * eta;
        total += share[c];
    }
    if (total > 0.0)
        for (double& s : share) s /= total;
    return share;
}

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
                model.side_unknowns({model.model_cell[as_size(side.side.cell)], side.side.side}, on.data());
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

inline LevelAnswer answer_linear(BracketLevel& level, const Quantity& quantity) {
    const Model& model = level.model();
    const ModelProblem& primal = level.primal();
    std::vector<double> held(as_size(model.unknowns), 0.0);
    model.prescribe(level.values(), {}, held.data());
    const LinearQuantity q = linear_quantity(model, level.values(), primal, quantity, held.data());
    LevelAnswer out;
    double half_width = 0.0, value = q.constant, absolute = q.absolute;
    if (!q.exact) {
        level.factor();
        held.erase(held.begin(), held.begin() + model.free);
        const std::vector<double> t = level.solve(primal.problem, held), z = level.solve(q.adjoint, q.held);
        const Equilibrated flux_t = equilibrate(primal.problem, t.data()), flux_z = equilibrate(q.adjoint, z.data());
        const PairBound pair = pair_bound(primal.problem, t.data(), flux_t, q.adjoint, z.data(), flux_z);
        const std::vector<double> weights = flux_load(q.adjoint, model.unknowns);
        Summed sum = weak_form(primal.problem, t.data(), z.data());
        for (std::size_t u = 0; u < t.size(); ++u) sum.add(weights[u] * t[u]);
        value += sum.value + pair.correction;
        absolute += sum.absolute + std::abs(pair.correction);
        half_width = pair.half_width;
        out.share = shares(flux_t);
        const std::vector<double> other = shares(flux_z);
        for (std::size_t c = 0; c < other.size(); ++c) out.share[c] += other[c];
    }
    half_width += rounding_unit * absolute;
    const double a = q.scale * (value - half_width), b = q.scale * (value + half_width);
    out.lower = std::min(a, b);
    out.upper = std::max(a, b);
    out.value = q.scale * value;
    return out;
}

/// Cells that may still be halved: down to 1e-12 of the body, where coordinates run out of digits. Refining on at a strong
/// singularity beyond that would leave all other cells as they are.
inline std::vector<Index> refinable(const MeshData& mesh) {
    Point low = mesh.nodes.front(), high = low;
    for (const Point& p : mesh.nodes) {
        low = {std::min(low.x, p.x), std::min(low.y, p.y)};
        high = {std::max(high.x, p.x), std::max(high.y, p.y)};
    }
    const double least = 1.001e-12 * distance(low, high);
    std::vector<Index> cells;
    for (Index c = 0; c < mesh.cell_count(); ++c) {
        const Id* cell = mesh.cell(c);
        if (distance(mesh.nodes[as_size(cell[1])], mesh.nodes[as_size(cell[2])]) > least) cells.push_back(c);
    }
    return cells;
}

/// Of these cells, those of largest share that carry half of their sum (W. Doerfler, SIAM J. Numer. Anal. 33 (1996) 1106).
inline std::vector<Index> bulk(std::vector<Index> cells, const std::vector<double>& share) {
    std::sort(cells.begin(), cells.end(), [&](Index a, Index b) {
        return share[as_size(a)] != share[as_size(b)] ? share[as_size(a)] > share[as_size(b)] : a < b;
    });
    double half = 0.0, sum = 0.0;
    for (const Index c : cells) half += 0.5 * share[as_size(c)];
    std::size_t count = 0;
    while (count < cells.size() && sum < half) sum += share[as_size(cells[count++])];
    cells.resize(count);
    return cells;
}

/// A copy with straight sides, ready to be bisected.
inline std::shared_ptr<MeshData> straightened(const MeshData& mesh, const CellKind& kind) {
    auto out = std::make_shared<MeshData>(mesh);
    for (const CurvedSide& curved : out->curved) {
        const Id* cell = out->cell(curved.side.cell);
        const Id s = curved.side.side;
        if (out->order == 2)
            out->nodes[as_size(cell[3 + s])] =
                0.5 * (out->nodes[as_size(cell[s])] + out->nodes[as_size(cell[s == 2 ? 0 : s + 1])]);
    }
    out->curved.clear();
    longest_side_first(*out, kind);
    return out;
}

/// The next mesh: in 2D the cells that carry half of the width are bisected, in 1D all are.
inline std::shared_ptr<const MeshData> finer(const MeshData& mesh, const CellKind& kind,
                                             const std::vector<double>& share) {
    auto fine = std::make_shared<MeshData>();
    fine->dim = mesh.dim, fine->order = mesh.order, fine->nodes_per_cell = mesh.nodes_per_cell;
    fine->sides_per_cell = mesh.sides_per_cell, fine->shape = mesh.shape, fine->frame = mesh.frame;
    if (mesh.dim == 1) {
        refine_uniformly(mesh, kind, *fine);
    } else {
        Lineage lineage;
        Index skipped = 0;
        bisect(mesh, kind, bulk(refinable(mesh), share), *fine, lineage, skipped);
    }
    return fine;
}

inline void validate(const BracketOptions& options) {
    const auto check = [](const char* name, double value, bool fine, const char* rule) {
        if (!fine)
            throw Error(ErrorCode::bad_value, name, text("BracketOptions: ", name, " = ", value, ", expected ", rule));
    };
    check("relative_width", options.relative_width, options.relative_width >= 0.0, "a number >= 0");
    check("absolute_width", options.absolute_width, options.absolute_width >= 0.0, "a number >= 0");
    check("max_unknowns", as_double(options.max_unknowns), options.max_unknowns > 0, "at least 1");
    check("max_seconds", options.max_seconds, options.max_seconds > 0.0, "a number > 0");
}

} // namespace detail

TEPOR_INLINE Bracket bracket(const Body& body, const Quantity& quantity, const BracketOptions& options) {
    using namespace detail;
    using Clock = std::chrono::steady_clock;
    validate(options);
    const double relative =
        options.relative_width == 0.0 && options.absolute_width == 0.0 ? 0.01 : options.relative_width;
    const auto started = Clock::now();
    const auto since = [](Clock::time_point then) {
        return std::chrono::duration<double>(Clock::now() - then).count();
    };
    std::shared_ptr<const MeshData> mesh = body.shared_mesh();
    Bracket out;
    if (!mesh->curved.empty()) out.remark = "of the polygon: curved sides are replaced by their chords";
    if (mesh->shape == CellShape::triangle && mesh->order <= 2) mesh = straightened(*mesh, *body.model()->kind);
    out.lower = -std::numeric_limits<double>::infinity();
    out.upper = std::numeric_limits<double>::infinity();
    for (;;) {
        const auto began = Clock::now();
        BracketLevel level(body.on_mesh(mesh));
        if (out.passes.empty()) static_cast<void>(steady(body)); // says what is missing, in the words of steady
        LevelAnswer answer;
        if (quantity.kind() == Quantity::Kind::conductance_between) {
            level.factor();
            answer = answer_conductance(level, quantity);
        } else {
            answer = answer_linear(level, quantity);
        }
        out.cells = mesh->cell_count();
        out.unknowns = level.model().unknowns;
        // Every interval is guaranteed, so their intersection is.
        out.lower = std::max(out.lower, answer.lower);
        out.upper = std::min(out.upper, answer.upper);
        out.value = std::clamp(answer.value, out.lower, out.upper);
        out.passes.push_back({out.cells, out.unknowns, answer.lower, answer.upper, since(began)});
        out.reached = out.width() <= std::max(relative * std::abs(out.value), options.absolute_width);
        if (out.reached || answer.share.empty()) break;
        if (since(started) + 1.5 * out.passes.back().seconds > options.max_seconds) break;
        const Index before = mesh->cell_count();
        mesh = finer(*mesh, *level.model().kind, answer.share);
        if (mesh->cell_count() == before)
            break; // every cell is as small as coordinates allow, or nothing is left to gain
        // cells to unknowns as in the last pass
        if (as_double(mesh->cell_count()) * as_double(out.unknowns) >
            as_double(options.max_unknowns) * as_double(out.cells))
            break;
    }
    return out;
}

} // namespace tepor
