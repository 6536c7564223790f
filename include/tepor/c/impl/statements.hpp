#pragma once
// Statements with many members, made of C values.

#include <tepor/c/impl/handles.hpp>

namespace tepor::c {

inline Material material(Conductivity conductivity, const tepor_value& density, const tepor_value& specific_heat) {
    Material m;
    m.conductivity = std::move(conductivity);
    m.density = value_of(density);
    m.specific_heat = value_of(specific_heat);
    return m;
}

inline Material melting(const tepor_value& conductivity, const tepor_value& density, const tepor_value& specific_heat,
                        const tepor_value& latent_heat, const tepor_value& solidus, const tepor_value& liquidus) {
    Material m = material(value_of(conductivity), density, specific_heat);
    m.latent.heat = value_of(latent_heat);
    m.latent.solidus = value_of(solidus);
    m.latent.liquidus = value_of(liquidus);
    return m;
}

inline SideFilm bar_film(const tepor_value& coefficient, const tepor_value& fluid, const tepor_value& perimeter) {
    return {.coefficient = value_of(coefficient), .fluid = value_of(fluid), .perimeter = value_of(perimeter)};
}

inline SideFilm plate_film(const tepor_value& coefficient, const tepor_value& fluid, const tepor_value& thickness,
                           int32_t wet_sides) {
    return {.coefficient = value_of(coefficient),
            .fluid = value_of(fluid),
            .thickness = value_of(thickness),
            .wet_sides = wet_sides};
}

} // namespace tepor::c
