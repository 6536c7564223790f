#pragma once
// Shooting for the periodic state.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/text.hpp>
#include <tepor/solve/impl/march.hpp>
#include <tepor/solve/impl/newton.hpp>
#include <tepor/solve/periodic.hpp>

namespace tepor {

namespace detail {

/// Finds x = P x + g for the affine map `period(x)` = P x + g by GMRES on I - P; vectors are states of a march.
class Shooting {
  public:
    Shooting(Marcher& marcher, double period, Index steps) : marcher_(marcher), period_(period), steps_(steps) {}

    /// The start that stays; counts the periods marched.
    std::vector<double> run(std::vector<double> x) {
        const Index n = marcher_.model->free;
        const std::vector<double> still = march(std::vector<double>(x.size(), 0.0));
        std::vector<double> end = march(x);
        // r = P x + g - x; the steps of a Krylov space of I - P come from differences, which drop g
        std::vector<double> r(as_size(n));
        for (int restart = 0; restart < 4; ++restart) {
            double size = 0.0;
            double scale = 1e-300;
            for (Index u = 0; u < n; ++u) {
                r[as_size(u)] = end[as_size(u)] - x[as_size(u)];
                size += r[as_size(u)] * r[as_size(u)];
                scale += end[as_size(u)] * end[as_size(u)];
            }
            size = std::sqrt(size);
            mismatch = 0.0;
            for (const double v : r) mismatch = std::max(mismatch, std::abs(v));
            if (size <= 4.0 * std::numeric_limits<double>::epsilon() * std::sqrt(scale) * std::sqrt(as_double(n)))
                return x;
            if (restart == 3) break;
            const double before = size;
            correct(x, r, size, still);
            end = march(x);
            double after = 0.0;
            for (Index u = 0; u < n; ++u) {
                const double d = end[as_size(u)] - x[as_size(u)];
                after += d * d;
            }
            // rounding allows no more
            if (std::sqrt(after) > 0.5 * before) break;
        }
        mismatch = 0.0;
        double largest = 0.0;
        for (Index u = 0; u < n; ++u) {
            mismatch = std::max(mismatch, std::abs(end[as_size(u)] - x[as_size(u)]));
            largest = std::max(largest, std::abs(end[as_size(u)]));
        }
        if (!(mismatch <= 1e-9 * (1.0 + largest)))
            throw Error(ErrorCode::not_converged, "periodic_steady",
                        text("periodic_steady: start and end of the period still differ by ", mismatch, " K after ",
                             marches, " periods; check that the data repeat after ", period_, " s"));
        return x;
    }

    Index marches = 0;
    double mismatch = 0.0;

  private:
    /// Temperatures after one period.
    std::vector<double> march(const std::vector<double>& x) {
        std::vector<double> start = x;
        for (Index u = marcher_.model->free; u < marcher_.model->unknowns; ++u)
            start[as_size(u)] = marcher_.prescribed_end(period_)[as_size(u)];
        marcher_.restart(start, 0.0);
        for (Index i = 0; i < steps_; ++i) {
            const Verdict verdict = marcher_.advance();
            if (verdict != Verdict::ok) marcher_.raise_verdict(verdict);
        }
        ++marches;
        return marcher_.temperatures();
    }

    void correct(std::vector<double>& x, const std::vector<double>& r, double size, const std::vector<double>& still) {
        constexpr int most = 40;
        const std::size_t n = r.size();
        std::vector<std::vector<double>> basis{r};
        for (double& v : basis[0]) v /= size;
        std::vector<double> h; // rotated Hessenberg matrix, column by column
        std::vector<double> cosine, sine, load{size};
        int used = 0;
        for (int k = 0; k < most; ++k) {
            // (I - P) v by the difference of two periods; scaled so that rounding of g does not drown it
            const double by = std::max(1.0, size);
            std::vector<double> state(x.size(), 0.0);
            for (std::size_t u = 0; u < n; ++u) state[u] = by * basis[as_size(k)][u];
            const std::vector<double> end = march(state);
            std::vector<double> w(n);
            for (std::size_t u = 0; u < n; ++u) w[u] = basis[as_size(k)][u] - (end[u] - still[u]) / by;
            std::vector<double> column;
            for (const std::vector<double>& v : basis) {
                double dot = 0.0;
                for (std::size_t u = 0; u < n; ++u) dot += v[u] * w[u];
                column.push_back(dot);
                for (std::size_t u = 0; u < n; ++u) w[u] -= dot * v[u];
            }
            double norm = 0.0;
            for (const double v : w) norm += v * v;
            norm = std::sqrt(norm);
            for (int i = 0; i < k; ++i) {
                const auto at = as_size(i);
                const double a = cosine[at] * column[at] + sine[at] * column[at + 1];
                column[at + 1] = -sine[at] * column[at] + cosine[at] * column[at + 1];
                column[at] = a;
            }
            const double length = std::hypot(column[as_size(k)], norm);
            cosine.push_back(length > 0.0 ? column[as_size(k)] / length : 1.0);
            sine.push_back(length > 0.0 ? norm / length : 0.0);
            column[as_size(k)] = length;
            h.insert(h.end(), column.begin(), column.end());
            load.push_back(-sine.back() * load[as_size(k)]);
            load[as_size(k)] *= cosine.back();
            used = k + 1;
            if (std::abs(load.back()) <= 1e-13 * size || norm <= 1e-14 || !(length > 0.0)) break;
            for (double& v : w) v /= norm;
            basis.push_back(std::move(w));
        }
        std::vector<double> y(as_size(used));
        for (int i = used - 1; i >= 0; --i) {
            double sum = load[as_size(i)];
            for (int j = i + 1; j < used; ++j) sum -= h[as_size(j * (j + 1) / 2 + i)] * y[as_size(j)];
            const double diagonal = h[as_size(i * (i + 1) / 2 + i)];
            y[as_size(i)] = diagonal != 0.0 ? sum / diagonal : 0.0;
        }
        for (int i = 0; i < used; ++i)
            for (std::size_t u = 0; u < n; ++u) x[u] += y[as_size(i)] * basis[as_size(i)][u];
    }

    Marcher& marcher_;
    double period_;
    Index steps_;
};

} // namespace detail

TEPOR_INLINE Periodic periodic_steady(const Body& body, double period, const Theta& theta) {
    using detail::text;
    const double count = period / theta.step;
    const Index steps = std::isfinite(count) ? static_cast<Index>(std::llround(count)) : 0;
    if (!(period > 0.0) || steps < 1 || std::abs(count - detail::as_double(steps)) > 1e-9 * count)
        throw Error(
            ErrorCode::bad_value, "period",
            text("periodic_steady: period = ", period, " s, expected a whole number of steps of ", theta.step, " s"));
    const std::shared_ptr<const Model>& model = body.model();
    detail::require_level(*model, body.values());
    const double level = detail::start_temperature(*model, body.values(), {});
    Periodic result{March(body, initial(level), theta), period, 0, 0.0};
    detail::Marcher& marcher = result.march.marcher();
    if (model->nonlinear || !marcher.storage().linear())
        throw Error(ErrorCode::not_supported, "periodic_steady",
                    "periodic_steady: something depends on temperature; march until the periods repeat");
    detail::Shooting shooting(marcher, period, steps);
    std::vector<double> start = shooting.run(std::vector<double>(detail::as_size(model->unknowns), level));
    for (Index u = model->free; u < model->unknowns; ++u)
        start[detail::as_size(u)] = marcher.prescribed_end(period)[detail::as_size(u)];
    marcher.restart(start, 0.0);
    result.marches = shooting.marches;
    result.mismatch = shooting.mismatch;
    return result;
}

TEPOR_INLINE Swing Periodic::swing(const Quantity& quantity) {
    detail::Marcher& marcher = march.marcher();
    const std::vector<double> start = marcher.temperatures();
    const Probe probe = march.watch(quantity);
    const Integral sum = march.integral(quantity);
    Swing swing;
    swing.low = swing.high = {march[probe], march.time()};
    const Index steps = static_cast<Index>(std::llround(period / marcher.scheme.step));
    for (Index i = 0; i < steps; ++i) {
        march.advance().require();
        const double now = march[probe];
        if (now < swing.low.value) swing.low = {now, march.time()};
        if (now > swing.high.value) swing.high = {now, march.time()};
    }
    swing.mean = march[sum] / period;
    marcher.restart(start, 0.0);
    return swing;
}

} // namespace tepor
