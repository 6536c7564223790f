/* Quantities: scalars asked of a temperature field. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_QUANTITY_H
#define TEPOR_C_TEPOR_QUANTITY_H

#include <tepor/c/tepor_session.h>

#ifdef __cplusplus
extern "C" {
#endif

/* Temperature [degC] at (x, y) [m]; `region` "" unless a contact gives the place two temperatures. */
TEPOR_C_API tepor_status tepor_quantity_at(tepor_session* session, double x, double y, const char* region,
                                           tepor_quantity** out);
/* Mean, highest and lowest temperature [degC] in a region or on a face. */
TEPOR_C_API tepor_status tepor_quantity_mean_in(tepor_session* session, const char* region, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_mean_on(tepor_session* session, const char* face, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_hottest_in(tepor_session* session, const char* region, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_coldest_in(tepor_session* session, const char* region, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_hottest_on(tepor_session* session, const char* face, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_coldest_on(tepor_session* session, const char* face, tepor_quantity** out);
/* Heat through a face, from one region to another, and generated in a region [W], for the frame's size. */
TEPOR_C_API tepor_status tepor_quantity_heat_out_through(tepor_session* session, const char* face,
                                                         tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_heat_in_through(tepor_session* session, const char* face, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_heat_from(tepor_session* session, const char* region, const char* to,
                                                  tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_generated_in(tepor_session* session, const char* region, tepor_quantity** out);
/* Heat content of a region above 0 of the body's scale [J], latent heat included. */
TEPOR_C_API tepor_status tepor_quantity_stored_in(tepor_session* session, const char* region, tepor_quantity** out);
/* Mean temperature [degC] in the disc of `radius` [m] around (x, y); 2D, inside one region. */
TEPOR_C_API tepor_status tepor_quantity_mean_around(tepor_session* session, double x, double y, double radius,
                                                    tepor_quantity** out);
/* Heat flow from one face to another per kelvin between them [W/K]. */
TEPOR_C_API tepor_status tepor_quantity_conductance_between(tepor_session* session, const char* face, const char* to,
                                                            tepor_quantity** out);
/* The same quantity under a name of your own, for reports and charts. */
TEPOR_C_API tepor_status tepor_quantity_named(tepor_session* session, const tepor_quantity* quantity, const char* label,
                                              tepor_quantity** out);
TEPOR_C_API void tepor_quantity_free(tepor_quantity* quantity);

#ifdef __cplusplus
}
#endif

#endif
