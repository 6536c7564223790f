#pragma once
// Full pieces of a chain, their lanes side by side.

#include <cmath>
#include <tepor/base/memory.hpp>
#include <tepor/base/processor.hpp>
#include <tepor/linear/chain_sweep.hpp>

namespace tepor {

namespace detail {

TEPOR_IN_BOTH void sum_lanes(const double* TEPOR_RESTRICT resistance, const double* TEPOR_RESTRICT left,
                             const double* TEPOR_RESTRICT right, double* TEPOR_RESTRICT r, double* TEPOR_RESTRICT load,
                             ChainLanes& TEPOR_RESTRICT lanes) noexcept {
    constexpr int W = chain_lanes;
    double sum[W];
    double heat[W] = {};
    double moment[W] = {};
    for (int i = 0; i < W; ++i) r[i] = sum[i] = resistance[i];
    if (!left) {
        for (int c = W; c < chain_width; c += W)
            for (int i = 0; i < W; ++i) sum[i] += r[c + i] = resistance[c + i];
        for (int c = 1; c < chain_width; ++c) load[c] = 0.0;
    } else {
        // the first row of a lane is the last of the lane before
        for (int i = 1; i < W; ++i) load[i] = right[chain_width - W + i - 1] + left[i];
        for (int c = W; c < chain_width; c += W)
            for (int i = 0; i < W; ++i) {
                const double b = right[c - W + i] + left[c + i];
                load[c + i] = b;
                heat[i] += b;
                moment[i] += sum[i] * b;
                sum[i] += r[c + i] = resistance[c + i];
            }
    }
    for (int i = 0; i < W; ++i) {
        lanes.resistance[i] = sum[i];
        lanes.load[i] = heat[i];
        lanes.moment[i] = moment[i];
    }
}

/// Heat through the last link of each lane and temperature behind it.
inline void enter_lanes(const double* load, const ChainLanes& lanes, double flow, double last, double* heat,
                        double* T) noexcept {
    for (int i = chain_lanes - 1; i >= 0; --i) {
        heat[i] = flow;
        T[i] = last;
        last += lanes.resistance[i] * flow - lanes.moment[i];
        flow -= lanes.load[i] + (i > 0 ? load[i] : 0.0);
    }
}

TEPOR_IN_BOTH ChainSums solve_lanes(double* TEPOR_RESTRICT r, double* TEPOR_RESTRICT load, double* TEPOR_RESTRICT heat,
                                    double* TEPOR_RESTRICT right, double last) noexcept {
    constexpr int W = chain_lanes;
    double T[chain_width + W];
    double flow[chain_width];
    double conductance[chain_width];
    double residual[chain_width];
    for (int c = chain_width - W; c >= 0; c -= W)
        for (int i = 0; i < W; ++i) {
            const double t = right[i] + r[c + i] * heat[i];
            heat[i] -= load[c + i];
            T[c + i] = right[i] = t;
        }
    // the last link of a lane ends where the next lane begins
    for (int i = 0; i + 1 < W; ++i) T[chain_width + i] = T[i + 1];
    T[chain_width + W - 1] = last;
    for (int c = 0; c < chain_width; ++c) conductance[c] = 1.0 / r[c];
    for (int c = 0; c < chain_width; ++c) flow[c] = conductance[c] * (T[c] - T[c + W]);
    residual[0] = load[0];
    for (int i = 1; i < W; ++i) residual[i] = (flow[i] - flow[chain_width - W + i - 1]) - load[i];
    for (int c = W; c < chain_width; ++c) residual[c] = (flow[c] - flow[c - W]) - load[c];
    for (int i = 0; i < W; ++i)
        for (int step = 0; step < chain_steps; ++step) {
            r[i * chain_steps + step] = T[step * W + i];
            load[i * chain_steps + step] = residual[step * W + i];
        }
    // sums and the largest by halves, as that vectorises
    double sum[chain_width];
    double largest[chain_width];
    for (int c = 0; c < chain_width; ++c) {
        sum[c] = std::abs(residual[c]);
        largest[c] = std::abs(T[c]);
    }
    sum[0] = 0.0;
    for (int half = chain_width / 2; half >= 4; half /= 2)
        for (int c = 0; c < half; ++c) {
            sum[c] += sum[half + c];
            conductance[c] += conductance[half + c];
            largest[c] = largest[c] > largest[half + c] ? largest[c] : largest[half + c];
        }
    ChainSums sums;
    for (int c = 0; c < 4; ++c) {
        sums.residual += sum[c];
        sums.hottest = sums.hottest > largest[c] ? sums.hottest : largest[c];
        sums.conductance += conductance[c];
    }
    sums.flow_first = flow[0];
    sums.flow_last = flow[chain_width - 1];
    return sums;
}

TEPOR_WIDE inline void sum_lanes_wide(const double* resistance, const double* left, const double* right, double* r,
                                      double* load, ChainLanes& lanes) noexcept {
    sum_lanes(resistance, left, right, r, load, lanes);
}

TEPOR_WIDE inline ChainSums solve_lanes_wide(double* r, double* load, double* heat, double* right,
                                             double last) noexcept {
    return solve_lanes(r, load, heat, right, last);
}

} // namespace detail

TEPOR_INLINE void run_lanes(const double* resistance, const double* left, const double* right, double* r, double* load,
                            ChainLanes& lanes, ChainState& state) noexcept {
    if (detail::wide_processor())
        detail::sum_lanes_wide(resistance, left, right, r, load, lanes);
    else
        detail::sum_lanes(resistance, left, right, r, load, lanes);
    for (int i = 0; i < chain_lanes; ++i) {
        if (i > 0) state.sum += state.grounded ? state.resistance * load[i] : load[i];
        state.sum += state.grounded ? state.resistance * lanes.load[i] + lanes.moment[i] : lanes.load[i];
        if (state.grounded) state.resistance += lanes.resistance[i];
    }
}

TEPOR_INLINE ChainSums return_lanes(double* r, double* load, const ChainLanes& lanes, const ChainState& reached,
                                    double last) noexcept {
    double heat[chain_lanes];
    double right[chain_lanes];
    detail::enter_lanes(load, lanes, reached.flow_to(last), last, heat, right);
    return detail::wide_processor() ? detail::solve_lanes_wide(r, load, heat, right, last)
                                    : detail::solve_lanes(r, load, heat, right, last);
}

} // namespace tepor
