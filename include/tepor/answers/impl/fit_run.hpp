#pragma once
// What fits share: trial values, and the run behind a fit over time.

#include <tepor/base/error.hpp>
#include <tepor/body/body.hpp>
#include <tepor/describe/quantity.hpp>
#include <vector>

namespace tepor::detail {

/// Values outside a parameter's range are refused by the body: a trial there is no solution.
inline bool set_if_allowed(Body& body, const Parameter& parameter, double value) {
    try {
        body.set(parameter, value);
        return true;
    } catch (const Error& error) {
        if (error.code() == ErrorCode::bad_value) return false;
        throw;
    }
}

/// What a fit over time marches with.
class FitRun {
  public:
    FitRun() = default;
    FitRun(const FitRun&) = delete;
    FitRun& operator=(const FitRun&) = delete;
    virtual ~FitRun() = default;
    /// Value at a time of the march of `body`, and its slope by the parameters.
    virtual double predict(const Body& body, const Quantity& quantity, double time,
                           const std::vector<Parameter>& parameters, std::vector<double>& slope) const = 0;
};

} // namespace tepor::detail
