#pragma once
// The steady adjoint.

#include <algorithm>
#include <cmath>
#include <tepor/answers/gradient.hpp>
#include <tepor/answers/impl/adjoint.hpp>
#include <tepor/field/functional_slope.hpp>

namespace tepor {

namespace detail {

/// Every law among the data knows its slope exactly.
inline bool exact_laws(const Model& model) {
    const auto exact = [](const Coefficient& c) {
        return c.value().kind() != Value::Kind::law || c.value().law().exact_slope();
    };
    bool all = true;
    for (const RegionModel& r : model.regions) {
        for (const Coefficient& k : r.k) all = all && exact(k);
        for (const VolumeTerm& v : r.volume) all = all && exact(v.amount) && exact(v.fluid) && exact(v.extent);
    }
    for (const FaceModel& f : model.faces) {
        all = all && exact(f.fixed);
        for (const FaceTerm& t : f.terms) all = all && exact(t.amount) && exact(t.outside);
    }
    for (const ContactModel& c : model.contacts) all = all && exact(c.amount);
    for (const LocalModel& l : model.locals) all = all && exact(l.total);
    return all;
}

/// Sums by slot and place become the answer.
inline Gradient finish_gradient(const Quantity& quantity, double value, const Model& model, const Values& values,
                                SlopeSums& sums) {
    std::vector<Point> nodes;
    std::vector<Point> places;
    if (model.kernels->shape_at(0)) {
        nodes.resize(model.mesh->nodes.size());
        places = model.mesh->nodes;
        const Point* place = model.places_of(values);
        for (std::size_t u = 0; u < model.node_of.size(); ++u) {
            Point& sum = nodes[as_size(model.node_of[u])];
            sum = sum + sums.places[u];
            places[as_size(model.node_of[u])] = place[u];
        }
    }
    chain_places(model, sums);
    std::vector<Gradient::Entry> entries;
    entries.reserve(sums.slots.size());
    for (std::size_t s = 0; s < sums.slots.size(); ++s) {
        const double p = values.slots[s];
        entries.push_back({model.parameters[s], p, sums.slots[s], value == 0.0 ? 0.0 : p / value * sums.slots[s]});
    }
    return {quantity, value, std::move(entries), std::move(nodes), std::move(places), exact_laws(model)};
}

/// dJ/d(slot, place) of a linearised steady state.
inline Gradient steady_gradient(Linearised& at, const Quantity& quantity) {
    const Field& field = at.field();
    const Model& model = at.model();
    const Values& values = field.values();
    const double* T = field.temperature().data();
    const auto n = as_size(model.unknowns);
    const Functional functional = compile(model, values, quantity);
    const double value = evaluate(functional, model, values, at.work(), T, field.reaction().data(), {});

    std::vector<double> row(n, 0.0);
    temperature_slope(functional, model, values, at.work(), T, {}, row.data());
    std::vector<double> lambda = reaction_weights(functional, model);
    std::vector<double> product(n, 0.0);
    if (!functional.reaction.unknown.empty()) {
        at.multiply_all(lambda.data(), product.data(), true);
        for (std::size_t u = 0; u < n; ++u) row[u] += product[u];
    }
    std::vector<double> free(n, 0.0);
    for (Index u = 0; u < model.free; ++u) free[as_size(u)] = -row[as_size(u)];
    at.solve(free.data(), true);
    at.multiply_all(free.data(), product.data(), true);
    for (std::size_t u = 0; u < n; ++u) {
        row[u] += product[u]; // what is left at prescribed unknowns is the derivative by their temperature
        lambda[u] += free[u];
    }
    SlopeSums sums(model, true);
    explicit_slope(functional, quantity, model, values, at.work(), T, {}, 1.0, sums);
    contract_slopes(model, values, at.work(), {T, lambda.data(), {}, nullptr, 1.0}, sums);
    contract_prescribed(model, values, {}, row.data(), sums);
    return finish_gradient(quantity, value, model, values, sums);
}

} // namespace detail

TEPOR_INLINE double Gradient::operator[](const Parameter& parameter) const {
    for (const Entry& e : entries_)
        if (e.parameter == parameter) return e.derivative;
    std::vector<std::string> names;
    for (const Entry& e : entries_) names.push_back(e.parameter.name());
    throw Error(ErrorCode::unused, parameter.name(),
                detail::text("gradient: no statement of the body uses the parameter \"", parameter.name(),
                             "\"; its parameters are ", detail::quoted_list(names)));
}

TEPOR_INLINE std::vector<Gradient::Entry> Gradient::ranked() const {
    std::vector<Entry> sorted = entries_;
    std::stable_sort(sorted.begin(), sorted.end(),
                     [](const Entry& a, const Entry& b) { return std::abs(a.relative) > std::abs(b.relative); });
    return sorted;
}

TEPOR_INLINE const std::vector<Point>& Gradient::nodes() const {
    if (nodes_.empty())
        throw Error(
            ErrorCode::not_supported, quantity_.label(),
            "gradient: derivatives by node positions need cells with shape functions; thickness parameters work "
            "with every cell");
    return nodes_;
}

TEPOR_INLINE Gradient gradient(const Field& field, const Quantity& quantity) {
    detail::Linearised at(field);
    return detail::steady_gradient(at, quantity);
}

} // namespace tepor
