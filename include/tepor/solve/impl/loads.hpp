#pragma once
// Load vectors by input.

#include <tepor/base/memory.hpp>
#include <tepor/solve/loads.hpp>

namespace tepor {

namespace detail {

/// Calls f(coefficient, part it acts in) for every load of a linear model.
template <class Visit>
void for_each_load(const Model& model, const Visit& visit) {
    for (std::size_t r = 0; r < model.regions.size(); ++r)
        for (const VolumeTerm& term : model.regions[r].volume)
            visit(term.kind == VolumeTerm::Kind::side_film ? term.fluid : term.amount, 0, r);
    for (std::size_t f = 0; f < model.faces.size(); ++f)
        for (const FaceTerm& term : model.faces[f].terms)
            visit(term.kind == FaceTerm::Kind::flux ? term.amount : term.outside, 1, f);
    for (std::size_t l = 0; l < model.locals.size(); ++l) visit(model.locals[l].total, 2, l);
}

inline void add_times(std::size_t n, double a, const double* TEPOR_RESTRICT x, double* TEPOR_RESTRICT y) noexcept {
    for (std::size_t i = 0; i < n; ++i) y[i] += a * x[i];
}

} // namespace detail

TEPOR_INLINE Loads::Loads(std::shared_ptr<const Model> model, const Values& values, Workspace& work)
    : model_(std::move(model)) {
    const std::size_t n = detail::as_size(model_->unknowns);
    for (std::vector<double>* array : {&constant_, &from_samples_, &sum_, &cold_}) array->assign(n, 0.0);
    classify();
    rebuild(values, work);
}

TEPOR_INLINE void Loads::classify() {
    detail::for_each_load(*model_, [this](const Coefficient& c, int, std::size_t) {
        switch (c.value().kind()) {
        case Value::Kind::none:
        case Value::Kind::number: constants_.push_back(&c); return;
        case Value::Kind::parameter: units_.push_back({&c, c.slots()[0], {}, 0.0}); return;
        case Value::Kind::schedule: units_.push_back({&c, -1, {}, 0.0}); return;
        case Value::Kind::table: sampled_.push_back(&c); return;
        case Value::Kind::law:
            if (c.uniform())
                units_.push_back({&c, -1, {}, 0.0});
            else if (!c.depends_on_time() && c.slots().empty())
                constants_.push_back(&c);
            else
                sampled_.push_back(&c);
            if (c.depends_on_time()) sampled_in_time_ = true;
        }
    });
    sampled_where_ = where(sampled_);
}

TEPOR_INLINE Restriction Loads::where(const std::vector<const Coefficient*>& loads) const {
    Restriction part;
    const auto once = [](std::vector<Id>& ids, std::size_t id) {
        if (ids.empty() || ids.back() != detail::as_id(id)) ids.push_back(detail::as_id(id));
    };
    detail::for_each_load(*model_, [&](const Coefficient& c, int kind, std::size_t at) {
        for (const Coefficient* load : loads) {
            if (load != &c) continue;
            if (kind == 0) once(part.regions, at);
            if (kind == 1 && (part.faces.empty() || part.faces.back().face != detail::as_id(at)))
                part.faces.push_back({detail::as_id(at), model_->faces[at].sides});
            if (kind == 2) once(part.locals, at);
        }
    });
    return part;
}

TEPOR_INLINE void Loads::integrate(const Values& values, Workspace& work, const std::vector<const Coefficient*>& loads,
                                   bool unit, const Restriction* only, TimeSpan span, double* out) {
    Pass pass;
    pass.T = cold_.data();
    pass.time = span;
    pass.only = only;
    pass.loads = &loads;
    pass.unit_loads = unit;
    pass.residual = out;
    assemble(*model_, values, work, pass);
    for (std::size_t u = 0; u < cold_.size(); ++u) out[u] = -out[u];
    fault_ = pass.fault;
}

TEPOR_INLINE void Loads::rebuild(const Values& values, Workspace& work) {
    integrate(values, work, constants_, false, nullptr, {}, constant_.data());
    if (fault_) raise(fault_);
    std::vector<double> row(cold_.size());
    for (Unit& unit : units_) {
        const std::vector<const Coefficient*> one{unit.coefficient};
        const Restriction part = where(one);
        integrate(values, work, one, true, &part, {}, row.data());
        if (fault_) raise(fault_);
        unit.row = {};
        for (std::size_t u = 0; u < row.size(); ++u)
            if (row[u] != 0.0) unit.row.add(detail::as_id(u), row[u]);
        unit.dense.clear();
        if (2 * unit.row.unknown.size() > row.size()) unit.dense = row;
    }
    changed_ = fresh_ = true;
}

TEPOR_INLINE Fault Loads::update(const Values& values, Workspace& work, TimeSpan span) {
    bool differs = changed_;
    static constexpr double nowhere = 0.0;
    for (Unit& unit : units_) {
        double now = 0.0;
        if (unit.slot >= 0) {
            now = values.slots[detail::as_size(unit.slot)];
        } else if (const Fault fault = unit.coefficient->evaluate(
                       values.slots.data(), span, {1, nullptr, nullptr, &nowhere, &nowhere}, &now, nullptr)) {
            return fault;
        }
        differs = differs || now != unit.value;
        unit.value = now;
    }
    if (!sampled_.empty() && (changed_ || sampled_in_time_)) {
        integrate(values, work, sampled_, false, &sampled_where_, span, from_samples_.data());
        if (fault_) return fault_;
        differs = true;
    }
    if (!differs && !fresh_) return {};
    // always summed from the start, so that the sum does not depend on the history of the inputs
    const std::size_t n = cold_.size();
    if (sampled_.empty())
        for (std::size_t u = 0; u < n; ++u) sum_[u] = constant_[u];
    else
        for (std::size_t u = 0; u < n; ++u) sum_[u] = constant_[u] + from_samples_[u];
    for (const Unit& unit : units_) {
        if (!unit.dense.empty()) {
            detail::add_times(n, unit.value, unit.dense.data(), sum_.data());
            continue;
        }
        const Id* ids = unit.row.unknown.data();
        const double* weights = unit.row.weight.data();
        const std::size_t entries = unit.row.unknown.size();
        for (std::size_t i = 0; i < entries; ++i) sum_[detail::as_size(ids[i])] += unit.value * weights[i];
    }
    changed_ = fresh_ = false;
    return {};
}

TEPOR_INLINE bool Loads::plain(Id slot) const noexcept {
    for (const Coefficient* c : sampled_)
        if (c->depends_on(slot)) return false;
    return true;
}

} // namespace tepor
