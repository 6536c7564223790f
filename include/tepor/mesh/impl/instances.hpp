#pragma once
// The kinds of the library's own elements, made once in the compiled library.

#if defined(TEPOR_BUILDING)

#include <tepor/element/exact_segment.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>
#include <tepor/mesh/cell_kind.hpp>

namespace tepor {

// Here and not beside the types: checking them makes every matrix they return, which costs each user half a second.
static_assert(Element<Segment<1>> && Element<Segment<2>> && Element<Segment<3>> && Element<ExactSegment>);
static_assert(Element<Triangle<1>> && Element<Triangle<2>> && Element<Triangle<3>>);
static_assert(Element<Quadrilateral<1>> && Element<Quadrilateral<2>> && Element<Quadrilateral<3>>);

} // namespace tepor

namespace tepor::detail {

template const CellKind& cell_kind<Segment<1>>();
template const CellKind& cell_kind<Segment<2>>();
template const CellKind& cell_kind<Segment<3>>();
template const CellKind& cell_kind<Triangle<1>>();
template const CellKind& cell_kind<Triangle<2>>();
template const CellKind& cell_kind<Triangle<3>>();
template const CellKind& cell_kind<Quadrilateral<1>>();
template const CellKind& cell_kind<Quadrilateral<2>>();
template const CellKind& cell_kind<Quadrilateral<3>>();
template const CellKind& cell_kind<ExactSegment>();

} // namespace tepor::detail

#endif
