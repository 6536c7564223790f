#pragma once
// Gradients of marches.

#include <cmath>
#include <tepor/answers/gradient_march.hpp>
#include <tepor/answers/impl/gradient.hpp>
#include <tepor/answers/impl/march_adjoint.hpp>

namespace tepor {

namespace detail {

inline const MarchTape& recorded(const March& march) {
    const MarchTape* tape = march.tape();
    if (!tape || (tape->legs.empty() && !tape->full))
        throw Error(ErrorCode::missing, "record",
                    "gradient: the march has not been recorded; say march.record() before the run");
    if (tape->full)
        throw Error(ErrorCode::too_large, "record",
                    text("gradient: not even checkpoints of the run fit the ",
                         static_cast<double>(tape->most_bytes) / 1048576.0,
                         " MB stated in march.record(); state more, or take fewer steps"));
    return *tape;
}

inline Gradient gradient_to(const March& march, const Quantity& quantity, std::size_t leg) {
    (void)recorded(march);
    MarchAdjoint adjoint(march, quantity);
    const double value = adjoint.run_to(leg);
    return finish_gradient(quantity, value, *march.shared_model(), adjoint.values(), adjoint.sums());
}

} // namespace detail

TEPOR_INLINE Gradient gradient(const March& march, const Quantity& quantity) {
    return detail::gradient_to(march, quantity, detail::recorded(march).legs.size() - 1);
}

TEPOR_INLINE Gradient gradient(const March& march, const Quantity& quantity, double time) {
    const detail::MarchTape& tape = detail::recorded(march);
    for (std::size_t i = 0; i < tape.legs.size(); ++i) {
        const detail::MarchTape::Leg& leg = tape.legs[i];
        if (std::abs(leg.to - time) <= 1e-9 * (leg.to - leg.from)) return detail::gradient_to(march, quantity, i);
    }
    throw Error(
        ErrorCode::no_answer, quantity.label(),
        detail::text("gradient: no step of the march ended at ", time, " s; let advance_to() or observe() land there"));
}

TEPOR_INLINE Gradient gradient_of_integral(const March& march, const Quantity& quantity) {
    (void)detail::recorded(march);
    detail::MarchAdjoint adjoint(march, quantity);
    const double value = adjoint.run_integral();
    return detail::finish_gradient(quantity, value, *march.shared_model(), adjoint.values(), adjoint.sums());
}

namespace detail {

/// A schedule of the body has an entry at this instant.
inline bool scheduled_at(const Model& model, double time) {
    bool found = false;
    const auto look = [&](const Coefficient& c) {
        if (!c.given() || c.value().kind() != Value::Kind::schedule) return;
        for (const ScheduleEntry& entry : c.value().schedule().entries())
            found = found || std::abs(entry.time - time) <= 1e-12 * std::abs(time);
    };
    for (const RegionModel& region : model.regions) {
        for (const Coefficient& k : region.k) look(k);
        for (const VolumeTerm& term : region.volume)
            for (const Coefficient* c : {&term.amount, &term.fluid, &term.extent}) look(*c);
    }
    for (const FaceModel& face : model.faces) {
        look(face.fixed);
        for (const FaceTerm& term : face.terms)
            for (const Coefficient* c : {&term.amount, &term.outside}) look(*c);
    }
    for (const ContactModel& contact : model.contacts) look(contact.amount);
    for (const LocalModel& local : model.locals) look(local.total);
    return found;
}

} // namespace detail

TEPOR_INLINE PeakGradient gradient_of_peak(const March& march, const Quantity& quantity) {
    const detail::MarchTape& tape = detail::recorded(march);
    detail::MarchAdjoint adjoint(march, quantity);
    std::size_t best = 0;
    double highest = -HUGE_VAL;
    double second = -HUGE_VAL;
    for (std::size_t i = 0; i < tape.legs.size(); ++i) {
        const double value = adjoint.value_at(i);
        if (value > highest) {
            second = highest;
            highest = value;
            best = i;
        } else if (value > second) {
            second = value;
        }
    }
    const bool tie = second > -HUGE_VAL && highest - second <= 1e-12 * std::abs(highest);
    return {detail::gradient_to(march, quantity, best), tape.legs[best].to,
            best == 0 || best + 1 == tape.legs.size() || tie ||
                detail::scheduled_at(*march.shared_model(), tape.legs[best].to)};
}

} // namespace tepor
