/* Bodies: in a region, on a face, between two regions, at a point. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_BODY_H
#define TEPOR_C_TEPOR_BODY_H

#include <tepor/c/tepor_mesh.h>

#ifdef __cplusplus
extern "C" {
#endif

/* A body on a mesh (which is copied). `kelvin` not 0: all temperatures are in kelvin. */
TEPOR_C_API tepor_status tepor_body_create(tepor_session* session, const tepor_mesh* mesh, int32_t kelvin,
                                           tepor_body** out);
/* Choices made once for a body; start from tepor_body_options_default(). */
typedef struct tepor_body_options {
    size_t size;
    int32_t kelvin;       /* not 0: all temperatures are in kelvin */
    int32_t extra_degree; /* raises the degree of the quadrature rules, for data that vary a lot in a cell */
    int32_t lumped_faces; /* not 0: films, fluxes and radiation act at the nodes of a face */
    int32_t reserved;
} tepor_body_options;
TEPOR_C_API tepor_body_options tepor_body_options_default(void);
TEPOR_C_API tepor_status tepor_body_create_with(tepor_session* session, const tepor_mesh* mesh,
                                                const tepor_body_options* options, tepor_body** out);
/* The same statements and values on another mesh with the same region and face names. */
TEPOR_C_API tepor_status tepor_body_on_mesh(tepor_session* session, const tepor_body* body, const tepor_mesh* mesh,
                                            tepor_body** out);
/* An independent body described alike. */
TEPOR_C_API tepor_status tepor_body_copy(tepor_session* session, const tepor_body* body, tepor_body** out);
TEPOR_C_API void tepor_body_free(tepor_body* body);

/* In a region. Conductivity [W/(m K)]; density [kg/m3] and specific heat [J/(kg K)] count in marching only and may be
 * tepor_nothing(). TEPOR_BAD_NAME, TEPOR_BAD_VALUE, TEPOR_BAD_UNIT, TEPOR_CONTRADICTION. */
TEPOR_C_API tepor_status tepor_body_in_material(tepor_session* session, tepor_body* body, const char* region,
                                                tepor_value conductivity, tepor_value density,
                                                tepor_value specific_heat);
/* The same with conductivities along x (radius) and y (axis); 2D. */
TEPOR_C_API tepor_status tepor_body_in_orthotropic(tepor_session* session, tepor_body* body, const char* region,
                                                   tepor_value along_x, tepor_value along_y, tepor_value density,
                                                   tepor_value specific_heat);
/* The same with a symmetric positive definite tensor of conductivity; 2D. */
TEPOR_C_API tepor_status tepor_body_in_tensor(tepor_session* session, tepor_body* body, const char* region,
                                              tepor_value xx, tepor_value xy, tepor_value yy, tepor_value density,
                                              tepor_value specific_heat);
/* The same with latent heat [J/kg] between solidus and liquidus [degC]. */
TEPOR_C_API tepor_status tepor_body_in_melting(tepor_session* session, tepor_body* body, const char* region,
                                               tepor_value conductivity, tepor_value density, tepor_value specific_heat,
                                               tepor_value latent_heat, tepor_value solidus, tepor_value liquidus);
/* Heat generated per volume [W/m3], or in all cells of the region together [W] for the frame's size. */
TEPOR_C_API tepor_status tepor_body_in_generation_per_volume(tepor_session* session, tepor_body* body,
                                                             const char* region, tepor_value watts_per_m3);
TEPOR_C_API tepor_status tepor_body_in_generation_total(tepor_session* session, tepor_body* body, const char* region,
                                                        tepor_value watts);
/* Loss from the sides of a bar with wetted perimeter [m] (1D planar, section = the frame's area), or of a plate of
 * thickness [m] wet on `wet_sides` 1 or 2. Coefficient [W/(m2 K)], fluid [degC]. */
TEPOR_C_API tepor_status tepor_body_in_side_film_bar(tepor_session* session, tepor_body* body, const char* region,
                                                     tepor_value coefficient, tepor_value fluid, tepor_value perimeter);
TEPOR_C_API tepor_status tepor_body_in_side_film_plate(tepor_session* session, tepor_body* body, const char* region,
                                                       tepor_value coefficient, tepor_value fluid,
                                                       tepor_value thickness, int32_t wet_sides);

/* On a face; different kinds add up, the same kind twice is TEPOR_CONTRADICTION. */
/* Film coefficient [W/(m2 K)], fluid [degC]. */
TEPOR_C_API tepor_status tepor_body_on_film(tepor_session* session, tepor_body* body, const char* face,
                                            tepor_value coefficient, tepor_value fluid);
/* Emissivity 0..1, surroundings [degC]. */
TEPOR_C_API tepor_status tepor_body_on_radiation(tepor_session* session, tepor_body* body, const char* face,
                                                 tepor_value emissivity, tepor_value surroundings);
/* Heat flux into, or out of, the body [W/m2]. */
TEPOR_C_API tepor_status tepor_body_on_flux_into(tepor_session* session, tepor_body* body, const char* face,
                                                 tepor_value flux);
TEPOR_C_API tepor_status tepor_body_on_flux_out_of(tepor_session* session, tepor_body* body, const char* face,
                                                   tepor_value flux);
/* Held at a temperature [degC]. */
TEPOR_C_API tepor_status tepor_body_on_fixed_temperature(tepor_session* session, tepor_body* body, const char* face,
                                                         tepor_value temperature);

/* Between two regions: contact conductance [W/(m2 K)] or resistance [m2 K/W]. TEPOR_BAD_CONTACT when they do not touch. */
TEPOR_C_API tepor_status tepor_body_between_conductance(tepor_session* session, tepor_body* body, const char* region,
                                                        const char* other, tepor_value conductance);
TEPOR_C_API tepor_status tepor_body_between_resistance(tepor_session* session, tepor_body* body, const char* region,
                                                       const char* other, tepor_value resistance);

/* At a point: heat [W] at (x, y) [m]; in 2D within a radius [m] inside which no temperature is read. */
TEPOR_C_API tepor_status tepor_body_at_local_heat(tepor_session* session, tepor_body* body, double x, double y,
                                                  tepor_value watts, double radius);

/* A new value of a parameter in this body. TEPOR_UNUSED, TEPOR_BAD_VALUE. */
TEPOR_C_API tepor_status tepor_body_set(tepor_session* session, tepor_body* body, const tepor_parameter* parameter,
                                        double value);
/* The present value of a parameter in this body. */
TEPOR_C_API tepor_status tepor_body_value(tepor_session* session, const tepor_body* body,
                                          const tepor_parameter* parameter, double* out);

#ifdef __cplusplus
}
#endif

#endif
