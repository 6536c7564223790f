#pragma once
// Heat balances and their rounding floor.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/text.hpp>
#include <tepor/body/gather.hpp>
#include <tepor/body/split.hpp>
#include <tepor/field/field.hpp>
#include <tepor/field/impl/functional.hpp>

namespace tepor {

TEPOR_INLINE std::string size_in_words(const MeshData& mesh) {
    const Frame& frame = mesh.frame;
    const double size = frame.size(mesh.dim);
    switch (frame.kind()) {
    case Frame::Kind::planar:
        return mesh.dim == 1 ? detail::text(size, " m2 of wall") : detail::text("a depth of ", size, " m");
    case Frame::Kind::cylindrical:
        return mesh.dim == 1 ? detail::text("a length of ", size, " m") : std::string("the whole body of revolution");
    case Frame::Kind::spherical: return "the whole sphere";
    }
    return {};
}

namespace detail {

/// Area of a list of sides [m2] for the frame's size.
inline double area_of(const Model& model, const Values& values, Workspace& work, const SideList& sides) {
    SideBlock& block = work.sides;
    block.T = nullptr;
    Id ids[block_width];
    double area = 0.0;
    for (Index s = 0; s < sides.count(); s += block_width) {
        block.count = gather_sides(model, model.places_of(values), nullptr, nullptr, sides, s, block, ids);
        model.kernels->open_side(block, false);
        for (int q = 0; q < model.kernels->side_points; ++q)
            for (int b = 0; b < block.count; ++b) area += block.weight[q * block_width + b];
    }
    return area;
}

/// Largest k / h over the cells, h the least distance at which a shape function falls from 1 to 0.
inline double largest_conductance(const Model& model, const Values& values, Workspace& work, const double* T) {
    const CellKernels& kernel = *model.kernels;
    CellBlock& block = work.cells;
    block.T = work.nodal_T;
    double largest = 0.0;
    Id ids[block_width];
    for (const RegionModel& region : model.regions)
        for (Id c = region.first_cell; c < region.last_cell; c += block_width) {
            block.count =
                gather_cells(model, model.places_of(values), T, work.nodal_T, c, region.last_cell, block, ids);
            kernel.open(block);
            const Points at = conduction_points(kernel, block, block.point_T);
            const int first = kernel.first_conduction_point();
            double* k = work.coefficient[0];
            for (int m = 0; m < (region.conductivities > 1 ? 2 : 1); ++m) {
                if (const Fault fault = region.k[m].evaluate(values.slots.data(), {}, at, k, nullptr)) raise(fault);
                const int last =
                    kernel.conduction_points() - 1; // around a solid centre the slope vanishes at the first point
                for (int q = 0; q <= last; q += std::max(last, 1))
                    for (int i = 0; i < kernel.nodes; ++i)
                        for (int b = 0; b < block.count; ++b) {
                            const int entry = ((first + q) * kernel.nodes + i) * block_width + b;
                            const double gx = block.gradient_x[entry];
                            const double gy = kernel.dim == 2 ? block.gradient_y[entry] : 0.0;
                            largest = std::max(largest, k[q * block_width + b] * std::sqrt(gx * gx + gy * gy));
                        }
            }
        }
    return largest;
}

/// Part of the surface belongs to no face: some side has one cell and no name.
inline bool has_unnamed_surface(const Model& model) {
    const MeshData& mesh = *model.mesh;
    std::vector<KeyedSide> sides;
    sides.reserve(mesh.region.size() * as_size(mesh.sides_per_cell));
    for (Index c = 0; c < mesh.cell_count(); ++c)
        for (int s = 0; s < mesh.sides_per_cell; ++s)
            sides.push_back({side_key(mesh, *model.kernels, as_id(c), s), {as_id(c), s}});
    sort_by_key(sides);
    std::vector<SideKey> named;
    for (const MeshFace& face : mesh.faces)
        for (const CellSide side : face.sides) named.push_back(side_key(mesh, *model.kernels, side.cell, side.side));
    std::sort(named.begin(), named.end());
    for (std::size_t i = 0; i < sides.size(); ++i) {
        const bool shared =
            (i > 0 && sides[i - 1].key == sides[i].key) || (i + 1 < sides.size() && sides[i + 1].key == sides[i].key);
        if (!shared && !std::binary_search(named.begin(), named.end(), sides[i].key)) {
            const bool on_axis = mesh.frame.power() > 0 && mesh.nodes[as_size(sides[i].key.first)].x == 0.0 &&
                                 mesh.nodes[as_size(sides[i].key.second)].x == 0.0;
            if (!on_axis) return true;
        }
    }
    return false;
}

} // namespace detail

TEPOR_INLINE double rounding_floor(const Model& model, const Values& values, Workspace& work, const double* T) {
    double hottest = 0.0;
    for (Index u = 0; u < model.unknowns; ++u) hottest = std::max(hottest, std::abs(T[u]));
    double area = 0.0;
    for (const FaceModel& face : model.faces)
        if (face.fixed.given() || !face.terms.empty()) area += detail::area_of(model, values, work, face.sides);
    double factor = 16.0;
    if (model.mesh->dim == 1) factor = std::max(factor, std::sqrt(detail::as_double(model.user_cell.size())));
    return std::numeric_limits<double>::epsilon() * hottest * detail::largest_conductance(model, values, work, T) *
           factor * area;
}

TEPOR_INLINE Balance Field::balance() const {
    const Model& m = *model_;
    Workspace work = m.kernels->workspace();
    HeatSums sums;
    Pass pass;
    pass.T = temperature_.data();
    pass.time = {time_, time_, 1.0};
    pass.accounts = &sums.accounts;
    assemble(m, values_, work, pass);
    if (pass.fault) raise(pass.fault);
    sums.reaction = reaction_.data();
    sums.stored = storage_.empty() ? nullptr : storage_.data();
    sums.side_traffic = pass.side_traffic;
    sums.source_traffic = pass.source_traffic;
    return balance_of(m, values_, work, sums, temperature_.data(), pass.time);
}

namespace detail {

/// Heat that leaves through terms of other faces on sides shared with this one.
inline bool shares_terms(const Model& model, std::size_t face) {
    const int m = model.kernels->side_nodes;
    for (std::size_t g = 0; g < model.faces.size(); ++g)
        if (g != face && !model.faces[g].terms.empty() &&
            !common_sides(model.faces[g].sides, model.faces[face].sides, m).side.empty())
            return true;
    return false;
}

} // namespace detail

TEPOR_INLINE Balance balance_of(const Model& m, const Values& values, Workspace& work, const HeatSums& sums,
                                const double* T, TimeSpan span) {
    const Accounts& accounts = sums.accounts;
    Balance b;
    b.size = size_in_words(*m.mesh);
    const auto leaves = [&b](double heat) { (heat > 0.0 ? b.out : b.in) += std::abs(heat); };
    for (std::size_t r = 0; r < m.regions.size(); ++r) {
        RegionHeat region{m.regions[r].name, accounts.generated[r], accounts.side_loss[r],
                          sums.stored ? sums.stored[r] : 0.0};
        for (std::size_t l = 0; l < m.locals.size(); ++l)
            if (m.locals[l].region == detail::as_id(r)) region.generated += accounts.local[l];
        b.generated += region.generated;
        b.stored += region.stored;
        leaves(region.side_loss);
        b.regions.push_back(std::move(region));
    }
    double reaction_in = 0.0;
    double traffic = sums.side_traffic + sums.source_traffic;
    for (Index u = m.free; u < m.unknowns; ++u) {
        const double r = sums.reaction[u];
        reaction_in += r;
        traffic += std::abs(r);
        leaves(-r);
    }
    for (const RegionHeat& region : b.regions) traffic += std::abs(region.stored);
    b.gross = 0.5 * traffic;

    std::size_t term = 0;
    double through_terms = 0.0;
    std::vector<double> by_face(m.faces.size(), 0.0);
    for (std::size_t f = 0; f < m.faces.size(); ++f)
        for (std::size_t t = 0; t < m.faces[f].terms.size(); ++t, ++term) {
            through_terms += accounts.face[term];
            leaves(accounts.face[term]);
        }
    double side_losses = 0.0;
    for (const double s : accounts.side_loss) side_losses += s;
    b.left_over = reaction_in + b.generated - through_terms - side_losses - b.stored;
    b.floor = sums.duration * rounding_floor(m, values, work, T);

    term = 0;
    for (std::size_t f = 0; f < m.faces.size(); ++f) {
        const FaceModel& face = m.faces[f];
        FaceHeat heat;
        heat.name = face.name;
        heat.area = detail::area_of(m, values, work, face.sides);
        for (const FaceTerm& t : face.terms) {
            double& kind = t.kind == FaceTerm::Kind::film
                               ? heat.film
                               : (t.kind == FaceTerm::Kind::radiation ? heat.radiation : heat.flux);
            kind += accounts.face[term++];
        }
        const Functional flow = compile(m, values, heat_out_through(face.name));
        heat.adiabatic = flow.heats.empty() && flow.reaction.unknown.empty();
        if (flow.unbounded) {
            heat.unbounded = true;
            heat.unbounded_x = flow.unbounded->x;
            heat.unbounded_y = flow.unbounded->y;
        } else {
            // what passes at prescribed temperatures; films, radiation and fluxes are in the accounts
            heat.prescribed = flow.reaction.dot(sums.reaction);
            for (const Functional::EdgeFlux& edge : flow.edges)
                heat.prescribed += sums.duration * edge.factor * detail::edge_flux(m, values, edge, T, span, nullptr);
            heat.out = heat.film + heat.radiation + heat.flux + heat.prescribed;
            if (detail::shares_terms(m, f)) {
                heat.out = heat.prescribed;
                for (const Functional::Heat& through : flow.heats)
                    heat.out += sums.duration * detail::weigh(through, m, values, work, T, span, nullptr);
            }
        }
        b.faces.push_back(std::move(heat));
    }
    b.has_unnamed = detail::has_unnamed_surface(m);
    return b;
}

} // namespace tepor
