#pragma once
// fit: parameters from readings, with their uncertainty and a verdict on what the readings cannot tell apart.

#include <memory>
#include <optional>
#include <string>
#include <tepor/base/config.hpp>
#include <tepor/body/body.hpp>
#include <tepor/describe/quantity.hpp>
#include <tepor/field/field.hpp>
#include <vector>

namespace tepor {

/// A parameter held at a value while a reading was taken.
struct Condition {
    Parameter parameter;
    double value = 0.0;
};

/// One measured number.
struct Reading {
    Quantity quantity;
    double value = 0.0;
    double uncertainty = 0.0;            ///< standard uncertainty (one sigma), > 0, in the unit of the quantity
    std::vector<Condition> conditions{}; ///< what was different from the body's present values
};

/// What is known of a parameter before the readings.
struct Prior {
    double value = 0.0;
    double uncertainty = 0.0; ///< standard uncertainty, > 0
};

/// A parameter to be found; it starts from its present value in the body.
struct FitBy {
    Parameter parameter;
    std::optional<double> from{}; ///< bounds
    std::optional<double> to{};
    std::optional<Prior> prior{};
};

struct FitOptions {
    /// A combination of parameters whose relative standard uncertainty is larger than this is refused: the readings do not tell
    /// its members apart.
    double weakest = 1.0;
    double tolerance = 1e-10; ///< relative change of the sum of squares at which it stops
    Index most_passes = 100;
};

/// A value with its uncertainty.
struct Estimated {
    double value = 0.0;
    double uncertainty = 0.0; ///< standard uncertainty
    double low = 0.0;         ///< 95 % interval
    double high = 0.0;
};

namespace detail {
class FitRun;
}

/// What a fit found.
class Fitted {
  public:
    /// Of one parameter, with its 95 % interval. @throws Error unused  it was not fitted
    [[nodiscard]] TEPOR_INLINE Estimated operator[](const Parameter& parameter) const;

    [[nodiscard]] const std::vector<Parameter>& parameters() const noexcept { return parameters_; }
    /// In the order of the parameters.
    [[nodiscard]] const std::vector<double>& values() const noexcept { return values_; }
    /// Covariance of the values, row by row, from the uncertainties as given.
    [[nodiscard]] const std::vector<double>& covariance() const noexcept { return covariance_; }
    /// Sum of ((model - reading) / uncertainty)^2 over the readings; expected near their number less that of the parameters.
    [[nodiscard]] double chi_square() const noexcept { return chi_square_; }
    /// Readings (and priors) less parameters.
    [[nodiscard]] Index degrees_of_freedom() const noexcept { return degrees_; }
    /// Probability of a chi-square as large as this if model and uncertainties are right; below 0.01 look for what is wrong.
    [[nodiscard]] TEPOR_INLINE double goodness() const;
    /// (model - reading) / uncertainty, in the order of the readings.
    [[nodiscard]] const std::vector<double>& residuals() const noexcept { return residuals_; }
    /// Parameters that ended on one of their bounds; their intervals and those of their partners are not to be trusted.
    [[nodiscard]] const std::vector<Parameter>& on_bounds() const noexcept { return on_bounds_; }
    [[nodiscard]] Index passes() const noexcept { return passes_; }

    /// Any quantity of the steady state at the fitted parameters with its 95 % interval from their covariance, under conditions.
    /// @throws Error contradiction  a condition on a fitted parameter; else as steady() and gradient()
    [[nodiscard]] TEPOR_INLINE Estimated predict(const Quantity& quantity,
                                                 const std::vector<Condition>& conditions = {}) const;
    /// The same at a time [s] of the march that was fitted, which may lie beyond the last reading; between steps on the straight
    /// line between their ends.
    /// @throws Error not_supported  a fit of steady readings; outside  a time before the start
    [[nodiscard]] TEPOR_INLINE Estimated predict_at(const Quantity& quantity, double time,
                                                    const std::vector<Condition>& conditions = {}) const;

  private:
    friend struct FitAccess;
    [[nodiscard]] TEPOR_INLINE Estimated spread(double value, const std::vector<double>& slope) const;
    [[nodiscard]] TEPOR_INLINE Body body_under(const std::vector<Condition>& conditions) const;

    std::vector<Parameter> parameters_;
    std::vector<double> values_;
    std::vector<double> covariance_;
    std::vector<double> residuals_;
    std::vector<Parameter> on_bounds_;
    double chi_square_ = 0.0;
    Index degrees_ = 0;
    Index passes_ = 0;
    std::shared_ptr<const Body> body_;          ///< at the fitted values
    std::shared_ptr<const detail::FitRun> run_; ///< of a fit over time
};

/// Parameters of a body from steady readings, by least squares weighted with the uncertainties (Levenberg-Marquardt on adjoint
/// slopes). Readings under different conditions (another power, another gas temperature) may be mixed: that is what tells a
/// film from an emissivity.
///
///     Fitted found = fit(wall, {{h}, {grey}}, {{.quantity = shell, .value = 61.2, .uncertainty = 0.5}, ...});
///
/// @throws Error no_answer      the readings do not tell some parameters apart (offender: their names); a prior helps
///               missing        fewer than one reading or parameter
///               bad_value      uncertainties not > 0, bounds
///               unused         a parameter the body does not use
///               not_converged  the passes ran out
[[nodiscard]] TEPOR_INLINE Fitted fit(const Body& body, const std::vector<FitBy>& parameters,
                                      const std::vector<Reading>& readings, const FitOptions& options = {});

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/fit.hpp>
#endif
