#pragma once
// Fits of readings over time.

#include <algorithm>
#include <cmath>
#include <optional>
#include <tepor/answers/fit_march.hpp>
#include <tepor/answers/impl/fit.hpp>
#include <tepor/answers/impl/march_forward.hpp>
#include <tepor/solve/march.hpp>

namespace tepor {

namespace detail {

class MarchFitModel final : public FitModel {
  public:
    MarchFitModel(const Body& body, const Initial& start, const Theta& steps, const std::vector<FitBy>& parameters,
                  const std::vector<TimedReading>& readings)
        : body_(body), start_(start), steps_(steps), parameters_(parameters), readings_(readings) {
        for (const TimedReading& r : readings) end_ = std::max(end_, r.time);
        for (const FitBy& by : parameters) slots_.push_back(as_id(body.model()->slot_of(by.parameter)));
    }

    bool evaluate(const std::vector<double>& p, std::vector<double>& y, std::vector<double>& slope) override {
        const std::size_t m = p.size();
        for (std::size_t j = 0; j < m; ++j)
            if (!set_if_allowed(body_, parameters_[j].parameter, p[j])) return false;
        std::optional<March> march;
        try {
            march.emplace(body_, start_, steps_);
            march->record(1e6);
            const double last = std::ceil((end_ - march->time()) / steps_.step - 1e-9);
            for (double k = 0.0; k < std::max(last, 1.0); ++k) march->advance().require();
        } catch (const Error& error) {
            if (error.code() == ErrorCode::not_converged || error.code() == ErrorCode::singular ||
                error.code() == ErrorCode::bad_law || error.code() == ErrorCode::outside_table)
                return false;
            throw;
        }
        const MarchTape& tape = *march->tape();
        const Model& model = *march->shared_model();
        std::vector<Functional> functionals;
        for (const TimedReading& r : readings_) {
            functionals.push_back(compile(model, body_.values(), r.quantity));
            if (!functionals.back().reaction.unknown.empty())
                throw Error(ErrorCode::not_supported, r.quantity.label(),
                            text("fit: ", r.quantity.label(),
                                 " at an instant of a march holds a rate of change; give the face a film, or read "
                                 "temperatures"));
        }
        y.assign(readings_.size(), 0.0);
        slope.assign(readings_.size() * m, 0.0);
        std::vector<double> here(m);
        MarchForward forward(*march, slots_);
        const double begin = tape.legs.front().from;
        forward.run([&](Index leg) {
            const double t = leg < 0 ? begin : tape.legs[as_size(leg)].to;
            const double before = leg < 0 ? t : tape.legs[as_size(leg)].from;
            const double after =
                static_cast<std::size_t>(leg + 1) < tape.legs.size() ? tape.legs[as_size(leg + 1)].to : t;
            const std::vector<double>& T = leg < 0 ? tape.start.T : tape.kept[as_size(leg)].T;
            for (std::size_t i = 0; i < readings_.size(); ++i) {
                // weight of this instant on the straight lines between step ends
                const double at = readings_[i].time;
                double weight = 0.0;
                if (std::abs(at - t) <= 1e-9 * steps_.step)
                    weight = 1.0;
                else if (at > before && at < t)
                    weight = (at - before) / (t - before);
                else if (at > t && at < after)
                    weight = (after - at) / (after - t);
                if (weight < 1e-9) continue;
                y[i] += weight * forward.read(functionals[i], readings_[i].quantity, T.data(), t, here.data());
                for (std::size_t j = 0; j < m; ++j) slope[i * m + j] += weight * here[j];
            }
        });
        return true;
    }

  private:
    Body body_;
    const Initial& start_;
    const Theta& steps_;
    const std::vector<FitBy>& parameters_;
    const std::vector<TimedReading>& readings_;
    std::vector<Id> slots_;
    double end_ = 0.0;
};

} // namespace detail

TEPOR_INLINE Fitted fit(const Body& body, const Initial& start, const Theta& steps,
                        const std::vector<FitBy>& parameters, const std::vector<TimedReading>& readings,
                        const FitOptions& options) {
    detail::validate_fit(body, parameters, readings.size(), options);
    std::vector<detail::LeastSquares::Datum> data;
    for (std::size_t i = 0; i < readings.size(); ++i) {
        detail::validate_reading({readings[i].quantity, readings[i].value, readings[i].uncertainty, {}}, i);
        if (!(readings[i].time >= start.time()))
            throw Error(ErrorCode::outside, readings[i].quantity.label(),
                        detail::text("fit: reading ", i + 1, " is of ", readings[i].time,
                                     " s, before the march starts at ", start.time(), " s"));
        data.push_back({readings[i].value, readings[i].uncertainty});
    }
    detail::MarchFitModel model(body, start, steps, parameters, readings);
    detail::LeastSquares squares(model, parameters, std::move(data), options);
    for (const FitBy& by : parameters) squares.p.push_back(body.value(by.parameter));
    squares.run();
    return FitAccess::make(parameters, squares, readings.size(), nullptr);
}

} // namespace tepor
