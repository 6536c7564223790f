#pragma once
// Parameters, tables, schedules and laws by callback.

#include <algorithm>
#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

/// A law of a C program: one callback per batch, slopes its own or by differences.
class CallbackLaw final : public LawFunction {
  public:
    CallbackLaw(tepor_law_callback callback, void* user_data, std::size_t parameters, bool temperature,
                int32_t own_slope)
        : callback_(callback), user_data_(user_data), parameters_(parameters), temperature_(temperature),
          own_slope_(own_slope) {}

    int evaluate(const LawPoints& points, double* value, double* slope) const override {
        if (!slope) return call(points, value, nullptr);
        if (own_slope_ == TEPOR_SLOPE_BY_TEMPERATURE) return call(points, value, slope);
        const auto n = tepor::detail::as_size(points.count);
        if (own_slope_ == TEPOR_SLOPE_BY_ALL) {
            std::vector<double> all(lanes() * n);
            const int status = call(points, value, all.data());
            std::copy_n(all.begin(), n, slope);
            return status;
        }
        if (const int status = call(points, value, nullptr)) return status;
        if (temperature_) return difference(points, law_temperature_lane, slope);
        std::fill_n(slope, n, 0.0);
        return 0;
    }

    int derivatives(const LawPoints& points, double* derivative) const override {
        if (own_slope_ == TEPOR_SLOPE_BY_ALL) {
            const auto n = tepor::detail::as_size(points.count);
            std::vector<double> value(n);
            std::fill_n(derivative, lanes() * n, 0.0);
            return call(points, value.data(), derivative);
        }
        for (int lane = 0; lane < static_cast<int>(lanes()); ++lane)
            if (const int status = difference(points, lane, derivative + lane * points.count)) return status;
        return 0;
    }

  private:
    [[nodiscard]] std::size_t lanes() const { return law_parameter_lane + parameters_; }

    int call(const LawPoints& p, double* value, double* slope) const {
        const tepor_points points{static_cast<std::size_t>(p.count),
                                  temperature_ ? p.temperature : nullptr,
                                  p.fluid,
                                  p.x,
                                  p.y,
                                  p.time,
                                  p.parameters,
                                  parameters_};
        return callback_(&points, value, slope, user_data_);
    }

    /// Central differences of the whole batch; the steps are those of laws of plain doubles in C++.
    int difference(const LawPoints& p, int lane, double* out) const {
        const auto n = tepor::detail::as_size(p.count);
        std::vector<double> moved(n);
        std::vector<double> step(n);
        std::vector<double> parameters(p.parameters, p.parameters + parameters_);
        std::vector<double> above(n);
        std::vector<double> below(n);
        LawPoints at = p;
        at.parameters = parameters.data();
        const double* from = lane == law_temperature_lane ? p.temperature
                             : lane == law_fluid_lane     ? p.fluid
                             : lane == law_x_lane         ? p.x
                             : lane == law_y_lane         ? p.y
                                                          : nullptr;
        if (lane < law_parameter_lane && !from) {
            for (std::size_t i = 0; i < n; ++i) out[i] = 0.0;
            return 0;
        }
        double* const parameter =
            lane < law_parameter_lane ? nullptr : &parameters[tepor::detail::as_size(lane - law_parameter_lane)];
        const double centre = parameter ? *parameter : 0.0;
        if (!parameter)
            (lane == law_temperature_lane ? at.temperature
             : lane == law_fluid_lane     ? at.fluid
             : lane == law_x_lane         ? at.x
                                          : at.y) = moved.data();
        for (std::size_t i = 0; i < n; ++i)
            step[i] = parameter ? (centre != 0.0 ? 6.0e-6 * std::abs(centre) : tepor::detail::difference_step(centre))
                                : tepor::detail::difference_step(from[i]);
        for (const double sign : {1.0, -1.0}) {
            if (parameter)
                *parameter = centre + sign * (n > 0 ? step[0] : 0.0);
            else
                for (std::size_t i = 0; i < n; ++i) moved[i] = from[i] + sign * step[i];
            if (const int status = call(at, (sign > 0.0 ? above : below).data(), nullptr)) return status;
        }
        for (std::size_t i = 0; i < n; ++i) out[i] = (above[i] - below[i]) / (2.0 * step[i]);
        return 0;
    }

    tepor_law_callback callback_;
    void* user_data_;
    std::size_t parameters_;
    bool temperature_;
    int32_t own_slope_;
};

} // namespace tepor::c

extern "C" {

tepor_status tepor_parameter_create(tepor_session* session, const char* name, double value, tepor_parameter** out) {
    return tepor::c::run(session, name && out, [&] { *out = new tepor_parameter{tepor::Parameter(name, value)}; });
}
void tepor_parameter_free(tepor_parameter* parameter) {
    delete parameter;
}

tepor_value tepor_nothing(void) {
    return {0, 0, 0.0, nullptr};
}
tepor_value tepor_number(double number) {
    return {1, 0, number, nullptr};
}
tepor_value tepor_kelvin(double temperature) {
    return {4, 0, temperature, nullptr};
}
tepor_value tepor_of(const tepor_parameter* parameter) {
    return {2, 0, 0.0, parameter};
}
tepor_value tepor_by(const tepor_function* function) {
    return {3, 0, 0.0, function};
}

tepor_status tepor_table_create(tepor_session* session, const double* temperature, const double* value, size_t count,
                                int32_t hold, tepor_function** out) {
    return tepor::c::run(session, temperature && value && out, [&] {
        std::vector<tepor::TablePoint> points;
        for (size_t i = 0; i < count; ++i) points.push_back({temperature[i], value[i]});
        *out =
            new tepor_function{tepor::table(std::move(points), hold ? tepor::Outside::hold : tepor::Outside::refuse)};
    });
}

tepor_status tepor_schedule_create(tepor_session* session, const double* time, const double* value, size_t count,
                                   int32_t ramps, tepor_function** out) {
    return tepor::c::run(session, time && value && out, [&] {
        std::vector<tepor::ScheduleEntry> entries;
        for (size_t i = 0; i < count; ++i) entries.push_back({time[i], value[i]});
        *out = new tepor_function{
            tepor::schedule(std::move(entries), ramps ? tepor::Between::ramps : tepor::Between::steps)};
    });
}

tepor_status tepor_law_create(tepor_session* session, const char* name, tepor_law_callback callback, void* user_data,
                              const tepor_parameter* const* parameters, size_t parameter_count, tepor_law_kind kind,
                              tepor_own_slope own_slope, tepor_function** out) {
    return tepor::c::run(session, name && callback && out && (parameters || parameter_count == 0), [&] {
        std::vector<tepor::Parameter> list;
        for (size_t i = 0; i < parameter_count; ++i) {
            if (!parameters[i]) tepor::c::misuse("a parameter of the law is NULL");
            list.push_back(parameters[i]->parameter);
        }
        if (kind != TEPOR_LAW_OF_PLACE && kind != TEPOR_LAW_OF_TEMPERATURE && kind != TEPOR_LAW_OF_TIME)
            tepor::c::misuse("the kind of the law is no tepor_law_kind");
        if (own_slope < TEPOR_SLOPE_BY_DIFFERENCES || own_slope > TEPOR_SLOPE_BY_ALL)
            tepor::c::misuse("own_slope is no tepor_own_slope");
        const bool temperature = kind == TEPOR_LAW_OF_TEMPERATURE;
        auto function =
            std::make_shared<const tepor::c::CallbackLaw>(callback, user_data, parameter_count, temperature, own_slope);
        const tepor::Law law(std::move(function), std::move(list), {temperature, kind != TEPOR_LAW_OF_TIME, true},
                             own_slope == TEPOR_SLOPE_BY_ALL);
        *out = new tepor_function{law.named(name)};
    });
}
void tepor_function_free(tepor_function* function) {
    delete function;
}

} // extern "C"
