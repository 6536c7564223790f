#pragma once
// The full model behind a compact one: M T' + K T = B u, y = C T + D u around a steady state.

#include <cmath>
#include <tepor/answers/compact.hpp>
#include <tepor/answers/impl/dense.hpp>
#include <tepor/base/text.hpp>
#include <tepor/body/residual_slope.hpp>
#include <tepor/field/functional_slope.hpp>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/steady.hpp>

namespace tepor::detail {

class CompactPlant {
  public:
    CompactPlant(const Body& body, const CompactOptions& options)
        : body_(body), options_(options), field_(steady(body, {.time = 0.0})), model_(body.model()),
          n_(as_size(model_->free)) {
        check();
        Workspace work = model_->kernels->workspace();
        const Values& values = field_.values();
        Storage storage(model_, values, options.capacity, work);
        if (!storage.latent().empty())
            throw Error(ErrorCode::not_supported, "latent heat",
                        "compact: latent heat has no linear model; march the body");
        prepare_matrix(*model_, K);
        prepare_matrix(*model_, M);
        Pass pass;
        pass.T = field_.temperature().data();
        pass.matrix = &K;
        assemble(*model_, values, work, pass);
        if (pass.fault) raise(pass.fault);
        std::vector<double> nothing(as_size(model_->unknowns), 0.0);
        if (const Fault fault = storage.rise(values, work, pass.T, pass.T, nothing.data(), &M, nullptr)) raise(fault);
        inputs(work);
        outputs(work);
    }

    SparseMatrix K, M;                  ///< all unknowns
    std::vector<std::vector<double>> B; ///< per input, free unknowns, scaled
    std::vector<std::vector<double>> C; ///< per output, free unknowns, scaled
    Dense D;                            ///< outputs x inputs, scaled
    std::vector<double> u0, y0, input_scale, output_scale;
    Index factorisations = 0;

    [[nodiscard]] std::size_t size() const noexcept { return n_; }
    [[nodiscard]] const std::shared_ptr<const Model>& model() const noexcept { return model_; }
    [[nodiscard]] const Field& field() const noexcept { return field_; }

    /// Factor of K + shift M (K for 0), on the free unknowns.
    std::unique_ptr<Engine> factor(double shift, double stiffness = 1.0) {
        auto engine = std::make_unique<Engine>(model_);
        for (std::size_t e = 0; e < K.lower.size(); ++e)
            engine->matrix.lower[e] = stiffness * K.lower[e] + shift * M.lower[e];
        ++factorisations;
        if (!engine->factor(Purpose::many_solves))
            throw Error(ErrorCode::singular, "",
                        "compact: the body has no stable steady state here (a source that grows with temperature)");
        return engine;
    }
    static void solve(Engine& engine, std::vector<double>& b) {
        double sum = 0.0;
        for (const double v : b) sum += std::abs(v);
        if (sum > 0.0 && !engine.solve(b.data(), 1e-13 * sum))
            throw Error(ErrorCode::not_converged, "", "compact: a linear solve stalled");
    }

  private:
    void check() const {
        const auto refuse = [](ErrorCode code, const std::string& who, const std::string& what) {
            throw Error(code, who, what);
        };
        if (options_.inputs.empty() || options_.outputs.empty())
            refuse(ErrorCode::missing, "", "compact: give at least one input and one output");
        if (!(options_.sample_time > 0.0) || !std::isfinite(options_.sample_time))
            refuse(ErrorCode::missing, "sample_time",
                   text("compact: sample_time = ", options_.sample_time, " s, expected > 0"));
        if (!(options_.tolerance > 0.0 && options_.tolerance < 1.0))
            refuse(ErrorCode::bad_value, "tolerance",
                   text("compact: tolerance = ", options_.tolerance, ", expected 0 < tolerance < 1"));
        const auto scales = [&](const std::vector<double>& scale, std::size_t count, const char* name) {
            if (!scale.empty() && scale.size() != count)
                refuse(ErrorCode::bad_value, name,
                       text("compact: ", name, " has ", scale.size(), " entries for ", count));
            for (const double s : scale)
                if (!(s > 0.0) || !std::isfinite(s))
                    refuse(ErrorCode::bad_value, name, text("compact: ", name, " holds ", s, ", expected numbers > 0"));
        };
        scales(options_.input_scale, options_.inputs.size(), "input_scale");
        scales(options_.output_scale, options_.outputs.size(), "output_scale");
        if (model_->slope)
            refuse(ErrorCode::not_supported, "conductivity",
                   "compact: a conductivity that depends on temperature has no symmetric linear model; give numbers at "
                   "the "
                   "operating point");
        if (depends_on_time())
            refuse(ErrorCode::not_supported, "time",
                   "compact: the body's data depend on time; give the values at the operating point, or make them "
                   "inputs");
        for (const Parameter& p : options_.inputs) {
            const Index slot = model_->slot_of(p);
            if (slot < 0)
                refuse(ErrorCode::unused, p.name(),
                       text("compact: no statement of the body uses the input \"", p.name(), "\""));
            const SlotRole& role = model_->roles[as_size(slot)];
            if (role.matrix || role.capacity || role.place)
                refuse(
                    ErrorCode::not_supported, p.name(),
                    text("compact: \"", p.name(),
                         "\" multiplies temperature, stores heat or moves the body and cannot be an input; inputs are "
                         "powers, fluxes, and temperatures of fluids and faces"));
        }
    }

    /// Schedules and functions of time say so; a law that may use time is asked at a few odd instants.
    [[nodiscard]] bool depends_on_time() const {
        if (!model_->time_dependent) return false;
        const auto timed = [](const Coefficient& c) {
            if (c.value().kind() == Value::Kind::schedule) return true;
            if (c.value().kind() != Value::Kind::law) return false;
            const Law::Uses uses = c.value().law().uses();
            return uses.time && !uses.place && !uses.temperature;
        };
        for (const RegionModel& r : model_->regions) {
            for (const Coefficient& k : r.k)
                if (timed(k)) return true;
            for (const VolumeTerm& v : r.volume)
                if (timed(v.amount) || timed(v.fluid) || timed(v.extent)) return true;
        }
        for (const FaceModel& f : model_->faces) {
            if (timed(f.fixed)) return true;
            for (const FaceTerm& t : f.terms)
                if (timed(t.amount) || timed(t.outside)) return true;
        }
        for (const ContactModel& c : model_->contacts)
            if (timed(c.amount)) return true;
        for (const LocalModel& l : model_->locals)
            if (timed(l.total)) return true;
        Workspace work = model_->kernels->workspace();
        std::vector<double> T = field_.temperature();
        std::vector<double> first;
        for (const double t : {0.0, 977.13, 86399.7}) {
            std::vector<double> r(T.size());
            Pass pass;
            pass.T = field_.temperature().data();
            pass.time = {t, t, 1.0};
            pass.residual = r.data();
            assemble(*model_, field_.values(), work, pass);
            if (pass.fault) return true;
            model_->prescribe(field_.values(), {t, t, 1.0}, T.data());
            r.insert(r.end(), T.begin() + model_->free, T.end());
            if (first.empty()) first = r;
            if (r != first) return true;
        }
        return false;
    }

    /// dr/du of the free unknowns and the prescribed temperatures' part.
    void column(Workspace& work, const Values& values, Id slot, std::vector<double>& r,
                std::vector<double>& held) const {
        const double* T = field_.temperature().data();
        residual_by_slot(*model_, values, work, T, {}, slot, r.data());
        (void)prescribed_by_slot(*model_, values, {}, slot, held.data());
    }

    void inputs(Workspace& work) {
        const auto all = as_size(model_->unknowns);
        input_scale =
            options_.input_scale.empty() ? std::vector<double>(options_.inputs.size(), 1.0) : options_.input_scale;
        for (std::size_t j = 0; j < options_.inputs.size(); ++j) {
            const Parameter& p = options_.inputs[j];
            const Id slot = as_id(model_->slot_of(p));
            u0.push_back(body_.value(p));
            std::vector<double> r(all);
            std::vector<double> held(all, 0.0);
            column(work, field_.values(), slot, r, held);
            // an input that enters nonlinearly shows at another value
            std::vector<double> slots = field_.values().slots;
            slots[as_size(slot)] = 1.5 * u0[j] + 1.0;
            std::vector<double> r2(all);
            std::vector<double> held2(all, 0.0);
            column(work, model_->values_for(std::move(slots)), slot, r2, held2);
            double off = 0.0;
            double size = 0.0;
            for (std::size_t u = 0; u < all; ++u) {
                off = std::max({off, std::abs(r[u] - r2[u]), std::abs(held[u] - held2[u])});
                size = std::max({size, std::abs(r[u]), std::abs(held[u])});
            }
            if (!(off <= 1e-6 * size))
                throw Error(
                    ErrorCode::not_supported, p.name(),
                    text("compact: the input \"", p.name(),
                         "\" enters nonlinearly (through a law); make what is linear the input, such as its power"));
            std::vector<double> total(all);
            multiply(K, model_->unknowns, held.data(), total.data());
            std::vector<double> rising(all);
            multiply(M, model_->unknowns, held.data(), rising.data());
            std::vector<double> b(n_);
            for (std::size_t u = 0; u < n_; ++u) {
                b[u] = -input_scale[j] * (r[u] + total[u]);
                if (std::abs(rising[u]) > 0.0)
                    throw Error(
                        ErrorCode::not_supported, p.name(),
                        text("compact: the prescribed temperature \"", p.name(),
                             "\" as an input needs lumped capacity; say .capacity = Capacity::lumped, or give the "
                             "face a film"));
            }
            B.push_back(std::move(b));
            for (double& h : held) h *= input_scale[j];
            held_.push_back(std::move(held));
        }
    }

    void outputs(Workspace& work) {
        const Values& values = field_.values();
        const double* T = field_.temperature().data();
        const auto all = as_size(model_->unknowns);
        output_scale =
            options_.output_scale.empty() ? std::vector<double>(options_.outputs.size(), 1.0) : options_.output_scale;
        D = Dense(options_.outputs.size(), options_.inputs.size());
        for (std::size_t i = 0; i < options_.outputs.size(); ++i) {
            const Quantity& q = options_.outputs[i];
            const Functional f = compile(*model_, values, q);
            if (f.extreme)
                throw Error(ErrorCode::not_supported, q.label(),
                            text("compact: ", q.label(), " is no linear output; ask for a place or a mean"));
            y0.push_back(evaluate(f, *model_, values, work, T, field_.reaction().data(), {}));
            std::vector<double> row(all, 0.0);
            temperature_slope(f, *model_, values, work, T, {}, row.data());
            SlopeSums sums(*model_, false);
            explicit_slope(f, q, *model_, values, work, T, {}, 1.0, sums);
            if (!f.reaction.unknown.empty()) {
                // what enters at prescribed unknowns: K T - F + M T'
                const std::vector<double> w = reaction_weights(f, *model_);
                std::vector<double> y(all);
                multiply(K, model_->unknowns, w.data(), y.data());
                for (std::size_t u = 0; u < all; ++u) row[u] += y[u];
                contract_slopes(*model_, values, work, {T, w.data(), {}, nullptr, 1.0}, sums);
                multiply(M, model_->unknowns, w.data(), y.data());
                bool stores = false;
                for (std::size_t u = 0; u < n_; ++u) stores = stores || y[u] != 0.0;
                for (const std::vector<double>& held : held_)
                    for (std::size_t u = n_; u < all; ++u) stores = stores || (y[u] != 0.0 && held[u] != 0.0);
                if (stores)
                    throw Error(ErrorCode::not_supported, q.label(),
                                text("compact: ", q.label(),
                                     " at a prescribed temperature holds a rate of change here; say .capacity = "
                                     "Capacity::lumped, give the face a film, or make another temperature the input"));
            }
            for (std::size_t j = 0; j < B.size(); ++j) {
                const Id slot = as_id(model_->slot_of(options_.inputs[j]));
                double d = input_scale[j] * sums.slots[as_size(slot)];
                for (std::size_t u = n_; u < all; ++u) d += row[u] * held_[j][u];
                D(i, j) = d / output_scale[i];
            }
            std::vector<double> c(n_);
            for (std::size_t u = 0; u < n_; ++u) c[u] = row[u] / output_scale[i];
            C.push_back(std::move(c));
        }
    }

    const Body& body_;
    const CompactOptions& options_;
    Field field_;
    std::shared_ptr<const Model> model_;
    std::size_t n_;
    std::vector<std::vector<double>> held_; // per input: prescribed temperatures, scaled
};

} // namespace tepor::detail
