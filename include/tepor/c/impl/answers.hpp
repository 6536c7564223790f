#pragma once
// Brackets, gradients and sizes.

#include <tepor/c/impl/field.hpp>
#include <tepor/c/impl/handles.hpp>

extern "C" {

tepor_status tepor_bracket(tepor_session* session, const tepor_body* body, const tepor_quantity* quantity,
                           double relative_width, int64_t max_unknowns, double max_seconds,
                           tepor_bracket_result* result) {
    return tepor::c::run(session, body && quantity && result, [&] {
        tepor::BracketOptions options;
        options.relative_width = relative_width;
        options.max_unknowns = static_cast<tepor::Index>(max_unknowns);
        options.max_seconds = max_seconds;
        const tepor::Bracket found = tepor::bracket(body->body, quantity->quantity, options);
        tepor_bracket_result out{};
        out.lower = found.lower;
        out.value = found.value;
        out.upper = found.upper;
        out.cells = found.cells;
        out.unknowns = found.unknowns;
        out.reached = found.reached ? 1 : 0;
        tepor::c::give(out, result);
    });
}

tepor_status tepor_gradient(tepor_session* session, const tepor_field* field, const tepor_quantity* quantity,
                            const tepor_parameter* const* parameters, size_t count, double* slope) {
    return tepor::c::run(session, field && quantity && parameters && slope, [&] {
        const tepor::Gradient gradient = tepor::gradient(field->field, quantity->quantity);
        std::vector<double> found;
        for (size_t i = 0; i < count; ++i) {
            if (!parameters[i]) tepor::c::misuse("a parameter of the gradient is NULL");
            found.push_back(gradient[parameters[i]->parameter]);
        }
        std::copy(found.begin(), found.end(), slope);
    });
}

tepor_status tepor_size_for(tepor_session* session, const tepor_body* body, const tepor_parameter* parameter,
                            const tepor_quantity* quantity, tepor_target_kind kind, double target, double from,
                            double to, tepor_sized* result) {
    return tepor::c::run(session, body && parameter && quantity && result, [&] {
        tepor::SizeOptions options;
        if (from != 0.0 || to != 0.0) {
            options.from = from;
            options.to = to;
        }
        if (kind != TEPOR_EQUAL_TO && kind != TEPOR_AT_MOST && kind != TEPOR_AT_LEAST)
            tepor::c::misuse("the kind of target is no tepor_target_kind");
        const tepor::Target wanted = kind == TEPOR_AT_MOST    ? tepor::at_most(target)
                                     : kind == TEPOR_AT_LEAST ? tepor::at_least(target)
                                                              : tepor::Target(target);
        const tepor::Sized found =
            tepor::size_for(body->body, parameter->parameter, quantity->quantity, wanted, options);
        tepor_sized out{};
        out.value = found.value;
        out.reached = found.reached;
        out.failed_at = found.failed_at;
        out.solves = found.solves;
        out.reason = static_cast<int32_t>(found.reason);
        tepor::c::give(out, result);
        tepor::c::copy_text(session->message, found.message.c_str());
        tepor::c::copy_text(session->offender, "");
    });
}

} // extern "C"
