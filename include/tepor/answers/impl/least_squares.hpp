#pragma once
// Levenberg-Marquardt with bounds and priors, and the groups of parameters that data do not tell apart.
// Levenberg 1944; Marquardt 1963; damping by the gain ratio: Nielsen 1999.

#include <algorithm>
#include <cmath>
#include <tepor/answers/fit.hpp>
#include <tepor/answers/impl/small_dense.hpp>
#include <tepor/base/text.hpp>

namespace tepor::detail {

/// Model values and their slopes by the parameters.
class FitModel {
  public:
    FitModel() = default;
    FitModel(const FitModel&) = delete;
    FitModel& operator=(const FitModel&) = delete;
    virtual ~FitModel() = default;
    /// `y` one per reading, `slope` readings x parameters row by row. False where the body has no solution.
    virtual bool evaluate(const std::vector<double>& p, std::vector<double>& y, std::vector<double>& slope) = 0;
};

/// One residual row per reading and prior: (model - value) / uncertainty.
class LeastSquares {
  public:
    struct Datum {
        double value;
        double uncertainty;
    };

    LeastSquares(FitModel& model, const std::vector<FitBy>& parameters, std::vector<Datum> data,
                 const FitOptions& options)
        : model_(model), parameters_(parameters), data_(std::move(data)), options_(options), m_(parameters.size()) {}

    std::vector<double> p;        ///< in: where to start; out: the answer
    std::vector<double> residual; ///< of readings, then priors
    std::vector<double> slope;    ///< rows x parameters
    std::vector<double> covariance;
    std::vector<std::size_t> on_bounds;
    Index passes = 0;

    void run() {
        for (std::size_t j = 0; j < m_; ++j) p[j] = clamped(j, p[j]);
        if (!rows(p, residual, slope))
            throw Error(ErrorCode::not_converged, "", "fit: the body has no solution at the values it starts from");
        set_scales();
        double cost = square(residual);
        double damping = 1e-3;
        double raise = 2.0;
        bool moved = true;
        for (; passes < options_.most_passes && moved; ++passes) {
            std::vector<double> normal;
            std::vector<double> gradient;
            normal_equations(normal, gradient);
            // parameters pressed against a bound stay there for this pass
            std::vector<bool> held(m_);
            for (std::size_t j = 0; j < m_; ++j) held[j] = pressed(j, gradient[j]);
            moved = false;
            while (damping < 1e20) {
                std::vector<double> A = normal;
                std::vector<double> step(m_);
                for (std::size_t j = 0; j < m_; ++j) {
                    A[j * m_ + j] += damping * std::max(normal[j * m_ + j], 1e-12);
                    step[j] = held[j] ? 0.0 : -gradient[j];
                    if (!held[j]) continue;
                    for (std::size_t k = 0; k < m_; ++k) A[j * m_ + k] = A[k * m_ + j] = 0.0;
                    A[j * m_ + j] = 1.0;
                }
                std::vector<double> next = p;
                std::vector<double> y;
                std::vector<double> J;
                double predicted = 0.0;
                if (solve_definite(A, step)) {
                    for (std::size_t j = 0; j < m_; ++j) {
                        next[j] = clamped(j, p[j] + scale_[j] * step[j]);
                        step[j] = (next[j] - p[j]) / scale_[j];
                    }
                    for (std::size_t j = 0; j < m_; ++j) {
                        predicted -= 2.0 * gradient[j] * step[j];
                        for (std::size_t k = 0; k < m_; ++k) predicted -= step[j] * normal[j * m_ + k] * step[k];
                    }
                    double size = 0.0;
                    for (const double s : step) size = std::max(size, std::abs(s));
                    if (size <= 1e-13 ||
                        std::abs(predicted) <= options_.tolerance * options_.tolerance * (1.0 + cost)) {
                        finish();
                        return;
                    }
                    if (predicted > 0.0 && rows(next, y, J)) {
                        const double now = square(y);
                        const double gain = (cost - now) / predicted;
                        if (now < cost) {
                            const double fall = cost - now;
                            p = std::move(next);
                            residual = std::move(y);
                            slope = std::move(J);
                            cost = now;
                            damping *= std::max(1.0 / 3.0, 1.0 - std::pow(2.0 * gain - 1.0, 3));
                            raise = 2.0;
                            moved = true;
                            if (fall <= options_.tolerance * (1.0 + cost) && damping < 1e-2) {
                                ++passes;
                                finish();
                                return;
                            }
                            break;
                        }
                        // at the bottom rounding hides what is left
                        if (predicted <= 1e-9 * (1.0 + cost)) {
                            finish();
                            return;
                        }
                    }
                }
                damping *= raise;
                raise *= 2.0;
            }
        }
        if (!moved) {
            finish();
            return;
        }
        throw Error(ErrorCode::not_converged, "",
                    text("fit: not converged after ", passes, " passes, chi-square ", cost,
                         "; check the readings and their units, or start from better values"));
    }

  private:
    [[nodiscard]] double clamped(std::size_t j, double v) const {
        if (parameters_[j].from) v = std::max(v, *parameters_[j].from);
        if (parameters_[j].to) v = std::min(v, *parameters_[j].to);
        return v;
    }
    [[nodiscard]] bool pressed(std::size_t j, double gradient) const {
        return (parameters_[j].from && p[j] <= *parameters_[j].from && gradient > 0.0) ||
               (parameters_[j].to && p[j] >= *parameters_[j].to && gradient < 0.0);
    }
    static double square(const std::vector<double>& v) {
        double sum = 0.0;
        for (const double x : v) sum += x * x;
        return sum;
    }

    bool rows(const std::vector<double>& at, std::vector<double>& r, std::vector<double>& J) {
        if (!model_.evaluate(at, r, J)) return false;
        for (std::size_t i = 0; i < data_.size(); ++i) {
            r[i] = (r[i] - data_[i].value) / data_[i].uncertainty;
            for (std::size_t j = 0; j < m_; ++j) J[i * m_ + j] /= data_[i].uncertainty;
        }
        for (std::size_t j = 0; j < m_; ++j) {
            if (!parameters_[j].prior) continue;
            const Prior& prior = *parameters_[j].prior;
            r.push_back((at[j] - prior.value) / prior.uncertainty);
            for (std::size_t k = 0; k < m_; ++k) J.push_back(k == j ? 1.0 / prior.uncertainty : 0.0);
        }
        for (const double v : r)
            if (!std::isfinite(v)) return false;
        return true;
    }

    /// Parameters count relative to their size; one that is 0 by its prior or bounds.
    void set_scales() {
        scale_.resize(m_);
        for (std::size_t j = 0; j < m_; ++j) {
            const FitBy& by = parameters_[j];
            double s = std::abs(p[j]);
            if (!(s > 0.0) && by.prior) s = by.prior->uncertainty;
            if (!(s > 0.0) && by.from && by.to) s = *by.to - *by.from;
            scale_[j] = s > 0.0 ? s : 1.0;
        }
    }

    void normal_equations(std::vector<double>& A, std::vector<double>& g) const {
        A.assign(m_ * m_, 0.0);
        g.assign(m_, 0.0);
        for (std::size_t i = 0; i < residual.size(); ++i)
            for (std::size_t j = 0; j < m_; ++j) {
                const double a = slope[i * m_ + j] * scale_[j];
                g[j] += a * residual[i];
                for (std::size_t k = 0; k < m_; ++k) A[j * m_ + k] += a * slope[i * m_ + k] * scale_[k];
            }
    }

    void finish() {
        set_scales();
        std::vector<double> A;
        std::vector<double> g;
        normal_equations(A, g);
        refuse_inseparable(A);
        std::vector<double> inverse;
        if (!invert_definite(A, m_, inverse))
            throw Error(ErrorCode::no_answer, names(std::vector<bool>(m_, true)),
                        "fit: the readings do not determine the parameters; give priors or more readings");
        covariance.resize(m_ * m_);
        for (std::size_t j = 0; j < m_; ++j) {
            for (std::size_t k = 0; k < m_; ++k) covariance[j * m_ + k] = inverse[j * m_ + k] * scale_[j] * scale_[k];
            const FitBy& by = parameters_[j];
            if ((by.from && p[j] <= *by.from) || (by.to && p[j] >= *by.to)) on_bounds.push_back(j);
        }
    }

    [[nodiscard]] std::string names(const std::vector<bool>& members) const {
        std::string list;
        for (std::size_t j = 0; j < m_; ++j)
            if (members[j]) list += text(list.empty() ? "" : ", ", parameters_[j].parameter.name());
        return list;
    }

    /// Directions (relative changes of the parameters) that move the readings by less than their uncertainty allows to see.
    void refuse_inseparable(const std::vector<double>& A) const {
        // columns to size one first, so that the directions of weak parameters show beside strong ones
        std::vector<double> size(m_);
        for (std::size_t j = 0; j < m_; ++j) size[j] = std::sqrt(A[j * m_ + j]);
        std::vector<bool> dead(m_);
        bool any_dead = false;
        for (std::size_t j = 0; j < m_; ++j) {
            dead[j] = !(size[j] * options_.weakest > 1.0);
            any_dead = any_dead || dead[j];
        }
        if (any_dead)
            throw Error(ErrorCode::no_answer, names(dead),
                        text("fit: the readings say nothing about ", names(dead), " (relative uncertainty above ",
                             options_.weakest,
                             " even with all else known); give a prior, or readings that depend on it"));
        std::vector<double> value;
        std::vector<double> vector;
        symmetric_eigen(A, m_, value, vector);
        double largest = 0.0;
        for (const double v : value) largest = std::max(largest, v);
        // weight of each pair of parameters in the directions nobody sees
        std::vector<double> hidden(m_ * m_, 0.0);
        bool any = false;
        for (std::size_t e = 0; e < m_; ++e) {
            if (value[e] > 0.0 && value[e] * options_.weakest * options_.weakest > 1.0 && value[e] > 1e-13 * largest)
                continue;
            any = true;
            for (std::size_t j = 0; j < m_; ++j)
                for (std::size_t k = 0; k < m_; ++k) hidden[j * m_ + k] += vector[j * m_ + e] * vector[k * m_ + e];
        }
        if (!any) return;
        std::string groups;
        std::string first;
        std::vector<bool> done(m_);
        for (std::size_t j = 0; j < m_; ++j) {
            if (done[j] || hidden[j * m_ + j] < 0.01) continue;
            std::vector<bool> members(m_);
            std::vector<std::size_t> queue{j};
            while (!queue.empty()) {
                const std::size_t a = queue.back();
                queue.pop_back();
                if (members[a]) continue;
                members[a] = done[a] = true;
                for (std::size_t b = 0; b < m_; ++b)
                    if (std::abs(hidden[a * m_ + b]) > 0.01 && !members[b]) queue.push_back(b);
            }
            groups += text(groups.empty() ? "{" : ", {", names(members), "}");
            first += text(first.empty() ? "" : "; ", names(members));
        }
        throw Error(
            ErrorCode::no_answer, first,
            text("fit: the readings do not tell apart ", groups,
                 ": these can change together without a reading noticing; give a prior for one of each group, or "
                 "readings under other conditions"));
    }

    FitModel& model_;
    const std::vector<FitBy>& parameters_;
    std::vector<Datum> data_;
    const FitOptions& options_;
    std::size_t m_;
    std::vector<double> scale_;
};

} // namespace tepor::detail
