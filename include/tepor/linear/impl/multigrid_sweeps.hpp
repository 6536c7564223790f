#pragma once
// The sweeps over a level of multigrid.

#include <tepor/linear/detail/multigrid_level.hpp>

namespace tepor::detail {

/// own - sum of value x[column] over a row whose length is a multiple of Padding.
template <Index Padding, class Real, class X>
inline Real gather(const typename MultigridLevel<Real>::Entry* e, const typename MultigridLevel<Real>::Entry* end,
                   const X* x, Real own) noexcept {
    for (; e != end; e += Padding) {
        own -= e[0].value * static_cast<Real>(x[e[0].column]);
        if constexpr (Padding > 1) own -= e[1].value * static_cast<Real>(x[e[1].column]);
        if constexpr (Padding > 2) {
            own -= e[2].value * static_cast<Real>(x[e[2].column]);
            own -= e[3].value * static_cast<Real>(x[e[3].column]);
        }
    }
    return own;
}

/// x[column] -= value own over such a row.
template <Index Padding, class Real, class X>
inline void scatter(const typename MultigridLevel<Real>::Entry* e, const typename MultigridLevel<Real>::Entry* end,
                    X* x, Real own) noexcept {
    for (; e != end; e += Padding) {
        x[e[0].column] -= static_cast<X>(e[0].value * own);
        if constexpr (Padding > 1) x[e[1].column] -= static_cast<X>(e[1].value * own);
        if constexpr (Padding > 2) {
            x[e[2].column] -= static_cast<X>(e[2].value * own);
            x[e[3].column] -= static_cast<X>(e[3].value * own);
        }
    }
}

template <Index Padding, class Real, class Coarse>
inline void forward_row(const Id* start, const typename MultigridLevel<Real>::Entry* entry, Real* x, Coarse* coarse,
                        Index i) noexcept {
    const auto* middle = entry + start[2 * i + 1];
    const Real own = gather<Padding, Real>(entry + start[2 * i], middle, x, x[i]);
    x[i] = own;
    scatter<2, Real>(middle, entry + start[2 * i + 2], coarse, own);
}

template <Index Padding, class Real, class Coarse>
inline void backward_row(const Id* start, const typename MultigridLevel<Real>::Entry* entry, Real* x,
                         const Coarse* coarse, Index i) noexcept {
    const auto* middle = entry + start[2 * i + 1];
    const Real own = gather<2, Real>(middle, entry + start[2 * i + 2], coarse, x[i]);
    x[i] = own;
    scatter<Padding, Real>(entry + start[2 * i], middle, x, own);
}

/// The way down over the blocks `first` and `first + 1` (if there), row by row in turn so that neither waits for itself:
/// x solves (I + L) x = x, coarse loses Q^T x.
template <Index Padding, class Real, class Coarse>
inline void forward_pair(MultigridLevel<Real>& level, std::size_t first, Coarse* coarse) noexcept {
    const Id* start = level.start.data() + first;
    const Id* second = start + 1; // see MultigridLevel::start
    const auto* entry = level.entry.data();
    Real* x = level.x.data();
    Index i = level.block[first];
    const Index i_end = level.block[first + 1];
    Index j = i_end;
    const Index j_end = first + 2 < level.block.size() ? level.block[first + 2] : j;
    for (; i < i_end && j < j_end; ++i, ++j) {
        forward_row<Padding, Real>(start, entry, x, coarse, i);
        forward_row<Padding, Real>(second, entry, x, coarse, j);
    }
    for (; i < i_end; ++i) forward_row<Padding, Real>(start, entry, x, coarse, i);
    for (; j < j_end; ++j) forward_row<Padding, Real>(second, entry, x, coarse, j);
}

/// The way up: x loses Q coarse, then x solves (I + L^T) x = x.
template <Index Padding, class Real, class Coarse>
inline void backward_pair(MultigridLevel<Real>& level, std::size_t first, const Coarse* coarse) noexcept {
    const Id* start = level.start.data() + first;
    const Id* second = start + 1;
    const auto* entry = level.entry.data();
    Real* x = level.x.data();
    const Index i_begin = level.block[first];
    Index i = level.block[first + 1];
    const Index j_begin = i;
    Index j = first + 2 < level.block.size() ? level.block[first + 2] : j_begin;
    while (i > i_begin && j > j_begin) {
        backward_row<Padding, Real>(start, entry, x, coarse, --i);
        backward_row<Padding, Real>(second, entry, x, coarse, --j);
    }
    while (i > i_begin) backward_row<Padding, Real>(start, entry, x, coarse, --i);
    while (j > j_begin) backward_row<Padding, Real>(second, entry, x, coarse, --j);
}

template <class Real, class Coarse>
void forward_blocks(MultigridLevel<Real>& level, std::size_t first, Coarse* coarse) noexcept {
    switch (level.padding) {
    case 1: return forward_pair<1, Real>(level, first, coarse);
    case 2: return forward_pair<2, Real>(level, first, coarse);
    default: return forward_pair<4, Real>(level, first, coarse);
    }
}

template <class Real, class Coarse>
void backward_blocks(MultigridLevel<Real>& level, std::size_t first, const Coarse* coarse) noexcept {
    switch (level.padding) {
    case 1: return backward_pair<1, Real>(level, first, coarse);
    case 2: return backward_pair<2, Real>(level, first, coarse);
    default: return backward_pair<4, Real>(level, first, coarse);
    }
}

/// What lies between blocks, once all of them are down: coarse loses its part of Q^T x, and x its part of A x for the way up.
template <class Real, class Coarse>
void forward_between(MultigridLevel<Real>& level, Coarse* coarse) noexcept {
    Real* x = level.x.data();
    for (const auto& e : level.coarse_cross) coarse[e.column] -= static_cast<Coarse>(e.value * x[e.row]);
    Real* product = level.cross_product.data();
    for (const auto& e : level.cross) { // all products before any change
        *product++ = e.value * x[e.column];
        *product++ = e.value * x[e.row];
    }
    product = level.cross_product.data();
    for (const auto& e : level.cross) {
        x[e.row] -= *product++;
        x[e.column] -= *product++;
    }
}

/// x loses the part of Q coarse that lies between blocks.
template <class Real, class Coarse>
void backward_between(MultigridLevel<Real>& level, const Coarse* coarse) noexcept {
    Real* x = level.x.data();
    for (const auto& e : level.coarse_cross) x[e.row] -= e.value * static_cast<Real>(coarse[e.column]);
}

/// y -= A x.
template <class Real>
void subtract_product(const MultigridLevel<Real>& level, const Real* x, Real* y) noexcept {
    for (std::size_t b = 0; b + 1 < level.block.size(); ++b) {
        const Id* start = level.start.data() + b;
        for (Index i = level.block[b]; i < level.block[b + 1]; ++i) {
            Real sum = x[i];
            for (Index e = start[2 * i]; e < start[2 * i + 1]; ++e) {
                const auto& entry = level.entry[e];
                sum += entry.value * x[entry.column];
                y[entry.column] -= entry.value * x[i];
            }
            y[i] -= sum;
        }
    }
    for (const auto& e : level.cross) {
        y[e.row] -= e.value * x[e.column];
        y[e.column] -= e.value * x[e.row];
    }
}

} // namespace tepor::detail
