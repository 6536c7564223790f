/* Statements added on purpose, and statements replaced. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_CHANGES_H
#define TEPOR_C_TEPOR_CHANGES_H

#include <tepor/c/tepor_body.h>

#ifdef __cplusplus
extern "C" {
#endif

/* Another of the same kind on purpose; they add up. Units and arguments are those of the call of the same name in
 * tepor_body.h: tepor_body_also_on_film() adds what tepor_body_on_film() says. */
TEPOR_C_API tepor_status tepor_body_also_in_generation_per_volume(tepor_session* session, tepor_body* body,
                                                                  const char* region, tepor_value watts_per_m3);
TEPOR_C_API tepor_status tepor_body_also_in_generation_total(tepor_session* session, tepor_body* body,
                                                             const char* region, tepor_value watts);
TEPOR_C_API tepor_status tepor_body_also_in_side_film_bar(tepor_session* session, tepor_body* body, const char* region,
                                                          tepor_value coefficient, tepor_value fluid,
                                                          tepor_value perimeter);
TEPOR_C_API tepor_status tepor_body_also_in_side_film_plate(tepor_session* session, tepor_body* body,
                                                            const char* region, tepor_value coefficient,
                                                            tepor_value fluid, tepor_value thickness,
                                                            int32_t wet_sides);
TEPOR_C_API tepor_status tepor_body_also_on_film(tepor_session* session, tepor_body* body, const char* face,
                                                 tepor_value coefficient, tepor_value fluid);
TEPOR_C_API tepor_status tepor_body_also_on_radiation(tepor_session* session, tepor_body* body, const char* face,
                                                      tepor_value emissivity, tepor_value surroundings);
TEPOR_C_API tepor_status tepor_body_also_on_flux_into(tepor_session* session, tepor_body* body, const char* face,
                                                      tepor_value flux);
TEPOR_C_API tepor_status tepor_body_also_on_flux_out_of(tepor_session* session, tepor_body* body, const char* face,
                                                        tepor_value flux);

/* Takes back all statements of the kind on the region, face or interface and makes this one. TEPOR_MISSING when nothing of
 * the kind was said there. */
TEPOR_C_API tepor_status tepor_body_replace_in_material(tepor_session* session, tepor_body* body, const char* region,
                                                        tepor_value conductivity, tepor_value density,
                                                        tepor_value specific_heat);
TEPOR_C_API tepor_status tepor_body_replace_in_orthotropic(tepor_session* session, tepor_body* body, const char* region,
                                                           tepor_value along_x, tepor_value along_y,
                                                           tepor_value density, tepor_value specific_heat);
TEPOR_C_API tepor_status tepor_body_replace_in_tensor(tepor_session* session, tepor_body* body, const char* region,
                                                      tepor_value xx, tepor_value xy, tepor_value yy,
                                                      tepor_value density, tepor_value specific_heat);
TEPOR_C_API tepor_status tepor_body_replace_in_melting(tepor_session* session, tepor_body* body, const char* region,
                                                       tepor_value conductivity, tepor_value density,
                                                       tepor_value specific_heat, tepor_value latent_heat,
                                                       tepor_value solidus, tepor_value liquidus);
TEPOR_C_API tepor_status tepor_body_replace_in_generation_per_volume(tepor_session* session, tepor_body* body,
                                                                     const char* region, tepor_value watts_per_m3);
TEPOR_C_API tepor_status tepor_body_replace_in_generation_total(tepor_session* session, tepor_body* body,
                                                                const char* region, tepor_value watts);
TEPOR_C_API tepor_status tepor_body_replace_in_side_film_bar(tepor_session* session, tepor_body* body,
                                                             const char* region, tepor_value coefficient,
                                                             tepor_value fluid, tepor_value perimeter);
TEPOR_C_API tepor_status tepor_body_replace_in_side_film_plate(tepor_session* session, tepor_body* body,
                                                               const char* region, tepor_value coefficient,
                                                               tepor_value fluid, tepor_value thickness,
                                                               int32_t wet_sides);
TEPOR_C_API tepor_status tepor_body_replace_on_film(tepor_session* session, tepor_body* body, const char* face,
                                                    tepor_value coefficient, tepor_value fluid);
TEPOR_C_API tepor_status tepor_body_replace_on_radiation(tepor_session* session, tepor_body* body, const char* face,
                                                         tepor_value emissivity, tepor_value surroundings);
TEPOR_C_API tepor_status tepor_body_replace_on_flux_into(tepor_session* session, tepor_body* body, const char* face,
                                                         tepor_value flux);
TEPOR_C_API tepor_status tepor_body_replace_on_flux_out_of(tepor_session* session, tepor_body* body, const char* face,
                                                           tepor_value flux);
TEPOR_C_API tepor_status tepor_body_replace_on_fixed_temperature(tepor_session* session, tepor_body* body,
                                                                 const char* face, tepor_value temperature);
TEPOR_C_API tepor_status tepor_body_replace_between_conductance(tepor_session* session, tepor_body* body,
                                                                const char* region, const char* other,
                                                                tepor_value conductance);
TEPOR_C_API tepor_status tepor_body_replace_between_resistance(tepor_session* session, tepor_body* body,
                                                               const char* region, const char* other,
                                                               tepor_value resistance);

#ifdef __cplusplus
}
#endif

#endif
