#pragma once
// Sizing by several parameters for as many targets: damped Newton within bounds.

#include <algorithm>
#include <cmath>
#include <tepor/answers/impl/size_for.hpp>

namespace tepor {

namespace detail {

/// x := A^-1 x by elimination with pivots; false when A (row by row, n x n) is singular to 1e-12 of its rows.
inline bool solve_small(std::vector<double> A, std::vector<double>& x) {
    const std::size_t n = x.size();
    for (std::size_t i = 0; i < n; ++i) { // rows to size one, so that pivots tell
        double largest = 0.0;
        for (std::size_t j = 0; j < n; ++j) largest = std::max(largest, std::abs(A[i * n + j]));
        if (!(largest > 0.0)) return false;
        for (std::size_t j = 0; j < n; ++j) A[i * n + j] /= largest;
        x[i] /= largest;
    }
    for (std::size_t k = 0; k < n; ++k) {
        std::size_t p = k;
        for (std::size_t i = k; i < n; ++i)
            if (std::abs(A[i * n + k]) > std::abs(A[p * n + k])) p = i;
        if (!(std::abs(A[p * n + k]) > 1e-12)) return false;
        for (std::size_t j = 0; j < n; ++j) std::swap(A[k * n + j], A[p * n + j]);
        std::swap(x[k], x[p]);
        for (std::size_t i = k + 1; i < n; ++i) {
            const double f = A[i * n + k] / A[k * n + k];
            for (std::size_t j = k; j < n; ++j) A[i * n + j] -= f * A[k * n + j];
            x[i] -= f * x[k];
        }
    }
    for (std::size_t k = n; k-- > 0;) {
        for (std::size_t j = k + 1; j < n; ++j) x[k] -= A[k * n + j] * x[j];
        x[k] /= A[k * n + k];
    }
    return true;
}

class SeveralSizer {
  public:
    SeveralSizer(const Body& body, const std::vector<SizeBy>& parameters, const std::vector<SizeTo>& targets,
                 const SizeOptions& options)
        : body_(body), parameters_(parameters), targets_(targets), options_(options), n_(parameters.size()) {}

    SizedTogether run() {
        std::vector<double> u(n_);
        for (std::size_t j = 0; j < n_; ++j) {
            const SizeBy& by = parameters_[j];
            bounds_.push_back(size_bounds(body_, by.parameter, by.from, by.to));
            by_ratio_.push_back(bounds_[j].from > 0.0 && bounds_[j].to > 3.0 * bounds_[j].from);
            u[j] = to_scale(j, std::clamp(body_.value(by.parameter), bounds_[j].from, bounds_[j].to));
        }
        Tried now = at(u, nullptr);
        for (std::size_t i = 0; i < n_; ++i)
            scale_.push_back(std::max(
                {std::abs(targets_[i].target.value), std::abs(now.value[i] - targets_[i].target.value), 1e-300}));
        while (!met(now)) {
            std::vector<double> step(n_);
            for (std::size_t i = 0; i < n_; ++i) step[i] = -off(now, i);
            std::vector<double> J(n_ * n_);
            for (std::size_t i = 0; i < n_; ++i)
                for (std::size_t j = 0; j < n_; ++j) J[i * n_ + j] = now.slope[i * n_ + j] / scale_[i];
            if (!solve_small(J, step))
                return finish(std::move(now), SizeReason::unreachable,
                              "the parameters do not move the targets apart from each other; size one of them, or ask "
                              "for other targets");
            double share = 1.0;
            for (std::size_t j = 0; j < n_; ++j)
                if (by_ratio_[j]) share = std::min(share, 1.5 / std::max(1.5, std::abs(step[j])));
            const double before = norm(now);
            bool better = false;
            for (int halving = 0; halving < 12 && !better; ++halving, share *= 0.5) {
                std::vector<double> next = now.u;
                for (std::size_t j = 0; j < n_; ++j)
                    next[j] =
                        std::clamp(next[j] + share * step[j], to_scale(j, bounds_[j].from), to_scale(j, bounds_[j].to));
                if (next == now.u) break;
                if (solves_ >= options_.most_solves)
                    return finish(std::move(now), SizeReason::unreachable, "the solves ran out before the targets met");
                try {
                    Tried trial = at(next, &now.field);
                    if (norm(trial) < before) {
                        now = std::move(trial);
                        better = true;
                    }
                } catch (const Error& error) {
                    if (error.code() != ErrorCode::not_converged && error.code() != ErrorCode::singular &&
                        error.code() != ErrorCode::outside_table && error.code() != ErrorCode::bad_law)
                        throw;
                }
            }
            if (!better)
                return finish(std::move(now), SizeReason::unreachable,
                              "no values within the bounds come nearer to the targets");
        }
        return finish(std::move(now), SizeReason::found, "");
    }

  private:
    struct Tried {
        std::vector<double> u;
        Field field;
        std::vector<double> value;
        std::vector<double> slope; // targets x parameters, in the scale of the search
    };

    [[nodiscard]] double to_scale(std::size_t j, double x) const { return by_ratio_[j] ? std::log(x) : x; }
    [[nodiscard]] double from_scale(std::size_t j, double u) const {
        return std::clamp(by_ratio_[j] ? std::exp(u) : u, bounds_[j].from, bounds_[j].to);
    }

    Tried at(const std::vector<double>& u, const Field* near) {
        ++solves_;
        Tried tried;
        tried.u = u;
        for (std::size_t j = 0; j < n_; ++j) body_.set(parameters_[j].parameter, from_scale(j, u[j]));
        SteadyOptions start;
        start.from = near;
        tried.field = steady(body_, start);
        for (const SizeTo& to : targets_) {
            const Gradient slope = gradient(tried.field, to.quantity);
            tried.value.push_back(slope.value());
            for (std::size_t j = 0; j < n_; ++j)
                tried.slope.push_back(slope[parameters_[j].parameter] * (by_ratio_[j] ? from_scale(j, u[j]) : 1.0));
        }
        return tried;
    }

    [[nodiscard]] double off(const Tried& t, std::size_t i) const {
        const Target& target = targets_[i].target;
        const double margin = 0.5 * options_.tolerance * scale_[i];
        const double aim = target.kind == Target::Kind::at_most
                               ? target.value - margin
                               : (target.kind == Target::Kind::at_least ? target.value + margin : target.value);
        return (t.value[i] - aim) / scale_[i];
    }
    [[nodiscard]] double norm(const Tried& t) const {
        double sum = 0.0;
        for (std::size_t i = 0; i < n_; ++i) sum += off(t, i) * off(t, i);
        return std::sqrt(sum);
    }
    [[nodiscard]] bool met(const Tried& t) const {
        for (std::size_t i = 0; i < n_; ++i)
            if (!(std::abs(off(t, i)) <= (targets_[i].target.limit() ? 0.499 : 1.0) * options_.tolerance)) return false;
        return true;
    }

    SizedTogether finish(Tried now, SizeReason reason, const char* why) {
        SizedTogether out;
        out.reason = reason;
        for (std::size_t j = 0; j < n_; ++j) out.values.push_back(from_scale(j, now.u[j]));
        out.reached = now.value;
        out.field = std::move(now.field);
        out.solves = solves_;
        out.message = why;
        if (!out.message.empty()) out.message += "; nearest: ";
        for (std::size_t j = 0; j < n_; ++j)
            out.message += text(j > 0 ? ", \"" : "\"", parameters_[j].parameter.name(), "\" = ", out.values[j]);
        out.message += " gives ";
        for (std::size_t i = 0; i < n_; ++i)
            out.message += text(i > 0 ? ", " : "", targets_[i].quantity.label(), " = ", out.reached[i], " ",
                                targets_[i].quantity.unit(), " for ", targets_[i].target.value);
        return out;
    }

    Body body_;
    const std::vector<SizeBy>& parameters_;
    const std::vector<SizeTo>& targets_;
    const SizeOptions& options_;
    std::size_t n_;
    std::vector<SizeBounds> bounds_;
    std::vector<bool> by_ratio_;
    std::vector<double> scale_;
    Index solves_ = 0;
};

} // namespace detail

TEPOR_INLINE SizedTogether size_for(const Body& body, const std::vector<SizeBy>& parameters,
                                    const std::vector<SizeTo>& targets, const SizeOptions& options) {
    detail::validate(options);
    if (parameters.empty() || parameters.size() != targets.size())
        throw Error(ErrorCode::contradiction, "targets",
                    detail::text("size_for: ", parameters.size(), " parameters for ", targets.size(),
                                 " targets; give as many of one as of the other"));
    return detail::SeveralSizer(body, parameters, targets, options).run();
}

} // namespace tepor
