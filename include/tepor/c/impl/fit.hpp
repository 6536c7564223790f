#pragma once
// Parameters from readings.

#include <tepor/c/impl/march.hpp>

struct tepor_fitted {
    tepor::Fitted fitted;
};

namespace tepor::c {

inline FitOptions fit_options_of(const tepor_fit_options* options) {
    tepor_fit_options o = tepor_fit_options_default();
    if (options) take(options, o);
    FitOptions how;
    how.weakest = o.weakest;
    how.tolerance = o.tolerance;
    how.most_passes = static_cast<Index>(o.most_passes);
    return how;
}

inline std::vector<FitBy> fit_by_of(const tepor_fit_by* by, std::size_t count) {
    std::vector<FitBy> out;
    for (std::size_t i = 0; i < count; ++i) {
        if (!by[i].parameter) misuse("a parameter of the fit is NULL");
        FitBy one{by[i].parameter->parameter, given(by[i].from), given(by[i].to), {}};
        if (by[i].prior_uncertainty != 0.0) one.prior = Prior{by[i].prior, by[i].prior_uncertainty};
        out.push_back(std::move(one));
    }
    return out;
}

inline std::vector<Condition> conditions_of(const tepor_condition* conditions, std::size_t count) {
    std::vector<Condition> out;
    if (count > 0 && !conditions) misuse("the conditions are NULL, though their number is not 0");
    for (std::size_t i = 0; i < count; ++i) {
        if (!conditions[i].parameter) misuse("the parameter of a condition is NULL");
        out.push_back({conditions[i].parameter->parameter, conditions[i].value});
    }
    return out;
}

inline const Quantity& quantity_of(const tepor_reading& reading) {
    if (!reading.quantity) misuse("the quantity of a reading is NULL");
    return reading.quantity->quantity;
}

inline void give_estimated(const Estimated& found, tepor_estimated* to) {
    tepor_estimated out{};
    out.value = found.value;
    out.uncertainty = found.uncertainty;
    out.low = found.low;
    out.high = found.high;
    give(out, to);
}

} // namespace tepor::c

extern "C" {

tepor_fit_options tepor_fit_options_default(void) {
    const tepor::FitOptions usual;
    tepor_fit_options o{};
    o.size = sizeof o;
    o.weakest = usual.weakest;
    o.tolerance = usual.tolerance;
    o.most_passes = usual.most_passes;
    return o;
}
tepor_status tepor_fit(tepor_session* session, const tepor_body* body, const tepor_fit_by* by, size_t by_count,
                       const tepor_reading* readings, size_t reading_count, const tepor_fit_options* options,
                       tepor_fitted** out) {
    return tepor::c::run(session, body && by && readings && out, [&] {
        std::vector<tepor::Reading> read;
        for (size_t i = 0; i < reading_count; ++i)
            read.push_back({tepor::c::quantity_of(readings[i]), readings[i].value, readings[i].uncertainty,
                            tepor::c::conditions_of(readings[i].conditions, readings[i].condition_count)});
        *out = new tepor_fitted{
            tepor::fit(body->body, tepor::c::fit_by_of(by, by_count), read, tepor::c::fit_options_of(options))};
    });
}
tepor_status tepor_fit_march(tepor_session* session, const tepor_body* body, double temperature,
                             const tepor_march_options* steps, const tepor_fit_by* by, size_t by_count,
                             const tepor_reading* readings, size_t reading_count, const tepor_fit_options* options,
                             tepor_fitted** out) {
    return tepor::c::run(session, body && steps && by && readings && out, [&] {
        std::vector<tepor::TimedReading> read;
        for (size_t i = 0; i < reading_count; ++i) {
            if (readings[i].condition_count != 0)
                tepor::c::misuse("readings of a march have no conditions; march each condition by itself");
            read.push_back(
                {tepor::c::quantity_of(readings[i]), readings[i].time, readings[i].value, readings[i].uncertainty});
        }
        const tepor_march_options o = tepor::c::options_of(steps);
        const tepor::Initial start = tepor::initial(temperature, tepor::c::phase_of(o));
        const std::vector<tepor::FitBy> parameters = tepor::c::fit_by_of(by, by_count);
        const tepor::FitOptions how = tepor::c::fit_options_of(options);
        *out = new tepor_fitted{o.step != 0.0
                                    ? tepor::fit(body->body, start, tepor::c::theta_of(o), parameters, read, how)
                                    : tepor::fit(body->body, start, tepor::c::adaptive_of(o), parameters, read, how)};
    });
}
void tepor_fitted_free(tepor_fitted* fitted) {
    delete fitted;
}
tepor_status tepor_fitted_value(tepor_session* session, const tepor_fitted* fitted, const tepor_parameter* parameter,
                                tepor_estimated* out) {
    return tepor::c::run(session, fitted && parameter && out,
                         [&] { tepor::c::give_estimated(fitted->fitted[parameter->parameter], out); });
}
tepor_status tepor_fitted_predict(tepor_session* session, const tepor_fitted* fitted, const tepor_quantity* quantity,
                                  const tepor_condition* conditions, size_t count, tepor_estimated* out) {
    return tepor::c::run(session, fitted && quantity && out, [&] {
        tepor::c::give_estimated(fitted->fitted.predict(quantity->quantity, tepor::c::conditions_of(conditions, count)),
                                 out);
    });
}
tepor_status tepor_fitted_predict_at(tepor_session* session, const tepor_fitted* fitted, const tepor_quantity* quantity,
                                     double time, const tepor_condition* conditions, size_t count,
                                     tepor_estimated* out) {
    return tepor::c::run(session, fitted && quantity && out, [&] {
        tepor::c::give_estimated(
            fitted->fitted.predict_at(quantity->quantity, time, tepor::c::conditions_of(conditions, count)), out);
    });
}
tepor_status tepor_fitted_agreement(tepor_session* session, const tepor_fitted* fitted, tepor_agreement* out) {
    return tepor::c::run(session, fitted && out, [&] {
        tepor_agreement found{};
        found.chi_square = fitted->fitted.chi_square();
        found.goodness = fitted->fitted.goodness();
        found.degrees_of_freedom = fitted->fitted.degrees_of_freedom();
        found.passes = fitted->fitted.passes();
        found.on_bounds = static_cast<int64_t>(fitted->fitted.on_bounds().size());
        tepor::c::give(found, out);
    });
}
tepor_status tepor_fitted_covariance(tepor_session* session, const tepor_fitted* fitted, double* covariance,
                                     size_t entries) {
    return tepor::c::run(session, fitted && covariance,
                         [&] { tepor::c::copy_out(fitted->fitted.covariance(), covariance, entries); });
}
tepor_status tepor_fitted_residuals(tepor_session* session, const tepor_fitted* fitted, double* residuals,
                                    size_t entries) {
    return tepor::c::run(session, fitted && residuals,
                         [&] { tepor::c::copy_out(fitted->fitted.residuals(), residuals, entries); });
}

} // extern "C"
