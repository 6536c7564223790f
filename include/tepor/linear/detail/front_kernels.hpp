#pragma once
// The dense kernels of a front, behind pointers: which set is in use depends on the processor.

#include <tepor/base/numbers.hpp>

namespace tepor::detail {

/// See front_kernel.hpp for what each one does. In all of them `panel` holds `pivots` columns, `stride` apart, with `pad`
/// unused rows, the pivot rows, and from row `top` on the rows below.
struct FrontKernels {
    Index (*eliminate)(double* panel, Index pivots, Index pad, Index top, Index stride, const double* floors,
                       double* update) noexcept = nullptr;
    void (*forward)(const double* panel, Index pivots, Index pad, Index top, Index stride, double* x,
                    double* sum) noexcept = nullptr;
    void (*backward)(const double* panel, Index pivots, Index pad, Index top, Index stride, double* x,
                     const double* y) noexcept = nullptr;
    decltype(forward) forward_four = nullptr;
    decltype(backward) backward_four = nullptr;
};

} // namespace tepor::detail
