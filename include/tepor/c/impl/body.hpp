#pragma once
// Describing bodies: one call per statement.

#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

/// The designated members of statements that do not take positional ones.
inline Flux flux_into(Value v) {
    return {.into = std::move(v)};
}
inline Flux flux_out_of(Value v) {
    return {.out_of = std::move(v)};
}

} // namespace tepor::c

extern "C" {

tepor_status tepor_body_create(tepor_session* session, const tepor_mesh* mesh, int32_t kelvin, tepor_body** out) {
    return tepor::c::run(session, mesh && out, [&] {
        *out = new tepor_body{mesh->body(kelvin ? tepor::TemperatureScale::kelvin : tepor::TemperatureScale::celsius)};
    });
}
tepor_status tepor_body_copy(tepor_session* session, const tepor_body* body, tepor_body** out) {
    return tepor::c::run(session, body && out, [&] { *out = new tepor_body{body->body}; });
}
void tepor_body_free(tepor_body* body) {
    delete body;
}

tepor_status tepor_body_in_material(tepor_session* session, tepor_body* body, const char* region,
                                    tepor_value conductivity, tepor_value density, tepor_value specific_heat) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::Material{.conductivity = value_of(conductivity),
                                              .density = value_of(density),
                                              .specific_heat = value_of(specific_heat)});
    });
}

tepor_status tepor_body_in_orthotropic(tepor_session* session, tepor_body* body, const char* region,
                                       tepor_value along_x, tepor_value along_y, tepor_value density,
                                       tepor_value specific_heat) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::Material{.conductivity = tepor::orthotropic(value_of(along_x), value_of(along_y)),
                                              .density = value_of(density),
                                              .specific_heat = value_of(specific_heat)});
    });
}

tepor_status tepor_body_in_melting(tepor_session* session, tepor_body* body, const char* region,
                                   tepor_value conductivity, tepor_value density, tepor_value specific_heat,
                                   tepor_value latent_heat, tepor_value solidus, tepor_value liquidus) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::Material{.conductivity = value_of(conductivity),
                                              .density = value_of(density),
                                              .specific_heat = value_of(specific_heat),
                                              .latent = {.heat = value_of(latent_heat),
                                                         .solidus = value_of(solidus),
                                                         .liquidus = value_of(liquidus)}});
    });
}

tepor_status tepor_body_in_generation_per_volume(tepor_session* session, tepor_body* body, const char* region,
                                                 tepor_value watts_per_m3) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::Generation{.per_volume = value_of(watts_per_m3)});
    });
}

tepor_status tepor_body_in_generation_total(tepor_session* session, tepor_body* body, const char* region,
                                            tepor_value watts) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::Generation{.total = value_of(watts)});
    });
}

tepor_status tepor_body_in_side_film_bar(tepor_session* session, tepor_body* body, const char* region,
                                         tepor_value coefficient, tepor_value fluid, tepor_value perimeter) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::SideFilm{.coefficient = value_of(coefficient),
                                              .fluid = value_of(fluid),
                                              .perimeter = value_of(perimeter)});
    });
}

tepor_status tepor_body_in_side_film_plate(tepor_session* session, tepor_body* body, const char* region,
                                           tepor_value coefficient, tepor_value fluid, tepor_value thickness,
                                           int32_t wet_sides) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::SideFilm{.coefficient = value_of(coefficient),
                                              .fluid = value_of(fluid),
                                              .thickness = value_of(thickness),
                                              .wet_sides = wet_sides});
    });
}

tepor_status tepor_body_on_film(tepor_session* session, tepor_body* body, const char* face, tepor_value coefficient,
                                tepor_value fluid) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.on(face, tepor::Film{.coefficient = value_of(coefficient), .fluid = value_of(fluid)});
    });
}

tepor_status tepor_body_on_radiation(tepor_session* session, tepor_body* body, const char* face, tepor_value emissivity,
                                     tepor_value surroundings) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.on(face,
                      tepor::Radiation{.emissivity = value_of(emissivity), .surroundings = value_of(surroundings)});
    });
}

tepor_status tepor_body_on_flux_into(tepor_session* session, tepor_body* body, const char* face, tepor_value flux) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.on(face, tepor::c::flux_into(value_of(flux)));
    });
}

tepor_status tepor_body_on_flux_out_of(tepor_session* session, tepor_body* body, const char* face, tepor_value flux) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.on(face, tepor::c::flux_out_of(value_of(flux)));
    });
}

tepor_status tepor_body_on_fixed_temperature(tepor_session* session, tepor_body* body, const char* face,
                                             tepor_value temperature) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.on(face, tepor::FixedTemperature{.temperature = value_of(temperature)});
    });
}

tepor_status tepor_body_between_conductance(tepor_session* session, tepor_body* body, const char* region,
                                            const char* other, tepor_value conductance) {
    return tepor::c::run(session, body && region && other, [&] {
        using tepor::c::value_of;
        body->body.between(region, other, tepor::Contact{.conductance = value_of(conductance)});
    });
}

tepor_status tepor_body_between_resistance(tepor_session* session, tepor_body* body, const char* region,
                                           const char* other, tepor_value resistance) {
    return tepor::c::run(session, body && region && other, [&] {
        using tepor::c::value_of;
        body->body.between(region, other, tepor::Contact{.resistance = value_of(resistance)});
    });
}

tepor_status tepor_body_at_local_heat(tepor_session* session, tepor_body* body, double x, double y, tepor_value watts,
                                      double radius) {
    return tepor::c::run(session, body, [&] {
        body->body.at(tepor::Point{x, y}, tepor::LocalHeat{.total = tepor::c::value_of(watts), .radius = radius});
    });
}

tepor_status tepor_body_set(tepor_session* session, tepor_body* body, const tepor_parameter* parameter, double value) {
    return tepor::c::run(session, body && parameter, [&] { body->body.set(parameter->parameter, value); });
}
tepor_status tepor_body_value(tepor_session* session, const tepor_body* body, const tepor_parameter* parameter,
                              double* out) {
    return tepor::c::run(session, body && parameter && out, [&] { *out = body->body.value(parameter->parameter); });
}

} // extern "C"
