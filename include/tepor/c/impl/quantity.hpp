#pragma once
// Quantities: one call per question.

#include <tepor/c/impl/handles.hpp>

extern "C" {

tepor_status tepor_quantity_at(tepor_session* session, double x, double y, const char* region, tepor_quantity** out) {
    return tepor::c::run(session, region && out, [&] {
        *out = new tepor_quantity{tepor::at(tepor::Point{x, y}, region)};
    });
}
tepor_status tepor_quantity_mean_in(tepor_session* session, const char* region, tepor_quantity** out) {
    return tepor::c::run(session, region && out, [&] { *out = new tepor_quantity{tepor::mean_in(region)}; });
}
tepor_status tepor_quantity_mean_on(tepor_session* session, const char* face, tepor_quantity** out) {
    return tepor::c::run(session, face && out, [&] { *out = new tepor_quantity{tepor::mean_on(face)}; });
}
tepor_status tepor_quantity_hottest_in(tepor_session* session, const char* region, tepor_quantity** out) {
    return tepor::c::run(session, region && out, [&] { *out = new tepor_quantity{tepor::hottest_in(region)}; });
}
tepor_status tepor_quantity_coldest_in(tepor_session* session, const char* region, tepor_quantity** out) {
    return tepor::c::run(session, region && out, [&] { *out = new tepor_quantity{tepor::coldest_in(region)}; });
}
tepor_status tepor_quantity_hottest_on(tepor_session* session, const char* face, tepor_quantity** out) {
    return tepor::c::run(session, face && out, [&] { *out = new tepor_quantity{tepor::hottest_on(face)}; });
}
tepor_status tepor_quantity_coldest_on(tepor_session* session, const char* face, tepor_quantity** out) {
    return tepor::c::run(session, face && out, [&] { *out = new tepor_quantity{tepor::coldest_on(face)}; });
}
tepor_status tepor_quantity_heat_out_through(tepor_session* session, const char* face, tepor_quantity** out) {
    return tepor::c::run(session, face && out, [&] { *out = new tepor_quantity{tepor::heat_out_through(face)}; });
}
tepor_status tepor_quantity_heat_in_through(tepor_session* session, const char* face, tepor_quantity** out) {
    return tepor::c::run(session, face && out, [&] { *out = new tepor_quantity{tepor::heat_in_through(face)}; });
}
tepor_status tepor_quantity_generated_in(tepor_session* session, const char* region, tepor_quantity** out) {
    return tepor::c::run(session, region && out, [&] { *out = new tepor_quantity{tepor::generated_in(region)}; });
}
tepor_status tepor_quantity_stored_in(tepor_session* session, const char* region, tepor_quantity** out) {
    return tepor::c::run(session, region && out, [&] { *out = new tepor_quantity{tepor::stored_in(region)}; });
}
tepor_status tepor_quantity_heat_from(tepor_session* session, const char* region, const char* to,
                                      tepor_quantity** out) {
    return tepor::c::run(session, region && to && out,
                         [&] { *out = new tepor_quantity{tepor::heat_from(region, to)}; });
}
tepor_status tepor_quantity_conductance_between(tepor_session* session, const char* face, const char* to,
                                                tepor_quantity** out) {
    return tepor::c::run(session, face && to && out,
                         [&] { *out = new tepor_quantity{tepor::conductance_between(face, to)}; });
}
tepor_status tepor_quantity_mean_around(tepor_session* session, double x, double y, double radius,
                                        tepor_quantity** out) {
    return tepor::c::run(session, out, [&] {
        *out = new tepor_quantity{tepor::mean_around(tepor::Point{x, y}, radius)};
    });
}
tepor_status tepor_quantity_named(tepor_session* session, const tepor_quantity* quantity, const char* label,
                                  tepor_quantity** out) {
    return tepor::c::run(session, quantity && label && out,
                         [&] { *out = new tepor_quantity{quantity->quantity.named(label)}; });
}
void tepor_quantity_free(tepor_quantity* quantity) {
    delete quantity;
}

} // extern "C"
