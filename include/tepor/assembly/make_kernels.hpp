#pragma once
// The kernels of an element type behind their base class.

#include <memory>
#include <tepor/assembly/cell_kernels.hpp>
#include <tepor/assembly/kernels.hpp>

namespace tepor {

template <int P>
struct Segment;
template <int P>
struct Triangle;
template <int P>
struct Quadrilateral;
struct ExactSegment;

namespace detail {

/// Kernels<E> for a frame; see there for `extra_degree`.
template <class E>
std::shared_ptr<const CellKernels> make_kernels(const Frame& frame, int extra_degree) {
    return std::make_shared<const Kernels<E>>(frame, extra_degree);
}

// With tepor::compiled the library's own elements stand in it, and their code is not made again; see
// assembly/impl/instances.hpp.
#if defined(TEPOR_COMPILED) && !defined(TEPOR_BUILDING)
extern template std::shared_ptr<const CellKernels> make_kernels<Segment<1>>(const Frame&, int);
extern template std::shared_ptr<const CellKernels> make_kernels<Segment<2>>(const Frame&, int);
extern template std::shared_ptr<const CellKernels> make_kernels<Segment<3>>(const Frame&, int);
extern template std::shared_ptr<const CellKernels> make_kernels<Triangle<1>>(const Frame&, int);
extern template std::shared_ptr<const CellKernels> make_kernels<Triangle<2>>(const Frame&, int);
extern template std::shared_ptr<const CellKernels> make_kernels<Triangle<3>>(const Frame&, int);
extern template std::shared_ptr<const CellKernels> make_kernels<Quadrilateral<1>>(const Frame&, int);
extern template std::shared_ptr<const CellKernels> make_kernels<Quadrilateral<2>>(const Frame&, int);
extern template std::shared_ptr<const CellKernels> make_kernels<Quadrilateral<3>>(const Frame&, int);
extern template std::shared_ptr<const CellKernels> make_kernels<ExactSegment>(const Frame&, int);
#endif

} // namespace detail
} // namespace tepor
