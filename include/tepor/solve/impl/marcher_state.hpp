#pragma once
// The state of a march, written and read back.

#include <tepor/base/text.hpp>
#include <tepor/solve/impl/checkpoint.hpp>
#include <tepor/solve/impl/marcher.hpp>

namespace tepor::detail {

/// What tells one body from another: sizes, names and values that place its unknowns.
TEPOR_INLINE double Marcher::signature() const {
    double sum = as_double(model->unknowns) + 1e-3 * as_double(model->free);
    for (std::size_t u = 0; u < model->places.size(); ++u)
        sum += (1.0 + as_double(u % 97)) * (model->places[u].x + 3.0 * model->places[u].y);
    for (const Parameter& p : model->parameters)
        for (const char c : p.name()) sum += static_cast<double>(static_cast<unsigned char>(c));
    return sum;
}

template <class Stream, class Self>
void Marcher::transfer(Stream& stream, Self& self) {
    const auto ledger = [&stream](auto& one) {
        stream(one.accounts.generated);
        stream(one.accounts.side_loss);
        stream(one.accounts.local);
        stream(one.accounts.face);
        stream(one.accounts.contact);
        stream(one.reaction);
        stream(one.stored);
        stream(one.side_traffic);
        stream(one.source_traffic);
    };
    stream(self.time);
    stream(self.steps);
    stream(self.rejections);
    stream(self.passes);
    stream(self.last_step);
    stream(self.values.slots);
    stream(self.next_slots_);
    stream(self.grid_start_);
    stream(self.grid_steps_);
    stream(self.damp_);
    stream(self.birth_);
    stream(self.step_);
    stream(self.start_time_);
    stream(self.T_);
    stream(self.start_T_);
    stream(self.early_T_);
    stream(self.stage_T_);
    stream(self.mean_);
    stream(self.step_rise_);
    stream(self.molten_);
    stream(self.run_mean_);
    stream(self.run_start_T_);
    stream(self.run_start_);
    stream(self.run_slots_);
    stream(self.prescribed_from_);
    stream(self.prescribed_to_);
    stream(self.prescribed_dt_);
    stream(self.step_span_.from);
    stream(self.step_span_.to);
    stream(self.input_kept_);
    ledger(self.step_book_);
    ledger(self.run_book_);
    stream(self.kept_sums_);
    stream(self.kept_peaks_);
}

TEPOR_INLINE Checkpoint Marcher::checkpoint() {
    next_slots_ = values.slots;
    for (const Driven& driven : driven_) next_slots_[as_size(driven.slot)] = driven.value;
    kept_sums_.clear();
    kept_peaks_.clear();
    for (const Summed& one : integrals) kept_sums_.push_back(one.sum);
    for (const Highest& one : peaks) {
        kept_peaks_.push_back(one.moment.value);
        kept_peaks_.push_back(one.moment.time);
    }
    StateWriter writer;
    writer(signature());
    writer(scheme.adaptive);
    transfer(writer, *this);
    return Checkpoint(writer.take());
}

TEPOR_INLINE void Marcher::restore(const Checkpoint& checkpoint) {
    StateReader reader(checkpoint.bytes());
    double whose = 0.0;
    bool adaptive = false;
    reader(whose);
    reader(adaptive);
    if (whose != signature())
        throw Error(ErrorCode::bad_file, "checkpoint",
                    "checkpoint: it belongs to another body; march the body it was written from, on the same mesh");
    const std::size_t n = T_.size();
    const std::vector<double> slots = values.slots;
    transfer(reader, *this);
    if (T_.size() != n || values.slots.size() != slots.size() || molten_.size() != storage_->latent().size())
        throw Error(ErrorCode::bad_file, "checkpoint",
                    "checkpoint: its sizes do not fit this body; march the body it was written from");
    for (std::vector<double>* array : {&early_T_, &stage_T_})
        if (scheme.adaptive) array->resize(n, 0.0);
    if (adaptive != scheme.adaptive) {
        grid_start_ = time;
        grid_steps_ = 0;
        step_ = 0.0;
        damp_ = 0;
    }
    start_molten_ = piece_molten_ = try_molten_ = molten_;
    prescribed_fresh_ = instant_fresh_ = slope_fresh_ = false;
    events_.clear();
    event_jumps_.clear();
    collect_events();
    if (values.slots == slots) {
        measure_minimum();
        return;
    }
    model->update_geometry(values);
    storage_ = std::make_unique<Storage>(model, values, scheme.capacity, work_);
    if (linear_) {
        loads_->rebuild(values, work_);
        prepare_linear();
    }
    measure_minimum();
}

/// Stands at `at` with other temperatures, as if newly made.
TEPOR_INLINE void Marcher::restart(const std::vector<double>& T, double at) {
    time = grid_start_ = birth_ = run_start_ = step_span_.from = step_span_.to = at;
    grid_steps_ = steps = rejections = 0;
    damp_ = 0;
    T_ = start_T_ = run_start_T_ = T;
    std::fill(run_mean_.begin(), run_mean_.end(), 0.0);
    std::fill(run_slots_.begin(), run_slots_.end(), 0.0);
    std::fill(mean_.begin(), mean_.end(), 0.0);
    clear(step_book_);
    clear(run_book_);
    prescribed_fresh_ = instant_fresh_ = false;
    if (loads_) loads_->changed();
}

} // namespace tepor::detail
