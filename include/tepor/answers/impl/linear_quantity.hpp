#pragma once
// One function per kind of quantity.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/answers/linear_quantity.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/flux/disc.hpp>
#include <tepor/flux/line_cell.hpp>
#include <tepor/flux/loads.hpp>
#include <tepor/mesh/sides.hpp>

namespace tepor::detail {

class QuantityReader {
  public:
    QuantityReader(const Model& model, const Values& values, const ModelProblem& primal, const Quantity& quantity,
                   const double* temperature)
        : model_(model), values_(values), primal_(primal), problem_(primal.problem), mesh_(*primal.mesh),
          quantity_(quantity), temperature_(temperature) {}

    LinearQuantity read() {
        start();
        switch (quantity_.kind()) {
        case Quantity::Kind::mean_in: weigh_region(1.0 / region_measure(), false); break;
        case Quantity::Kind::stored_in: stored(); break;
        case Quantity::Kind::generated_in: generated(); break;
        case Quantity::Kind::mean_on: mean_on(); break;
        case Quantity::Kind::heat_out_through: heat_out(); break;
        case Quantity::Kind::heat_from: heat_from(); break;
        case Quantity::Kind::mean_around: mean_around(); break;
        case Quantity::Kind::at: at(); break;
        case Quantity::Kind::conductance_between: refuse("because it is not linear in the temperature");
        case Quantity::Kind::hottest_in:
        case Quantity::Kind::coldest_in:
        case Quantity::Kind::hottest_on:
        case Quantity::Kind::coldest_on:
            refuse("because an extreme is not linear in the temperature; ask for the temperature at its place, which "
                   "bounds it "
                   "from one side");
        }
        return std::move(out_);
    }

  private:
    [[noreturn]] void refuse(const std::string& why) const {
        throw Error(ErrorCode::not_certifiable, quantity_.label(),
                    text(quantity_.label(), ": no guaranteed bound exists, ", why, "; use estimate"));
    }

    /// The adjoint body: conduction and laws as they are, nothing given.
    void start() {
        FluxProblem& z = out_.adjoint;
        z = problem_;
        std::fill(z.source.begin(), z.source.end(), 0.0);
        std::fill(z.sink_temperature.begin(), z.sink_temperature.end(), 0.0);
        z.spread.clear();
        z.traces.clear();
        for (FluxSide& side : z.sides) side.flux = side.fluid = 0.0, side.trace = -1;
        out_.held.assign(as_size(model_.unknowns - model_.free), 0.0);
        out_.scale = quantity_.sign();
    }

    void constant(double v) {
        out_.constant += v;
        out_.absolute += std::abs(v);
    }

    [[nodiscard]] std::size_t region(const std::string& name) const {
        const Index r = mesh_.find_region(name);
        if (r < 0)
            throw Error(
                ErrorCode::bad_name, name,
                text(quantity_.label(), ": no region \"", name, "\"; there are ", quoted_list(mesh_.region_names)));
        return as_size(r);
    }

    [[nodiscard]] std::size_t face(const std::string& name) const {
        const Index f = mesh_.find_face(name);
        if (f < 0) {
            std::vector<std::string> names;
            for (const MeshFace& known : mesh_.faces) names.push_back(known.name);
            throw Error(ErrorCode::bad_name, name,
                        text(quantity_.label(), ": no face \"", name, "\"; there are ", quoted_list(names)));
        }
        return as_size(f);
    }

    // ---- regions

    /// Volume of the region per unit depth, radian or steradian.
    [[nodiscard]] double region_measure() const {
        const std::size_t r = region(quantity_.first());
        double sum = 0.0;
        for (Index c = 0; c < mesh_.cell_count(); ++c)
            if (as_size(mesh_.region[as_size(c)]) == r) sum += measure(c);
        return sum;
    }

    [[nodiscard]] double measure(Index c) const {
        if (mesh_.dim == 1) {
            double sum = 0.0;
            LineCell(problem_, temperature_, c).points([&](double w, double, double rn) { sum += w * rn; });
            return sum;
        }
        double area = triangle_area(mesh_, c);
        if (mesh_.frame.power() > 0) {
            const Id* node = mesh_.cell(c);
            area *=
                (mesh_.nodes[as_size(node[0])].x + mesh_.nodes[as_size(node[1])].x + mesh_.nodes[as_size(node[2])].x) /
                3.0;
        }
        return area;
    }

    void weigh_region(double weight, bool heat) {
        const std::size_t r = region(quantity_.first());
        for (std::size_t c = 0; c < mesh_.region.size(); ++c)
            if (as_size(mesh_.region[c]) == r) out_.adjoint.source[c] = weight;
        if (heat) out_.scale *= primal_.factor;
    }

    void stored() {
        const RegionModel& model = model_region(region(quantity_.first()));
        if (!model.density.given() || !model.specific_heat.given())
            throw Error(ErrorCode::missing, quantity_.first(),
                        text(quantity_.label(), ": the material has no density or specific heat"));
        if (model.latent.given()) refuse("because of latent heat");
        if (!model.density.uniform() || !model.specific_heat.uniform()) refuse("because the capacity varies");
        weigh_region(model.density.uniform_value(values_.slots.data(), {}) *
                         model.specific_heat.uniform_value(values_.slots.data(), {}),
                     true);
    }

    [[nodiscard]] const RegionModel& model_region(std::size_t r) const { return model_.regions[r]; }

    void generated() {
        const std::size_t r = region(quantity_.first());
        out_.scale *= primal_.factor;
        out_.exact = true;
        for (Index c = 0; c < mesh_.cell_count(); ++c)
            if (as_size(mesh_.region[as_size(c)]) == r) constant(problem_.source[as_size(c)] * measure(c));
        for (const LocalModel& local : model_.locals)
            if (as_size(local.region) == r)
                constant(local.total.uniform_value(values_.slots.data(), {}) / primal_.factor);
    }

    // ---- faces

    /// Area of a cell side per unit depth, radian or steradian.
    [[nodiscard]] double side_measure(CellSide side) const {
        if (mesh_.dim == 1)
            return radius_power(mesh_.frame.power(), mesh_.nodes[as_size(mesh_.cell(side.cell)[side.side])].x);
        double r0 = 1.0, r1 = 1.0;
        const double length = side_length(mesh_, side, r0, r1);
        return 0.5 * (r0 + r1) * length;
    }

    /// Calls act(cell side, listed side or null) for each side of a face.
    template <class Act>
    void each_side(std::size_t f, Act act) {
        for (Id e = primal_.face_side_start[f]; e < primal_.face_side_start[f + 1]; ++e) {
            const Id at = primal_.face_side[as_size(e)];
            if (at >= 0 && problem_.sides[as_size(at)].kind == SideKind::contact)
                refuse(text("because the face \"", mesh_.faces[f].name,
                            "\" lies on a contact (ask for the heat between the regions)"));
            act(primal_.face_cell_side[as_size(e)], at);
        }
    }

    void mean_on() {
        const std::size_t f = face(quantity_.first());
        double area = 0.0;
        each_side(f, [&](CellSide side, Id) { area += side_measure(side); });
        if (!(area > 0.0)) refuse("because the face has no area");
        each_side(f, [&](CellSide side, Id at) {
            if (at < 0) {
                if (problem_.matched->across(side.cell, side.side).cell >= 0)
                    refuse("because the face lies inside the body");
                FluxSide fresh;
                fresh.side = side;
                fresh.flux = -1.0 / area;
                out_.adjoint.sides.push_back(fresh);
            } else if (problem_.sides[as_size(at)].kind == SideKind::fixed) {
                const Id* dof = problem_.dof.data() + as_size(side.cell) * as_size(mesh_.nodes_per_cell);
                constant(temperature_[dof[side.side]] * side_measure(side) / area); // one temperature per held side
            } else {
                out_.adjoint.sides[as_size(at)].flux -= 1.0 / area;
            }
        });
    }

    void heat_out() {
        const std::size_t f = face(quantity_.first());
        out_.scale *= primal_.factor;
        std::vector<char>& own = out_.through;
        own.assign(problem_.sides.size(), 0);
        each_side(f, [&](CellSide side, Id at) {
            if (at < 0) return; // insulated
            own[as_size(at)] = 1;
            const FluxSide& given = problem_.sides[as_size(at)];
            if (given.kind == SideKind::fixed) {
                hold(side);
                return;
            }
            out_.adjoint.sides[as_size(at)].flux -= given.film;
            constant(given.flux * side_measure(side));
            constant(-given.film * given.fluid * side_measure(side));
        });
        // z would have to jump from 1 to 0 where another prescribed face begins
        for (std::size_t i = 0; i < problem_.sides.size(); ++i) {
            if (own[i] || problem_.sides[i].kind != SideKind::fixed || partner_is_own(i, own)) continue;
            const CellSide side = problem_.sides[i].side;
            const Id* dof = problem_.dof.data() + as_size(side.cell) * as_size(mesh_.nodes_per_cell);
            for (const Id v :
                 {side.side, mesh_.dim == 1 || side.side == 2 ? (mesh_.dim == 1 ? side.side : 0) : side.side + 1})
                if (out_.held[as_size(dof[v] - model_.free)] != 0.0) {
                    const Point p = mesh_.nodes[as_size(mesh_.cell(side.cell)[v])];
                    refuse(text("because the face meets another one of prescribed temperature at (", p.x, ", ", p.y,
                                "); ask for a face that holds both"));
                }
        }
    }

    /// The two sides of a held line inside the body carry the same nodes.
    [[nodiscard]] bool partner_is_own(std::size_t i, const std::vector<char>& own) {
        const CellSide other = problem_.matched->across(problem_.sides[i].side.cell, problem_.sides[i].side.side);
        if (other.cell < 0) return false;
        for (std::size_t j = 0; j < own.size(); ++j)
            if (own[j] && problem_.sides[j].side == other) return true;
        return false;
    }

    void hold(CellSide side) {
        std::vector<Id> on(as_size(model_.kernels->side_nodes));
        const CellSide inner{model_.model_cell(side.cell), side.side};
        model_.side_unknowns(inner, on.data());
        for (const Id u : on) out_.held[as_size(u - model_.free)] = 1.0;
    }

    void heat_from() {
        const Id a = as_id(region(quantity_.first())), b = as_id(region(quantity_.second()));
        out_.scale *= primal_.factor;
        const auto region_of = [&](CellSide side) { return mesh_.region[as_size(side.cell)]; };
        Index found = 0;
        for (std::size_t i = 0; i < problem_.sides.size(); ++i) {
            const FluxSide& side = problem_.sides[i];
            if (side.kind != SideKind::contact || region_of(side.side) != a) continue;
            if (region_of(problem_.sides[as_size(side.partner)].side) != b) continue;
            out_.adjoint.sides[i].fluid = 1.0; // the prescribed jump
            out_.adjoint.sides[as_size(side.partner)].fluid = -1.0;
            ++found;
        }
        const SideMap& map = *problem_.matched;
        for (Index s = 0; s < map.count(); ++s) {
            const CellSide first = map.first[as_size(s)], second = map.second[as_size(s)];
            if (second.cell < 0 || std::minmax(region_of(first), region_of(second)) != std::minmax(a, b)) continue;
            if (found-- <= 0)
                refuse(
                    "because the regions touch without a contact (ask for the heat through the faces of one of them)");
        }
        if (found < 0) refuse("because the regions do not touch");
    }

    // ---- places

    void plane_only() const {
        if (mesh_.dim == 1)
            refuse(
                "because in 1D only means and heat flows have one (the temperature at an end is a mean on its face)");
        if (mesh_.frame.power() > 0) refuse("because in r-z only means over regions and faces and heat flows have one");
    }

    static double total(const std::vector<SpreadSource>& sources) {
        double sum = 0.0;
        for (const SpreadSource& s : sources)
            for (int m = 0; m < 6; ++m) sum += (m < 3 ? 1.0 : 2.0) * s.moment[m];
        return sum;
    }

    void mean_around() {
        plane_only();
        out_.adjoint.spread = disc_moments(mesh_, {quantity_.place(), quantity_.radius(), 0, 1.0});
        if (!(std::abs(total(out_.adjoint.spread) - 1.0) <= 1e-9))
            throw Error(ErrorCode::outside, quantity_.label(),
                        text(quantity_.label(), ": the disc of radius ", quantity_.radius(),
                             " m reaches out of the body; move it or make it smaller"));
    }

    static double distance_to(Point p, Point a, Point b) noexcept {
        const Point d = b - a;
        const double t = std::clamp(dot(p - a, d) / dot(d, d), 0.0, 1.0);
        return distance(p, a + t * d);
    }

    /// The mean value property (see Disc), on the largest disc around the place that stays in the material.
    void at() {
        plane_only();
        const Point place = quantity_.place();
        const Location where = quantity_.first().empty()
                                   ? model_.locator().find(place)
                                   : model_.locator().find_in(static_cast<Index>(region(quantity_.first())), place);
        if (!where)
            throw Error(ErrorCode::outside, quantity_.label(),
                        text(quantity_.label(), ": the place lies outside the body"));
        // Cells are located in the user's mesh; the region is that of the cell there, curved or not.
        const Id r = model_.mesh->region[as_size(where.cell)];
        double size = 0.0;
        for (const Point& p : mesh_.nodes) size = std::max(size, distance(p, mesh_.nodes.front()));
        double radius = std::numeric_limits<double>::max();
        bool on_edge = false;
        const SideMap& map = *problem_.matched;
        std::vector<Id> listed(map.first.size(), -1);
        for (std::size_t i = 0; i < problem_.sides.size(); ++i)
            listed[as_size(map.number(problem_.sides[i].side.cell, problem_.sides[i].side.side))] = as_id(i);
        Point edge{};
        for (int pass = 0; pass < 2; ++pass)
            for (std::size_t s = 0; s < map.first.size(); ++s) {
                const CellSide first = map.first[s], second = map.second[s];
                const bool mine = mesh_.region[as_size(first.cell)] == r;
                const bool theirs = second.cell >= 0 && mesh_.region[as_size(second.cell)] == r;
                if (!mine && !theirs) continue;
                if (mine && theirs && listed[s] < 0) continue; // inside the material
                const CellSide side = mine ? first : second;
                const Id* cell = mesh_.cell(side.cell);
                const Point a = mesh_.nodes[as_size(cell[side.side])],
                            b = mesh_.nodes[as_size(cell[side.side == 2 ? 0 : side.side + 1])];
                const double d = distance_to(place, a, b);
                const bool insulated = second.cell < 0 && listed[s] < 0;
                if (pass == 0) {
                    if (insulated && d <= 1e-9 * size) {
                        on_edge = true;
                        edge = b - a;
                    }
                    continue;
                }
                if (on_edge && insulated &&
                    std::abs(cross(b - a, edge)) <= 1e-9 * distance(a, b) * std::sqrt(dot(edge, edge)) &&
                    std::abs(cross(place - a, edge)) <= 1e-9 * size * std::sqrt(dot(edge, edge)))
                    continue; // the straight insulated edge itself: the half disc mirrors the other half
                radius = std::min(radius, d);
            }
        for (const LocalModel& local : model_.locals)
            radius = std::min(radius, distance(local.place, place) - local.radius);
        const std::size_t c = first_cell_of(r);
        if (!problem_.sink.empty() && problem_.sink[c] > 0.0) refuse("because of the side film in its region");
        if (!problem_.stretch.empty()) refuse("because conductivities depend on the direction");
        if (!(radius > 1e-6 * size))
            refuse("because the place does not lie inside one material or on a straight insulated edge");
        const double k = problem_.conductivity[c];
        const Disc disc{place, radius * (1.0 - 1e-12), 2, on_edge ? 2.0 : 1.0};
        out_.adjoint.spread = disc_moments(mesh_, disc);
        if (!(std::abs(total(out_.adjoint.spread) - 1.0) <= 1e-9)) refuse("because the disc around it leaves the body");
        constant(problem_.source[c] * disc.radius * disc.radius / (16.0 * k));
    }

    [[nodiscard]] std::size_t first_cell_of(Id r) const {
        return as_size(std::find(mesh_.region.begin(), mesh_.region.end(), r) - mesh_.region.begin());
    }

    const Model& model_;
    const Values& values_;
    const ModelProblem& primal_;
    const FluxProblem& problem_;
    const MeshData& mesh_;
    const Quantity& quantity_;
    const double* temperature_;
    LinearQuantity out_;
};

TEPOR_INLINE LinearQuantity linear_quantity(const Model& model, const Values& values, const ModelProblem& primal,
                                            const Quantity& quantity, const double* temperature) {
    return QuantityReader(model, values, primal, quantity, temperature).read();
}

} // namespace tepor::detail
