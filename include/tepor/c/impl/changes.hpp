#pragma once
// Statements added on purpose, and statements replaced.

#include <tepor/c/impl/handles.hpp>
#include <tepor/c/impl/statements.hpp>

extern "C" {

tepor_status tepor_body_also_in_generation_per_volume(tepor_session* session, tepor_body* body, const char* region,
                                                      tepor_value watts_per_m3) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.also_in(region, tepor::Generation{.per_volume = value_of(watts_per_m3)});
    });
}
tepor_status tepor_body_also_in_generation_total(tepor_session* session, tepor_body* body, const char* region,
                                                 tepor_value watts) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.also_in(region, tepor::Generation{.total = value_of(watts)});
    });
}
tepor_status tepor_body_also_in_side_film_bar(tepor_session* session, tepor_body* body, const char* region,
                                              tepor_value coefficient, tepor_value fluid, tepor_value perimeter) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.also_in(region, tepor::c::bar_film(coefficient, fluid, perimeter));
    });
}
tepor_status tepor_body_also_in_side_film_plate(tepor_session* session, tepor_body* body, const char* region,
                                                tepor_value coefficient, tepor_value fluid, tepor_value thickness,
                                                int32_t wet_sides) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.also_in(region, tepor::c::plate_film(coefficient, fluid, thickness, wet_sides));
    });
}
tepor_status tepor_body_also_on_film(tepor_session* session, tepor_body* body, const char* face,
                                     tepor_value coefficient, tepor_value fluid) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.also_on(face, tepor::Film{.coefficient = value_of(coefficient), .fluid = value_of(fluid)});
    });
}
tepor_status tepor_body_also_on_radiation(tepor_session* session, tepor_body* body, const char* face,
                                          tepor_value emissivity, tepor_value surroundings) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.also_on(
            face, tepor::Radiation{.emissivity = value_of(emissivity), .surroundings = value_of(surroundings)});
    });
}
tepor_status tepor_body_also_on_flux_into(tepor_session* session, tepor_body* body, const char* face,
                                          tepor_value flux) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.also_on(face, tepor::Flux{.into = value_of(flux)});
    });
}
tepor_status tepor_body_also_on_flux_out_of(tepor_session* session, tepor_body* body, const char* face,
                                            tepor_value flux) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.also_on(face, tepor::Flux{.out_of = value_of(flux)});
    });
}
tepor_status tepor_body_replace_in_material(tepor_session* session, tepor_body* body, const char* region,
                                            tepor_value conductivity, tepor_value density, tepor_value specific_heat) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.replace(region, tepor::c::material(value_of(conductivity), density, specific_heat));
    });
}
tepor_status tepor_body_replace_in_orthotropic(tepor_session* session, tepor_body* body, const char* region,
                                               tepor_value along_x, tepor_value along_y, tepor_value density,
                                               tepor_value specific_heat) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.replace(region, tepor::c::material(tepor::orthotropic(value_of(along_x), value_of(along_y)), density,
                                                      specific_heat));
    });
}
tepor_status tepor_body_replace_in_tensor(tepor_session* session, tepor_body* body, const char* region, tepor_value xx,
                                          tepor_value xy, tepor_value yy, tepor_value density,
                                          tepor_value specific_heat) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.replace(region, tepor::c::material(tepor::tensor(value_of(xx), value_of(xy), value_of(yy)), density,
                                                      specific_heat));
    });
}
tepor_status tepor_body_replace_in_melting(tepor_session* session, tepor_body* body, const char* region,
                                           tepor_value conductivity, tepor_value density, tepor_value specific_heat,
                                           tepor_value latent_heat, tepor_value solidus, tepor_value liquidus) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.replace(region,
                           tepor::c::melting(conductivity, density, specific_heat, latent_heat, solidus, liquidus));
    });
}
tepor_status tepor_body_replace_in_generation_per_volume(tepor_session* session, tepor_body* body, const char* region,
                                                         tepor_value watts_per_m3) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.replace(region, tepor::Generation{.per_volume = value_of(watts_per_m3)});
    });
}
tepor_status tepor_body_replace_in_generation_total(tepor_session* session, tepor_body* body, const char* region,
                                                    tepor_value watts) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.replace(region, tepor::Generation{.total = value_of(watts)});
    });
}
tepor_status tepor_body_replace_in_side_film_bar(tepor_session* session, tepor_body* body, const char* region,
                                                 tepor_value coefficient, tepor_value fluid, tepor_value perimeter) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.replace(region, tepor::c::bar_film(coefficient, fluid, perimeter));
    });
}
tepor_status tepor_body_replace_in_side_film_plate(tepor_session* session, tepor_body* body, const char* region,
                                                   tepor_value coefficient, tepor_value fluid, tepor_value thickness,
                                                   int32_t wet_sides) {
    return tepor::c::run(session, body && region, [&] {
        using tepor::c::value_of;
        body->body.replace(region, tepor::c::plate_film(coefficient, fluid, thickness, wet_sides));
    });
}
tepor_status tepor_body_replace_on_film(tepor_session* session, tepor_body* body, const char* face,
                                        tepor_value coefficient, tepor_value fluid) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.replace(face, tepor::Film{.coefficient = value_of(coefficient), .fluid = value_of(fluid)});
    });
}
tepor_status tepor_body_replace_on_radiation(tepor_session* session, tepor_body* body, const char* face,
                                             tepor_value emissivity, tepor_value surroundings) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.replace(
            face, tepor::Radiation{.emissivity = value_of(emissivity), .surroundings = value_of(surroundings)});
    });
}
tepor_status tepor_body_replace_on_flux_into(tepor_session* session, tepor_body* body, const char* face,
                                             tepor_value flux) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.replace(face, tepor::Flux{.into = value_of(flux)});
    });
}
tepor_status tepor_body_replace_on_flux_out_of(tepor_session* session, tepor_body* body, const char* face,
                                               tepor_value flux) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.replace(face, tepor::Flux{.out_of = value_of(flux)});
    });
}
tepor_status tepor_body_replace_on_fixed_temperature(tepor_session* session, tepor_body* body, const char* face,
                                                     tepor_value temperature) {
    return tepor::c::run(session, body && face, [&] {
        using tepor::c::value_of;
        body->body.replace(face, tepor::FixedTemperature{.temperature = value_of(temperature)});
    });
}
tepor_status tepor_body_replace_between_conductance(tepor_session* session, tepor_body* body, const char* region,
                                                    const char* other, tepor_value conductance) {
    return tepor::c::run(session, body && region && other, [&] {
        body->body.replace(region, other, tepor::Contact{.conductance = tepor::c::value_of(conductance)});
    });
}
tepor_status tepor_body_replace_between_resistance(tepor_session* session, tepor_body* body, const char* region,
                                                   const char* other, tepor_value resistance) {
    return tepor::c::run(session, body && region && other, [&] {
        body->body.replace(region, other, tepor::Contact{.resistance = tepor::c::value_of(resistance)});
    });
}

} // extern "C"
