#pragma once
// The CellLaw concept: what the body needs of a cell, one step below Element.

#include <concepts>
#include <tepor/assembly/cell_kernels.hpp>
#include <tepor/assembly/exact_kernels.hpp>
#include <tepor/assembly/kernels.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>

namespace tepor {

/// The batch functions of one kind of cell: places, residual and matrix, capacity, and the temperature between its nodes.
///
/// | member | meaning |
/// |---|---|
/// | `law.nodes`, `law.points`, ... | the sizes in CellKernels |
/// | `law.open(block)` | places, weights and temperatures of the quadrature points |
/// | `law.form(block, wanted)` | residual, matrix and slope from the coefficients at those points |
/// | `law.form_capacity(block, amount, lumped)` | integral of amount times the product of two functions |
/// | `law.profile(block, shape)` | temperature at the quadrature points as the cell itself has it |
/// | `law.open_side`, `law.form_side` | the same for sides |
///
/// Every Element E yields one, Kernels<E>; Kernels<ExactSegment> is one of its own. A law derives from CellKernels, so that a
/// Body can hold it with its type erased.
template <class L>
concept CellLaw = std::derived_from<L, CellKernels> &&
    requires(const L& law, CellBlock& block, SideBlock& side, Wanted wanted, const double* amount, double* shape,
             int i) {
    { law.side_node(i, i) } -> std::convertible_to<int>;
    law.open(block);
    law.form(block, wanted);
    law.form_capacity(block, amount, true);
    law.profile(block, shape);
    law.open_side(side, true);
    law.form_side(side, wanted, true);
};

} // namespace tepor
