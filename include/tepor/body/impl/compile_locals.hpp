#pragma once
// Local heats: their place, their cell, and what stands against them.

#include <tepor/body/impl/compile_terms.hpp>

namespace tepor::detail {

/// Heat at one place: found in the mesh and shared among the unknowns of its cell by their shape functions.
inline void TermCompiler::locals() {
    const CellKernels& kernel = *model_.kernels;
    for (const SaidLocal& local : said_.locals) {
        const std::string place =
            mesh_.dim == 1 ? text("x = ", local.place.x) : text("(", local.place.x, ", ", local.place.y, ")");
        LocalModel term;
        term.total = make(local.what.total, "local heat at", place, Range::any, &SlotRole::load);
        no_temperature(term.total);
        if (!term.total.uniform())
            throw Error(ErrorCode::not_supported, place,
                        text("local heat at ", place, ": .total must be a number, a Parameter, a schedule or of_time"));
        if (mesh_.dim == 2 && !(local.what.radius > 0.0))
            throw Error(ErrorCode::missing, place,
                        text("local heat at ", place,
                             ": a line source in 2D needs .radius [m] > 0, inside which no temperature is read"));
        term.place = local.place;
        term.radius = mesh_.dim == 2 ? local.what.radius : 0.0;
        const Location where = model_.locator().find(local.place);
        if (!where)
            throw Error(ErrorCode::outside, place,
                        text("local heat at ", place, " lies outside the body; check the coordinates, in metres"));
        std::vector<double> shape(as_size(kernel.nodes));
        std::vector<double> gradient(as_size(kernel.nodes * kernel.dim));
        const double xi[2] = {where.reference.x, where.reference.y};
        kernel.shape(xi, shape.data(), gradient.data());
        const Id cell = model_.model_cell(where.cell);
        term.region = model_.region_of_cell(cell);
        for (int i = 0; i < kernel.nodes; ++i) {
            if (kernel.exact) {
                double& share = shape[as_size(i)];
                if (share > 1e-9 && share < 1.0 - 1e-9)
                    throw Error(ErrorCode::not_supported, place,
                                text("local heat at ", place,
                                     " lies inside an ExactSegment; end a layer there, or use Segment<2>"));
                share = share < 0.5 ? 0.0 : 1.0;
            }
            if (shape[as_size(i)] == 0.0) continue;
            term.unknowns.push_back(model_.cell(cell)[i]);
            term.share.push_back(shape[as_size(i)]);
        }
        model_.locals.push_back(std::move(term));
    }
}

} // namespace tepor::detail
