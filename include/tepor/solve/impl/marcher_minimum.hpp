#pragma once
// The smallest step that makes sense: where M + a K loses the signs that keep temperatures between their neighbours.

#include <algorithm>
#include <cmath>
#include <tepor/solve/impl/marcher.hpp>
#include <tepor/solve/impl/marcher_adaptive.hpp>

namespace tepor::detail {

/// Adds f(entry) of every entry beside the diagonal to the sums of the two rows it stands in.
template <class F>
void sum_beside_diagonal(const SparseMatrix& matrix, Index unknowns, const F& f, std::vector<double>& sum) {
    std::fill(sum.begin(), sum.end(), 0.0);
    for (Index i = 0; i < unknowns; ++i)
        for (Id p = matrix.start[as_size(i)]; p < matrix.start[as_size(i) + 1] - 1; ++p) {
            const double by = f(matrix.lower[as_size(p)]);
            sum[as_size(i)] += by;
            sum[as_size(matrix.column[as_size(p)])] += by;
        }
}

TEPOR_INLINE void Marcher::measure_minimum() {
    minimum_leg_ = 0.0;
    if (storage_->diagonal_only()) return;
    const Index all = model->unknowns;
    SparseMatrix matrix;
    prepare_matrix(*model, matrix);
    Pass pass;
    pass.T = T_.data();
    pass.time = {time, time, 1.0};
    pass.matrix = &matrix;
    assemble(*model, values, work_, pass);
    if (pass.fault) return; // the first step says what is wrong
    std::vector<double> conducts(as_size(all));
    std::vector<double> stores(as_size(all));
    std::vector<double> rise(as_size(all), 0.0);
    sum_beside_diagonal(
        matrix, all, [](double k) { return std::max(-k, 0.0); }, conducts);
    std::fill(matrix.lower.begin(), matrix.lower.end(), 0.0);
    std::fill(matrix.upper.begin(), matrix.upper.end(), 0.0);
    if (storage_->rise(values, work_, T_.data(), T_.data(), rise.data(), &matrix, nullptr)) return;
    sum_beside_diagonal(
        matrix, all, [](double m) { return std::abs(m); }, stores);
    for (Index u = 0; u < model->free; ++u)
        if (conducts[as_size(u)] > 0.0)
            minimum_leg_ = std::max(minimum_leg_, stores[as_size(u)] / conducts[as_size(u)]);
}

TEPOR_INLINE double Marcher::sensible_step() const noexcept {
    return minimum_leg_ / (scheme.adaptive ? tr_bdf2_numbers::implicit : scheme.theta);
}

} // namespace tepor::detail
