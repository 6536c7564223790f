#pragma once
// Fits of readings over time.

#include <cmath>
#include <memory>
#include <tepor/answers/fit_march.hpp>
#include <tepor/answers/impl/fit.hpp>
#include <tepor/answers/impl/march_fit_model.hpp>

namespace tepor {

namespace detail {

inline Fitted fit_march(const Body& body, const Initial& start, const MarchScheme& scheme,
                        const std::vector<FitBy>& parameters, const std::vector<TimedReading>& readings,
                        const FitOptions& options) {
    validate_fit(body, parameters, readings.size(), options);
    std::vector<LeastSquares::Datum> data;
    for (std::size_t i = 0; i < readings.size(); ++i) {
        validate_reading({readings[i].quantity, readings[i].value, readings[i].uncertainty, {}}, i);
        if (!(readings[i].time >= start.time()) || !std::isfinite(readings[i].time))
            throw Error(ErrorCode::outside, readings[i].quantity.label(),
                        text("fit: reading ", i + 1, " is of ", readings[i].time, " s, before the march starts at ",
                             start.time(), " s"));
        data.push_back({readings[i].value, readings[i].uncertainty});
    }
    MarchFitModel model(body, start, scheme, parameters, readings);
    LeastSquares squares(model, parameters, std::move(data), options);
    for (const FitBy& by : parameters) squares.p.push_back(body.value(by.parameter));
    squares.run();
    auto fitted = std::make_shared<Body>(body);
    for (std::size_t j = 0; j < parameters.size(); ++j) fitted->set(parameters[j].parameter, squares.p[j]);
    return FitAccess::make(parameters, squares, readings.size(), std::move(fitted),
                           std::make_shared<MarchFitRun>(start, scheme));
}

} // namespace detail

TEPOR_INLINE Fitted fit(const Body& body, const Initial& start, const Theta& steps,
                        const std::vector<FitBy>& parameters, const std::vector<TimedReading>& readings,
                        const FitOptions& options) {
    return detail::fit_march(body, start, steps, parameters, readings, options);
}

TEPOR_INLINE Fitted fit(const Body& body, const Initial& start, const Adaptive& steps,
                        const std::vector<FitBy>& parameters, const std::vector<TimedReading>& readings,
                        const FitOptions& options) {
    return detail::fit_march(body, start, steps, parameters, readings, options);
}

} // namespace tepor
