#pragma once
// Reads the terms of a model into arrays; every term that cannot be bounded is named.

#include <algorithm>
#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/flux/disc.hpp>
#include <tepor/flux/model_problem.hpp>
#include <tepor/mesh/sides.hpp>

namespace tepor {
namespace detail {

class ProblemReader {
  public:
    ProblemReader(const Model& model, const Values& values, RadiatingFaces radiating)
        : model_(model), values_(values), mesh_(*model.mesh), radiating_(radiating) {}

    ModelProblem read() {
        shape();
        geometry();
        out_.problem.matched = std::make_shared<const SideMap>(match_sides(*out_.mesh));
        regions();
        faces();
        contacts();
        held_lines();
        corners();
        locals();
        if (out_.radiating.any()) range();
        return std::move(out_);
    }

  private:
    [[noreturn]] static void refuse(const std::string& term, const std::string& why) {
        throw Error(ErrorCode::not_certifiable, term,
                    text(term, ": no guaranteed bound exists, ", why, "; use estimate"));
    }

    /// A coefficient that has one value everywhere.
    [[nodiscard]] double uniform(const Coefficient& c) const {
        if (c.depends_on_temperature()) refuse(c.label(), "because it depends on the temperature");
        if (!c.uniform()) refuse(c.label(), "because it depends on place or is a law of one's own");
        return c.uniform_value(values_.slots.data(), {});
    }

    void shape() const {
        if (mesh_.shape == CellShape::quadrilateral)
            refuse("mesh", "because its cells are quadrilaterals (triangles, which tiles can make too, have one)");
        if (mesh_.dim == 2 && mesh_.order > 2)
            refuse("mesh", "because its triangles are of order 3 (orders 1 and 2 have one)");
        if (mesh_.dim == 2 && mesh_.frame.power() > 0 && mesh_.order > 1)
            refuse("mesh", "because in r-z only triangles of order 1 have one");
        if (model_.kernels->exact) refuse("mesh", "because exact segments have no error at the nodes to bound");
        if (model_.kernels->nodes != mesh_.nodes_per_cell) refuse("mesh", "because of its own element type");
    }

    void geometry() {
        out_.factor = mesh_.frame.factor(mesh_.dim);
        out_.polygon = !mesh_.curved.empty();
        if (!model_.moving && (!out_.polygon || mesh_.order == 1)) {
            out_.mesh = model_.mesh;
        } else {
            auto copy = std::make_shared<MeshData>(mesh_);
            if (model_.moving)
                for (std::size_t u = 0; u < values_.places.size(); ++u)
                    copy->nodes[as_size(model_.node_of[u])] = values_.places[u];
            if (out_.polygon) {
                for (const CurvedSide& curved : copy->curved) {
                    const Id* cell = copy->cell(curved.side.cell);
                    const Id s = curved.side.side;
                    copy->nodes[as_size(cell[3 + s])] =
                        0.5 * (copy->nodes[as_size(cell[s])] + copy->nodes[as_size(cell[s == 2 ? 0 : s + 1])]);
                }
                copy->curved.clear();
            }
            out_.mesh = std::move(copy);
        }
        FluxProblem& p = out_.problem;
        p.mesh = out_.mesh.get();
        const std::size_t cells = as_size(mesh_.cell_count());
        p.dof.resize(mesh_.cells.size());
        for (std::size_t c = 0; c < cells; ++c)
            std::copy_n(model_.cell(model_.model_cell(static_cast<Index>(c))), mesh_.nodes_per_cell,
                        p.dof.data() + c * as_size(mesh_.nodes_per_cell));
        p.conductivity.resize(cells);
        p.source.assign(cells, 0.0);
    }

    void regions() {
        FluxProblem& p = out_.problem;
        for (std::size_t r = 0; r < model_.regions.size(); ++r) {
            const RegionModel& region = model_.regions[r];
            double k[3] = {};
            for (int i = 0; i < region.conductivities; ++i) k[i] = uniform(region.k[i]);
            double source = 0.0, sink = 0.0, sink_heat = 0.0;
            for (const VolumeTerm& term : region.volume) {
                const double amount = uniform(term.amount);
                if (term.kind == VolumeTerm::Kind::per_volume) source += amount;
                if (term.kind == VolumeTerm::Kind::total) source += amount / values_.region_volume[r];
                if (term.kind != VolumeTerm::Kind::side_film) continue;
                if (mesh_.dim == 2 && mesh_.frame.power() > 0)
                    refuse(term.amount.label(), "because it is a side film in r-z");
                const double extent = uniform(term.extent);
                const double c = amount * (term.by_thickness ? term.wet / extent : term.wet * extent);
                sink += c;
                sink_heat += c * uniform(term.fluid);
            }
            for (Id m = region.first_cell; m < region.last_cell; ++m) {
                const std::size_t c = as_size(model_.user_cell[as_size(m)]);
                p.source[c] = source;
                if (sink > 0.0) {
                    if (p.sink.empty()) {
                        p.sink.assign(p.source.size(), 0.0);
                        p.sink_temperature.assign(p.source.size(), 0.0);
                    }
                    p.sink[c] = sink;
                    p.sink_temperature[c] = sink_heat / sink;
                }
                if (region.conductivities <= 1)
                    p.conductivity[c] = k[0];
                else
                    tensor(c, k[0], region.conductivities == 3 ? k[2] : 0.0, k[1]);
            }
        }
        if (!p.stretch.empty()) // cells of other regions are isotropic
            for (std::size_t c = 0; c < p.conductivity.size(); ++c)
                if (p.stretch[3 * c] == 0.0)
                    stretch_of(p.conductivity[c], 0.0, p.conductivity[c], p.stretch.data() + 3 * c);
    }

    void tensor(std::size_t c, double xx, double xy, double yy) {
        FluxProblem& p = out_.problem;
        if (mesh_.frame.power() > 0) refuse("conductivity", "because it is a tensor in r-z");
        if (p.stretch.empty()) p.stretch.assign(3 * p.conductivity.size(), 0.0);
        p.conductivity[c] = std::sqrt(xx * yy - xy * xy);
        stretch_of(xx, xy, yy, p.stretch.data() + 3 * c);
    }

    Id& entry(CellSide side) {
        if (entry_.empty()) entry_.assign(as_size(mesh_.cell_count() * mesh_.sides_per_cell), -1);
        return entry_[as_size(side.cell * mesh_.sides_per_cell + side.side)];
    }

    FluxSide& listed(CellSide side, SideKind kind) {
        Id& at = entry(side);
        if (at < 0) {
            at = as_id(out_.problem.sides.size());
            FluxSide fresh;
            fresh.side = side;
            fresh.kind = kind;
            out_.problem.sides.push_back(fresh);
        }
        return out_.problem.sides[as_size(at)];
    }

    [[nodiscard]] CellSide in_user_numbering(CellSide side) const {
        return {model_.user_cell[as_size(side.cell)], side.side};
    }

    void faces() {
        std::vector<double> film_heat; // sum of coefficient times fluid, by entry of sides
        for (const FaceModel& face : model_.faces) {
            if (face.fixed.given()) static_cast<void>(uniform(face.fixed));
            for (const FaceTerm& term : face.terms) {
                if (term.kind == FaceTerm::Kind::radiation) {
                    radiates(face, term);
                    continue;
                }
                const double amount = uniform(term.amount);
                const double fluid = term.kind == FaceTerm::Kind::film ? uniform(term.outside) : 0.0;
                if (term.kind == FaceTerm::Kind::flux && amount != 0.0) given_flux_ = term.amount.label();
                for (const CellSide& s : face.sides.side) {
                    FluxSide& side = listed(in_user_numbering(s), SideKind::open);
                    if (term.kind == FaceTerm::Kind::flux) {
                        side.flux += term.sign * amount;
                    } else if (side.film + amount > 0.0) {
                        side.fluid = (side.film * side.fluid + amount * fluid) / (side.film + amount);
                        side.film += amount;
                    }
                }
            }
        }
        for (const FaceModel& face : model_.faces)
            if (face.fixed.given())
                for (const CellSide& s : face.sides.side) {
                    FluxSide& side = listed(in_user_numbering(s), SideKind::fixed);
                    side = FluxSide{side.side, SideKind::fixed, -1, -1, 0.0, 0.0,
                                    0.0}; // what else acts there does not reach the body
                }
        out_.face_side_start.push_back(0);
        for (const FaceModel& face : model_.faces) {
            for (const CellSide& s : face.sides.side) {
                const CellSide user = in_user_numbering(s);
                out_.face_side.push_back(entry(user));
                out_.face_cell_side.push_back(user);
            }
            out_.face_side_start.push_back(as_id(out_.face_side.size()));
        }
    }

    void radiates(const FaceModel& face, const FaceTerm& term) {
        if (radiating_ == RadiatingFaces::refuse)
            refuse(term.amount.label(), "because radiation goes with the fourth power");
        if (mesh_.dim == 2 && mesh_.frame.power() > 0) refuse(term.amount.label(), "because it is radiation in r-z");
        Radiating& all = out_.radiating;
        all.offset = model_.absolute_offset();
        const double strength = stefan_boltzmann * uniform(term.amount);
        const double outside = uniform(term.outside) + all.offset;
        if (!(strength > 0.0)) return;
        surroundings_.push_back(outside);
        const double given = strength * outside * outside * outside * outside;
        for (const CellSide& s : face.sides.side) {
            const CellSide user = in_user_numbering(s);
            static_cast<void>(listed(user, SideKind::open));
            const Id at = entry(user);
            if (radiating_at_.size() <= as_size(at)) radiating_at_.resize(as_size(at) + 1, -1);
            Id& place = radiating_at_[as_size(at)];
            if (place < 0) {
                place = as_id(all.sides.size());
                all.sides.push_back({at, 0.0, 0.0});
            }
            all.sides[as_size(place)].strength += strength;
            all.sides[as_size(place)].given += given;
        }
    }

    /// The range of the exact temperature, and that nothing drives it out of what stands around.
    void range() {
        Radiating& all = out_.radiating;
        all.sides.erase(std::remove_if(all.sides.begin(), all.sides.end(),
                                       [&](const RadiatingSide& r) {
                                           return out_.problem.sides[as_size(r.side)].kind != SideKind::open;
                                       }),
                        all.sides.end());
        if (!all.any()) return;
        const auto unknown = [&](const std::string& term) {
            refuse(term,
                   "because the body radiates as well, and heat given leaves open which temperatures its faces can "
                   "reach");
        };
        for (std::size_t c = 0; c < out_.problem.source.size(); ++c)
            if (out_.problem.source[c] != 0.0)
                unknown(text("generation in \"", mesh_.region_names[as_size(mesh_.region[c])], "\""));
        if (!out_.problem.spread.empty()) unknown(model_.locals.front().total.label());
        if (!given_flux_.empty()) unknown(given_flux_);
        std::vector<double> outside = surroundings_;
        for (const FluxSide& side : out_.problem.sides)
            if (side.kind == SideKind::open && side.film > 0.0) outside.push_back(side.fluid + all.offset);
        for (std::size_t c = 0; c < out_.problem.sink.size(); ++c)
            if (out_.problem.sink[c] > 0.0) outside.push_back(out_.problem.sink_temperature[c] + all.offset);
        for (const FaceModel& face : model_.faces)
            if (face.fixed.given()) outside.push_back(uniform(face.fixed) + all.offset);
        all.coldest = *std::min_element(outside.begin(), outside.end());
        all.hottest = *std::max_element(outside.begin(), outside.end());
    }

    void contacts() {
        for (const ContactModel& contact : model_.contacts) {
            const double amount = uniform(contact.amount);
            const double conductance = contact.resistance ? 1.0 / amount : amount;
            if (!(conductance > 0.0))
                refuse(contact.amount.label(),
                       "because a conductance of zero parts the body (leave the regions apart)");
            for (std::size_t i = 0; i < contact.first.side.size(); ++i) {
                const Id at = as_id(out_.problem.sides.size());
                for (const auto& [list, partner] :
                     {std::pair{&contact.first, at + 1}, std::pair{&contact.second, at}}) {
                    const CellSide side = in_user_numbering(list->side[i]);
                    if (entry(side) >= 0)
                        refuse(contact.amount.label(), "because a face condition acts at the same place");
                    entry(side) = as_id(out_.problem.sides.size());
                    out_.problem.sides.push_back({side, SideKind::contact, partner, -1, 0.0, conductance, 0.0});
                }
            }
        }
    }

    /// A line inside the body that is held at a temperature lets heat out of the cells on both of its sides.
    void held_lines() {
        bool any = false;
        for (const FluxSide& side : out_.problem.sides) any = any || side.kind == SideKind::fixed;
        if (!any) return;
        const SideMap& map = *out_.problem.matched;
        const std::size_t count = out_.problem.sides.size();
        for (std::size_t i = 0; i < count; ++i) {
            if (out_.problem.sides[i].kind != SideKind::fixed) continue;
            const CellSide other = map.across(out_.problem.sides[i].side.cell, out_.problem.sides[i].side.side);
            if (other.cell >= 0 && entry(other) < 0) listed(other, SideKind::fixed);
        }
    }

    /// Two temperatures at one node stand for an infinite flow between their faces.
    void corners() const {
        for (std::size_t j = 0; j + 1 < model_.fixed_start.size(); ++j)
            for (Id i = model_.fixed_start[j] + 1; i < model_.fixed_start[j + 1]; ++i) {
                const FaceModel& first = model_.faces[as_size(model_.fixed_face[as_size(model_.fixed_start[j])])];
                const FaceModel& other = model_.faces[as_size(model_.fixed_face[as_size(i)])];
                if (uniform(first.fixed) != uniform(other.fixed)) {
                    const Point p = model_.places_of(values_)[model_.free + static_cast<Index>(j)];
                    refuse(text("faces \"", first.name, "\" and \"", other.name, "\""),
                           text("because their temperatures differ where they meet, at (", p.x, ", ", p.y, ")"));
                }
            }
    }

    void locals() {
        for (const LocalModel& local : model_.locals) {
            const double total = uniform(local.total);
            if (mesh_.dim == 1)
                refuse(local.total.label(), "because local heat in 1D acts at one place (make it a thin layer)");
            if (mesh_.frame.power() > 0) refuse(local.total.label(), "because it is local heat in r-z");
            const auto spot = disc_moments(*out_.mesh, {local.place, local.radius, 0, total / out_.factor});
            double sum = 0.0;
            for (const SpreadSource& s : spot)
                for (int m = 0; m < 6; ++m) sum += (m < 3 ? 1.0 : 2.0) * s.moment[m];
            if (std::abs(sum - total / out_.factor) > 1e-9 * std::abs(total / out_.factor))
                refuse(local.total.label(), "because its disc reaches out of the body");
            merge_spread(out_.problem.spread, spot);
        }
    }

    const Model& model_;
    const Values& values_;
    const MeshData& mesh_;
    RadiatingFaces radiating_;
    std::vector<double> surroundings_; ///< of radiating faces, absolute [K]
    std::vector<Id> radiating_at_;     ///< position in Radiating::sides of each entry of sides, -1: none
    std::string given_flux_;           ///< a flux that is not zero
    ModelProblem out_;
    std::vector<Id> entry_;
};

} // namespace detail

TEPOR_INLINE ModelProblem model_problem(const Model& model, const Values& values, RadiatingFaces radiating) {
    return detail::ProblemReader(model, values, radiating).read();
}

} // namespace tepor
