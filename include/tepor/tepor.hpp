#pragma once
// The front door: everything numerical. Printing and pictures are in <tepor/output/...>; this header defines nothing.

#include <tepor/version.hpp>

#include <tepor/base/config.hpp>
#include <tepor/base/dual.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/frame.hpp>
#include <tepor/base/memory.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/base/processor.hpp>

#include <tepor/quadrature/gauss.hpp>
#include <tepor/quadrature/rule.hpp>
#include <tepor/quadrature/rules.hpp>
#include <tepor/quadrature/triangle_rules.hpp>

#include <tepor/element/concept.hpp>
#include <tepor/element/exact_segment.hpp>
#include <tepor/element/map.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>

#include <tepor/describe/conditions.hpp>
#include <tepor/describe/law.hpp>
#include <tepor/describe/number.hpp>
#include <tepor/describe/parameter.hpp>
#include <tepor/describe/quantity.hpp>
#include <tepor/describe/schedule.hpp>
#include <tepor/describe/spot.hpp>
#include <tepor/describe/table.hpp>
#include <tepor/describe/value.hpp>

#include <tepor/mesh/bisect.hpp>
#include <tepor/mesh/cell_kind.hpp>
#include <tepor/mesh/from_arrays.hpp>
#include <tepor/mesh/grading.hpp>
#include <tepor/mesh/layers.hpp>
#include <tepor/mesh/locate.hpp>
#include <tepor/mesh/mesh.hpp>
#include <tepor/mesh/of_place.hpp>
#include <tepor/mesh/refine.hpp>
#include <tepor/mesh/section.hpp>
#include <tepor/mesh/shapes.hpp>
#include <tepor/mesh/sides.hpp>
#include <tepor/mesh/stack.hpp>
#include <tepor/mesh/tile_axis.hpp>
#include <tepor/mesh/tiles.hpp>
#include <tepor/mesh/triangulate.hpp>
#include <tepor/mesh/verify.hpp>

#include <tepor/assembly/block.hpp>
#include <tepor/assembly/cell_kernels.hpp>
#include <tepor/assembly/cell_law.hpp>
#include <tepor/assembly/chain_block.hpp>
#include <tepor/assembly/element_matrices.hpp>
#include <tepor/assembly/exact_kernels.hpp>
#include <tepor/assembly/kernels.hpp>
#include <tepor/assembly/kernels_cells.hpp>
#include <tepor/assembly/kernels_chain.hpp>
#include <tepor/assembly/kernels_maps.hpp>
#include <tepor/assembly/kernels_plane.hpp>
#include <tepor/assembly/kernels_sides.hpp>
#include <tepor/assembly/kernels_triangles.hpp>
#include <tepor/assembly/make_kernels.hpp>

#include <tepor/linear/banded.hpp>
#include <tepor/linear/chain_sweep.hpp>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/choose.hpp>
#include <tepor/linear/concept.hpp>
#include <tepor/linear/conjugate_gradient.hpp>
#include <tepor/linear/krylov.hpp>
#include <tepor/linear/low_rank.hpp>
#include <tepor/linear/multigrid.hpp>
#include <tepor/linear/multigrid_solver.hpp>
#include <tepor/linear/plane_solver.hpp>
#include <tepor/linear/sparse_matrix.hpp>
#include <tepor/linear/tridiagonal.hpp>

#include <tepor/body/assemble.hpp>
#include <tepor/body/body.hpp>
#include <tepor/body/coefficient.hpp>
#include <tepor/body/enthalpy.hpp>
#include <tepor/body/line.hpp>
#include <tepor/body/model.hpp>
#include <tepor/body/residual_slope.hpp>

#include <tepor/flux/conductance.hpp>
#include <tepor/flux/disc.hpp>
#include <tepor/flux/equilibrate.hpp>
#include <tepor/flux/equilibrated.hpp>
#include <tepor/flux/flux_load.hpp>
#include <tepor/flux/model_problem.hpp>
#include <tepor/flux/problem.hpp>
#include <tepor/flux/radiating.hpp>
#include <tepor/flux/weak_form.hpp>

#include <tepor/field/balance.hpp>
#include <tepor/field/error_bound.hpp>
#include <tepor/field/field.hpp>
#include <tepor/field/functional.hpp>
#include <tepor/field/functional_slope.hpp>

#include <tepor/solve/adaptive.hpp>
#include <tepor/solve/capacity.hpp>
#include <tepor/solve/checkpoint.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/initial.hpp>
#include <tepor/solve/line_sweep.hpp>
#include <tepor/solve/loads.hpp>
#include <tepor/solve/march.hpp>
#include <tepor/solve/march_handles.hpp>
#include <tepor/solve/periodic.hpp>
#include <tepor/solve/steady.hpp>
#include <tepor/solve/step.hpp>
#include <tepor/solve/theta.hpp>

#include <tepor/answers/bracket.hpp>
#include <tepor/answers/compact.hpp>
#include <tepor/answers/estimate.hpp>
#include <tepor/answers/fit.hpp>
#include <tepor/answers/fit_march.hpp>
#include <tepor/answers/gradient.hpp>
#include <tepor/answers/gradient_march.hpp>
#include <tepor/answers/size_for.hpp>
#include <tepor/answers/sized.hpp>
#include <tepor/answers/state_space.hpp>
#include <tepor/answers/target.hpp>
