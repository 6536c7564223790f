#pragma once
// Heats compiled: through a face, and from one region to another, as reactions of the discrete equations.

#include <algorithm>
#include <tepor/base/text.hpp>
#include <tepor/body/split.hpp>
#include <tepor/field/impl/edge_flux.hpp>
#include <tepor/field/impl/quantity_compiler.hpp>

namespace tepor::detail {

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
                if (model_.region_of_cell(all.side[as_size(s)].cell) != r) continue;
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

} // namespace tepor::detail
