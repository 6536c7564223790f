#pragma once
// The running sums of a piece of a chain.

#include <cmath>
#include <tepor/base/memory.hpp>
#include <tepor/linear/chain_sweep.hpp>

namespace tepor {

namespace detail {

/// Running sums R[j] = R[j - 1] + r[j - 1] and Z[j] = Z[j - 1] + R[j] load[j] for j = 1 .. links - 1, and R[links]. Four at a
/// time, so that only one addition in four waits for the one before.
inline void chain_sums(int links, const double* TEPOR_RESTRICT r, const double* TEPOR_RESTRICT load,
                       double* TEPOR_RESTRICT R, double* TEPOR_RESTRICT Z) noexcept {
    double resistance = R[0];
    double sum = Z[0];
    int j = 1;
    for (; j + 4 <= links; j += 4) {
        const double two = r[j - 1] + r[j];
        R[j] = resistance + r[j - 1];
        R[j + 1] = resistance + two;
        R[j + 2] = resistance + (two + r[j + 1]);
        R[j + 3] = resistance = resistance + (two + (r[j + 1] + r[j + 2]));
        const double first = R[j] * load[j];
        const double second = first + R[j + 1] * load[j + 1];
        const double third = R[j + 2] * load[j + 2];
        Z[j] = sum + first;
        Z[j + 1] = sum + second;
        Z[j + 2] = sum + (second + third);
        Z[j + 3] = sum = sum + (second + (third + R[j + 3] * load[j + 3]));
    }
    for (; j < links; ++j) {
        R[j] = resistance += r[j - 1];
        Z[j] = sum += resistance * load[j];
    }
    R[links] = resistance + r[links - 1];
}

/// Turns a[j] into last + the sum of a[j] .. a[links - 1].
inline void sum_from_end(int links, double last, double* a) noexcept {
    int j = links - 1;
    for (; j >= 3; j -= 4) {
        const double two = a[j] + a[j - 1];
        const double three = two + a[j - 2];
        const double four = two + (a[j - 2] + a[j - 3]);
        a[j] = last + a[j];
        a[j - 1] = last + two;
        a[j - 2] = last + three;
        a[j - 3] = last = last + four;
    }
    for (; j >= 0; --j) a[j] = last += a[j];
}

/// Temperatures of a piece; `conductance` of its links comes along.
inline void chain_temperatures(int links, const double* r, const double* load, const ChainState& from, double last,
                               double* T, double* conductance) noexcept {
    if (!from.grounded) {
        double flow[chain_piece];
        flow[0] = from.sum;
        for (int j = 1; j < links; ++j) flow[j] = flow[j - 1] + load[j];
        for (int j = 0; j < links; ++j) conductance[j] = 1.0 / r[j];
        for (int j = 0; j < links; ++j) T[j] = r[j] * flow[j];
        sum_from_end(links, last, T);
        return;
    }
    double R[chain_piece + 1];
    double Z[chain_piece + 1];
    R[0] = from.resistance;
    Z[0] = from.sum;
    chain_sums(links, r, load, R, Z);
    double rise[chain_piece];
    const bool held = !(R[0] > 0.0); // the first row is held at from.sum
    if (held) {
        rise[0] = 0.0;
        conductance[0] = 1.0 / r[0];
    }
    for (int j = held ? 1 : 0; j < links; ++j) {
        // one division for 1 / (R R' ) and 1 / r
        const double both = R[j] * R[j + 1];
        const double inverse = 1.0 / (both * r[j]);
        conductance[j] = both * inverse;
        rise[j] = (Z[j] * inverse) * (r[j] * r[j]);
    }
    sum_from_end(links, last / R[links], rise);
    for (int j = 0; j < links; ++j) T[j] = R[j] * rise[j];
    if (held) T[0] = from.sum;
}

} // namespace detail

TEPOR_INLINE void run_chain(int links, const double* r, const double* load, ChainState& state) noexcept {
    if (!state.grounded) {
        for (int j = 1; j < links; ++j) state.sum += load[j];
        return;
    }
    double R[chain_piece + 1];
    double Z[chain_piece];
    R[0] = state.resistance;
    Z[0] = state.sum;
    detail::chain_sums(links, r, load, R, Z);
    state.resistance = R[links];
    state.sum = Z[links - 1];
}

TEPOR_INLINE ChainSums return_chain(int links, double* r, double* load, const ChainState& from, double last) noexcept {
    double T[chain_piece + 1];
    double conductance[chain_piece];
    detail::chain_temperatures(links, r, load, from, last, T, conductance);
    T[links] = last;
    double flow[chain_piece];
    for (int j = 0; j < links; ++j) {
        flow[j] = conductance[j] * (T[j] - T[j + 1]);
        r[j] = T[j];
    }
    for (int j = 1; j < links; ++j) load[j] = (flow[j] - flow[j - 1]) - load[j];
    // four sums side by side, so that they vectorise in a fixed order
    double residual[4] = {};
    double hottest[4] = {};
    double total[4] = {};
    int j = 1;
    for (; j + 4 <= links; j += 4)
        for (int i = 0; i < 4; ++i) {
            residual[i] += std::abs(load[j + i]);
            const double t = std::abs(T[j + i]);
            hottest[i] = hottest[i] > t ? hottest[i] : t;
            total[i] += conductance[j + i];
        }
    for (; j < links; ++j) {
        residual[0] += std::abs(load[j]);
        const double t = std::abs(T[j]);
        hottest[0] = hottest[0] > t ? hottest[0] : t;
        total[0] += conductance[j];
    }
    const auto larger = [](double a, double b) { return a > b ? a : b; };
    ChainSums sums;
    sums.residual = (residual[0] + residual[1]) + (residual[2] + residual[3]);
    sums.hottest = larger(larger(larger(hottest[0], hottest[1]), larger(hottest[2], hottest[3])), std::abs(T[0]));
    sums.conductance = (total[0] + total[1]) + (total[2] + total[3]) + conductance[0];
    sums.flow_first = flow[0];
    sums.flow_last = flow[links - 1];
    return sums;
}

} // namespace tepor
