#pragma once
// Quantities compiled and evaluated.

#include <algorithm>
#include <cmath>
#include <tepor/base/text.hpp>
#include <tepor/body/gather.hpp>
#include <tepor/body/split.hpp>
#include <tepor/field/functional.hpp>
#include <tepor/field/impl/edge_flux.hpp>
#include <tepor/field/impl/inner_place.hpp>
#include <tepor/field/impl/stored.hpp>

namespace tepor {

namespace detail {

class QuantityCompiler {
  public:
    QuantityCompiler(const Model& model, const Values& values, const Quantity& quantity)
        : model_(model), values_(values), quantity_(quantity) {
        out_.kind = quantity.kind();
    }

    Functional run() {
        using Kind = Quantity::Kind;
        switch (quantity_.kind()) {
        case Kind::at: at(); break;
        case Kind::mean_in: mean_in(); break;
        case Kind::mean_on: mean_on(); break;
        case Kind::mean_around: mean_around(); break;
        case Kind::hottest_in:
        case Kind::coldest_in:
            out_.extreme = true;
            out_.direction = quantity_.kind() == Kind::hottest_in ? 1.0 : -1.0;
            out_.region = region(quantity_.first());
            break;
        case Kind::hottest_on:
        case Kind::coldest_on:
            out_.extreme = true;
            out_.direction = quantity_.kind() == Kind::hottest_on ? 1.0 : -1.0;
            out_.face = face(quantity_.first());
            break;
        case Kind::heat_out_through: heat_out(); break;
        case Kind::heat_from: heat_from(); break;
        case Kind::generated_in: generated_in(); break;
        case Kind::stored_in: stored_in(); break;
        case Kind::conductance_between:
            throw Error(ErrorCode::not_supported, quantity_.label(),
                        text(quantity_.label(), ": ask bracket for a conductance"));
        }
        return std::move(out_);
    }

  private:
    [[nodiscard]] Id region(const std::string& name) const {
        const Index r = model_.mesh->find_region(name);
        if (r < 0)
            throw Error(ErrorCode::bad_name, name,
                        text(quantity_.label(), ": there is no region \"", name, "\"; the regions are ",
                             quoted_list(model_.mesh->region_names)));
        return as_id(r);
    }
    [[nodiscard]] Id face(const std::string& name) const {
        const Index f = model_.mesh->find_face(name);
        if (f < 0) {
            std::vector<std::string> names;
            for (const MeshFace& known : model_.mesh->faces) names.push_back(known.name);
            throw Error(
                ErrorCode::bad_name, name,
                text(quantity_.label(), ": there is no face \"", name, "\"; the faces are ", quoted_list(names)));
        }
        return as_id(f);
    }

    void at() {
        const Id in = quantity_.first().empty() ? -1 : region(quantity_.first());
        const ModelPlace place = locate(model_, values_, quantity_.place(), in);
        if (model_.kernels->exact) {
            out_.inner.push_back({place, 1.0});
            return;
        }
        double shape[max_cell_nodes];
        (void)shapes_at(model_, values_, place, shape, nullptr, nullptr);
        for (int i = 0; i < model_.kernels->nodes; ++i)
            if (shape[i] != 0.0) out_.temperature.add(model_.cell(place.cell)[i], shape[i]);
    }

    /// Row of the integral of T times a weight over cells, and the integral of the weight, by the kernels' own rule.
    template <class Weight>
    double integrate_cells(Id first, Id last, Weight weight, std::vector<double>& row) {
        const CellKernels& kernel = *model_.kernels;
        Workspace work = kernel.workspace();
        CellBlock& block = work.cells;
        block.T = nullptr;
        const Point* place = model_.places_of(values_);
        Id ids[block_width];
        double total = 0.0;
        for (Id c = first; c < last; c += block_width) {
            block.count = gather_cells(model_, place, nullptr, nullptr, c, last, block, ids);
            kernel.open(block);
            for (int q = 0; q < kernel.points; ++q) {
                const double* shape = kernel.shape_at(q);
                for (int b = 0; b < block.count; ++b) {
                    const int at = q * block_width + b;
                    const double w = block.weight[at] * weight(Point{block.point_x[at], block.point_y[at]});
                    if (w == 0.0) continue;
                    total += w;
                    for (int i = 0; i < kernel.nodes; ++i) row[as_size(model_.cell(c + b)[i])] += w * shape[i];
                }
            }
        }
        return total;
    }

    [[nodiscard]] double volume_of(const RegionModel& r) const {
        const CellKernels& kernel = *model_.kernels;
        Workspace work = kernel.workspace();
        work.cells.T = nullptr;
        Id ids[block_width];
        double total = 0.0;
        for (Id c = r.first_cell; c < r.last_cell; c += block_width) {
            work.cells.count =
                gather_cells(model_, model_.places_of(values_), nullptr, nullptr, c, r.last_cell, work.cells, ids);
            kernel.open(work.cells);
            for (int q = 0; q < kernel.points; ++q)
                for (int b = 0; b < work.cells.count; ++b) total += work.cells.weight[q * block_width + b];
        }
        return total;
    }

    void keep_row(const std::vector<double>& row, double scale) {
        for (std::size_t u = 0; u < row.size(); ++u)
            if (row[u] != 0.0) out_.temperature.add(as_id(u), scale * row[u]);
    }

    void mean_in() {
        const Id id = region(quantity_.first());
        const RegionModel& r = model_.regions[as_size(id)];
        if (model_.kernels->exact) {
            out_.contents.push_back({id, 1.0 / volume_of(r)});
            return;
        }
        std::vector<double> row(as_size(model_.unknowns), 0.0);
        const double total = integrate_cells(
            r.first_cell, r.last_cell, [](Point) { return 1.0; }, row);
        keep_row(row, 1.0 / total);
    }

    /// The weight 3 / (pi rho^2) (1 - d^2 / rho^2)^2 of the certified point temperature, normalised by its own integral here.
    void mean_around() {
        if (model_.mesh->dim != 2)
            throw Error(ErrorCode::wrong_dimension, quantity_.label(),
                        text(quantity_.label(), ": a disc needs a 2D body; ask at(x) in 1D"));
        const Point centre = quantity_.place();
        const double rho = quantity_.radius();
        if (!(rho > 0.0))
            throw Error(ErrorCode::bad_value, quantity_.label(),
                        text(quantity_.label(), ": radius = ", rho, " m, expected > 0"));
        (void)locate(model_, values_, centre, -1);
        std::vector<double> row(as_size(model_.unknowns), 0.0);
        const auto weight = [&](Point p) {
            const double s =
                1.0 - ((p.x - centre.x) * (p.x - centre.x) + (p.y - centre.y) * (p.y - centre.y)) / (rho * rho);
            return s > 0.0 ? s * s : 0.0;
        };
        const double total = integrate_cells(0, as_id(model_.user_cell.size()), weight, row);
        if (!(total > 0.0))
            throw Error(ErrorCode::bad_value, quantity_.label(),
                        text(quantity_.label(), ": radius ", rho,
                             " m is smaller than the cells there; refine the mesh or ask at(place)"));
        keep_row(row, 1.0 / total);
    }

    void mean_on() {
        const SideList& sides = model_.faces[as_size(face(quantity_.first()))].sides;
        const CellKernels& kernel = *model_.kernels;
        Workspace work = kernel.workspace();
        SideBlock& block = work.sides;
        block.T = nullptr;
        Id ids[block_width];
        std::vector<double> row(as_size(model_.unknowns), 0.0);
        double total = 0.0;
        for (Index s = 0; s < sides.count(); s += block_width) {
            block.count = gather_sides(model_, model_.places_of(values_), nullptr, nullptr, sides, s, block, ids);
            kernel.open_side(block, false);
            for (int q = 0; q < kernel.side_points; ++q) {
                for (int b = 0; b < block.count; ++b) {
                    const double w = block.weight[q * block_width + b];
                    if (w == 0.0) continue; // also the padding of shorter rules, which has no shape functions
                    const double* shape = kernel.side_shape_at(q, false);
                    total += w;
                    for (int i = 0; i < kernel.side_nodes; ++i)
                        row[as_size(sides.unknowns[as_size((s + b) * kernel.side_nodes + i)])] += w * shape[i];
                }
            }
        }
        keep_row(row, 1.0 / total);
    }

    void generated_in() {
        const Id r = region(quantity_.first());
        Functional::Heat heat;
        // -(sum of the residual) of what acts per volume: conduction adds nothing to a sum over all unknowns of the region
        heat.part.regions.push_back(r);
        for (std::size_t l = 0; l < model_.locals.size(); ++l)
            if (model_.locals[l].region == r) heat.part.locals.push_back(as_id(l));
        for (const VolumeTerm& term : model_.regions[as_size(r)].volume)
            if (term.kind == VolumeTerm::Kind::side_film)
                throw Error(ErrorCode::not_supported, quantity_.first(),
                            text(quantity_.label(),
                                 ": the region also has a SideFilm; read the balance, which keeps the two apart"));
        std::vector<unsigned char> seen(as_size(model_.unknowns), 0);
        const RegionModel& region_model = model_.regions[as_size(r)];
        for (Id c = region_model.first_cell; c < region_model.last_cell; ++c)
            for (int i = 0; i < model_.kernels->nodes; ++i) seen[as_size(model_.cell(c)[i])] = 1;
        for (std::size_t u = 0; u < seen.size(); ++u)
            if (seen[u]) heat.weights.add(as_id(u), -1.0);
        out_.heats.push_back(std::move(heat));
    }

    void stored_in() {
        const Id r = region(quantity_.first());
        const Enthalpy enthalpy(model_.regions[as_size(r)], values_);
        if (enthalpy.latent() || !enthalpy.constant()) {
            out_.stored = r;
            return;
        }
        std::vector<double> row(as_size(model_.unknowns), 0.0);
        Workspace work = model_.kernels->workspace();
        std::vector<double> T(as_size(model_.unknowns), 0.0);
        (void)sensible_heat(model_, values_, work, enthalpy, as_size(r), T.data(), row.data());
        keep_row(row, 1.0);
    }

    void heat_out();
    void share_reactions(Id of_face);
    void heat_from();

    const Model& model_;
    const Values& values_;
    const Quantity& quantity_;
    Functional out_;
};

/// The sides of a face that are also sides of another.
inline SideList common_sides(const SideList& of, const SideList& in, int side_nodes) {
    const auto before = [](CellSide a, CellSide b) { return a.cell != b.cell ? a.cell < b.cell : a.side < b.side; };
    std::vector<CellSide> sorted = in.side;
    std::sort(sorted.begin(), sorted.end(), before);
    SideList common;
    for (Index s = 0; s < of.count(); ++s) {
        if (!std::binary_search(sorted.begin(), sorted.end(), of.side[as_size(s)], before)) continue;
        common.side.push_back(of.side[as_size(s)]);
        for (int j = 0; j < side_nodes; ++j) common.unknowns.push_back(of.unknowns[as_size(s * side_nodes + j)]);
    }
    return common;
}

inline void QuantityCompiler::heat_out() {
    const Id f = face(quantity_.first());
    const SideList& sides = model_.faces[as_size(f)].sides;
    if (sides.side.empty())
        throw Error(ErrorCode::bad_name, quantity_.first(),
                    text(quantity_.label(), ": the face \"", quantity_.first(), "\" has no sides"));
    Functional::Heat heat;
    std::vector<Id> touched;
    for (std::size_t g = 0; g < model_.faces.size(); ++g) {
        if (model_.faces[g].terms.empty()) continue;
        SideList common =
            g == as_size(f) ? sides : common_sides(model_.faces[g].sides, sides, model_.kernels->side_nodes);
        if (common.side.empty()) continue;
        touched.insert(touched.end(), common.unknowns.begin(), common.unknowns.end());
        heat.part.faces.push_back({as_id(g), std::move(common)});
    }
    std::sort(touched.begin(), touched.end());
    touched.erase(std::unique(touched.begin(), touched.end()), touched.end());
    for (const Id u : touched) heat.weights.add(u, quantity_.sign());
    if (!heat.part.faces.empty()) out_.heats.push_back(std::move(heat));
    share_reactions(f);
}

/// Reactions of prescribed unknowns. Where only part of the prescribed sides at an unknown belong to the face, it gets the
/// flux of its own sides there plus its share of what is left to the reaction.
inline void QuantityCompiler::share_reactions(Id of_face) {
    const int m = model_.kernels->side_nodes;
    const auto before = [](CellSide a, CellSide b) { return a.cell != b.cell ? a.cell < b.cell : a.side < b.side; };
    std::vector<CellSide> own = model_.faces[as_size(of_face)].sides.side;
    std::sort(own.begin(), own.end(), before);
    struct Incidence {
        Id unknown;
        CellSide side;
        int node;
        Id face;
        bool own;
    };
    std::vector<Incidence> at;
    for (std::size_t g = 0; g < model_.faces.size(); ++g) {
        if (!model_.faces[g].fixed.given()) continue;
        const SideList& list = model_.faces[g].sides;
        for (Index s = 0; s < list.count(); ++s)
            for (int j = 0; j < m; ++j)
                at.push_back({list.unknowns[as_size(s * m + j)], list.side[as_size(s)], j, as_id(g),
                              std::binary_search(own.begin(), own.end(), list.side[as_size(s)], before)});
    }
    std::sort(at.begin(), at.end(), [](const Incidence& a, const Incidence& b) { return a.unknown < b.unknown; });
    const Point* place = model_.places_of(values_);
    for (std::size_t i = 0; i < at.size();) {
        std::size_t end = i;
        int mine = 0;
        while (end < at.size() && at[end].unknown == at[i].unknown) mine += at[end++].own ? 1 : 0;
        const auto all = static_cast<int>(end - i);
        const Id u = at[i].unknown;
        if (mine > 0) {
            const double part = static_cast<double>(mine) / all;
            out_.reaction.add(u, -quantity_.sign() * part);
            if (mine < all)
                for (std::size_t e = i; e < end; ++e)
                    out_.edges.push_back({at[e].side, at[e].node, quantity_.sign() * (at[e].own ? 1.0 - part : -part)});
            // two temperatures at one corner: the flow through each of the two faces has no finite value
            double first = 0.0;
            for (std::size_t e = i; e < end && mine < all; ++e) {
                double value = 0.0;
                const double cold = 0.0;
                const Points where{1, &cold, nullptr, &place[u].x, &place[u].y};
                if (Fault fault = model_.faces[as_size(at[e].face)].fixed.evaluate(values_.slots.data(), {}, where,
                                                                                   &value, nullptr))
                    raise(fault);
                if (e == i) first = value;
                // a difference within 1e-9 is rounding of the two descriptions, and what it drives is nothing
                if (std::abs(value - first) > 1e-9 * (1.0 + std::abs(first))) out_.unbounded = place[u];
            }
        }
        i = end;
    }
}

inline void QuantityCompiler::heat_from() {
    const Id a = region(quantity_.first());
    const Id b = region(quantity_.second());
    if (a == b)
        throw Error(ErrorCode::bad_name, quantity_.first(), text(quantity_.label(), ": name two different regions"));
    bool any = false;
    for (std::size_t c = 0; c < model_.contacts.size(); ++c) {
        const ContactModel& contact = model_.contacts[c];
        const bool forward = contact.first_region == a && contact.second_region == b;
        if (!forward && !(contact.first_region == b && contact.second_region == a)) continue;
        any = true;
        Functional::Heat heat;
        heat.part.contacts.push_back(as_id(c));
        // the jump leaves the first side: weigh its rows, those shared with the second side cancel by themselves
        std::vector<Id> rows = contact.first.unknowns;
        std::sort(rows.begin(), rows.end());
        rows.erase(std::unique(rows.begin(), rows.end()), rows.end());
        std::vector<Id> other = contact.second.unknowns;
        std::sort(other.begin(), other.end());
        for (const Id u : rows)
            if (!std::binary_search(other.begin(), other.end(), u)) heat.weights.add(u, forward ? 1.0 : -1.0);
        out_.heats.push_back(std::move(heat));
    }
    // unknowns the two regions share: what enters through the cells of one and leaves through those of the other
    std::vector<unsigned char> in(as_size(model_.unknowns), 0);
    for (std::size_t r = 0; r < model_.regions.size(); ++r) {
        const unsigned char bit = as_id(r) == a ? 1 : (as_id(r) == b ? 2 : 0);
        if (bit == 0) continue;
        for (Id c = model_.regions[r].first_cell; c < model_.regions[r].last_cell; ++c)
            for (int i = 0; i < model_.kernels->nodes; ++i) in[as_size(model_.cell(c)[i])] |= bit;
    }
    std::vector<int> regions_at(as_size(model_.unknowns), 0);
    for (std::size_t r = 0; r < model_.regions.size(); ++r) {
        std::vector<unsigned char> seen(as_size(model_.unknowns), 0);
        for (Id c = model_.regions[r].first_cell; c < model_.regions[r].last_cell; ++c)
            for (int i = 0; i < model_.kernels->nodes; ++i) seen[as_size(model_.cell(c)[i])] = 1;
        for (std::size_t u = 0; u < seen.size(); ++u) regions_at[u] += seen[u];
    }
    Functional::Heat from;
    Functional::Heat to;
    for (Index u = 0; u < model_.unknowns; ++u) {
        if (in[as_size(u)] != 3) continue;
        any = true;
        const double share = 1.0 / regions_at[as_size(u)];
        from.weights.add(as_id(u), -share);
        to.weights.add(as_id(u), share);
    }
    if (!any)
        throw Error(ErrorCode::bad_name, quantity_.first(),
                    text(quantity_.label(),
                         ": the two regions do not touch; ask for neighbours, such as those a contact joins"));
    if (from.weights.unknown.empty()) return;
    const auto restrict_to = [this](Id r, tepor::Restriction& part) {
        part.regions.push_back(r);
        for (std::size_t l = 0; l < model_.locals.size(); ++l)
            if (model_.locals[l].region == r) part.locals.push_back(as_id(l));
        for (std::size_t f = 0; f < model_.faces.size(); ++f) {
            if (model_.faces[f].terms.empty()) continue;
            SideList mine;
            const SideList& all = model_.faces[f].sides;
            for (Index s = 0; s < all.count(); ++s) {
                if (model_.region_of_cell[as_size(all.side[as_size(s)].cell)] != r) continue;
                mine.side.push_back(all.side[as_size(s)]);
                for (int j = 0; j < model_.kernels->side_nodes; ++j)
                    mine.unknowns.push_back(all.unknowns[as_size(s * model_.kernels->side_nodes + j)]);
            }
            if (!mine.side.empty()) part.faces.push_back({as_id(f), std::move(mine)});
        }
    };
    restrict_to(a, from.part);
    restrict_to(b, to.part);
    out_.heats.push_back(std::move(from));
    out_.heats.push_back(std::move(to));
}

/// Runs a restricted pass with the heat's weights.
inline double weigh(const Functional::Heat& heat, const Model& model, const Values& values, Workspace& work,
                    const double* T, TimeSpan time, double* transposed) {
    std::vector<double> dense(as_size(model.unknowns), 0.0);
    for (std::size_t i = 0; i < heat.weights.unknown.size(); ++i)
        dense[as_size(heat.weights.unknown[i])] += heat.weights.weight[i];
    Pass pass;
    pass.T = T;
    pass.time = time;
    pass.only = &heat.part;
    pass.weights = dense.data();
    pass.transposed = transposed;
    assemble(model, values, work, pass);
    if (pass.fault) raise(pass.fault);
    return pass.weighted;
}

/// Integral of T over a region as exact cells have it; with `row`, factor times its derivative is added there.
inline double content_of(const Functional::Content& content, const Model& model, const Values& values, Workspace& work,
                         const double* T, TimeSpan time, double* row) {
    Restriction part;
    part.regions.push_back(content.region);
    std::vector<double> sums(model.regions.size());
    std::vector<double> slope(row ? as_size(model.unknowns) : 0, 0.0);
    Pass pass;
    pass.T = T;
    pass.time = time;
    pass.only = &part;
    pass.content = sums.data();
    pass.content_slope = row ? slope.data() : nullptr;
    assemble(model, values, work, pass);
    if (pass.fault) raise(pass.fault);
    for (std::size_t u = 0; u < slope.size(); ++u) row[u] += content.factor * slope[u];
    return content.factor * sums[as_size(content.region)];
}

} // namespace detail

TEPOR_INLINE Functional compile(const Model& model, const Values& values, const Quantity& quantity) {
    return detail::QuantityCompiler(model, values, quantity).run();
}

TEPOR_INLINE double evaluate(const Functional& functional, const Model& model, const Values& values, Workspace& work,
                             const double* T, const double* reaction, TimeSpan time) {
    if (functional.unbounded)
        throw Error(
            ErrorCode::no_answer, "",
            detail::text(
                "the heat flow through this face is unbounded at (", functional.unbounded->x, ", ",
                functional.unbounded->y,
                "), where two prescribed temperatures differ; ask for the faces together, or give the corner a film"));
    if (functional.extreme)
        return (functional.face >= 0 ? extreme_on(model, values, T, functional.face, functional.direction)
                                     : extreme_in(model, values, T, functional.region, functional.direction))
            .value;
    double value = functional.constant + functional.temperature.dot(T);
    if (functional.stored >= 0) {
        const Enthalpy enthalpy(model.regions[detail::as_size(functional.stored)], values);
        value += sensible_heat(model, values, work, enthalpy, detail::as_size(functional.stored), T, nullptr);
        value += latent_heat(model, values, work, enthalpy, detail::as_size(functional.stored), T);
    }
    if (!functional.reaction.unknown.empty()) value += functional.reaction.dot(reaction);
    for (const Functional::Heat& heat : functional.heats)
        value += detail::weigh(heat, model, values, work, T, time, nullptr);
    for (const Functional::EdgeFlux& edge : functional.edges)
        value += edge.factor * detail::edge_flux(model, values, edge, T, time, nullptr);
    for (const Functional::Inner& inner : functional.inner)
        value += inner.factor * detail::inner_place(model, values, work, T, inner.place, time).temperature;
    for (const Functional::Content& content : functional.contents)
        value += detail::content_of(content, model, values, work, T, time, nullptr);
    return value;
}

TEPOR_INLINE void temperature_slope(const Functional& functional, const Model& model, const Values& values,
                                    Workspace& work, const double* T, TimeSpan time, double* row) {
    if (functional.extreme) {
        const Extreme at = functional.face >= 0 ? extreme_on(model, values, T, functional.face, functional.direction)
                                                : extreme_in(model, values, T, functional.region, functional.direction);
        double shape[detail::max_cell_nodes];
        (void)shapes_at(model, values, at.at, shape, nullptr, nullptr);
        if (model.kernels->exact) {
            const detail::InnerPlace there = detail::inner_place(model, values, work, T, at.at, time);
            for (int i = 0; i < 2; ++i) shape[i] = there.slope[i];
        }
        for (int i = 0; i < model.kernels->nodes; ++i) row[model.cell(at.at.cell)[i]] += shape[i];
        return;
    }
    for (std::size_t i = 0; i < functional.temperature.unknown.size(); ++i)
        row[functional.temperature.unknown[i]] += functional.temperature.weight[i];
    if (functional.stored >= 0) {
        const Enthalpy enthalpy(model.regions[detail::as_size(functional.stored)], values);
        (void)sensible_heat(model, values, work, enthalpy, detail::as_size(functional.stored), T, row);
    }
    for (const Functional::Heat& heat : functional.heats) (void)detail::weigh(heat, model, values, work, T, time, row);
    for (const Functional::EdgeFlux& edge : functional.edges)
        (void)detail::edge_flux(model, values, edge, T, time, row);
    for (const Functional::Inner& inner : functional.inner) {
        const detail::InnerPlace there = detail::inner_place(model, values, work, T, inner.place, time);
        for (int i = 0; i < 2; ++i) row[model.cell(inner.place.cell)[i]] += inner.factor * there.slope[i];
    }
    for (const Functional::Content& content : functional.contents)
        (void)detail::content_of(content, model, values, work, T, time, row);
}

} // namespace tepor
