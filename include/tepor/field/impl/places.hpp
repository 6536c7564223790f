#pragma once
// Places seen by the model: cells, reference coordinates, shape functions.

#include <cmath>
#include <tepor/base/text.hpp>
#include <tepor/field/functional.hpp>

namespace tepor {

namespace detail {

inline std::string place_text(const Model& model, Point p) {
    return model.mesh->dim == 1 ? text("x = ", p.x) : text("(", p.x, ", ", p.y, ")");
}

/// 1D: the cells of a region are in the order of x, also after a thickness has changed. Appends every cell that holds x.
inline void find_on_line(const Model& model, const Values& values, double x, std::size_t r,
                         std::vector<ModelPlace>& found) {
    const Point* place = model.places_of(values);
    const RegionModel& region = model.regions[r];
    const auto left = [&](Id c) { return place[model.cell(c)[0]].x; };
    const auto right = [&](Id c) { return place[model.cell(c)[1]].x; };
    Id low = region.first_cell;
    Id high = region.last_cell;
    while (high - low > 1) {
        const Id middle = low + (high - low) / 2;
        (left(middle) <= x ? low : high) = middle;
    }
    for (Id c = low > region.first_cell ? low - 1 : low; c <= low && c < region.last_cell; ++c) {
        const double slack = 1e-9 * (right(c) - left(c));
        if (x < left(c) - slack || x > right(c) + slack) continue;
        ModelPlace at;
        at.cell = c;
        at.xi[0] = (x - left(c)) / (right(c) - left(c));
        at.xi[0] = at.xi[0] < 0.0 ? 0.0 : (at.xi[0] > 1.0 ? 1.0 : at.xi[0]);
        found.push_back(at);
    }
}

inline std::vector<ModelPlace> find_places(const Model& model, const Values& values, Point p, Id region) {
    std::vector<ModelPlace> found;
    if (model.mesh->dim == 1) {
        for (std::size_t r = 0; r < model.regions.size(); ++r)
            if (region < 0 || r == as_size(region)) find_on_line(model, values, p.x, r, found);
        return found;
    }
    const auto add = [&](const Location& l) {
        ModelPlace at;
        at.cell = model.model_cell(l.cell);
        at.xi[0] = l.reference.x;
        at.xi[1] = l.reference.y;
        found.push_back(at);
    };
    if (region >= 0 || !model.split) {
        const Location l = region >= 0 ? model.locator().find_in(region, p) : model.locator().find(p);
        if (l) add(l);
        return found;
    }
    std::vector<Location> all;
    model.locator().find_all(p, all);
    for (const Location& l : all) add(l);
    return found;
}

/// The unknowns that carry weight at a place, to tell whether two cells give it the same temperature.
inline bool same_unknowns(const Model& model, const ModelPlace& a, const ModelPlace& b) {
    const int n = model.kernels->nodes;
    std::vector<double> shape(as_size(n));
    std::vector<double> gradient(as_size(2 * n));
    const auto carried = [&](const ModelPlace& at) {
        model.kernels->shape(at.xi, shape.data(), gradient.data());
        std::vector<Id> ids;
        for (int i = 0; i < n; ++i)
            if (std::abs(shape[as_size(i)]) > 1e-7) ids.push_back(model.cell(at.cell)[i]);
        std::sort(ids.begin(), ids.end());
        return ids;
    };
    return carried(a) == carried(b);
}

} // namespace detail

TEPOR_INLINE ModelPlace locate(const Model& model, const Values& values, Point p, Id region) {
    using detail::text;
    const std::string where = detail::place_text(model, p);
    for (const LocalModel& heat : model.locals)
        if (heat.radius > 0.0 && distance(heat.place, p) < heat.radius)
            throw Error(ErrorCode::outside, where,
                        text("at ", where, ": inside the radius ", heat.radius, " m of the local heat at (",
                             heat.place.x, ", ", heat.place.y, ") the temperature has no meaning; ask outside it"));
    const std::vector<ModelPlace> found = detail::find_places(model, values, p, region);
    if (found.empty()) {
        const std::string in =
            region < 0 ? "the body" : "region \"" + model.regions[detail::as_size(region)].name + '"';
        throw Error(ErrorCode::outside, where,
                    text("at ", where, ": the place lies outside ", in, "; coordinates are in metres"));
    }
    if (region < 0 && model.split)
        for (std::size_t i = 1; i < found.size(); ++i)
            if (!detail::same_unknowns(model, found[0], found[i])) {
                const auto name = [&](const ModelPlace& at) {
                    return model.regions[detail::as_size(model.region_of_cell(at.cell))].name;
                };
                throw Error(ErrorCode::outside, where,
                            text("at ", where, ": a contact gives this place two temperatures; ask at(place, \"",
                                 name(found[0]), "\") or at(place, \"", name(found[i]), "\")"));
            }
    return found[0];
}

TEPOR_INLINE Point shapes_at(const Model& model, const Values& values, const ModelPlace& at, double* shape,
                             double* gradient_x, double* gradient_y) {
    const CellKernels& kernel = *model.kernels;
    const int n = kernel.nodes;
    double reference[2 * detail::max_cell_nodes];
    kernel.shape(at.xi, shape, reference);
    const Point* place = model.places_of(values);
    const Id* ids = model.cell(at.cell);
    Point p;
    for (int i = 0; i < n; ++i) p = p + shape[i] * place[ids[i]];
    if (!gradient_x) return p;
    if (kernel.dim == 1) {
        double jacobian = 0.0;
        for (int i = 0; i < n; ++i) jacobian += reference[i] * place[ids[i]].x;
        for (int i = 0; i < n; ++i) {
            gradient_x[i] = reference[i] / jacobian;
            gradient_y[i] = 0.0;
        }
        return p;
    }
    Point a;
    Point b;
    for (int i = 0; i < n; ++i) {
        a = a + reference[2 * i] * place[ids[i]];
        b = b + reference[2 * i + 1] * place[ids[i]];
    }
    const double jacobian = cross(a, b);
    for (int i = 0; i < n; ++i) {
        gradient_x[i] = (b.y * reference[2 * i] - a.y * reference[2 * i + 1]) / jacobian;
        gradient_y[i] = (a.x * reference[2 * i + 1] - b.x * reference[2 * i]) / jacobian;
    }
    return p;
}

} // namespace tepor
