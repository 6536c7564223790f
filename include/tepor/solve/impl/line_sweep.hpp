#pragma once
// The sweep over the pieces of a line.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/memory.hpp>
#include <tepor/solve/line_sweep.hpp>

namespace tepor {

TEPOR_INLINE LineSweep::LineSweep(std::shared_ptr<const Model> model, std::shared_ptr<const LinePlan> plan)
    : model_(std::move(model)), plan_(std::move(plan)), cells_(*model_, *plan_), work_(model_->kernels->workspace()),
      state_(plan_->pieces.size()) {
    std::size_t full = 0;
    for (std::size_t p = 0; p < plan_->pieces.size(); ++p) full += cells_.in_lanes(p) ? 1U : 0U;
    lanes_.resize(full);
}

TEPOR_INLINE bool LineSweep::run(const Values& values, TimeSpan time, double* T, double* residual, Report& report) {
    const Index last = plan_->positions - 1;
    const double left = plan_->left_held ? T[plan_->left_unknown] : 0.0;
    const double right = plan_->right_held ? T[plan_->unknown(last)] : 0.0;
    if (!cells_.open(values, time, work_, T, residual)) return false;
    if (!go(left, T, residual)) return false;
    const LineCells::Acting acting = cells_.acting(plan_->last_special);
    residual[plan_->unknown(last)] = carried_ + acting.load;
    if (!plan_->right_held) {
        end_.enter(carried_ + acting.load, acting.sink);
        if (!end_.grounded) return false;
    }
    if (plan_->left_held) T[plan_->left_unknown] = left; // the way there has used it for a link where it ends a piece
    come_back(plan_->right_held ? right : end_.sum, T, residual, report);
    report.source_traffic = report.given = cells_.source_traffic();
    for (std::size_t s = 0; s < plan_->special.size(); ++s)
        report.given += std::abs(cells_.acting(detail::as_id(s)).load);
    return std::isfinite(report.residual);
}

TEPOR_INLINE bool LineSweep::go(double left, double* T, double* load) {
    end_ = ChainState{plan_->left_held, 0.0, left};
    carried_ = 0.0; // load on the present node from the cell to its left
    ChainLanes* lanes = lanes_.data();
    for (std::size_t p = 0; p < plan_->pieces.size(); ++p) {
        const LinePlan::Piece& piece = plan_->pieces[p];
        if (!cells_.fill(p)) return false;
        const ChainBlock& block = cells_.block();
        const Index u = plan_->unknown(piece.first);
        const bool held = p == 0 && plan_->left_held;
        const LineCells::Acting acting = cells_.acting(piece.special);
        const bool loaded = cells_.loaded();
        load[u] = carried_ + acting.load + (loaded ? block.load_left[0] : 0.0);
        if (!held) end_.enter(load[u], acting.sink);
        double* TEPOR_RESTRICT r = held ? &first_ : T + u;
        const int links = piece.links;
        carried_ = loaded ? block.load_right[links - 1] : 0.0;
        if (cells_.in_lanes(p)) {
            run_lanes(block.resistance, loaded ? block.load_left : nullptr, block.load_right, r, load + u, *lanes++,
                      end_);
        } else {
            for (int j = 0; j < links; ++j) r[j] = block.resistance[j];
            for (int j = 1; j < links; ++j) load[u + j] = loaded ? block.load_right[j - 1] + block.load_left[j] : 0.0;
            run_chain(links, block.resistance, load + u, end_);
        }
        state_[p] = end_;
    }
    return true;
}

TEPOR_INLINE void LineSweep::come_back(double last, double* T, double* residual, Report& report) {
    const Index end = plan_->positions - 1;
    const double sink = cells_.acting(plan_->last_special).sink;
    double sum = 0.0;
    double hottest = std::abs(last);
    double diagonal = 0.0;
    double flow = 0.0; // from the present node to its right
    // closes the books of a node whose flow to the left is known
    const auto close = [&](Index position, double by_sink, double T_here, double flow_in) {
        double& r = residual[plan_->unknown(position)];
        r = (flow - flow_in) - r + by_sink * T_here;
        const bool held = (plan_->left_held && position == 0) || (plan_->right_held && position == end);
        if (held) return;
        sum += std::abs(r);
        diagonal += by_sink;
    };
    T[plan_->unknown(end)] = last;
    Index position = end;
    double by_sink = sink;
    double T_here = last;
    const ChainLanes* lanes = lanes_.data() + lanes_.size();
    for (std::size_t p = plan_->pieces.size(); p-- > 0;) {
        const LinePlan::Piece& piece = plan_->pieces[p];
        const Index u = plan_->unknown(piece.first);
        double* r = p == 0 && plan_->left_held ? &first_ : T + u;
        if (p > 1) {
            const LinePlan::Piece& next = plan_->pieces[p - 1];
            detail::fetch_ahead(T + plan_->unknown(next.first), next.links);
            detail::fetch_ahead(residual + plan_->unknown(next.first), next.links);
        }
        const ChainSums sums = cells_.in_lanes(p)
                                   ? return_lanes(r, residual + u, *--lanes, state_[p], T_here)
                                   : return_chain(piece.links, r, residual + u, state_[p], T_here,
                                                  p == 0 && plan_->left_held ? T + plan_->left_unknown : nullptr);
        sum += sums.residual;
        hottest = std::max(hottest, sums.hottest);
        diagonal += 2.0 * sums.conductance;
        close(position, by_sink, T_here, sums.flow_last);
        flow = sums.flow_first;
        position = piece.first;
        by_sink = cells_.acting(piece.special).sink;
        T_here = r[0];
    }
    close(position, by_sink, T_here, 0.0);
    report.residual = sum;
    report.hottest = hottest;
    report.rounding = 8.0 * std::numeric_limits<double>::epsilon() * hottest * diagonal;
}

} // namespace tepor
