/* Steady solves, and what fields tell. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_FIELD_H
#define TEPOR_C_TEPOR_FIELD_H

#include <tepor/c/tepor_body.h>
#include <tepor/c/tepor_quantity.h>

#ifdef __cplusplus
extern "C" {
#endif

/* The steady temperature field of a body. TEPOR_NO_LEVEL, TEPOR_NOT_CONVERGED, TEPOR_SINGULAR, TEPOR_OUTSIDE_TABLE,
 * TEPOR_BAD_LAW, and whatever the description gets wrong. */
TEPOR_C_API tepor_status tepor_steady(tepor_session* session, const tepor_body* body, tepor_field** out);

/* How a steady solve starts and when it stops; start from tepor_steady_options_default(). */
typedef struct tepor_steady_options {
    size_t size;
    double tolerance; /* sum of |r| over the free unknowns, as a share of the gross heat traffic */
    double start;     /* temperature everywhere to start from [degC]; NaN: the mean of those given */
    double time;      /* [s] at which schedules and laws of time are taken; NaN: none, a body with such data needs it */
    const tepor_field* from; /* a field of a body described alike to start from, or NULL */
    int32_t most_passes;     /* of Newton's method */
    int32_t reserved;
} tepor_steady_options;
TEPOR_C_API tepor_steady_options tepor_steady_options_default(void);
TEPOR_C_API tepor_status tepor_steady_with(tepor_session* session, const tepor_body* body,
                                           const tepor_steady_options* options, tepor_field** out);
TEPOR_C_API void tepor_field_free(tepor_field* field);
/* The value of a quantity, in its unit. */
TEPOR_C_API tepor_status tepor_field_value(tepor_session* session, const tepor_field* field,
                                           const tepor_quantity* quantity, double* out);
/* Node temperatures [degC] in the mesh's numbering (at a contact the first region's) into `temperature`, `entries` must be
 * the node count. */
TEPOR_C_API tepor_status tepor_field_temperatures(tepor_session* session, const tepor_field* field, double* temperature,
                                                  size_t entries);
/* Temperatures cell by cell, nodes_per_cell each: keeps the jumps of contacts. */
TEPOR_C_API tepor_status tepor_field_cell_temperatures(tepor_session* session, const tepor_field* field,
                                                       double* temperature, size_t entries);
/* Temperature [degC] and heat flux vector [W/m2] at (x, y) [m]; `region` "" unless a contact gives the place two. */
TEPOR_C_API tepor_status tepor_field_at(tepor_session* session, const tepor_field* field, double x, double y,
                                        const char* region, double* temperature);
TEPOR_C_API tepor_status tepor_field_heat_flux(tepor_session* session, const tepor_field* field, double x, double y,
                                               const char* region, double* flux_x, double* flux_y);
/* Heat flux vectors in the middle of every cell [W/m2], x and y in turn, 2 * cell_count entries. */
TEPOR_C_API tepor_status tepor_field_cell_heat_fluxes(tepor_session* session, const tepor_field* field, double* flux,
                                                      size_t entries);
/* x and y of every node in turn [m] at this field's parameter values, 2 * node_count entries. */
TEPOR_C_API tepor_status tepor_field_places(tepor_session* session, const tepor_field* field, double* places,
                                            size_t entries);
/* Highest and lowest temperature [degC] and where [m]; `region` "": of the whole body. */
TEPOR_C_API tepor_status tepor_field_hottest(tepor_session* session, const tepor_field* field, const char* region,
                                             double* temperature, double* x, double* y);
TEPOR_C_API tepor_status tepor_field_coldest(tepor_session* session, const tepor_field* field, const char* region,
                                             double* temperature, double* x, double* y);
/* The value a parameter had when the field was made. TEPOR_UNUSED. */
TEPOR_C_API tepor_status tepor_field_parameter(tepor_session* session, const tepor_field* field,
                                               const tepor_parameter* parameter, double* out);
/* Guaranteed bound of the error in the energy norm [(W K)^(1/2)], in all and per cell (`per_cell` may be NULL, else
 * cell_count entries). Linear steady bodies; TEPOR_NOT_CERTIFIABLE names the term for which there is none. */
TEPOR_C_API tepor_status tepor_field_error_bound(tepor_session* session, const tepor_field* field, double* total,
                                                 double* field_energy, double* per_cell, size_t entries);
/* Passes of the solve; 0 for NULL. */
TEPOR_C_API size_t tepor_field_pass_count(const tepor_field* field);
/* [s]; 0 for a steady state and for NULL. */
TEPOR_C_API double tepor_field_time(const tepor_field* field);

/* The heat balance [W] for the frame's size. Set `size` to sizeof(tepor_balance) before the call: later versions append. */
typedef struct tepor_balance {
    size_t size;
    double in;        /* through faces and side films, inward */
    double out;       /* outward */
    double generated; /* by generation and local heat */
    double stored;    /* rate of storage; 0 at rest */
    double left_over; /* in + generated - out - stored, as computed; closure is never forced */
    double gross;     /* half the sum of all absolute flows */
    double floor;     /* what rounding can leave over */
    int32_t balanced; /* |left_over| <= 1e-10 gross + floor */
    int32_t reserved;
} tepor_balance;
TEPOR_C_API tepor_status tepor_field_balance(tepor_session* session, const tepor_field* field, tepor_balance* balance);
/* What leaves through one face of the balance [W], by kind; position from 0. Set `size` to sizeof(tepor_face_heat). */
typedef struct tepor_face_heat {
    size_t size;
    double area; /* [m2] */
    double out;  /* in all, outward */
    double film;
    double radiation;
    double flux;
    double prescribed;
    int32_t adiabatic; /* nothing was said on it */
    int32_t unbounded; /* differing prescribed temperatures meet on it: `out` has no value */
} tepor_face_heat;
TEPOR_C_API tepor_status tepor_field_face_heat(tepor_session* session, const tepor_field* field, const char* face,
                                               tepor_face_heat* heat);

#ifdef __cplusplus
}
#endif

#endif
