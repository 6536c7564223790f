/* Marching: a body through time. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_MARCH_H
#define TEPOR_C_TEPOR_MARCH_H

#include <tepor/c/tepor_field.h>

#ifdef __cplusplus
extern "C" {
#endif

/* How heat capacity stands in the discrete equations: at the nodes alone, integrated, or half of each. */
typedef enum tepor_capacity {
    TEPOR_CAPACITY_AUTOMATIC = 0, /* lumped for elements of order 1, consistent above */
    TEPOR_CAPACITY_LUMPED = 1,
    TEPOR_CAPACITY_CONSISTENT = 2,
    TEPOR_CAPACITY_BLENDED = 3
} tepor_capacity;

/* How to march. Start from tepor_march_options_default(), then change what is wanted. */
typedef struct tepor_march_options {
    size_t size;         /* sizeof(tepor_march_options) */
    double theta;        /* 0.5 to 1 */
    double step;         /* [s]; 0: adaptive steps */
    double tolerance;    /* adaptive: error per step [K] */
    double largest_step; /* adaptive [s]; 0: no limit */
    int32_t
        damped_start; /* four backward-Euler half steps at the start and after jumps of schedules; not 0 by default */
    int32_t newton_passes;   /* fixed step, nonlinear: always this many; 0: until converged */
    double first_step;       /* adaptive [s]; 0: chosen */
    double smallest_step;    /* adaptive [s]; 0: chosen */
    double newton_tolerance; /* sum of |r| as a share of the gross heat traffic */
    int32_t capacity;        /* tepor_capacity */
    int32_t liquid;          /* not 0: what starts exactly at a melting temperature without width is liquid */
} tepor_march_options;
TEPOR_C_API tepor_march_options tepor_march_options_default(void);

/* A march from one temperature [degC], or from a field. TEPOR_BAD_VALUE, TEPOR_MISSING (density, specific heat). */
TEPOR_C_API tepor_status tepor_march_create(tepor_session* session, const tepor_body* body, double temperature,
                                            const tepor_march_options* options, tepor_march** out);
TEPOR_C_API tepor_status tepor_march_create_from(tepor_session* session, const tepor_body* body,
                                                 const tepor_field* field, const tepor_march_options* options,
                                                 tepor_march** out);
/* From a law of place. */
TEPOR_C_API tepor_status tepor_march_create_by(tepor_session* session, const tepor_body* body,
                                               const tepor_function* temperature, const tepor_march_options* options,
                                               tepor_march** out);
/* From a checkpoint of a march of this body; parameters have the values they had there. TEPOR_BAD_FILE (another body). */
TEPOR_C_API tepor_status tepor_march_resume(tepor_session* session, const tepor_body* body,
                                            const tepor_checkpoint* checkpoint, const tepor_march_options* options,
                                            tepor_march** out);
TEPOR_C_API void tepor_march_free(tepor_march* march);

/* Before the loop: names and places are resolved once; the numbers are handles for this march. */
TEPOR_C_API tepor_status tepor_march_watch(tepor_session* session, tepor_march* march, const tepor_quantity* quantity,
                                           int64_t* probe);
TEPOR_C_API tepor_status tepor_march_drive(tepor_session* session, tepor_march* march, const tepor_parameter* parameter,
                                           int64_t* input);

/* Integral of a quantity over time from now on [unit s], and its highest value from now on. */
TEPOR_C_API tepor_status tepor_march_integral(tepor_session* session, tepor_march* march,
                                              const tepor_quantity* quantity, int64_t* integral);
TEPOR_C_API tepor_status tepor_march_peak(tepor_session* session, tepor_march* march, const tepor_quantity* quantity,
                                          int64_t* peak);
/* Keeps every state from now on for tepor_gradient_at_end() and its sisters, up to so many megabytes. */
TEPOR_C_API tepor_status tepor_march_record(tepor_session* session, tepor_march* march, double megabytes);
/* Called with the march and `user_data`; not 0 stops with TEPOR_CANCELLED. It may read the march, not change it. */
typedef int32_t (*tepor_march_callback)(const tepor_march* march, void* user_data);
/* `callback` is called by the longer runs below at the present time plus every multiple of `interval` [s], on which steps
 * land exactly. */
TEPOR_C_API tepor_status tepor_march_observe(tepor_session* session, tepor_march* march, double interval,
                                             tepor_march_callback callback, void* user_data);

/* In the loop; these three neither fail nor allocate for linear bodies with a fixed step. */
/* A value that is not finite keeps the last one; the next advance then answers 1. */
TEPOR_C_API void tepor_march_set(tepor_march* march, int64_t input, double value);
/* NaN when the probe has no value. */
TEPOR_C_API double tepor_march_read(const tepor_march* march, int64_t probe);
/* NaN when there is no such integral. */
TEPOR_C_API double tepor_march_read_integral(const tepor_march* march, int64_t integral);
/* The peak's value; its instant [s] into `time`, which may be NULL. NaN when there is no such peak. */
TEPOR_C_API double tepor_march_read_peak(const tepor_march* march, int64_t peak, double* time);
/* One step. 0: done; 1: done with the last good input; otherwise the state is that before the step and the number is a
 * verdict: 10 not converged, 11 bad law, 12 outside a table, 13 singular, 14 step too small, 15 out of memory, 16 NULL. */
TEPOR_C_API int32_t tepor_march_advance(tepor_march* march);
TEPOR_C_API const char* tepor_verdict_text(int32_t verdict);
/* [s]; 0 for NULL. */
TEPOR_C_API double tepor_march_time(const tepor_march* march);

/* To the time exactly [s]. */
TEPOR_C_API tepor_status tepor_march_advance_to(tepor_session* session, tepor_march* march, double time);
/* The same with `progress` called after every step. TEPOR_CANCELLED. */
TEPOR_C_API tepor_status tepor_march_advance_to_with(tepor_session* session, tepor_march* march, double time,
                                                     tepor_march_callback progress, void* user_data);
/* Until the quantity passes the value, at the latest at `latest` [s] (0: no limit); the time of passing [s]. TEPOR_NO_ANSWER. */
TEPOR_C_API tepor_status tepor_march_time_to_reach(tepor_session* session, tepor_march* march,
                                                   const tepor_quantity* quantity, double value, double latest,
                                                   double* time);
TEPOR_C_API tepor_status tepor_march_value(tepor_session* session, const tepor_march* march,
                                           const tepor_quantity* quantity, double* out);
TEPOR_C_API tepor_status tepor_march_field(tepor_session* session, const tepor_march* march, tepor_field** out);
/* Mean of the last step [W], and sum over the run [J]. */
TEPOR_C_API tepor_status tepor_march_balance(tepor_session* session, const tepor_march* march, tepor_balance* balance);
TEPOR_C_API tepor_status tepor_march_total(tepor_session* session, const tepor_march* march, tepor_balance* balance);
/* Molten share of what can melt in a region, 0 to 1. */
TEPOR_C_API tepor_status tepor_march_molten_in(tepor_session* session, const tepor_march* march, const char* region,
                                               double* share);
/* The value a parameter has in this march. */
TEPOR_C_API tepor_status tepor_march_parameter(tepor_session* session, const tepor_march* march,
                                               const tepor_parameter* parameter, double* out);
/* Size of the last step [s]; 0 for NULL. */
TEPOR_C_API double tepor_march_last_step(const tepor_march* march);
/* The smallest step that makes sense on this mesh [s]: below it a capacity that is not lumped lets temperatures swing beyond
 * their neighbours after a jump. 0 where there is no such limit, and for NULL. */
TEPOR_C_API double tepor_march_sensible_step(const tepor_march* march);
/* Steps advanced; factorisations so far; steps that were tried again. 0 for NULL. */
TEPOR_C_API int64_t tepor_march_steps(const tepor_march* march);
TEPOR_C_API int64_t tepor_march_factorisations(const tepor_march* march);
TEPOR_C_API int64_t tepor_march_rejections(const tepor_march* march);

/* The state of a march at a step end, as bytes and in files. TEPOR_BAD_FILE: none, of another version, cut short, damaged. */
TEPOR_C_API tepor_status tepor_march_checkpoint(tepor_session* session, const tepor_march* march,
                                                tepor_checkpoint** out);
TEPOR_C_API tepor_status tepor_checkpoint_from_bytes(tepor_session* session, const unsigned char* bytes, size_t count,
                                                     tepor_checkpoint** out);
TEPOR_C_API tepor_status tepor_checkpoint_load(tepor_session* session, const char* path, tepor_checkpoint** out);
TEPOR_C_API tepor_status tepor_checkpoint_save(tepor_session* session, const tepor_checkpoint* checkpoint,
                                               const char* path);
/* Valid as long as the checkpoint; NULL and 0 for NULL. */
TEPOR_C_API const unsigned char* tepor_checkpoint_bytes(const tepor_checkpoint* checkpoint);
TEPOR_C_API size_t tepor_checkpoint_size(const tepor_checkpoint* checkpoint);
TEPOR_C_API void tepor_checkpoint_free(tepor_checkpoint* checkpoint);

/* The state a linear body comes to under data that repeat after `period` [s], found by shooting; fixed steps that divide the
 * period. TEPOR_BAD_VALUE, TEPOR_NOT_SUPPORTED (something depends on temperature), TEPOR_NO_LEVEL. */
TEPOR_C_API tepor_status tepor_periodic_steady(tepor_session* session, const tepor_body* body, double period,
                                               const tepor_march_options* options, tepor_periodic** out);
/* Lowest and highest value over a period, when, and the mean over time. Set `size` to sizeof(tepor_swing). */
typedef struct tepor_swing {
    size_t size;
    double low;
    double low_time; /* [s] */
    double high;
    double high_time; /* [s] */
    double mean;
} tepor_swing;
TEPOR_C_API tepor_status tepor_periodic_swing(tepor_session* session, tepor_periodic* periodic,
                                              const tepor_quantity* quantity, tepor_swing* swing);
/* The field at the start of the period. */
TEPOR_C_API tepor_status tepor_periodic_field(tepor_session* session, const tepor_periodic* periodic,
                                              tepor_field** out);
TEPOR_C_API void tepor_periodic_free(tepor_periodic* periodic);

#ifdef __cplusplus
}
#endif

#endif
