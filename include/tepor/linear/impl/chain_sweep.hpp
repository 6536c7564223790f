#pragma once
// The running sums of a piece of a chain.

#include <cmath>
#include <tepor/linear/chain_sweep.hpp>

namespace tepor {

namespace detail {

/// The larger of two, never a NaN from the first.
inline double larger(double a, double b) noexcept {
    return a > b ? a : b;
}

} // namespace detail

TEPOR_INLINE void run_chain(int links, const double* r, const double* load, ChainState& state) noexcept {
    for (int j = 1; j < links; ++j) {
        state.resistance += r[j - 1];
        state.sum += state.grounded ? state.resistance * load[j] : load[j];
    }
    state.resistance = state.grounded ? state.resistance + r[links - 1] : 0.0;
}

TEPOR_INLINE ChainSums return_chain(int links, double* r, double* load, const ChainState& reached, double last,
                                    const double* held) noexcept {
    ChainSums sums;
    double heat = reached.flow_to(last); // through link j
    double right = last;                 // temperature of the row after it
    double after = 0.0;                  // what flows there by the temperatures as they are rounded
    for (int j = links - 1; j >= 0; --j) {
        const double T = j == 0 && held ? *held : right + r[j] * heat;
        const double conductance = 1.0 / r[j];
        const double flow = conductance * (T - right);
        if (j + 1 < links) {
            load[j + 1] = (after - flow) - load[j + 1];
            sums.residual += std::abs(load[j + 1]);
        } else {
            sums.flow_last = flow;
        }
        if (j > 0) heat -= load[j];
        sums.conductance += conductance;
        sums.hottest = detail::larger(sums.hottest, std::abs(T));
        r[j] = right = T;
        after = flow;
    }
    sums.flow_first = after;
    return sums;
}

} // namespace tepor
