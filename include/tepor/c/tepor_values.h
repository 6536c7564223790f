/* Numbers that may be more: parameters, tables, schedules, own laws. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_VALUES_H
#define TEPOR_C_TEPOR_VALUES_H

#include <tepor/c/tepor_session.h>

#ifdef __cplusplus
extern "C" {
#endif

/* A parameter: a number with a name, in the unit of where it is used. Free-standing; each body keeps its own value, which
 * starts as the one given here. TEPOR_BAD_NAME (empty), TEPOR_BAD_VALUE (not finite). */
TEPOR_C_API tepor_status tepor_parameter_create(tepor_session* session, const char* name, double value,
                                                tepor_parameter** out);
TEPOR_C_API void tepor_parameter_free(tepor_parameter* parameter);

/* Whatever stands where a number is asked for: a number, a parameter or a function. Make it with the three calls below; a
 * value of all zeros says nothing. The object must live until the call that takes the value has returned. */
typedef struct tepor_value {
    int32_t kind; /* 0 nothing, 1 number, 2 parameter, 3 function, 4 number meant in kelvin though below 100 */
    int32_t reserved;
    double number;
    const void* object;
} tepor_value;

TEPOR_C_API tepor_value tepor_nothing(void);
TEPOR_C_API tepor_value tepor_number(double number);
/* A low absolute temperature [K] that is meant: radiating faces of kelvin bodies refuse plain numbers below 100. */
TEPOR_C_API tepor_value tepor_kelvin(double temperature);
TEPOR_C_API tepor_value tepor_of(const tepor_parameter* parameter);
TEPOR_C_API tepor_value tepor_by(const tepor_function* function);

/* A property over temperature [degC, or K in a kelvin body], linear between `count` points of rising temperature. Outside
 * its range it is refused on the solution, or holds its end value when `hold` is not 0. TEPOR_BAD_VALUE. */
TEPOR_C_API tepor_status tepor_table_create(tepor_session* session, const double* temperature, const double* value,
                                            size_t count, int32_t hold, tepor_function** out);
/* A value over time [s]: each of the `count` values holds from its time on, or with `ramps` not 0 straight lines join them.
 * Its energy is exact whatever the step. TEPOR_BAD_VALUE. */
TEPOR_C_API tepor_status tepor_schedule_create(tepor_session* session, const double* time, const double* value,
                                               size_t count, int32_t ramps, tepor_function** out);

/* Points at which an own law is asked: arrays of `count` entries. */
typedef struct tepor_points {
    size_t count;
    const double* temperature; /* [degC, or K in a kelvin body]; NULL when the law was said not to use it */
    const double* fluid;       /* temperature beyond the face, same scale; NULL inside a body */
    const double* x;           /* x or radius [m] */
    const double* y;           /* y or axial coordinate [m]; zeros in 1D */
    double time;               /* [s]; 0 in a steady state */
    const double* parameters;  /* present values of the law's parameters, in their order */
    size_t parameter_count;
} tepor_points;

/* Which slopes a law fills itself; the others are taken by differences, good to about six digits. */
typedef enum tepor_own_slope {
    TEPOR_SLOPE_BY_DIFFERENCES = 0,
    TEPOR_SLOPE_BY_TEMPERATURE = 1, /* slope[0 .. count) [per K] */
    TEPOR_SLOPE_BY_ALL =
        2 /* one row of `count` after another, zeros at first: by temperature, fluid, x, y, each parameter */
} tepor_own_slope;

/* An own law: fills value[0 .. count) and, when `slope` is not NULL, the slopes it was created to know. It is called once
 * per batch of points. Returns 0, or any other number to stop the solve: TEPOR_BAD_LAW shows it. */
typedef int32_t (*tepor_law_callback)(const tepor_points* points, double* value, double* slope, void* user_data);

/* What a law depends on. */
typedef enum tepor_law_kind {
    TEPOR_LAW_OF_PLACE = 0,       /* place and time; the body stays linear */
    TEPOR_LAW_OF_TEMPERATURE = 1, /* temperature, the fluid's too on a face, place and time */
    TEPOR_LAW_OF_TIME = 2         /* time alone, sampled where a step needs it */
} tepor_law_kind;

/* A law with `parameter_count` parameters (NULL and 0: none). `name` shows in messages. `user_data` is passed through and
 * must outlive every body that uses the law. A law that says it is of place and reads the temperature all the same is
 * given NULL for it. */
TEPOR_C_API tepor_status tepor_law_create(tepor_session* session, const char* name, tepor_law_callback callback,
                                          void* user_data, const tepor_parameter* const* parameters,
                                          size_t parameter_count, tepor_law_kind kind, tepor_own_slope own_slope,
                                          tepor_function** out);
TEPOR_C_API void tepor_function_free(tepor_function* function);

#ifdef __cplusplus
}
#endif

#endif
