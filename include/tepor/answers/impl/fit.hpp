#pragma once
// Fits of steady readings, and what is asked of a fit.

#include <cmath>
#include <tepor/answers/gradient.hpp>
#include <tepor/answers/impl/adjoint.hpp>
#include <tepor/answers/impl/chi_square.hpp>
#include <tepor/answers/impl/fit_run.hpp>
#include <tepor/answers/impl/gradient.hpp>
#include <tepor/answers/impl/least_squares.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor {

/// Fills a Fitted.
struct FitAccess {
    static Fitted make(const std::vector<FitBy>& parameters, const detail::LeastSquares& squares, std::size_t readings,
                       std::shared_ptr<const Body> body, std::shared_ptr<const detail::FitRun> run = nullptr) {
        Fitted out;
        for (const FitBy& by : parameters) out.parameters_.push_back(by.parameter);
        out.values_ = squares.p;
        out.covariance_ = squares.covariance;
        out.residuals_.assign(squares.residual.begin(), squares.residual.begin() + static_cast<Index>(readings));
        for (const double r : squares.residual) out.chi_square_ += r * r;
        out.degrees_ = static_cast<Index>(squares.residual.size()) - static_cast<Index>(parameters.size());
        for (const std::size_t j : squares.on_bounds) out.on_bounds_.push_back(parameters[j].parameter);
        out.passes_ = squares.passes;
        out.body_ = std::move(body);
        out.run_ = std::move(run);
        return out;
    }
};

namespace detail {

/// Half width of the 95 % interval in standard uncertainties. Source: standard normal distribution.
inline constexpr double interval_95 = 1.959963984540054;

inline Estimated estimated(double value, double variance) {
    const double u = std::sqrt(std::max(variance, 0.0));
    return {value, u, value - interval_95 * u, value + interval_95 * u};
}

inline void validate_fit(const Body& body, const std::vector<FitBy>& parameters, std::size_t readings,
                         const FitOptions& options) {
    if (parameters.empty() || readings == 0)
        throw Error(ErrorCode::missing, "", "fit: give at least one parameter and one reading");
    const Model& model = *body.model();
    for (std::size_t j = 0; j < parameters.size(); ++j) {
        const FitBy& by = parameters[j];
        const std::string& name = by.parameter.name();
        const Index slot = model.slot_of(by.parameter);
        if (slot < 0)
            throw Error(ErrorCode::unused, name,
                        text("fit: no statement of the body uses the parameter \"", name, "\""));
        for (std::size_t k = 0; k < j; ++k)
            if (parameters[k].parameter == by.parameter)
                throw Error(ErrorCode::contradiction, name, text("fit: the parameter \"", name, "\" is listed twice"));
        if (by.from && by.to && !(*by.from < *by.to))
            throw Error(
                ErrorCode::bad_value, name,
                text("fit: the bounds of \"", name, "\" are ", *by.from, " and ", *by.to, ", expected from < to"));
        if (by.prior && !(by.prior->uncertainty > 0.0 && std::isfinite(by.prior->value)))
            throw Error(
                ErrorCode::bad_value, name,
                text("fit: the prior of \"", name, "\" has the uncertainty ", by.prior->uncertainty, ", expected > 0"));
    }
    if (!(options.weakest > 0.0) || !(options.tolerance > 0.0) || options.most_passes < 1)
        throw Error(ErrorCode::bad_value, "FitOptions",
                    "FitOptions: weakest, tolerance and most_passes must be positive");
}

inline void validate_reading(const Reading& reading, std::size_t i) {
    if (!(reading.uncertainty > 0.0) || !std::isfinite(reading.uncertainty) || !std::isfinite(reading.value))
        throw Error(ErrorCode::bad_value, reading.quantity.label(),
                    text("fit: reading ", i + 1, " of ", reading.quantity.label(), " is ", reading.value,
                         " with the uncertainty ", reading.uncertainty,
                         "; expected a finite value and an uncertainty > 0"));
}

/// Steady readings, those of equal conditions solved together.
class SteadyFitModel final : public FitModel {
  public:
    SteadyFitModel(const Body& body, const std::vector<FitBy>& parameters, const std::vector<Reading>& readings)
        : parameters_(parameters), readings_(readings), group_(readings.size()) {
        for (std::size_t i = 0; i < readings.size(); ++i) {
            std::size_t g = 0;
            while (g < first_.size() && !same(readings[first_[g]].conditions, readings[i].conditions)) ++g;
            if (g == first_.size()) {
                first_.push_back(i);
                bodies_.push_back(body);
                for (const Condition& c : readings[i].conditions) {
                    for (const FitBy& by : parameters)
                        if (by.parameter == c.parameter)
                            throw Error(ErrorCode::contradiction, c.parameter.name(),
                                        text("fit: \"", c.parameter.name(),
                                             "\" is both a condition of a reading and to be fitted"));
                    bodies_.back().set(c.parameter, c.value);
                }
            }
            group_[i] = g;
        }
        fields_.resize(bodies_.size());
    }

    bool evaluate(const std::vector<double>& p, std::vector<double>& y, std::vector<double>& slope) override {
        const std::size_t m = p.size();
        y.assign(readings_.size(), 0.0);
        slope.assign(readings_.size() * m, 0.0);
        for (std::size_t g = 0; g < bodies_.size(); ++g) {
            for (std::size_t j = 0; j < m; ++j)
                if (!set_if_allowed(bodies_[g], parameters_[j].parameter, p[j])) return false;
            try {
                SteadyOptions start;
                if (fields_[g]) start.from = &*fields_[g];
                fields_[g] = steady(bodies_[g], start);
            } catch (const Error& error) {
                if (error.code() == ErrorCode::not_converged || error.code() == ErrorCode::singular ||
                    error.code() == ErrorCode::bad_law || error.code() == ErrorCode::outside_table)
                    return fail(g);
                throw;
            }
            Linearised at(*fields_[g], Purpose::many_solves);
            for (std::size_t i = 0; i < readings_.size(); ++i) {
                if (group_[i] != g) continue;
                const Gradient gradient = steady_gradient(at, readings_[i].quantity);
                y[i] = gradient.value();
                for (std::size_t j = 0; j < m; ++j) slope[i * m + j] = gradient[parameters_[j].parameter];
            }
        }
        return true;
    }

    [[nodiscard]] const Body& body() const { return bodies_[0]; }

  private:
    static bool same(const std::vector<Condition>& a, const std::vector<Condition>& b) {
        if (a.size() != b.size()) return false;
        for (const Condition& c : a) {
            bool found = false;
            for (const Condition& d : b) found = found || (c.parameter == d.parameter && c.value == d.value);
            if (!found) return false;
        }
        return true;
    }
    bool fail(std::size_t g) {
        fields_[g].reset();
        return false;
    }

    const std::vector<FitBy>& parameters_;
    const std::vector<Reading>& readings_;
    std::vector<std::size_t> group_;
    std::vector<std::size_t> first_;
    std::vector<Body> bodies_;
    std::vector<std::optional<Field>> fields_;
};

} // namespace detail

TEPOR_INLINE Estimated Fitted::operator[](const Parameter& parameter) const {
    const std::size_t m = parameters_.size();
    for (std::size_t j = 0; j < m; ++j)
        if (parameters_[j] == parameter) return detail::estimated(values_[j], covariance_[j * m + j]);
    throw Error(ErrorCode::unused, parameter.name(),
                detail::text("fit: the parameter \"", parameter.name(), "\" was not fitted"));
}

TEPOR_INLINE double Fitted::goodness() const {
    return degrees_ > 0 ? detail::chi_square_tail(chi_square_, static_cast<double>(degrees_)) : 1.0;
}

TEPOR_INLINE Estimated Fitted::spread(double value, const std::vector<double>& slope) const {
    const std::size_t m = parameters_.size();
    double variance = 0.0;
    for (std::size_t j = 0; j < m; ++j)
        for (std::size_t k = 0; k < m; ++k) variance += slope[j] * covariance_[j * m + k] * slope[k];
    return detail::estimated(value, variance);
}

TEPOR_INLINE Body Fitted::body_under(const std::vector<Condition>& conditions) const {
    Body body = *body_;
    for (const Condition& c : conditions) {
        for (const Parameter& p : parameters_)
            if (p == c.parameter)
                throw Error(ErrorCode::contradiction, p.name(),
                            detail::text("predict: \"", p.name(), "\" was fitted and cannot be a condition, too"));
        body.set(c.parameter, c.value);
    }
    return body;
}

TEPOR_INLINE Estimated Fitted::predict(const Quantity& quantity, const std::vector<Condition>& conditions) const {
    const Gradient slope = gradient(steady(body_under(conditions)), quantity);
    std::vector<double> by;
    for (const Parameter& p : parameters_) by.push_back(slope[p]);
    return spread(slope.value(), by);
}

TEPOR_INLINE Estimated Fitted::predict_at(const Quantity& quantity, double time,
                                          const std::vector<Condition>& conditions) const {
    if (!run_)
        throw Error(ErrorCode::not_supported, quantity.label(),
                    "predict_at: this fit is of steady readings and knows no time; ask predict()");
    std::vector<double> by;
    const double value = run_->predict(body_under(conditions), quantity, time, parameters_, by);
    return spread(value, by);
}

TEPOR_INLINE Fitted fit(const Body& body, const std::vector<FitBy>& parameters, const std::vector<Reading>& readings,
                        const FitOptions& options) {
    detail::validate_fit(body, parameters, readings.size(), options);
    std::vector<detail::LeastSquares::Datum> data;
    for (std::size_t i = 0; i < readings.size(); ++i) {
        detail::validate_reading(readings[i], i);
        data.push_back({readings[i].value, readings[i].uncertainty});
    }
    detail::SteadyFitModel model(body, parameters, readings);
    detail::LeastSquares squares(model, parameters, std::move(data), options);
    for (const FitBy& by : parameters) squares.p.push_back(body.value(by.parameter));
    squares.run();
    auto fitted = std::make_shared<Body>(body);
    for (std::size_t j = 0; j < parameters.size(); ++j) fitted->set(parameters[j].parameter, squares.p[j]);
    return FitAccess::make(parameters, squares, readings.size(), std::move(fitted));
}

} // namespace tepor
