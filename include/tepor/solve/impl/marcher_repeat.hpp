#pragma once
// Recorded steps gone through again, and the factors a march lends to those who go through it backwards.

#include <cmath>
#include <tepor/solve/impl/marcher.hpp>

namespace tepor::detail {

TEPOR_INLINE void Marcher::repeat(const MarchTape::Leg& leg, const Values& with, const MarchTape::State& start,
                                  MarchTape::State& end) {
    if (values.slots != with.slots) {
        bool remake = false;
        bool capacity = false;
        for (std::size_t s = 0; s < with.slots.size(); ++s) {
            if (values.slots[s] == with.slots[s]) continue;
            remake = remake || model->roles[s].matrix || model->roles[s].capacity;
            capacity = capacity || model->roles[s].capacity;
        }
        values = with;
        if (loads_) loads_->changed();
        slope_fresh_ = false;
        if (remake) remade(capacity);
    }
    prescribed_fresh_ = instant_fresh_ = false;
    time = leg.from;
    T_ = start.T;
    molten_ = start.molten;
    keep_start();
    begin_books(leg.dt);
    double error = 0.0; // known to be small enough
    const Verdict verdict = leg.two_stages ? tr_bdf2(leg.to, leg.dt, error) : substep(leg.to, leg.dt, leg.theta);
    if (verdict != Verdict::ok) raise_verdict(verdict);
    end.T = T_;
    end.molten = molten_;
    if (!leg.two_stages) return;
    end.stage = stage_T_;
    end.stage_molten = stage_molten_;
}

TEPOR_INLINE Engine* Marcher::factored(double a, const Values& with) noexcept {
    if (!linear_) return nullptr;
    for (std::size_t s = 0; s < with.slots.size(); ++s) {
        const SlotRole& role = model->roles[s];
        if ((role.matrix || role.capacity || role.place) && values.slots[s] != with.slots[s]) return nullptr;
    }
    for (Lane& lane : lanes_)
        if (std::abs(lane.a - a) <= 1e-12 * a) return lane.engine.get();
    return nullptr;
}

} // namespace tepor::detail
