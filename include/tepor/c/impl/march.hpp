#pragma once
// Marching: options, handles for the loop, longer runs.

#include <limits>
#include <tepor/c/impl/field.hpp>
#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

inline tepor_march* make_march(const Body& body, const Initial& start, const tepor_march_options* given) {
    tepor_march_options o = tepor_march_options_default();
    if (given->size < sizeof(std::size_t)) misuse("start the options from tepor_march_options_default()");
    std::memcpy(&o, given, std::min(given->size, sizeof o));
    if (o.step > 0.0) {
        Theta theta{.theta = o.theta, .step = o.step};
        theta.damped_start = o.damped_start != 0;
        theta.newton_passes = o.newton_passes;
        return new tepor_march{March(body, start, theta), {}, {}};
    }
    Adaptive adaptive{.tolerance = o.tolerance};
    if (o.largest_step > 0.0) adaptive.largest_step = o.largest_step;
    return new tepor_march{March(body, start, adaptive), {}, {}};
}

} // namespace tepor::c

extern "C" {

tepor_march_options tepor_march_options_default(void) {
    tepor_march_options o{};
    o.size = sizeof o;
    o.theta = 0.5;
    o.tolerance = 0.01;
    o.damped_start = 1;
    return o;
}

tepor_status tepor_march_create(tepor_session* session, const tepor_body* body, double temperature,
                                const tepor_march_options* options, tepor_march** out) {
    return tepor::c::run(session, body && options && out,
                         [&] { *out = tepor::c::make_march(body->body, tepor::initial(temperature), options); });
}
tepor_status tepor_march_create_from(tepor_session* session, const tepor_body* body, const tepor_field* field,
                                     const tepor_march_options* options, tepor_march** out) {
    return tepor::c::run(session, body && field && options && out,
                         [&] { *out = tepor::c::make_march(body->body, tepor::initial(field->field), options); });
}
void tepor_march_free(tepor_march* march) {
    delete march;
}

tepor_status tepor_march_watch(tepor_session* session, tepor_march* march, const tepor_quantity* quantity,
                               int64_t* probe) {
    return tepor::c::run(session, march && quantity && probe, [&] {
        march->probes.push_back(march->march.watch(quantity->quantity));
        *probe = static_cast<int64_t>(march->probes.size()) - 1;
    });
}
tepor_status tepor_march_drive(tepor_session* session, tepor_march* march, const tepor_parameter* parameter,
                               int64_t* input) {
    return tepor::c::run(session, march && parameter && input, [&] {
        march->inputs.push_back(march->march.drive(parameter->parameter));
        *input = static_cast<int64_t>(march->inputs.size()) - 1;
    });
}

void tepor_march_set(tepor_march* march, int64_t input, double value) {
    if (march && input >= 0 && static_cast<size_t>(input) < march->inputs.size())
        march->march.set(march->inputs[static_cast<size_t>(input)], value);
}
double tepor_march_read(const tepor_march* march, int64_t probe) {
    if (!march || probe < 0 || static_cast<size_t>(probe) >= march->probes.size())
        return std::numeric_limits<double>::quiet_NaN();
    return march->march[march->probes[static_cast<size_t>(probe)]];
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

} // extern "C"
