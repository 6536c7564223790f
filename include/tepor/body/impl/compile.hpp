#pragma once
// The compiler: from statements on a mesh to a Model, one step per concern.

#include <algorithm>
#include <tepor/base/text.hpp>
#include <tepor/body/impl/compile_numbering.hpp>
#include <tepor/body/impl/compile_terms.hpp>
#include <tepor/body/model.hpp>
#include <tepor/body/split.hpp>

namespace tepor {

TEPOR_INLINE std::shared_ptr<const Model>
compile(std::shared_ptr<const MeshData> mesh, std::shared_ptr<const CellKernels> kernels, const detail::CellKind& kind,
        PlaneSolverMaker make_plane_solver, const detail::Statements& said, TemperatureScale scale, bool lumped_faces) {
    auto model = std::make_shared<Model>();
    model->mesh = std::move(mesh);
    model->kernels = std::move(kernels);
    model->kind = &kind;
    model->make_plane_solver = make_plane_solver;
    model->scale = scale;
    model->lumped_faces = lumped_faces;
    model->frame_area = model->mesh->frame.size(model->mesh->dim);
    detail::TermCompiler terms(*model, said);
    terms.regions();
    terms.faces();
    const std::vector<std::vector<detail::ContactPair>> pairs = terms.contacts();
    terms.layers();
    detail::number_unknowns(*model, pairs);
    terms.locals();
    terms.finish();
    return model;
}

} // namespace tepor
