#pragma once
// Steady solves and reading fields.

#include <algorithm>
#include <limits>
#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

inline tepor_balance balance_of(const Balance& b) {
    tepor_balance out{};
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

inline std::vector<double> interleaved(const std::vector<Point>& points) {
    std::vector<double> out;
    out.reserve(2 * points.size());
    for (const Point p : points) {
        out.push_back(p.x);
        out.push_back(p.y);
    }
    return out;
}

/// Options in C say "not given" by NaN.
inline std::optional<double> given(double number) {
    return std::isnan(number) ? std::optional<double>{} : number;
}
inline constexpr double not_given = std::numeric_limits<double>::quiet_NaN();

} // namespace tepor::c

extern "C" {

tepor_status tepor_steady(tepor_session* session, const tepor_body* body, tepor_field** out) {
    return tepor::c::run(session, body && out, [&] { *out = new tepor_field{tepor::steady(body->body)}; });
}
tepor_steady_options tepor_steady_options_default(void) {
    const tepor::SteadyOptions usual;
    tepor_steady_options o{};
    o.size = sizeof o;
    o.tolerance = usual.tolerance;
    o.start = tepor::c::not_given;
    o.time = tepor::c::not_given;
    o.most_passes = static_cast<int32_t>(usual.most_passes);
    return o;
}
tepor_status tepor_steady_with(tepor_session* session, const tepor_body* body, const tepor_steady_options* options,
                               tepor_field** out) {
    return tepor::c::run(session, body && options && out, [&] {
        tepor_steady_options o = tepor_steady_options_default();
        tepor::c::take(options, o);
        tepor::SteadyOptions how;
        how.tolerance = o.tolerance;
        how.most_passes = o.most_passes;
        how.start = tepor::c::given(o.start);
        how.time = tepor::c::given(o.time);
        how.from = o.from ? &o.from->field : nullptr;
        *out = new tepor_field{tepor::steady(body->body, how)};
    });
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
tepor_status tepor_field_at(tepor_session* session, const tepor_field* field, double x, double y, const char* region,
                            double* temperature) {
    return tepor::c::run(session, field && region && temperature, [&] {
        *temperature = field->field.at(tepor::Point{x, y}, region);
    });
}
tepor_status tepor_field_heat_flux(tepor_session* session, const tepor_field* field, double x, double y,
                                   const char* region, double* flux_x, double* flux_y) {
    return tepor::c::run(session, field && region && flux_x && flux_y, [&] {
        const tepor::Point q = field->field.heat_flux(tepor::Point{x, y}, region);
        *flux_x = q.x;
        *flux_y = q.y;
    });
}
tepor_status tepor_field_cell_heat_fluxes(tepor_session* session, const tepor_field* field, double* flux,
                                          size_t entries) {
    return tepor::c::run(session, field && flux, [&] {
        std::vector<tepor::Point> all;
        for (tepor::Index c = 0; c < field->field.mesh().cell_count(); ++c)
            all.push_back(field->field.cell_heat_flux(c));
        tepor::c::copy_out(tepor::c::interleaved(all), flux, entries);
    });
}
tepor_status tepor_field_places(tepor_session* session, const tepor_field* field, double* places, size_t entries) {
    return tepor::c::run(session, field && places, [&] {
        tepor::c::copy_out(tepor::c::interleaved(field->field.node_places()), places, entries);
    });
}
tepor_status tepor_field_hottest(tepor_session* session, const tepor_field* field, const char* region,
                                 double* temperature, double* x, double* y) {
    return tepor::c::run(session, field && region && temperature && x && y, [&] {
        const tepor::Spotted found = *region ? field->field.hottest(region) : field->field.hottest();
        *temperature = found.temperature;
        *x = found.place.x;
        *y = found.place.y;
    });
}
tepor_status tepor_field_coldest(tepor_session* session, const tepor_field* field, const char* region,
                                 double* temperature, double* x, double* y) {
    return tepor::c::run(session, field && region && temperature && x && y, [&] {
        const tepor::Spotted found = *region ? field->field.coldest(region) : field->field.coldest();
        *temperature = found.temperature;
        *x = found.place.x;
        *y = found.place.y;
    });
}
tepor_status tepor_field_parameter(tepor_session* session, const tepor_field* field, const tepor_parameter* parameter,
                                   double* out) {
    return tepor::c::run(session, field && parameter && out, [&] { *out = field->field.value(parameter->parameter); });
}
tepor_status tepor_field_error_bound(tepor_session* session, const tepor_field* field, double* total,
                                     double* field_energy, double* per_cell, size_t entries) {
    return tepor::c::run(session, field && total && field_energy, [&] {
        const tepor::ErrorBound bound = field->field.error_bound();
        if (per_cell) tepor::c::copy_out(bound.per_cell, per_cell, entries);
        *total = bound.total;
        *field_energy = bound.field_energy;
    });
}
size_t tepor_field_pass_count(const tepor_field* field) {
    return field ? field->field.passes().size() : 0;
}
double tepor_field_time(const tepor_field* field) {
    return field ? field->field.time() : 0.0;
}
tepor_status tepor_field_balance(tepor_session* session, const tepor_field* field, tepor_balance* balance) {
    return tepor::c::run(session, field && balance,
                         [&] { tepor::c::give(tepor::c::balance_of(field->field.balance()), balance); });
}
tepor_status tepor_field_face_heat(tepor_session* session, const tepor_field* field, const char* face,
                                   tepor_face_heat* heat) {
    return tepor::c::run(session, field && face && heat, [&] {
        const tepor::Balance balance = field->field.balance();
        for (const tepor::FaceHeat& f : balance.faces) {
            if (f.name != face) continue;
            tepor_face_heat out{};
            out.area = f.area;
            out.out = f.out;
            out.film = f.film;
            out.radiation = f.radiation;
            out.flux = f.flux;
            out.prescribed = f.prescribed;
            out.adiabatic = f.adiabatic ? 1 : 0;
            out.unbounded = f.unbounded ? 1 : 0;
            tepor::c::give(out, heat);
            return;
        }
        throw tepor::Error(tepor::ErrorCode::bad_name, face,
                           tepor::detail::text("the body has no face \"", face, "\"; see tepor_mesh_face_name"));
    });
}

} // extern "C"
