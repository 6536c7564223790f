#pragma once
// Readings over time as a model of the parameters: marches, and their slopes forwards or back.

#include <algorithm>
#include <cmath>
#include <optional>
#include <tepor/answers/fit_march.hpp>
#include <tepor/answers/impl/fit_run.hpp>
#include <tepor/answers/impl/least_squares.hpp>
#include <tepor/answers/impl/march_adjoint.hpp>
#include <tepor/answers/impl/march_forward.hpp>
#include <tepor/solve/march.hpp>
#include <variant>

namespace tepor::detail {

using MarchScheme = std::variant<Theta, Adaptive>;

/// A march with its states recorded, landing on every time where its steps are its own to choose.
inline March recorded_march(const Body& body, const Initial& start, const MarchScheme& scheme,
                            const std::vector<double>& times) {
    if (const Theta* steps = std::get_if<Theta>(&scheme)) {
        March march{body, start, *steps};
        march.record(1e6);
        const double last = std::ceil((times.back() - march.time()) / steps->step - 1e-9);
        Index steps_left = static_cast<Index>(std::max(last, 1.0));
        while (steps_left-- > 0) march.advance().require();
        return march;
    }
    March march{body, start, std::get<Adaptive>(scheme)};
    march.record(1e6);
    for (const double t : times)
        if (t > march.time()) march.advance_to(t);
    if (march.tape()->legs.empty()) march.advance().require();
    return march;
}

/// The step ends on either side of a time, weighted for the straight line between them.
inline std::vector<MarchAdjoint::Instant> instants_at(const MarchTape& tape, double time) {
    Index leg = -1;
    const double end = tape.legs.back().to;
    while (leg + 1 < static_cast<Index>(tape.legs.size()) &&
           tape.legs[as_size(leg + 1)].to <= time + 1e-9 * tape.legs[as_size(leg + 1)].dt)
        ++leg;
    const double here = leg < 0 ? tape.legs.front().from : tape.legs[as_size(leg)].to;
    if (leg + 1 == static_cast<Index>(tape.legs.size()) || time >= end) return {{leg, 1.0}};
    const double share = (time - here) / tape.legs[as_size(leg + 1)].dt;
    if (share < 1e-9) return {{leg, 1.0}};
    return {{leg, 1.0 - share}, {leg + 1, share}};
}

/// A quantity at a time of a recorded march and its derivative by every slot.
struct TimedSlope {
    double value = 0.0;
    std::vector<double> slots;
};
inline TimedSlope slope_at(const March& march, const Quantity& quantity, double time) {
    MarchAdjoint adjoint(march, quantity);
    TimedSlope out;
    out.value = adjoint.run_at(instants_at(*march.tape(), time));
    chain_places(*march.shared_model(), adjoint.sums());
    out.slots = adjoint.sums().slots;
    return out;
}

/// The run behind a fit over time, to predict with.
class MarchFitRun final : public FitRun {
  public:
    MarchFitRun(Initial start, MarchScheme scheme) : start_(std::move(start)), scheme_(scheme) {}

    double predict(const Body& body, const Quantity& quantity, double time, const std::vector<Parameter>& parameters,
                   std::vector<double>& slope) const override {
        if (!(time >= start_.time()))
            throw Error(ErrorCode::outside, quantity.label(),
                        text("predict_at: ", time, " s lies before the march starts at ", start_.time(), " s"));
        const TimedSlope at = slope_at(recorded_march(body, start_, scheme_, {time}), quantity, time);
        slope.clear();
        for (const Parameter& p : parameters) slope.push_back(at.slots[as_size(body.model()->slot_of(p))]);
        return at.value;
    }

  private:
    Initial start_;
    MarchScheme scheme_;
};

class MarchFitModel final : public FitModel {
  public:
    enum class Way { cheaper, forward, adjoint };

    MarchFitModel(const Body& body, const Initial& start, MarchScheme scheme, const std::vector<FitBy>& parameters,
                  const std::vector<TimedReading>& readings, Way way = Way::cheaper)
        : body_(body), start_(start), scheme_(scheme), parameters_(parameters), readings_(readings), way_(way) {
        for (const TimedReading& r : readings) times_.push_back(r.time);
        std::sort(times_.begin(), times_.end());
        for (const FitBy& by : parameters) slots_.push_back(as_id(body.model()->slot_of(by.parameter)));
    }

    bool evaluate(const std::vector<double>& p, std::vector<double>& y, std::vector<double>& slope) override {
        for (std::size_t j = 0; j < p.size(); ++j)
            if (!set_if_allowed(body_, parameters_[j].parameter, p[j])) return false;
        std::optional<March> march;
        try {
            march.emplace(recorded_march(body_, start_, scheme_, times_));
        } catch (const Error& error) {
            if (error.code() == ErrorCode::not_converged || error.code() == ErrorCode::singular ||
                error.code() == ErrorCode::bad_law || error.code() == ErrorCode::outside_table)
                return false;
            throw;
        }
        y.assign(readings_.size(), 0.0);
        slope.assign(readings_.size() * p.size(), 0.0);
        if (forwards(*march))
            forward(*march, y, slope);
        else
            adjoint(*march, y, slope);
        return true;
    }

  private:
    /// One sweep carries all parameters forwards, or one sweep per reading goes back from it. Per step a column of the weak form's
    /// derivative costs a few solves; going back costs one where the body is linear, else a factor.
    [[nodiscard]] bool forwards(const March& march) const {
        if (way_ == Way::adjoint || std::holds_alternative<Adaptive>(scheme_)) return false;
        for (const RegionModel& region : march.shared_model()->regions)
            if (region.latent.given() || region.density.depends_on_temperature() ||
                region.specific_heat.depends_on_temperature())
                return false;
        if (way_ == Way::forward) return true;
        double back = 0.0;
        const double begin = march.tape()->legs.front().from;
        for (const double t : times_) back += (t - begin) / std::max(times_.back() - begin, 1e-300);
        const double columns = static_cast<double>(parameters_.size());
        return MarchStates(march).linear() ? 1.5 * back > 6.0 * columns : 3.0 * back > 3.0 + 6.0 * columns;
    }

    void adjoint(const March& march, std::vector<double>& y, std::vector<double>& slope) const {
        const std::size_t m = slots_.size();
        for (std::size_t i = 0; i < readings_.size(); ++i) {
            const TimedSlope at = slope_at(march, readings_[i].quantity, readings_[i].time);
            y[i] = at.value;
            for (std::size_t j = 0; j < m; ++j) slope[i * m + j] = at.slots[as_size(slots_[j])];
        }
    }

    void forward(const March& march, std::vector<double>& y, std::vector<double>& slope) const {
        const std::size_t m = slots_.size();
        const MarchTape& tape = *march.tape();
        std::vector<Functional> functionals;
        std::vector<std::vector<MarchAdjoint::Instant>> instants;
        for (const TimedReading& r : readings_) {
            functionals.push_back(compile(*march.shared_model(), body_.values(), r.quantity));
            if (!functionals.back().reaction.unknown.empty())
                throw Error(ErrorCode::not_supported, r.quantity.label(),
                            text("fit: ", r.quantity.label(),
                                 " at an instant of a march holds a rate of change; give the face a film, or read "
                                 "temperatures"));
            instants.push_back(instants_at(tape, r.time));
        }
        std::vector<double> here(m);
        MarchForward forward(march, slots_);
        forward.run([&](Index leg, const std::vector<double>& T) {
            const double t = leg < 0 ? tape.legs.front().from : tape.legs[as_size(leg)].to;
            for (std::size_t i = 0; i < readings_.size(); ++i)
                for (const MarchAdjoint::Instant& at : instants[i]) {
                    if (at.leg != leg) continue;
                    y[i] += at.weight * forward.read(functionals[i], readings_[i].quantity, T.data(), t, here.data());
                    for (std::size_t j = 0; j < m; ++j) slope[i * m + j] += at.weight * here[j];
                }
        });
    }

    Body body_;
    const Initial& start_;
    MarchScheme scheme_;
    const std::vector<FitBy>& parameters_;
    const std::vector<TimedReading>& readings_;
    Way way_;
    std::vector<double> times_; // rising
    std::vector<Id> slots_;
};

} // namespace tepor::detail
