#pragma once
// The dense front kernels for the instruction sets of the machine, chosen when the program runs.

#include <cmath>
#include <tepor/linear/detail/front_kernels.hpp>

namespace tepor::detail {

#if defined(__GNUC__)
/// Four doubles that the compiler maps to the widest registers it may use.
typedef double Four __attribute__((vector_size(32)));
/// The same in memory at any multiple of eight bytes. (A typedef: in an alias, clang drops the alignment.)
typedef double LooseFour __attribute__((vector_size(32), aligned(8), may_alias));
#else
/// Four doubles in plain C++.
struct Four {
    double value[4];
    double operator[](int i) const { return value[i]; }
    Four& operator+=(const Four& o) {
        for (int i = 0; i < 4; ++i) value[i] += o.value[i];
        return *this;
    }
    Four& operator-=(const Four& o) {
        for (int i = 0; i < 4; ++i) value[i] -= o.value[i];
        return *this;
    }
    friend Four operator+(Four a, const Four& b) { return a += b; }
    friend Four operator*(Four a, const Four& b) {
        for (int i = 0; i < 4; ++i) a.value[i] *= b.value[i];
        return a;
    }
    friend Four operator*(Four a, double b) {
        for (int i = 0; i < 4; ++i) a.value[i] *= b;
        return a;
    }
    friend Four operator*(double a, Four b) { return b * a; }
};
using LooseFour = Four;
#endif

} // namespace tepor::detail

#define TEPOR_FRONT_SPACE plain
#define TEPOR_FRONT_TARGET
#include <tepor/linear/detail/front_kernel.hpp>
#undef TEPOR_FRONT_SPACE
#undef TEPOR_FRONT_TARGET

#if defined(__GNUC__) && defined(__x86_64__)
#define TEPOR_FRONT_SPACE wide
#define TEPOR_FRONT_TARGET __attribute__((target("avx2,fma")))
#include <tepor/linear/detail/front_kernel.hpp>
#undef TEPOR_FRONT_SPACE
#undef TEPOR_FRONT_TARGET
#endif

namespace tepor::detail {

/// The best kernels the processor can run. Bits of a result are the same on every run of one machine; between machines
/// with and without fused multiply-add they differ by rounding.
inline FrontKernels front_kernels() noexcept {
    FrontKernels kernels{&plain::eliminate_front, &plain::forward_front, &plain::backward_front,
                         &plain::forward_front_four, &plain::backward_front_four};
#if defined(__GNUC__) && defined(__x86_64__)
    if (__builtin_cpu_supports("avx2") && __builtin_cpu_supports("fma")) {
        kernels = {&wide::eliminate_front, &wide::forward_front, &wide::backward_front, &wide::forward_front_four,
                   &wide::backward_front_four};
    }
#endif
    return kernels;
}

} // namespace tepor::detail
