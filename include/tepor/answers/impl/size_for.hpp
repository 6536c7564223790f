#pragma once
// Sizing by one parameter: points tried, brackets, inverse interpolation, and the reasons.

#include <algorithm>
#include <cmath>
#include <tepor/answers/impl/size_certified.hpp>
#include <tepor/answers/impl/size_trial.hpp>

namespace tepor {

namespace detail {

class Sizer {
  public:
    Sizer(SizeTrial& trial, std::string name, std::optional<double> now, SizeBounds bounds, const Quantity& quantity,
          Target target, const SizeOptions& options)
        : trial_(trial), name_(std::move(name)), now_(now), bounds_(bounds), quantity_(quantity), target_(target),
          options_(options), by_ratio_(bounds.from > 0.0 && bounds.to > 3.0 * bounds.from) {}

    Sized run() {
        if (now_) now_ = std::clamp(*now_, bounds_.from, bounds_.to);
        const double middle = now_ && *now_ > bounds_.from && *now_ < bounds_.to
                                  ? *now_
                                  : from_scale(0.5 * (to_scale(bounds_.from) + to_scale(bounds_.to)));
        (void)try_at(middle);
        reach(bounds_.from, middle);
        reach(bounds_.to, middle);
        if (points_.empty()) return give_up();
        set_tolerance();
        if (options_.scan || slope_turns()) scan();
        std::vector<std::size_t> found = roots();
        if (found.empty()) return none();
        Sized out = at_point(nearest(found));
        for (const std::size_t r : found) out.answers.push_back(points_[r].x);
        out.reason = found.size() == 1 ? SizeReason::found : SizeReason::several;
        if (found.size() == 1) {
            out.message =
                text(name_, " = ", out.value, " gives ", quantity_.label(), " = ", out.reached, " ", quantity_.unit());
        } else {
            out.message = text("more than one value of ", name_, " meets the target: ");
            for (std::size_t i = 0; i < found.size(); ++i) out.message += text(i > 0 ? ", " : "", points_[found[i]].x);
            out.message += "; narrow the bounds to the one that is meant";
        }
        return out;
    }

  private:
    struct PointTried {
        double x;
        double value;
        double off; ///< value - target
        double slope;
        Field field;
    };

    [[nodiscard]] double to_scale(double x) const { return by_ratio_ ? std::log(x) : x; }
    [[nodiscard]] double from_scale(double u) const { return by_ratio_ ? std::exp(u) : u; }

    /// Tries a value; false when the body has no steady state there. The points stay sorted.
    bool try_at(double x) {
        if (solves_ >= options_.most_solves)
            throw Error(ErrorCode::not_converged, name_,
                        text("size_for: ", solves_, " solves were not enough; narrow the bounds or raise most_solves"));
        ++solves_;
        try {
            SizeTrial::Result result = trial_.at(x, near(x));
            PointTried point{x, result.value, result.value - aim(), result.slope, std::move(result.field)};
            const auto place = std::lower_bound(points_.begin(), points_.end(), x,
                                                [](const PointTried& p, double v) { return p.x < v; });
            last_ = static_cast<std::size_t>(place - points_.begin());
            points_.insert(place, std::move(point));
            return true;
        } catch (const Error& error) {
            const bool of_the_solve = error.code() == ErrorCode::not_converged || error.code() == ErrorCode::singular ||
                                      error.code() == ErrorCode::outside_table || error.code() == ErrorCode::bad_law ||
                                      (error.code() == ErrorCode::bad_value && !trial_.sloped());
            if (!of_the_solve) throw;
            failures_.push_back({x, error.code(), error.what()});
            return false;
        }
    }

    /// Field to start from: the nearest one (bodies made anew have other meshes).
    [[nodiscard]] const Field* near(double x) const {
        if (!trial_.sloped() || points_.empty()) return nullptr;
        std::size_t best = 0;
        for (std::size_t i = 1; i < points_.size(); ++i)
            if (std::abs(points_[i].x - x) < std::abs(points_[best].x - x)) best = i;
        return &points_[best].field;
    }

    /// Tries a bound; where there is no steady state it goes back towards the middle, half way each time.
    void reach(double bound, double middle) {
        if (try_at(bound) || bound == middle) return;
        double bad = to_scale(bound);
        double good = to_scale(middle);
        if (points_.empty()) return;
        for (int i = 0; i < 6; ++i) {
            const double half = 0.5 * (bad + good);
            (try_at(from_scale(half)) ? good : bad) = half;
        }
    }

    /// What is aimed at: a limit a little on its good side, so that the answer keeps it.
    [[nodiscard]] double aim() const {
        const double margin = 0.5 * tolerance_;
        return target_.kind == Target::Kind::at_most
                   ? target_.value - margin
                   : (target_.kind == Target::Kind::at_least ? target_.value + margin : target_.value);
    }

    void set_tolerance() {
        double low = points_[0].value;
        double high = low;
        for (const PointTried& p : points_) {
            low = std::min(low, p.value);
            high = std::max(high, p.value);
        }
        tolerance_ = options_.tolerance * std::max(std::abs(target_.value), high - low);
        if (tolerance_ == 0.0) tolerance_ = options_.tolerance;
        for (PointTried& p : points_) p.off = p.value - aim();
    }

    [[nodiscard]] bool close(const PointTried& p) const {
        return std::abs(p.off) <= (target_.limit() ? 0.499 : 1.0) * tolerance_;
    }

    /// Slopes of both signs are among the points (by the values where slopes are not at hand).
    [[nodiscard]] bool slope_turns() const {
        bool up = false;
        bool down = false;
        for (std::size_t i = 0; i < points_.size(); ++i) {
            double slope = points_[i].slope;
            if (std::isnan(slope)) slope = i + 1 < points_.size() ? points_[i + 1].value - points_[i].value : 0.0;
            up = up || slope > 0.0;
            down = down || slope < 0.0;
        }
        return up && down;
    }

    void scan() {
        constexpr int steps = 16;
        const double a = to_scale(points_.front().x);
        const double b = to_scale(points_.back().x);
        for (int i = 1; i < steps; ++i) (void)try_at(from_scale(a + (b - a) * i / steps));
        // an extremum between two points may reach the target although both are on one side of it
        for (std::size_t i = 0; i + 1 < points_.size(); ++i) {
            const PointTried& p = points_[i];
            const PointTried& q = points_[i + 1];
            if (p.off * q.off <= 0.0 || !(p.off * p.slope < 0.0) || !(q.off * q.slope > 0.0)) continue;
            chase_extremum(i);
        }
    }

    /// Between points i and i + 1 the quantity turns towards the target: follow the turn until it crosses or clearly does not.
    void chase_extremum(std::size_t i) {
        double left = points_[i].x;
        double right = points_[i + 1].x;
        double left_slope = points_[i].slope;
        double right_slope = points_[i + 1].slope;
        const double side = points_[i].off;
        for (int pass = 0; pass < 12; ++pass) {
            double x = left + (right - left) * left_slope / (left_slope - right_slope);
            if (!(x > left + 0.05 * (right - left)) || !(x < right - 0.05 * (right - left))) x = 0.5 * (left + right);
            if (!try_at(x)) return;
            const PointTried& p = points_[last_];
            if (p.off * side <= 0.0 || std::abs(p.slope) * (right - left) < 1e-3 * std::abs(p.off)) return;
            if (p.slope * left_slope > 0.0) {
                left = x;
                left_slope = p.slope;
            } else {
                right = x;
                right_slope = p.slope;
            }
        }
    }

    /// Positions of all answers: points that meet the target, and what lies between points on either side of it.
    std::vector<std::size_t> roots() {
        std::vector<double> answers;
        for (const PointTried& p : points_)
            if (close(p)) answers.push_back(p.x);
        std::vector<std::pair<double, double>> brackets;
        for (std::size_t i = 0; i + 1 < points_.size(); ++i)
            if (!close(points_[i]) && !close(points_[i + 1]) && points_[i].off * points_[i + 1].off < 0.0 &&
                !fails_between(points_[i].x, points_[i + 1].x))
                brackets.emplace_back(points_[i].x, points_[i + 1].x);
        for (const auto& [a, b] : brackets) answers.push_back(close_in(a, b));
        std::sort(answers.begin(), answers.end());
        std::vector<std::size_t> found;
        for (const double x : answers)
            for (std::size_t i = 0; i < points_.size(); ++i)
                if (points_[i].x == x && (found.empty() || found.back() != i)) found.push_back(i);
        return found;
    }

    [[nodiscard]] bool fails_between(double a, double b) const {
        for (const Failure& f : failures_)
            if (f.x > a && f.x < b) return true;
        return false;
    }

    [[nodiscard]] const PointTried& point(double x) const {
        for (const PointTried& p : points_)
            if (p.x == x) return p;
        return points_[0];
    }

    /// Where a quotient of straight lines meets the target between two points. Resistances in series and in parallel make
    /// heats and temperatures such quotients of a thickness, a conductivity, a film coefficient or a power.
    [[nodiscard]] double interpolate(const PointTried& a, const PointTried& b) const {
        const bool at_a = std::abs(a.off) < std::abs(b.off);
        const PointTried& p = at_a ? a : b;
        const PointTried& q = at_a ? b : a;
        const double h = q.x - p.x;
        const double bend = p.slope * h / (q.off - p.off); // > 0: no pole between the two
        if (bend > 0.0) return p.x - p.off / (p.slope + (bend - 1.0) / h * p.off);
        const PointTried* third = nullptr;
        for (const PointTried& t : points_)
            if (&t != &a && &t != &b && (!third || std::abs(t.off) < std::abs(third->off))) third = &t;
        const double chord = p.x - p.off * h / (q.off - p.off);
        if (trial_.sloped() || !third) return chord;
        // x = (A + B off) / (1 + C off) through three points
        const double f2 = p.off - q.off;
        const double f3 = p.off - third->off;
        const double x2 = p.x - q.x;
        const double x3 = p.x - third->x;
        const double y2 = p.x * p.off - q.x * q.off;
        const double y3 = p.x * p.off - third->x * third->off;
        const double C = (x3 * f2 - x2 * f3) / (y2 * f3 - y3 * f2);
        const double B = (x2 + C * y2) / f2;
        const double x = p.x * (1.0 + C * p.off) - B * p.off;
        return x > a.x && x < b.x ? x : chord;
    }

    /// Closes the bracket [a, b] on its answer.
    double close_in(double a, double b) {
        double width = to_scale(b) - to_scale(a);
        int slow = 0;
        for (;;) {
            double x = interpolate(point(a), point(b));
            if (slow >= 2 || !(x > a && x < b)) x = from_scale(0.5 * (to_scale(a) + to_scale(b)));
            if (!(x > a && x < b)) return std::abs(point(a).off) < std::abs(point(b).off) ? a : b;
            if (!try_at(x)) return std::abs(point(a).off) < std::abs(point(b).off) ? a : b;
            const PointTried& p = points_[last_];
            if (close(p)) return x;
            (p.off * point(a).off > 0.0 ? a : b) = x;
            const double now = to_scale(b) - to_scale(a);
            slow = now > 0.5 * width ? slow + 1 : 0;
            width = now;
        }
    }

    [[nodiscard]] std::size_t nearest(const std::vector<std::size_t>& found) const {
        const double to = now_ ? *now_ : bounds_.from;
        std::size_t best = found[0];
        for (const std::size_t r : found)
            if (std::abs(points_[r].x - to) < std::abs(points_[best].x - to)) best = r;
        return best;
    }

    Sized at_point(std::size_t i) {
        Sized out;
        out.value = points_[i].x;
        out.reached = points_[i].value;
        out.field = std::move(points_[i].field);
        out.solves = solves_;
        return out;
    }

    /// No answer between the points that could be tried.
    Sized none() {
        bool all_kept = target_.limit() && failures_.empty();
        std::size_t best = 0;
        for (std::size_t i = 0; i < points_.size(); ++i) {
            all_kept = all_kept && target_.kept_by(points_[i].value);
            if (std::abs(points_[i].off) < std::abs(points_[best].off)) best = i;
        }
        if (all_kept) {
            const double stay = now_ ? *now_ : bounds_.from;
            for (std::size_t i = 0; i < points_.size(); ++i)
                if (std::abs(points_[i].x - stay) < std::abs(points_[best].x - stay)) best = i;
            Sized out = at_point(best);
            out.reason = SizeReason::always_met;
            out.message = text("every value of ", name_, " from ", bounds_.from, " to ", bounds_.to,
                               " keeps the limit ", target_.value, " ", quantity_.unit());
            return out;
        }
        Sized out = at_point(best);
        out.reason = SizeReason::unreachable;
        out.message = text(quantity_.label(), " does not reach ", target_.value, " ", quantity_.unit(), " for ", name_,
                           " from ", bounds_.from, " to ", bounds_.to, "; it comes nearest at ", out.value, " with ",
                           out.reached, " ", quantity_.unit());
        if (failures_.empty()) return out;
        fail(out);
        return out;
    }

    void fail(Sized& out) const {
        // the failure next to what could be solved
        const Failure* worst = &failures_[0];
        for (const Failure& f : failures_)
            if (std::abs(f.x - out.value) < std::abs(worst->x - out.value)) worst = &f;
        const bool lost = worst->code == ErrorCode::not_converged || worst->code == ErrorCode::singular;
        out.reason = lost ? SizeReason::runaway : SizeReason::failed;
        out.failed_at = worst->x;
        out.message += text(out.message.empty() ? "" : "; ", "at ", name_, " = ", worst->x,
                            lost ? " there is no steady state (a source that runs away, or values out of hand): "
                                 : " the body has no meaning: ",
                            worst->what);
    }

    Sized give_up() {
        Sized out;
        out.solves = solves_;
        out.value = failures_[0].x;
        fail(out);
        return out;
    }

    struct Failure {
        double x;
        ErrorCode code;
        std::string what;
    };

    SizeTrial& trial_;
    std::string name_;
    std::optional<double> now_;
    SizeBounds bounds_;
    const Quantity& quantity_;
    Target target_;
    const SizeOptions& options_;
    bool by_ratio_;
    double tolerance_ = 0.0;
    std::vector<PointTried> points_; // rising x
    std::vector<Failure> failures_;
    std::size_t last_ = 0;
    Index solves_ = 0;
};

} // namespace detail

TEPOR_INLINE Sized size_for(const Body& body, const Parameter& parameter, const Quantity& quantity, Target target,
                            const SizeOptions& options) {
    detail::validate(options);
    const detail::SizeBounds bounds = detail::size_bounds(body, parameter, options.from, options.to);
    const Model& model = *body.model();
    for (const double b : {bounds.from, bounds.to}) model.check_slot(model.slot_of(parameter), b);
    detail::SizeTrial trial(body, parameter, quantity);
    const auto run = [&](Target to) {
        return detail::Sizer(trial, '"' + parameter.name() + '"', body.value(parameter), bounds, quantity, to, options)
            .run();
    };
    const auto make = [&](double value) {
        Body sized = body;
        sized.set(parameter, value);
        return sized;
    };
    return options.certified_side ? detail::size_certified(run, make, quantity, target, options) : run(target);
}

TEPOR_INLINE Sized size_for(const BodyMaker& maker, const Quantity& quantity, Target target,
                            const SizeOptions& options) {
    detail::validate(options);
    if (!options.from || !options.to)
        throw Error(ErrorCode::missing, "bounds",
                    "size_for: bodies made by a function need both bounds, {.from = ..., .to = ...}");
    if (!(*options.from < *options.to))
        throw Error(
            ErrorCode::bad_value, "bounds",
            detail::text("size_for: the bounds are ", *options.from, " and ", *options.to, ", expected from < to"));
    detail::SizeTrial trial(maker, quantity);
    const detail::SizeBounds bounds{*options.from, *options.to};
    const auto run = [&](Target to) {
        return detail::Sizer(trial, "the value", std::nullopt, bounds, quantity, to, options).run();
    };
    const auto make = [&](double value) { return maker.make(value); };
    return options.certified_side ? detail::size_certified(run, make, quantity, target, options) : run(target);
}

} // namespace tepor
