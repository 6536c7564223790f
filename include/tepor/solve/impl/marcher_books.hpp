#pragma once
// The books of a march: heat by step and over the run, readings, the field of an instant.

#include <algorithm>
#include <cmath>
#include <limits>
#include <tepor/base/text.hpp>
#include <tepor/solve/impl/marcher.hpp>

namespace tepor::detail {

TEPOR_INLINE void Marcher::clear(Ledger& ledger) const {
    std::size_t terms = 0;
    for (const FaceModel& face : model->faces) terms += face.terms.size();
    ledger.accounts.generated.assign(model->regions.size(), 0.0);
    ledger.accounts.side_loss.assign(model->regions.size(), 0.0);
    ledger.accounts.local.assign(model->locals.size(), 0.0);
    ledger.accounts.face.assign(terms, 0.0);
    ledger.accounts.contact.assign(model->contacts.size(), 0.0);
    ledger.reaction.assign(as_size(model->unknowns), 0.0);
    ledger.stored.assign(model->regions.size(), 0.0);
    ledger.side_traffic = ledger.source_traffic = 0.0;
}

inline void add_scaled(std::vector<double>& to, const std::vector<double>& what, double by) noexcept {
    for (std::size_t i = 0; i < to.size(); ++i) to[i] += by * what[i];
}
inline void add_accounts(Accounts& to, const Accounts& what, double by) noexcept {
    add_scaled(to.generated, what.generated, by);
    add_scaled(to.side_loss, what.side_loss, by);
    add_scaled(to.local, what.local, by);
    add_scaled(to.face, what.face, by);
    add_scaled(to.contact, what.contact, by);
}

TEPOR_INLINE void Marcher::add(Ledger& to, const Ledger& what) const {
    add_accounts(to.accounts, what.accounts, 1.0);
    add_scaled(to.reaction, what.reaction, 1.0);
    add_scaled(to.stored, what.stored, 1.0);
    to.side_traffic += what.side_traffic;
    to.source_traffic += what.source_traffic;
}

TEPOR_INLINE void Marcher::begin_books(double dt) noexcept {
    whole_ = dt;
    passes = 0;
    least_leg_ = std::numeric_limits<double>::infinity();
    instant_fresh_ = false;
    for (Summed& one : integrals) one.pending = 0.0;
    whole_leg_ = false;
    if (!lazy_books_) clear(step_book_);
}

/// Flows of the weak form at T for a time dt, into the step's book (storage apart).
TEPOR_INLINE bool Marcher::enter(const double* T, TimeSpan span, double dt) {
    pass_ = Pass();
    pass_.T = T;
    pass_.time = span;
    pass_.residual = instant_book_.data();
    pass_.accounts = &pass_accounts_;
    assemble(*model, values, work_, pass_);
    if (pass_.fault) {
        fault_ = pass_.fault;
        return false;
    }
    add_accounts(step_book_.accounts, pass_accounts_, dt);
    add_scaled(step_book_.reaction, instant_book_, dt);
    step_book_.side_traffic += dt * pass_.side_traffic;
    step_book_.source_traffic += dt * pass_.source_traffic;
    for (Summed& one : integrals) one.pending += dt * value_of(readings_[as_size(one.reading)], T, nullptr, span);
    return true;
}

/// Books a substep: its flows at T and the heat it stored at every unknown [J].
TEPOR_INLINE Verdict Marcher::book(const double* T, TimeSpan span, double dt, const double* stored) {
    if (!enter(T, span, dt)) return Verdict::bad_law;
    return book_storage(stored);
}

TEPOR_INLINE Verdict Marcher::book_storage(const double* stored) {
    for (Index u = 0; u < model->unknowns; ++u) step_book_.reaction[as_size(u)] += stored[u];
    std::vector<double>& rise = instant_book_;
    if (linear_) {
        storage_->by_rise(rise_.data(), step_book_.stored.data());
        return Verdict::ok;
    }
    // increments of sensible heat by region once more, then the latent heat of the nodes
    std::fill(rise.begin(), rise.end(), 0.0);
    fault_ = storage_->rise(values, work_, piece_T_.data(), T_.data(), rise.data(), nullptr, step_book_.stored.data());
    if (fault_) return Verdict::bad_law;
    const std::vector<LatentNode>& nodes = storage_->latent();
    for (std::size_t i = 0; i < nodes.size(); ++i)
        step_book_.stored[as_size(nodes[i].region)] += molten_[i] - piece_molten_[i];
    return Verdict::ok;
}

TEPOR_INLINE void Marcher::end_books(double from, double dt) {
    step_span_ = {from, time, 1.0};
    if (lazy_books_) {
        if (!whole_leg_) add_scaled(run_mean_, mean_, dt);
        for (std::size_t s = 0; s < run_slots_.size(); ++s) run_slots_[s] += dt * values.slots[s];
    } else {
        add(run_book_, step_book_);
    }
    if (!integrals.empty()) end_integrals(dt);
    for (Highest& one : peaks) {
        const double now = now_value(readings_[as_size(one.reading)]);
        if (now > one.moment.value || std::isnan(one.moment.value)) one.moment = {now, time};
    }
}

TEPOR_INLINE void Marcher::end_integrals(double dt) {
    bool reactions = false;
    for (const Summed& one : integrals)
        reactions = reactions || !readings_[as_size(one.reading)].functional.reaction.unknown.empty();
    const double* reaction = step_book_.reaction.data();
    if (lazy_books_ && reactions) {
        // reactions of the step mean: K T - F + M rise / dt
        if (loads_->update(values, work_, step_span_)) return;
        multiply(K_, model->unknowns, mean_.data(), rate_.data());
        storage_->multiply(step_rise_.data(), instant_.data());
        for (Index u = 0; u < model->unknowns; ++u)
            instant_[as_size(u)] += dt * (rate_[as_size(u)] - loads_->vector()[u]);
        reaction = instant_.data();
    }
    for (Summed& one : integrals) {
        const Reading& reading = readings_[as_size(one.reading)];
        if (lazy_books_) one.pending = dt * value_of(reading, mean_.data(), nullptr, step_span_);
        one.sum += one.pending + (reactions ? reading.functional.reaction.dot(reaction) : 0.0);
        one.pending = 0.0;
    }
}

/// What a span of a linear body's run has exchanged, from its mean temperature: flows are linear in it.
TEPOR_INLINE void Marcher::lazy_ledger(const double* T, const double* rise, TimeSpan span, const Values& at,
                                       Ledger& to) {
    const double dt = span.to - span.from;
    clear(to);
    Pass pass;
    pass.T = T;
    pass.time = span;
    pass.residual = to.reaction.data();
    pass.accounts = &to.accounts;
    assemble(*model, at, work_, pass);
    if (pass.fault) raise(pass.fault);
    Accounts scaled = to.accounts;
    add_accounts(to.accounts, scaled, dt - 1.0);
    std::vector<double> stored(to.reaction.size());
    storage_->multiply(rise, stored.data());
    for (std::size_t u = 0; u < stored.size(); ++u) to.reaction[u] = dt * to.reaction[u] + stored[u];
    storage_->by_rise(rise, to.stored.data());
    to.side_traffic = dt * pass.side_traffic;
    to.source_traffic = dt * pass.source_traffic;
}

TEPOR_INLINE bool Marcher::open_run(Ledger& to) {
    const double dt = time - run_start_;
    if (!lazy_books_ || !(dt > 0.0)) return false;
    Values mean = values;
    for (std::size_t s = 0; s < run_slots_.size(); ++s)
        if (!model->roles[s].place) mean.slots[s] = run_slots_[s] / dt;
    std::vector<double> T = run_mean_;
    std::vector<double> rise = T_;
    for (std::size_t u = 0; u < T.size(); ++u) {
        T[u] /= dt;
        rise[u] -= run_start_T_[u];
    }
    lazy_ledger(T.data(), rise.data(), {run_start_, time, 1.0}, mean, to);
    return true;
}

/// Brings the run's book up to date before a matrix changes.
TEPOR_INLINE void Marcher::close_run() {
    Ledger ledger;
    if (!open_run(ledger)) return;
    add(run_book_, ledger);
    run_start_ = time;
    run_start_T_ = T_;
    std::fill(run_mean_.begin(), run_mean_.end(), 0.0);
    std::fill(run_slots_.begin(), run_slots_.end(), 0.0);
}

TEPOR_INLINE Balance Marcher::balance_of(bool whole_run) {
    Ledger ledger;
    double duration = step_span_.to - step_span_.from;
    if (whole_run) {
        clear(ledger);
        Ledger open;
        if (open_run(open)) add(ledger, open);
        add(ledger, run_book_);
        duration = time - birth_;
    } else if (lazy_books_ && duration > 0.0) {
        lazy_ledger(mean_.data(), step_rise_.data(), step_span_, values, ledger);
    } else {
        ledger = step_book_;
    }
    HeatSums sums;
    const double unit = whole_run || !(duration > 0.0) ? 1.0 : 1.0 / duration;
    sums.accounts = ledger.accounts;
    add_accounts(sums.accounts, ledger.accounts, unit - 1.0);
    for (double& r : ledger.reaction) r *= unit;
    for (double& s : ledger.stored) s *= unit;
    sums.reaction = ledger.reaction.data();
    sums.stored = ledger.stored.data();
    sums.side_traffic = unit * ledger.side_traffic;
    sums.source_traffic = unit * ledger.source_traffic;
    sums.duration = whole_run ? duration : 1.0;
    return tepor::balance_of(*model, values, work_, sums, mean_.data(), step_span_);
}

TEPOR_INLINE double Marcher::residual() {
    const double dt = step_span_.to - step_span_.from;
    if (!(dt > 0.0)) return 0.0;
    double sum = 0.0;
    if (lazy_books_) {
        Ledger ledger;
        lazy_ledger(mean_.data(), step_rise_.data(), step_span_, values, ledger);
        for (Index u = 0; u < model->free; ++u) sum += std::abs(ledger.reaction[as_size(u)]);
    } else {
        for (Index u = 0; u < model->free; ++u) sum += std::abs(step_book_.reaction[as_size(u)]);
    }
    return sum / dt;
}

// ---- readings

TEPOR_INLINE Marcher::Reading Marcher::compile_reading(const Quantity& quantity) const {
    Reading reading;
    reading.functional = compile(*model, values, quantity);
    for (const Functional::Heat& heat : reading.functional.heats) {
        std::vector<double> dense(as_size(model->unknowns), 0.0);
        for (std::size_t i = 0; i < heat.weights.unknown.size(); ++i)
            dense[as_size(heat.weights.unknown[i])] += heat.weights.weight[i];
        reading.weights.push_back(std::move(dense));
    }
    reading.rest.edges = reading.functional.edges;
    reading.rest.inner = reading.functional.inner;
    reading.rest.contents = reading.functional.contents;
    return reading;
}

/// Value at T. Without a reaction its share is left out.
TEPOR_INLINE double Marcher::value_of(const Reading& reading, const double* T, const double* reaction, TimeSpan span) {
    const Functional& f = reading.functional;
    if (f.unbounded) return std::numeric_limits<double>::quiet_NaN();
    if (f.extreme)
        return (f.face >= 0 ? extreme_on(*model, values, T, f.face, f.direction)
                            : extreme_in(*model, values, T, f.region, f.direction))
            .value;
    double value = f.constant + f.temperature.dot(T);
    if (reaction && !f.reaction.unknown.empty()) value += f.reaction.dot(reaction);
    for (std::size_t h = 0; h < f.heats.size(); ++h) {
        Pass pass;
        pass.T = T;
        pass.time = span;
        pass.only = &f.heats[h].part;
        pass.weights = reading.weights[h].data();
        assemble(*model, values, work_, pass);
        if (pass.fault) return std::numeric_limits<double>::quiet_NaN();
        value += pass.weighted;
    }
    if (!reading.rest.plain()) value += tepor::evaluate(reading.rest, *model, values, work_, T, nullptr, span);
    if (f.stored >= 0) {
        const auto r = as_size(f.stored);
        value += sensible_heat(*model, values, work_, storage_->enthalpy(r), r, T, nullptr);
        for (std::size_t i = 0; i < molten_.size(); ++i)
            if (storage_->latent()[i].region == f.stored) value += molten_[i];
    }
    return value;
}

TEPOR_INLINE double Marcher::now_value(const Reading& reading) {
    const bool reacts = !reading.functional.reaction.unknown.empty();
    if (reacts && !instant_fresh_) {
        rates(T_.data(), {time, time, 1.0});
        instant_fresh_ = true;
    }
    return value_of(reading, T_.data(), instant_.data(), {time, time, 1.0});
}

TEPOR_INLINE double Marcher::read(Index probe) noexcept {
    if (probe < 0 || as_size(probe) >= readings_.size()) return std::numeric_limits<double>::quiet_NaN();
    const Reading& reading = readings_[as_size(probe)];
    if (reading.functional.plain()) return reading.functional.constant + reading.functional.temperature.dot(T_.data());
    try {
        return now_value(reading);
    } catch (...) {
        return std::numeric_limits<double>::quiet_NaN();
    }
}

TEPOR_INLINE double Marcher::read(const Quantity& quantity) {
    const Reading reading = compile_reading(quantity);
    if (reading.functional.unbounded) return field()[quantity]; // says where
    return now_value(reading);
}

TEPOR_INLINE Index Marcher::watch(const Quantity& quantity) {
    readings_.push_back(compile_reading(quantity));
    const auto id = static_cast<Index>(readings_.size()) - 1;
    if (!readings_.back().functional.plain()) (void)read(id); // makes what reading needs
    return id;
}

TEPOR_INLINE Index Marcher::integral(const Quantity& quantity) {
    const Index reading = watch(quantity);
    const std::size_t id = integrals.size();
    integrals.push_back({reading, id < kept_sums_.size() ? kept_sums_[id] : 0.0, 0.0});
    return static_cast<Index>(id);
}

TEPOR_INLINE Index Marcher::peak(const Quantity& quantity) {
    const Index reading = watch(quantity);
    const std::size_t id = peaks.size();
    peaks.push_back({reading, {read(reading), time}});
    if (2 * id + 1 < kept_peaks_.size()) peaks.back().moment = {kept_peaks_[2 * id], kept_peaks_[2 * id + 1]};
    return static_cast<Index>(id);
}

/// Rates of change and reactions of an instant: what the weak form leaves over is stored.
TEPOR_INLINE void Marcher::rates(const double* T, TimeSpan span) {
    const Index n = model->free;
    const Index all = model->unknowns;
    if (linear_) {
        if (const Fault fault = loads_->update(values, work_, span)) raise(fault);
        multiply(K_, all, T, instant_.data());
        for (Index u = 0; u < all; ++u) instant_[as_size(u)] -= loads_->vector()[u];
    } else {
        Pass pass;
        pass.T = T;
        pass.time = span;
        pass.residual = instant_.data();
        assemble(*model, values, work_, pass);
        if (pass.fault) raise(pass.fault);
    }
    for (Index u = n; u < all; ++u)
        rate_[as_size(u)] =
            prescribed_dt_ > 0.0 ? (prescribed_to_[as_size(u)] - prescribed_from_[as_size(u)]) / prescribed_dt_ : 0.0;
    if (storage_->diagonal_only()) {
        if (const Fault fault = storage_->lumped_capacity(values, T, b_.data())) raise(fault);
        for (Index u = 0; u < n; ++u) {
            rate_[as_size(u)] = -instant_[as_size(u)] / b_[as_size(u)];
            instant_[as_size(u)] = 0.0;
        }
        for (Index u = n; u < all; ++u) instant_[as_size(u)] += b_[as_size(u)] * rate_[as_size(u)];
        return;
    }
    // consistent capacity: one solve with the capacity matrix
    if (!rate_engine_ || !linear_) {
        if (!rate_engine_) rate_engine_ = std::make_unique<Engine>(model);
        SparseMatrix& matrix = rate_engine_->matrix;
        std::fill(matrix.lower.begin(), matrix.lower.end(), 0.0);
        std::fill(matrix.upper.begin(), matrix.upper.end(), 0.0);
        std::fill(b_.begin(), b_.end(), 0.0);
        if (const Fault fault = storage_->rise(values, work_, T, T, b_.data(), &matrix, nullptr)) raise(fault);
        if (!rate_engine_->factor(Purpose::many_solves)) return;
    }
    const SparseMatrix& M = rate_engine_->matrix;
    for (Index u = 0; u < n; ++u) b_[as_size(u)] = -instant_[as_size(u)];
    for (Index i = n; i < all; ++i)
        for (Id p = M.start[as_size(i)]; p < M.start[as_size(i) + 1] - 1; ++p)
            if (M.column[as_size(p)] < n) b_[as_size(M.column[as_size(p)])] -= M.lower[as_size(p)] * rate_[as_size(i)];
    double limit = 0.0;
    for (Index u = 0; u < n; ++u) limit += std::abs(b_[as_size(u)]);
    (void)rate_engine_->solve(b_.data(), 1e-12 * limit);
    for (Index u = 0; u < n; ++u) rate_[as_size(u)] = b_[as_size(u)];
    multiply(M, all, rate_.data(), b_.data());
    for (Index u = 0; u < all; ++u) instant_[as_size(u)] += b_[as_size(u)];
}

TEPOR_INLINE Field Marcher::field() {
    rates(T_.data(), {time, time, 1.0});
    Field field(model, values, T_, instant_, time);
    field.storage().assign(model->regions.size(), 0.0);
    if (const Fault fault = storage_->by_region(values, T_.data(), rate_.data(), field.storage().data())) raise(fault);
    return field;
}

TEPOR_INLINE double Marcher::molten_in(std::string_view name) const {
    const Index r = model->mesh->find_region(name);
    double held = 0.0;
    double full = 0.0;
    for (std::size_t i = 0; i < molten_.size(); ++i) {
        if (storage_->latent()[i].region != r) continue;
        held += molten_[i];
        full += storage_->latent()[i].full;
    }
    if (!(full > 0.0))
        throw Error(r < 0 ? ErrorCode::bad_name : ErrorCode::missing, std::string(name),
                    r < 0 ? text("molten_in: there is no region \"", name, "\"; the regions are ",
                                 quoted_list(model->mesh->region_names))
                          : text("molten_in: the material of \"", name, "\" has no latent heat"));
    return held / full;
}

} // namespace tepor::detail
