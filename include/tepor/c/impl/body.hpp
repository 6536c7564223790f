#pragma once
// Describing bodies: one call per statement.

#include <tepor/c/impl/handles.hpp>
#include <tepor/c/impl/statements.hpp>

extern "C" {

tepor_body_options tepor_body_options_default(void) {
    tepor_body_options o{};
    o.size = sizeof o;
    return o;
}
tepor_status tepor_body_create(tepor_session* session, const tepor_mesh* mesh, int32_t kelvin, tepor_body** out) {
    return tepor::c::run(session, mesh && out, [&] {
        tepor::BodyOptions options;
        if (kelvin) options.scale = tepor::TemperatureScale::kelvin;
        *out = new tepor_body{mesh->body(options)};
    });
}
tepor_status tepor_body_create_with(tepor_session* session, const tepor_mesh* mesh, const tepor_body_options* options,
                                    tepor_body** out) {
    return tepor::c::run(session, mesh && options && out, [&] {
        tepor_body_options o = tepor_body_options_default();
        tepor::c::take(options, o);
        tepor::BodyOptions chosen;
        if (o.kelvin) chosen.scale = tepor::TemperatureScale::kelvin;
        chosen.extra_degree = o.extra_degree;
        chosen.lumped_faces = o.lumped_faces != 0;
        *out = new tepor_body{mesh->body(chosen)};
    });
}
tepor_status tepor_body_on_mesh(tepor_session* session, const tepor_body* body, const tepor_mesh* mesh,
                                tepor_body** out) {
    return tepor::c::run(session, body && mesh && out, [&] { *out = new tepor_body{mesh->body(body->body)}; });
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
        body->body.in(region, tepor::c::material(value_of(conductivity), density, specific_heat));
    });
}
tepor_status tepor_body_in_orthotropic(tepor_session* session, tepor_body* body, const char* region,
                                       tepor_value along_x, tepor_value along_y, tepor_value density,
                                       tepor_value specific_heat) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::c::material(tepor::orthotropic(value_of(along_x), value_of(along_y)), density,
                                                 specific_heat));
    });
}
tepor_status tepor_body_in_tensor(tepor_session* session, tepor_body* body, const char* region, tepor_value xx,
                                  tepor_value xy, tepor_value yy, tepor_value density, tepor_value specific_heat) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::c::material(tepor::tensor(value_of(xx), value_of(xy), value_of(yy)), density,
                                                 specific_heat));
    });
}
tepor_status tepor_body_in_melting(tepor_session* session, tepor_body* body, const char* region,
                                   tepor_value conductivity, tepor_value density, tepor_value specific_heat,
                                   tepor_value latent_heat, tepor_value solidus, tepor_value liquidus) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::c::melting(conductivity, density, specific_heat, latent_heat, solidus, liquidus));
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
        body->body.in(region, tepor::c::bar_film(coefficient, fluid, perimeter));
    });
}
tepor_status tepor_body_in_side_film_plate(tepor_session* session, tepor_body* body, const char* region,
                                           tepor_value coefficient, tepor_value fluid, tepor_value thickness,
                                           int32_t wet_sides) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.in(region, tepor::c::plate_film(coefficient, fluid, thickness, wet_sides));
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
        body->body.on(face, tepor::Flux{.into = value_of(flux)});
    });
}
tepor_status tepor_body_on_flux_out_of(tepor_session* session, tepor_body* body, const char* face, tepor_value flux) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.on(face, tepor::Flux{.out_of = value_of(flux)});
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
        body->body.between(region, other, tepor::Contact{.conductance = tepor::c::value_of(conductance)});
    });
}
tepor_status tepor_body_between_resistance(tepor_session* session, tepor_body* body, const char* region,
                                           const char* other, tepor_value resistance) {
    return tepor::c::run(session, body && region && other, [&] {
        body->body.between(region, other, tepor::Contact{.resistance = tepor::c::value_of(resistance)});
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
