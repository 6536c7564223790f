#pragma once
// Bounds of a sizing, and a body as a function of one number.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/answers/gradient.hpp>
#include <tepor/answers/size_for.hpp>
#include <tepor/base/text.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor::detail {

/// Bounds of a parameter, as given or as its value and uses suggest.
struct SizeBounds {
    double from;
    double to;
};

inline SizeBounds size_bounds(const Body& body, const Parameter& parameter, const std::optional<double>& from,
                              const std::optional<double>& to) {
    const Model& model = *body.model();
    const Index slot = model.slot_of(parameter);
    if (slot < 0) {
        std::vector<std::string> names;
        for (const Parameter& p : model.parameters) names.push_back(p.name());
        throw Error(ErrorCode::unused, parameter.name(),
                    text("size_for: no statement of this body uses the parameter \"", parameter.name(),
                         "\"; its parameters are ", quoted_list(names)));
    }
    const double now = body.value(parameter);
    bool temperature = false;
    bool fraction = false;
    for (const Model::SlotUse& use : model.uses[as_size(slot)]) {
        temperature = temperature || use.range == Range::celsius_temperature || use.range == Range::kelvin_temperature;
        fraction = fraction || use.range == Range::fraction;
    }
    if ((!from || !to) && (temperature || !(now > 0.0)))
        throw Error(ErrorCode::missing, parameter.name(),
                    text("size_for: \"", parameter.name(), "\" = ", now,
                         temperature ? " is a temperature" : " is not positive",
                         "; say between which values to search, {.from = ..., .to = ...}"));
    SizeBounds bounds{from ? *from : now / 100.0, to ? *to : (fraction ? std::min(1.0, 100.0 * now) : 100.0 * now)};
    if (!(bounds.from < bounds.to) || !std::isfinite(bounds.from) || !std::isfinite(bounds.to))
        throw Error(ErrorCode::bad_value, parameter.name(),
                    text("size_for: the bounds of \"", parameter.name(), "\" are ", bounds.from, " and ", bounds.to,
                         ", expected finite numbers with from < to"));
    return bounds;
}

inline void validate(const SizeOptions& options) {
    if (!(options.tolerance > 0.0 && options.tolerance < 0.1))
        throw Error(ErrorCode::bad_value, "tolerance",
                    text("SizeOptions: tolerance = ", options.tolerance, ", expected 0 < tolerance < 0.1"));
    if (options.most_solves < 4)
        throw Error(ErrorCode::bad_value, "most_solves",
                    text("SizeOptions: most_solves = ", options.most_solves, ", expected at least 4"));
}

/// A body as a function of one number.
class SizeTrial {
  public:
    SizeTrial(const Body& body, const Parameter& parameter, const Quantity& quantity)
        : body_(body), parameter_(&parameter), quantity_(quantity) {}
    SizeTrial(const BodyMaker& maker, const Quantity& quantity) : maker_(&maker), quantity_(quantity) {}

    struct Result {
        Field field;
        double value = 0.0;
        double slope = std::numeric_limits<double>::quiet_NaN();
    };
    Result at(double x, const Field* near) {
        Result result;
        if (maker_) {
            result.field = steady(maker_->make(x));
            result.value = result.field[quantity_];
            return result;
        }
        body_->set(*parameter_, x);
        SteadyOptions options;
        options.from = near;
        result.field = steady(*body_, options);
        const Gradient slope = gradient(result.field, quantity_);
        result.value = slope.value();
        result.slope = slope[*parameter_];
        return result;
    }

    [[nodiscard]] bool sloped() const noexcept { return !maker_; }

  private:
    std::optional<Body> body_;
    const Parameter* parameter_ = nullptr;
    const BodyMaker* maker_ = nullptr;
    const Quantity& quantity_;
};

} // namespace tepor::detail
