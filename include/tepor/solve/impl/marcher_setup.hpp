#pragma once
// A march made ready: matrices, factors, load vectors, handles.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/text.hpp>
#include <tepor/solve/impl/marcher.hpp>
#include <tepor/solve/impl/newton.hpp>

namespace tepor::detail {

/// Calls f on every coefficient that stands in the matrix of a linear body.
template <class Visit>
void for_each_in_matrix(const Model& model, const Visit& visit) {
    for (const RegionModel& region : model.regions) {
        for (const Coefficient& k : region.k) visit(k);
        for (const VolumeTerm& term : region.volume)
            if (term.kind == VolumeTerm::Kind::side_film) {
                visit(term.amount);
                visit(term.extent);
            }
    }
    for (const FaceModel& face : model.faces)
        for (const FaceTerm& term : face.terms)
            if (term.kind != FaceTerm::Kind::flux) visit(term.amount);
    for (const ContactModel& contact : model.contacts) visit(contact.amount);
}

TEPOR_INLINE Marcher::Marcher(std::shared_ptr<const Model> of, const Values& with, const Initial& start,
                              const Scheme& options)
    : time(start.time()), values(with), model(std::move(of)), scheme(options), work_(model->kernels->workspace()) {
    const std::size_t n = as_size(model->unknowns);
    storage_ = std::make_unique<Storage>(model, values, scheme.capacity, work_);
    linear_ = !model->nonlinear && storage_->linear() && !matrix_depends_on_time();
    T_ = start.temperatures(*model, values);
    for (std::vector<double>* array :
         {&rise_, &b_, &mean_, &rate_, &instant_, &leg_T_, &step_rise_, &run_mean_, &prescribed_from_, &prescribed_to_})
        array->assign(n, 0.0);
    start_T_ = run_start_T_ = T_;
    run_slots_.assign(values.slots.size(), 0.0);
    run_start_ = grid_start_ = birth_ = step_span_.from = step_span_.to = time;
    instant_book_.assign(n, 0.0);
    prescribed_from_ = prescribed_to_ = T_;
    for (const FaceModel& face : model->faces)
        if (face.fixed.given() && face.fixed.depends_on_time()) prescribed_timed_ = true;
    collect_events();
    if (scheme.damped && !scheme.adaptive && scheme.theta < 1.0) damp_ = 4;
    if (linear_) {
        loads_ = std::make_unique<Loads>(model, values, work_);
        lazy_books_ = !loads_->sampled_in_time();
        prepare_linear();
    } else {
        newton_ = std::make_unique<Engine>(model);
        for (std::vector<double>* array : {&piece_T_, &try_T_, &stored_rise_, &capacity_}) array->assign(n, 0.0);
    }
    start_latent(start.phase());
    measure_minimum();
    clear(step_book_);
    clear(run_book_);
    if (scheme.adaptive) {
        for (std::vector<double>* array : {&r0_, &rg_, &r1_, &stage_T_, &explicit_, &early_T_}) array->assign(n, 0.0);
        if (linear_)
            for (std::vector<double>* array : {&piece_T_, &stored_rise_, &capacity_}) array->assign(n, 0.0);
    }
}

TEPOR_INLINE bool Marcher::matrix_depends_on_time() const {
    bool depends = false;
    for_each_in_matrix(*model, [&](const Coefficient& c) { depends = depends || (c.given() && c.depends_on_time()); });
    return depends;
}

TEPOR_INLINE void Marcher::collect_events() {
    struct Event {
        double time;
        bool jump;
    };
    std::vector<Event> found;
    const auto look = [&](const Coefficient& c) {
        if (c.value().kind() != Value::Kind::schedule) return;
        const Schedule& schedule = c.value().schedule();
        for (const ScheduleEntry& e : schedule.entries())
            if (e.time > time) found.push_back({e.time, schedule.between() == Between::steps});
    };
    for_each_load(*model, [&](const Coefficient& c, int, std::size_t) { look(c); });
    for_each_in_matrix(*model, look);
    for (const FaceModel& face : model->faces) look(face.fixed);
    std::sort(found.begin(), found.end(), [](const Event& a, const Event& b) { return a.time < b.time; });
    for (const Event& e : found) {
        if (!events_.empty() && events_.back() == e.time) {
            event_jumps_.back() = event_jumps_.back() || e.jump;
            continue;
        }
        events_.push_back(e.time);
        event_jumps_.push_back(e.jump);
    }
}

TEPOR_INLINE void Marcher::prepare_linear() {
    prepare_matrix(*model, K_);
    Pass pass;
    pass.T = rate_.data(); // any temperature: the body is linear
    pass.time = {time, time, 1.0};
    pass.matrix = &K_;
    assemble(*model, values, work_, pass);
    if (pass.fault) raise(pass.fault);
    prepare_line();
    lanes_.clear();
    kept_lanes_ = 0;
    if (scheme.adaptive) return;
    const auto keep = [&](double a) {
        if (!lane_for(a)) raise_singular(*model, singular_);
    };
    keep(scheme.theta * scheme.step);
    if (scheme.damped && scheme.theta < 1.0) keep(0.5 * scheme.step);
    kept_lanes_ = lanes_.size();
}

TEPOR_INLINE void Marcher::prepare_line() {
    line_ = Line();
    const Index n = model->free;
    if (model->mesh->dim != 1 || n == 0 || half_bandwidth(K_, n) > 1) return;
    line_.on = true;
    line_.diagonal.assign(as_size(n), 0.0);
    line_.off.assign(as_size(n), 0.0);
    for (Index i = 0; i < model->unknowns; ++i)
        for (Id p = K_.start[as_size(i)]; p < K_.start[as_size(i) + 1]; ++p) {
            const Id j = K_.column[as_size(p)];
            const double value = K_.lower[as_size(p)];
            if (i < n)
                (j == i ? line_.diagonal[as_size(i)] : line_.off[as_size(j)]) = value;
            else if (j < n && value != 0.0)
                line_.couplings.push_back({j, as_id(i), value});
        }
}

TEPOR_INLINE Marcher::Lane* Marcher::lane_for(double a) {
    for (std::size_t i = 0; i < kept_lanes_; ++i)
        if (lanes_[i].a == a) return &lanes_[i];
    // sizes of pieces carry rounding: nearly equal ones share a factor, of a size that does not depend on which came first
    int exponent = 0;
    if (kept_lanes_ > 0 || scheme.adaptive) a = std::frexp(a, &exponent);
    if (kept_lanes_ > 0 || scheme.adaptive) a = std::ldexp(std::nearbyint(std::ldexp(a, 42)), exponent - 42);
    for (Lane& lane : lanes_)
        if (lane.a == a) return &lane;
    constexpr std::size_t spare = 6; // for steps cut by events, and for Adaptive
    if (lanes_.size() >= kept_lanes_ + spare) {
        std::rotate(lanes_.begin() + static_cast<Index>(kept_lanes_),
                    lanes_.begin() + static_cast<Index>(kept_lanes_) + 1, lanes_.end());
    } else {
        lanes_.push_back({0.0, std::make_unique<Engine>(model)});
    }
    Lane& lane = lanes_.back();
    lane.a = a;
    SparseMatrix& matrix = lane.engine->matrix;
    for (std::size_t p = 0; p < K_.lower.size(); ++p) matrix.lower[p] = a * K_.lower[p];
    storage_->add_to(matrix);
    ++factorisations;
    const Index most = std::numeric_limits<Index>::max();
    if (lane.engine->factor(scheme.expected_steps > 0 ? scheme.expected_steps : most)) return &lane;
    singular_ = lane.engine->singular_unknown();
    lanes_.pop_back();
    return nullptr;
}

TEPOR_INLINE void Marcher::start_latent(Phase phase) {
    const std::vector<LatentNode>& nodes = storage_->latent();
    molten_.clear();
    for (const LatentNode& node : nodes) {
        const double T = T_[as_size(node.unknown)];
        const double width = node.liquidus - node.solidus;
        double share = T >= node.liquidus ? 1.0 : (T <= node.solidus ? 0.0 : (T - node.solidus) / width);
        if (width == 0.0 && T == node.solidus) share = phase == Phase::liquid ? 1.0 : 0.0;
        molten_.push_back(share * node.full);
    }
    start_molten_ = piece_molten_ = try_molten_ = molten_;
    latent_slope_.assign(nodes.size(), 0.0);
}

TEPOR_INLINE Index Marcher::drive(const Parameter& parameter) {
    const Index slot = model->slot_of(parameter);
    if (slot < 0)
        throw Error(ErrorCode::unused, parameter.name(),
                    text("drive: no statement of this body uses the parameter \"", parameter.name(), "\""));
    const SlotRole& role = model->roles[as_size(slot)];
    if (role.place)
        throw Error(
            ErrorCode::not_supported, parameter.name(),
            text("drive: \"", parameter.name(),
                 "\" is a thickness, which cannot change while heat is stored; set it on the body and march again"));
    Driven driven;
    driven.slot = as_id(slot);
    driven.value = next_slots_.empty() ? values.slots[as_size(slot)] : next_slots_[as_size(slot)];
    driven.remake = role.matrix || role.capacity;
    driven.low = -std::numeric_limits<double>::infinity();
    driven.high = std::numeric_limits<double>::infinity();
    for (const Model::SlotUse& use : model->uses[as_size(slot)]) {
        if (use.range == Range::positive) driven.low = std::max(driven.low, std::numeric_limits<double>::min());
        if (use.range == Range::not_negative || use.range == Range::fraction || use.range == Range::kelvin_temperature)
            driven.low = std::max(driven.low, 0.0);
        if (use.range == Range::fraction) driven.high = std::min(driven.high, 1.0);
        if (use.range == Range::celsius_temperature) driven.low = std::max(driven.low, -zero_celsius);
    }
    for (std::size_t i = 0; i < driven_.size(); ++i)
        if (driven_[i].slot == driven.slot) return static_cast<Index>(i);
    driven_.push_back(driven);
    return static_cast<Index>(driven_.size()) - 1;
}

TEPOR_INLINE void Marcher::set(Index input, double value) noexcept {
    if (input < 0 || as_size(input) >= driven_.size()) {
        input_kept_ = true;
        return;
    }
    Driven& driven = driven_[as_size(input)];
    if (value >= driven.low && value <= driven.high && value - value == 0.0)
        driven.value = value;
    else
        input_kept_ = true;
}

/// The capacity at new values. What is molten keeps its share.
TEPOR_INLINE void Marcher::remake_storage() {
    std::unique_ptr<Storage> next = std::make_unique<Storage>(model, values, scheme.capacity, work_);
    for (std::size_t i = 0; i < molten_.size(); ++i)
        start_molten_[i] = molten_[i] *= next->latent()[i].full / storage_->latent()[i].full;
    storage_ = std::move(next);
    rate_engine_.reset();
}

TEPOR_INLINE Verdict Marcher::take_inputs() {
    bool remake = false;
    bool capacity = false;
    for (const Driven& driven : driven_) {
        if (values.slots[as_size(driven.slot)] == driven.value) continue;
        const SlotRole& role = model->roles[as_size(driven.slot)];
        if (driven.remake && !remake) close_run();
        remake = remake || driven.remake;
        capacity = capacity || role.capacity;
        values.slots[as_size(driven.slot)] = driven.value;
        if (loads_) loads_->changed();
        prescribed_fresh_ = false;
        instant_fresh_ = false;
        slope_fresh_ = false;
    }
    if (remake) remade(capacity);
    return Verdict::ok;
}

/// A value in a matrix has changed.
TEPOR_INLINE void Marcher::remade(bool capacity) {
    if (capacity) remake_storage();
    if (linear_) {
        loads_->rebuild(values, work_);
        prepare_linear();
    }
    measure_minimum();
}

} // namespace tepor::detail
