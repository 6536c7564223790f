#pragma once
// From a compiled body to the plain problem the error bounds work on, or the reason why there is none.

#include <memory>
#include <tepor/body/model.hpp>
#include <tepor/flux/problem.hpp>
#include <tepor/flux/radiating.hpp>
#include <vector>

namespace tepor {

/// A FluxProblem with the mesh it stands on.
struct ModelProblem {
    std::shared_ptr<const MeshData> mesh; ///< straight-sided, nodes where the parameters put them
    FluxProblem problem;  ///< cells and sides in the user's numbering, degrees of freedom are the model's unknowns
    double factor = 1.0;  ///< of the frame: depth, area, 2 pi ...; watts are problem's values times it
    bool polygon = false; ///< curved sides were replaced by their chords
    std::vector<Id> face_side_start;      ///< sides of face f: entries face_side_start[f] .. [f + 1] - 1 of face_side
    std::vector<Id> face_side;            ///< positions in problem.sides; -1: insulated, see face_cell_side
    std::vector<CellSide> face_cell_side; ///< the cell side of each entry of face_side
    Radiating radiating;                  ///< empty unless asked for
};

/// What to do about radiating faces: linear bounds have no place for them.
enum class RadiatingFaces { refuse, list };

/// The problem a model poses at the values.
///
/// @throws Error not_certifiable, naming the term, when the body is outside what can be bounded: quadrilaterals and triangles of
///         order 3; conductivities that vary inside a cell; anything that depends on temperature (radiation, k(T), films by a
///         law); films, fluxes, sources and prescribed temperatures that depend on place; prescribed temperatures that differ at
///         a shared node; order 2 and side films in r-z; local heat in 1D and r-z. Radiating faces, where listed, ask for a body
///         without heat sources, given flows and bodies of revolution
/// Cost O(cells)
ModelProblem model_problem(const Model& model, const Values& values, RadiatingFaces radiating = RadiatingFaces::refuse);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/flux/impl/model_problem.hpp>
#endif
