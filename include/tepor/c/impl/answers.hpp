#pragma once
// Brackets, estimates and gradients.

#include <tepor/c/impl/field.hpp>
#include <tepor/c/impl/handles.hpp>

struct tepor_slopes {
    tepor::Gradient gradient;
    std::vector<tepor::Gradient::Entry> ranked;
};

namespace tepor::c {

inline tepor_slopes* slopes_of(Gradient gradient) {
    std::vector<Gradient::Entry> ranked = gradient.ranked();
    return new tepor_slopes{std::move(gradient), std::move(ranked)};
}

} // namespace tepor::c

extern "C" {

tepor_bracket_options tepor_bracket_options_default(void) {
    const tepor::BracketOptions usual;
    tepor_bracket_options o{};
    o.size = sizeof o;
    o.relative_width = usual.relative_width;
    o.absolute_width = usual.absolute_width;
    o.max_seconds = usual.max_seconds;
    o.max_unknowns = usual.max_unknowns;
    return o;
}
tepor_status tepor_bracket(tepor_session* session, const tepor_body* body, const tepor_quantity* quantity,
                           const tepor_bracket_options* options, tepor_bracket_result* result) {
    return tepor::c::run(session, body && quantity && result, [&] {
        tepor_bracket_options o = tepor_bracket_options_default();
        if (options) tepor::c::take(options, o);
        tepor::BracketOptions how;
        how.relative_width = o.relative_width;
        how.absolute_width = o.absolute_width;
        how.max_seconds = o.max_seconds;
        how.max_unknowns = static_cast<tepor::Index>(o.max_unknowns);
        const tepor::Bracket found = tepor::bracket(body->body, quantity->quantity, how);
        tepor_bracket_result out{};
        out.lower = found.lower;
        out.value = found.value;
        out.upper = found.upper;
        out.cells = found.cells;
        out.unknowns = found.unknowns;
        out.reached = found.reached ? 1 : 0;
        out.passes = static_cast<int32_t>(found.passes.size());
        tepor::c::give(out, result);
        tepor::c::remark(session, found.remark);
    });
}

tepor_estimate_options tepor_estimate_options_default(void) {
    const tepor::EstimateOptions usual;
    tepor_estimate_options o{};
    o.size = sizeof o;
    o.relative_error = usual.relative_error;
    o.absolute_error = usual.absolute_error;
    o.max_seconds = usual.max_seconds;
    o.max_unknowns = usual.max_unknowns;
    return o;
}
tepor_status tepor_estimate(tepor_session* session, const tepor_body* body, const tepor_quantity* quantity,
                            const tepor_estimate_options* options, tepor_estimate_result* result) {
    return tepor::c::run(session, body && quantity && result, [&] {
        tepor_estimate_options o = tepor_estimate_options_default();
        if (options) tepor::c::take(options, o);
        tepor::EstimateOptions how;
        how.relative_error = o.relative_error;
        how.absolute_error = o.absolute_error;
        how.max_seconds = o.max_seconds;
        how.max_unknowns = static_cast<tepor::Index>(o.max_unknowns);
        const tepor::Estimate found = tepor::estimate(body->body, quantity->quantity, how);
        tepor_estimate_result out{};
        out.value = found.value;
        out.likely_error = found.likely_error;
        out.order = found.order;
        out.reached = found.reached ? 1 : 0;
        out.passes = static_cast<int32_t>(found.passes.size());
        tepor::c::give(out, result);
    });
}

tepor_status tepor_gradient(tepor_session* session, const tepor_field* field, const tepor_quantity* quantity,
                            tepor_slopes** out) {
    return tepor::c::run(session, field && quantity && out,
                         [&] { *out = tepor::c::slopes_of(tepor::gradient(field->field, quantity->quantity)); });
}
tepor_status tepor_gradient_at_end(tepor_session* session, const tepor_march* march, const tepor_quantity* quantity,
                                   tepor_slopes** out) {
    return tepor::c::run(session, march && quantity && out,
                         [&] { *out = tepor::c::slopes_of(tepor::gradient(march->march, quantity->quantity)); });
}
tepor_status tepor_gradient_at(tepor_session* session, const tepor_march* march, const tepor_quantity* quantity,
                               double time, tepor_slopes** out) {
    return tepor::c::run(session, march && quantity && out,
                         [&] { *out = tepor::c::slopes_of(tepor::gradient(march->march, quantity->quantity, time)); });
}
tepor_status tepor_gradient_of_integral(tepor_session* session, const tepor_march* march,
                                        const tepor_quantity* quantity, tepor_slopes** out) {
    return tepor::c::run(session, march && quantity && out, [&] {
        *out = tepor::c::slopes_of(tepor::gradient_of_integral(march->march, quantity->quantity));
    });
}
tepor_status tepor_gradient_of_peak(tepor_session* session, const tepor_march* march, const tepor_quantity* quantity,
                                    tepor_slopes** out, double* time, int32_t* one_sided) {
    return tepor::c::run(session, march && quantity && out && time && one_sided, [&] {
        tepor::PeakGradient peak = tepor::gradient_of_peak(march->march, quantity->quantity);
        *out = tepor::c::slopes_of(std::move(peak.gradient));
        *time = peak.time;
        *one_sided = peak.one_sided ? 1 : 0;
    });
}
void tepor_slopes_free(tepor_slopes* slopes) {
    delete slopes;
}
tepor_status tepor_slopes_by(tepor_session* session, const tepor_slopes* slopes, const tepor_parameter* parameter,
                             double* derivative) {
    return tepor::c::run(session, slopes && parameter && derivative,
                         [&] { *derivative = slopes->gradient[parameter->parameter]; });
}
double tepor_slopes_value(const tepor_slopes* slopes) {
    return slopes ? slopes->gradient.value() : tepor::c::not_given;
}
size_t tepor_slopes_count(const tepor_slopes* slopes) {
    return slopes ? slopes->ranked.size() : 0;
}
tepor_status tepor_slopes_ranked(tepor_session* session, const tepor_slopes* slopes, size_t rank, tepor_slope* slope) {
    return tepor::c::run(session, slopes && slope, [&] {
        if (rank >= slopes->ranked.size())
            tepor::c::misuse(tepor::detail::text("rank ", rank, " of ", slopes->ranked.size(), " parameters"));
        const tepor::Gradient::Entry& entry = slopes->ranked[rank];
        tepor_slope out{};
        out.parameter = entry.parameter.name().c_str();
        out.value = entry.value;
        out.derivative = entry.derivative;
        out.relative = entry.relative;
        tepor::c::give(out, slope);
    });
}
tepor_status tepor_slopes_nodes(tepor_session* session, const tepor_slopes* slopes, double* derivative,
                                size_t entries) {
    return tepor::c::run(session, slopes && derivative, [&] {
        tepor::c::copy_out(tepor::c::interleaved(slopes->gradient.nodes()), derivative, entries);
    });
}
int32_t tepor_slopes_exact(const tepor_slopes* slopes) {
    return slopes && slopes->gradient.exact() ? 1 : 0;
}

} // extern "C"
