#pragma once
// The kernels of the library's own elements, made once in the compiled library.

#if defined(TEPOR_BUILDING)

#include <tepor/assembly/cell_law.hpp>
#include <tepor/assembly/exact_kernels.hpp>
#include <tepor/assembly/make_kernels.hpp>
#include <tepor/element/exact_segment.hpp>
#include <tepor/element/quadrilateral.hpp>
#include <tepor/element/segment.hpp>
#include <tepor/element/triangle.hpp>

namespace tepor {

static_assert(CellLaw<Kernels<Segment<1>>> && CellLaw<Kernels<Triangle<2>>> && CellLaw<Kernels<Quadrilateral<3>>>);
static_assert(CellLaw<Kernels<ExactSegment>>);

} // namespace tepor

namespace tepor::detail {

template std::shared_ptr<const CellKernels> make_kernels<Segment<1>>(const Frame&, int);
template std::shared_ptr<const CellKernels> make_kernels<Segment<2>>(const Frame&, int);
template std::shared_ptr<const CellKernels> make_kernels<Segment<3>>(const Frame&, int);
template std::shared_ptr<const CellKernels> make_kernels<Triangle<1>>(const Frame&, int);
template std::shared_ptr<const CellKernels> make_kernels<Triangle<2>>(const Frame&, int);
template std::shared_ptr<const CellKernels> make_kernels<Triangle<3>>(const Frame&, int);
template std::shared_ptr<const CellKernels> make_kernels<Quadrilateral<1>>(const Frame&, int);
template std::shared_ptr<const CellKernels> make_kernels<Quadrilateral<2>>(const Frame&, int);
template std::shared_ptr<const CellKernels> make_kernels<Quadrilateral<3>>(const Frame&, int);
template std::shared_ptr<const CellKernels> make_kernels<ExactSegment>(const Frame&, int);

} // namespace tepor::detail

#endif
