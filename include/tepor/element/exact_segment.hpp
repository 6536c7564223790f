#pragma once
// ExactSegment: the 1D cell whose steady nodal values are exact.

#include <tepor/element/concept.hpp>
#include <tepor/element/segment.hpp>

namespace tepor {

/// The resistance cell: two nodes, and between them the solution of the steady equation itself in place of a polynomial.
///
/// Nodal temperatures and heat flows are exact (to rounding) for any conductivity of place and any source of place, with
/// films, contacts and prescribed temperatures, in all three frames, the solid centre included, on any mesh, one cell per
/// layer included. With a conductivity of temperature alone the cell is exact in the integral of k over T. A SideFilm with
/// a plain coefficient on a plain conductivity makes it the exact fin (planar frame). Temperatures between the nodes are
/// those of the exact solution too: `Field::at`, `hottest_in` and `mean_in` see it, not a straight line.
///
/// A source that depends on temperature, a side loss that varies along the bar or lies in a radial frame, and marching are
/// integrated with the same functions: nodal values are then of order 2, as with Segment<1>. In a march the temperatures
/// between the nodes are those a steady cell has at the present temperatures of its nodes.
///
/// As an Element it has the linear shape functions of Segment<1>; the cell law is in assembly/exact_kernels.hpp.
/// Source: I. Babuska, J. E. Osborn, SIAM J. Numerical Analysis 20 (1983) 510-536 (resistance cell); the solid centre and the
/// fin are derived in DEVELOPERS.md, "The exact cell".
struct ExactSegment : Segment<1> {};

} // namespace tepor
