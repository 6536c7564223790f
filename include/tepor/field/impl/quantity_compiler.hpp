#pragma once
// A quantity compiled for a model: weights of temperatures. Heats stand apart in quantity_heats.hpp.

#include <cmath>
#include <tepor/base/text.hpp>
#include <tepor/body/gather.hpp>
#include <tepor/body/split.hpp>
#include <tepor/field/functional.hpp>
#include <tepor/field/impl/inner_place.hpp>
#include <tepor/field/impl/stored.hpp>

namespace tepor::detail {

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

} // namespace tepor::detail
