/* fit: parameters from readings, with their uncertainty. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_FIT_H
#define TEPOR_C_TEPOR_FIT_H

#include <tepor/c/tepor_march.h>

#ifdef __cplusplus
extern "C" {
#endif

/* A parameter held at a value while a reading was taken. */
typedef struct tepor_condition {
    const tepor_parameter* parameter;
    double value;
} tepor_condition;

/* One measured number. */
typedef struct tepor_reading {
    const tepor_quantity* quantity;
    double time;        /* [s], of a march; unused in a steady fit */
    double value;       /* in the unit of the quantity */
    double uncertainty; /* standard uncertainty (one sigma), > 0, same unit */
    const tepor_condition*
        conditions; /* steady fits: what was different from the body's present values; NULL and 0: nothing */
    size_t condition_count;
} tepor_reading;

/* A parameter to be found; it starts from its present value in the body. */
typedef struct tepor_fit_by {
    const tepor_parameter* parameter;
    double from; /* bounds; NaN: none */
    double to;
    double prior;             /* what is known of it before the readings */
    double prior_uncertainty; /* standard uncertainty of that; 0: no prior */
} tepor_fit_by;

/* Start from tepor_fit_options_default(). */
typedef struct tepor_fit_options {
    size_t size;
    double weakest;   /* combinations less certain than this (relative standard uncertainty) are refused by name */
    double tolerance; /* relative change of the sum of squares at which it stops */
    int64_t most_passes;
} tepor_fit_options;
TEPOR_C_API tepor_fit_options tepor_fit_options_default(void);

/* Parameters of a body from steady readings, by least squares weighted with the uncertainties. `options` may be NULL.
 * TEPOR_NO_ANSWER: the readings do not tell some parameters apart (the offender names them); a prior, or readings under other
 * conditions, help. TEPOR_MISSING, TEPOR_BAD_VALUE, TEPOR_UNUSED, TEPOR_NOT_CONVERGED. */
TEPOR_C_API tepor_status tepor_fit(tepor_session* session, const tepor_body* body, const tepor_fit_by* by,
                                   size_t by_count, const tepor_reading* readings, size_t reading_count,
                                   const tepor_fit_options* options, tepor_fitted** out);
/* The same from readings over time, marched from one temperature [degC] with fixed or adaptive steps. TEPOR_OUTSIDE: a reading before
 * the start. */
TEPOR_C_API tepor_status tepor_fit_march(tepor_session* session, const tepor_body* body, double temperature,
                                         const tepor_march_options* steps, const tepor_fit_by* by, size_t by_count,
                                         const tepor_reading* readings, size_t reading_count,
                                         const tepor_fit_options* options, tepor_fitted** out);
TEPOR_C_API void tepor_fitted_free(tepor_fitted* fitted);

/* A value with its uncertainty. Set `size` to sizeof(tepor_estimated). */
typedef struct tepor_estimated {
    size_t size;
    double value;
    double uncertainty; /* standard uncertainty */
    double low;         /* 95 % interval */
    double high;
} tepor_estimated;
/* Of one fitted parameter. TEPOR_UNUSED. */
TEPOR_C_API tepor_status tepor_fitted_value(tepor_session* session, const tepor_fitted* fitted,
                                            const tepor_parameter* parameter, tepor_estimated* out);
/* Any quantity of the steady state at the fitted parameters, under conditions (NULL and 0: none). */
TEPOR_C_API tepor_status tepor_fitted_predict(tepor_session* session, const tepor_fitted* fitted,
                                              const tepor_quantity* quantity, const tepor_condition* conditions,
                                              size_t count, tepor_estimated* out);

/* The same at a time [s] of the march that was fitted, which may lie beyond the last reading. TEPOR_NOT_SUPPORTED: a fit of
 * steady readings. TEPOR_OUTSIDE: before the start. */
TEPOR_C_API tepor_status tepor_fitted_predict_at(tepor_session* session, const tepor_fitted* fitted,
                                                 const tepor_quantity* quantity, double time,
                                                 const tepor_condition* conditions, size_t count, tepor_estimated* out);

/* How well model and readings agree. Set `size` to sizeof(tepor_agreement). */
typedef struct tepor_agreement {
    size_t size;
    double chi_square; /* sum of ((model - reading) / uncertainty)^2 */
    double goodness;   /* probability of a chi-square as large as this; below 0.01 look for what is wrong */
    int64_t degrees_of_freedom;
    int64_t passes;
    int64_t on_bounds; /* parameters that ended on a bound: their intervals are not to be trusted */
} tepor_agreement;
TEPOR_C_API tepor_status tepor_fitted_agreement(tepor_session* session, const tepor_fitted* fitted,
                                                tepor_agreement* out);
/* Covariance of the values row by row (by_count^2 entries); (model - reading) / uncertainty (one per reading). */
TEPOR_C_API tepor_status tepor_fitted_covariance(tepor_session* session, const tepor_fitted* fitted, double* covariance,
                                                 size_t entries);
TEPOR_C_API tepor_status tepor_fitted_residuals(tepor_session* session, const tepor_fitted* fitted, double* residuals,
                                                size_t entries);

#ifdef __cplusplus
}
#endif

#endif
