#pragma once
// What the legs of an adjoint run leave behind: contracted leg by leg, or summed up where the body is linear and contracted once.

#include <tepor/body/residual_slope.hpp>
#include <tepor/solve/capacity.hpp>
#include <tepor/solve/tape.hpp>

namespace tepor::detail {

/// The parts of a linear body whose loads change over a run: their loads are contracted at every step, all else at the end.
inline Restriction changing_loads(const Model& model, const MarchTape& tape) {
    std::vector<bool> changes(model.parameters.size());
    for (const Values& v : tape.values)
        for (std::size_t s = 0; s < changes.size(); ++s)
            changes[s] = changes[s] || v.slots[s] != tape.values.front().slots[s];
    const auto moves = [&](const Coefficient& c) {
        if (!c.given()) return false;
        bool any = c.depends_on_time();
        for (const Id s : c.slots()) any = any || (s >= 0 && changes[as_size(s)]);
        return any;
    };
    Restriction only;
    for (std::size_t r = 0; r < model.regions.size(); ++r) {
        bool any = false;
        for (const VolumeTerm& t : model.regions[r].volume)
            any = any || moves(t.kind == VolumeTerm::Kind::side_film ? t.fluid : t.amount);
        if (any) only.regions.push_back(as_id(r));
    }
    for (std::size_t f = 0; f < model.faces.size(); ++f) {
        bool any = false;
        for (const FaceTerm& t : model.faces[f].terms)
            any = any || moves(t.kind == FaceTerm::Kind::flux ? t.amount : t.outside);
        if (any) only.faces.push_back({as_id(f), model.faces[f].sides});
    }
    for (std::size_t l = 0; l < model.locals.size(); ++l)
        if (moves(model.locals[l].total)) only.locals.push_back(as_id(l));
    return only;
}

/// Prescribed temperatures change over a run.
inline bool changing_prescribed(const Model& model, const MarchTape& tape) {
    for (const FaceModel& f : model.faces) {
        if (!f.fixed.given()) continue;
        if (f.fixed.depends_on_time()) return true;
        for (const Id s : f.fixed.slots())
            for (const Values& v : tape.values)
                if (s >= 0 && v.slots[as_size(s)] != tape.values.front().slots[as_size(s)]) return true;
    }
    return false;
}

class MarchSums {
  public:
    MarchSums(const Model& model, const MarchTape& tape, bool linear)
        : sums(model, model.kernels->shape_at(0) != nullptr), model_(model), summing_(linear && !sums.places.empty()),
          products_(model), heat_pairs_(model.pattern.column.size(), 0.0), cold_(as_size(model.unknowns), 0.0),
          by_prescribed_(as_size(model.unknowns), 0.0) {
        if (!summing_) return;
        changing_ = changing_loads(model, tape);
        any_changing_ = !changing_.regions.empty() || !changing_.faces.empty() || !changing_.locals.empty();
        prescribed_changes_ = changing_prescribed(model, tape);
    }

    SlopeSums sums;

    /// factor * lambda . r(T) of the weak form.
    void weak_form(const Values& values, Workspace& work, const std::vector<double>& T, TimeSpan span, double factor,
                   const std::vector<double>& lambda) {
        if (!summing_) {
            contract_slopes(model_, values, work, {T.data(), lambda.data(), span, nullptr, factor}, sums);
            return;
        }
        products_.add(model_, lambda.data(), T.data(), factor);
        if (any_changing_)
            contract_slopes(model_, values, work, {cold_.data(), lambda.data(), span, &changing_, factor}, sums);
        filled_ = true;
    }

    /// lambda . (E(to) - E(from)) of the sensible heat.
    void heat(const Values& values, Workspace& work, const Storage& storage, const std::vector<double>& from,
              const std::vector<double>& to, const std::vector<double>& lambda) {
        const double lumped = storage.lumped_share();
        if (!storage.linear()) {
            contract_enthalpy(model_, values, work, from.data(), to.data(), lambda.data(), lumped, sums);
            return;
        }
        rise_.resize(from.size());
        for (std::size_t u = 0; u < rise_.size(); ++u) rise_[u] = to[u] - from[u];
        if (!summing_) {
            contract_capacity(model_, values, work, rise_.data(), lambda.data(), lumped, sums);
            return;
        }
        filled_ = true;
        if (lumped == 1.0) {
            const Id* start = model_.pattern.start.data();
            for (std::size_t u = 0; u < rise_.size(); ++u)
                heat_pairs_[as_size(start[u + 1] - 1)] += lambda[u] * rise_[u];
        } else {
            SlopeProducts::add_pairs(model_, lambda.data(), rise_.data(), 1.0, heat_pairs_.data());
        }
    }

    /// Weights on the temperatures prescribed at a time.
    void prescribed(const Values& values, double at, bool before, const std::vector<double>& weights) {
        if (model_.free == model_.unknowns) return;
        if (!summing_ || prescribed_changes_) {
            contract_prescribed(model_, values, {at, at, 1.0, before}, weights.data(), sums);
            return;
        }
        for (Index u = model_.free; u < model_.unknowns; ++u) by_prescribed_[as_size(u)] += weights[as_size(u)];
        filled_ = true;
    }

    /// Contracts what was summed up, at the values it belongs to.
    void finish(const Values& values, Workspace& work, double lumped_share) {
        if (!filled_) return;
        filled_ = false;
        contract_products(model_, values, work, products_, {}, sums);
        // of what changes the loads have been counted leg by leg
        if (any_changing_)
            contract_slopes(model_, values, work, {cold_.data(), products_.weights.data(), {}, &changing_, -1.0}, sums);
        contract_capacity_products(model_, values, work, heat_pairs_, lumped_share, sums);
        if (model_.free < model_.unknowns) contract_prescribed(model_, values, {}, by_prescribed_.data(), sums);
        products_ = SlopeProducts(model_);
        std::fill(heat_pairs_.begin(), heat_pairs_.end(), 0.0);
        std::fill(by_prescribed_.begin(), by_prescribed_.end(), 0.0);
    }

  private:
    const Model& model_;
    bool summing_;
    SlopeProducts products_;
    std::vector<double> heat_pairs_;
    std::vector<double> cold_;
    std::vector<double> by_prescribed_;
    std::vector<double> rise_;
    Restriction changing_;
    bool any_changing_ = false;
    bool prescribed_changes_ = false;
    bool filled_ = false;
};

} // namespace tepor::detail
