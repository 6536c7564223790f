#pragma once
// Marching: options, handles for the loop, longer runs.

#include <tepor/c/impl/field.hpp>
#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

inline tepor_march_options options_of(const tepor_march_options* given) {
    tepor_march_options o = tepor_march_options_default();
    take(given, o);
    return o;
}

inline Capacity capacity_of(int32_t kind) {
    switch (kind) {
    case TEPOR_CAPACITY_AUTOMATIC: return Capacity::automatic;
    case TEPOR_CAPACITY_LUMPED: return Capacity::lumped;
    case TEPOR_CAPACITY_CONSISTENT: return Capacity::consistent;
    case TEPOR_CAPACITY_BLENDED: return Capacity::blended;
    default: misuse("the capacity is no tepor_capacity");
    }
}

inline Theta theta_of(const tepor_march_options& o) {
    Theta theta{.theta = o.theta, .step = o.step};
    theta.capacity = capacity_of(o.capacity);
    theta.damped_start = o.damped_start != 0;
    theta.newton_passes = o.newton_passes;
    theta.tolerance = o.newton_tolerance;
    return theta;
}

inline Adaptive adaptive_of(const tepor_march_options& o) {
    Adaptive adaptive{.tolerance = o.tolerance};
    adaptive.first_step = o.first_step;
    if (o.largest_step > 0.0) adaptive.largest_step = o.largest_step;
    adaptive.smallest_step = o.smallest_step;
    adaptive.capacity = capacity_of(o.capacity);
    adaptive.newton_tolerance = o.newton_tolerance;
    return adaptive;
}

/// From an Initial or a Checkpoint.
template <class Start>
tepor_march* make_march(const Body& body, const Start& start, const tepor_march_options& o) {
    return o.step != 0.0 ? new tepor_march{March(body, start, theta_of(o))}
                         : new tepor_march{March(body, start, adaptive_of(o))};
}

inline Phase phase_of(const tepor_march_options& o) {
    return o.liquid != 0 ? Phase::liquid : Phase::solid;
}

template <class Handle>
int64_t keep(std::vector<Handle>& handles, Handle handle) {
    handles.push_back(handle);
    return static_cast<int64_t>(handles.size()) - 1;
}

/// The handle of a number that was given out; null for any other.
template <class Handle>
const Handle* kept(const std::vector<Handle>& handles, int64_t number) {
    return number >= 0 && static_cast<std::size_t>(number) < handles.size() ? &handles[static_cast<std::size_t>(number)]
                                                                            : nullptr;
}

} // namespace tepor::c

extern "C" {

tepor_march_options tepor_march_options_default(void) {
    const tepor::Theta theta;
    const tepor::Adaptive adaptive;
    tepor_march_options o{};
    o.size = sizeof o;
    o.theta = theta.theta;
    o.tolerance = adaptive.tolerance;
    o.damped_start = theta.damped_start ? 1 : 0;
    o.newton_tolerance = theta.tolerance;
    return o;
}

tepor_status tepor_march_create(tepor_session* session, const tepor_body* body, double temperature,
                                const tepor_march_options* options, tepor_march** out) {
    return tepor::c::run(session, body && options && out, [&] {
        const tepor_march_options o = tepor::c::options_of(options);
        *out = tepor::c::make_march(body->body, tepor::initial(temperature, tepor::c::phase_of(o)), o);
    });
}
tepor_status tepor_march_create_from(tepor_session* session, const tepor_body* body, const tepor_field* field,
                                     const tepor_march_options* options, tepor_march** out) {
    return tepor::c::run(session, body && field && options && out, [&] {
        const tepor_march_options o = tepor::c::options_of(options);
        *out = tepor::c::make_march(body->body, tepor::initial(field->field, tepor::c::phase_of(o)), o);
    });
}
tepor_status tepor_march_create_by(tepor_session* session, const tepor_body* body, const tepor_function* temperature,
                                   const tepor_march_options* options, tepor_march** out) {
    return tepor::c::run(session, body && temperature && options && out, [&] {
        if (temperature->value.kind() != tepor::Value::Kind::law)
            tepor::c::misuse("a march starts from a law of place; make it with tepor_law_create");
        const tepor_march_options o = tepor::c::options_of(options);
        *out = tepor::c::make_march(body->body, tepor::initial(temperature->value.law(), tepor::c::phase_of(o)), o);
    });
}
tepor_status tepor_march_resume(tepor_session* session, const tepor_body* body, const tepor_checkpoint* checkpoint,
                                const tepor_march_options* options, tepor_march** out) {
    return tepor::c::run(session, body && checkpoint && options && out, [&] {
        *out = tepor::c::make_march(body->body, checkpoint->checkpoint, tepor::c::options_of(options));
    });
}
void tepor_march_free(tepor_march* march) {
    delete march;
}

tepor_status tepor_march_watch(tepor_session* session, tepor_march* march, const tepor_quantity* quantity,
                               int64_t* probe) {
    return tepor::c::run(session, march && quantity && probe,
                         [&] { *probe = tepor::c::keep(march->probes, march->march.watch(quantity->quantity)); });
}
tepor_status tepor_march_drive(tepor_session* session, tepor_march* march, const tepor_parameter* parameter,
                               int64_t* input) {
    return tepor::c::run(session, march && parameter && input,
                         [&] { *input = tepor::c::keep(march->inputs, march->march.drive(parameter->parameter)); });
}
tepor_status tepor_march_integral(tepor_session* session, tepor_march* march, const tepor_quantity* quantity,
                                  int64_t* integral) {
    return tepor::c::run(session, march && quantity && integral, [&] {
        *integral = tepor::c::keep(march->integrals, march->march.integral(quantity->quantity));
    });
}
tepor_status tepor_march_peak(tepor_session* session, tepor_march* march, const tepor_quantity* quantity,
                              int64_t* peak) {
    return tepor::c::run(session, march && quantity && peak,
                         [&] { *peak = tepor::c::keep(march->peaks, march->march.peak(quantity->quantity)); });
}
tepor_status tepor_march_record(tepor_session* session, tepor_march* march, double megabytes) {
    return tepor::c::run(session, march, [&] { march->march.record(megabytes); });
}
tepor_status tepor_march_observe(tepor_session* session, tepor_march* march, double interval,
                                 tepor_march_callback callback, void* user_data) {
    return tepor::c::run(session, march && callback, [&] {
        march->march.observe(interval, [march, callback, user_data](const tepor::March&) {
            if (callback(march, user_data) != 0)
                throw tepor::Error(tepor::ErrorCode::cancelled, "observer", "an observer of the march stopped it");
        });
    });
}

void tepor_march_set(tepor_march* march, int64_t input, double value) {
    if (!march) return;
    if (const tepor::Input* known = tepor::c::kept(march->inputs, input)) march->march.set(*known, value);
}
double tepor_march_read(const tepor_march* march, int64_t probe) {
    const tepor::Probe* known = march ? tepor::c::kept(march->probes, probe) : nullptr;
    return known ? march->march[*known] : tepor::c::not_given;
}
double tepor_march_read_integral(const tepor_march* march, int64_t integral) {
    const tepor::Integral* known = march ? tepor::c::kept(march->integrals, integral) : nullptr;
    return known ? march->march[*known] : tepor::c::not_given;
}
double tepor_march_read_peak(const tepor_march* march, int64_t peak, double* time) {
    const tepor::Peak* known = march ? tepor::c::kept(march->peaks, peak) : nullptr;
    if (!known) return tepor::c::not_given;
    const tepor::Moment met = march->march[*known];
    if (time) *time = met.time;
    return met.value;
}
int32_t tepor_march_advance(tepor_march* march) {
    return march ? static_cast<int32_t>(march->march.advance().verdict()) : 16;
}
const char* tepor_verdict_text(int32_t verdict) {
    return verdict == 16 ? "the march is NULL" : tepor::text_of(static_cast<tepor::Verdict>(verdict));
}
double tepor_march_time(const tepor_march* march) {
    return march ? march->march.time() : 0.0;
}

tepor_status tepor_march_advance_to(tepor_session* session, tepor_march* march, double time) {
    return tepor::c::run(session, march, [&] { march->march.advance_to(time); });
}
tepor_status tepor_march_advance_to_with(tepor_session* session, tepor_march* march, double time,
                                         tepor_march_callback progress, void* user_data) {
    return tepor::c::run(session, march && progress, [&] {
        march->march.advance_to(time, [&](const tepor::March&) { return progress(march, user_data) == 0; });
    });
}
tepor_status tepor_march_time_to_reach(tepor_session* session, tepor_march* march, const tepor_quantity* quantity,
                                       double value, double latest, double* time) {
    return tepor::c::run(session, march && quantity && time,
                         [&] { *time = march->march.time_to_reach(quantity->quantity, value, latest); });
}
tepor_status tepor_march_value(tepor_session* session, const tepor_march* march, const tepor_quantity* quantity,
                               double* out) {
    return tepor::c::run(session, march && quantity && out, [&] { *out = march->march[quantity->quantity]; });
}
tepor_status tepor_march_field(tepor_session* session, const tepor_march* march, tepor_field** out) {
    return tepor::c::run(session, march && out, [&] { *out = new tepor_field{march->march.field()}; });
}
tepor_status tepor_march_balance(tepor_session* session, const tepor_march* march, tepor_balance* balance) {
    return tepor::c::run(session, march && balance,
                         [&] { tepor::c::give(tepor::c::balance_of(march->march.balance()), balance); });
}
tepor_status tepor_march_total(tepor_session* session, const tepor_march* march, tepor_balance* balance) {
    return tepor::c::run(session, march && balance,
                         [&] { tepor::c::give(tepor::c::balance_of(march->march.total()), balance); });
}
tepor_status tepor_march_molten_in(tepor_session* session, const tepor_march* march, const char* region,
                                   double* share) {
    return tepor::c::run(session, march && region && share, [&] { *share = march->march.molten_in(region); });
}
tepor_status tepor_march_parameter(tepor_session* session, const tepor_march* march, const tepor_parameter* parameter,
                                   double* out) {
    return tepor::c::run(session, march && parameter && out, [&] { *out = march->march.value(parameter->parameter); });
}
double tepor_march_last_step(const tepor_march* march) {
    return march ? march->march.last_step() : 0.0;
}
double tepor_march_sensible_step(const tepor_march* march) {
    return march ? march->march.sensible_step() : 0.0;
}
int64_t tepor_march_steps(const tepor_march* march) {
    return march ? march->march.steps() : 0;
}
int64_t tepor_march_factorisations(const tepor_march* march) {
    return march ? march->march.factorisations() : 0;
}
int64_t tepor_march_rejections(const tepor_march* march) {
    return march ? march->march.rejections() : 0;
}

} // extern "C"
