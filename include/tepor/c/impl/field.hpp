#pragma once
// Steady solves and reading fields.

#include <algorithm>
#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

/// Copies what the caller's struct has room for: `size` leads every struct that may grow.
template <class Struct>
void give(const Struct& full, Struct* to) {
    const std::size_t room = to->size;
    if (room < sizeof(std::size_t)) misuse("set `size` of the result to sizeof its type before the call");
    std::memcpy(to, &full, std::min(room, sizeof full));
    to->size = room;
}

inline tepor_balance balance_of(const Balance& b) {
    tepor_balance out{};
    out.size = sizeof out;
    out.in = b.in;
    out.out = b.out;
    out.generated = b.generated;
    out.stored = b.stored;
    out.left_over = b.left_over;
    out.gross = b.gross;
    out.floor = b.floor;
    out.balanced = b.balanced() ? 1 : 0;
    return out;
}

inline void copy_out(const std::vector<double>& from, double* to, std::size_t entries) {
    if (entries != from.size())
        misuse(tepor::detail::text("the array has ", entries, " entries, expected ", from.size()));
    std::copy(from.begin(), from.end(), to);
}

} // namespace tepor::c

extern "C" {

tepor_status tepor_steady(tepor_session* session, const tepor_body* body, tepor_field** out) {
    return tepor::c::run(session, body && out, [&] { *out = new tepor_field{tepor::steady(body->body)}; });
}
void tepor_field_free(tepor_field* field) {
    delete field;
}
tepor_status tepor_field_value(tepor_session* session, const tepor_field* field, const tepor_quantity* quantity,
                               double* out) {
    return tepor::c::run(session, field && quantity && out, [&] { *out = field->field[quantity->quantity]; });
}
tepor_status tepor_field_temperatures(tepor_session* session, const tepor_field* field, double* temperature,
                                      size_t entries) {
    return tepor::c::run(session, field && temperature,
                         [&] { tepor::c::copy_out(field->field.node_temperatures(), temperature, entries); });
}
tepor_status tepor_field_cell_temperatures(tepor_session* session, const tepor_field* field, double* temperature,
                                           size_t entries) {
    return tepor::c::run(session, field && temperature,
                         [&] { tepor::c::copy_out(field->field.cell_temperatures(), temperature, entries); });
}
double tepor_field_time(const tepor_field* field) {
    return field ? field->field.time() : 0.0;
}
tepor_status tepor_field_balance(tepor_session* session, const tepor_field* field, tepor_balance* balance) {
    return tepor::c::run(session, field && balance,
                         [&] { tepor::c::give(tepor::c::balance_of(field->field.balance()), balance); });
}

} // extern "C"
