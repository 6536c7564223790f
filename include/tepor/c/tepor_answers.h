/* Brackets, estimates, gradients and sizes. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_ANSWERS_H
#define TEPOR_C_TEPOR_ANSWERS_H

#include <tepor/c/tepor_march.h>

#ifdef __cplusplus
extern "C" {
#endif

/* How narrow, and what it may cost; start from tepor_bracket_options_default(). With neither width: 1 % of |value|. */
typedef struct tepor_bracket_options {
    size_t size;
    double relative_width; /* of |value| */
    double absolute_width; /* in the unit of the quantity */
    double max_seconds;
    int64_t max_unknowns;
} tepor_bracket_options;
TEPOR_C_API tepor_bracket_options tepor_bracket_options_default(void);

/* A guaranteed interval of a quantity of the steady state: lower <= exact <= upper. Set `size` to
 * sizeof(tepor_bracket_result). What the interval is for, when not for the body as drawn, stands in the session's message.
 * `options` may be NULL. TEPOR_NOT_CERTIFIABLE names what no bound exists for. */
typedef struct tepor_bracket_result {
    size_t size;
    double lower;
    double value;
    double upper;
    int64_t cells;
    int64_t unknowns;
    int32_t reached; /* the width asked for was reached; else a budget was spent first */
    int32_t passes;
} tepor_bracket_result;
TEPOR_C_API tepor_status tepor_bracket(tepor_session* session, const tepor_body* body, const tepor_quantity* quantity,
                                       const tepor_bracket_options* options, tepor_bracket_result* result);

/* How good, and what it may cost; start from tepor_estimate_options_default(). With neither accuracy: 1 % of |value|. */
typedef struct tepor_estimate_options {
    size_t size;
    double relative_error; /* of |value| */
    double absolute_error; /* in the unit of the quantity */
    double max_seconds;
    int64_t max_unknowns;
} tepor_estimate_options;
TEPOR_C_API tepor_estimate_options tepor_estimate_options_default(void);

/* A value and how far off it likely is, from refined meshes: no bound. Set `size` to sizeof(tepor_estimate_result). */
typedef struct tepor_estimate_result {
    size_t size;
    double value;
    double likely_error; /* in the unit of the quantity */
    double order;        /* observed: the error falls as h^order; 0 when it could not be seen */
    int32_t reached;
    int32_t passes;
} tepor_estimate_result;
TEPOR_C_API tepor_status tepor_estimate(tepor_session* session, const tepor_body* body, const tepor_quantity* quantity,
                                        const tepor_estimate_options* options, tepor_estimate_result* result);

/* The derivative of a quantity of a steady field by every parameter and node position: one extra solve for all of them. */
TEPOR_C_API tepor_status tepor_gradient(tepor_session* session, const tepor_field* field,
                                        const tepor_quantity* quantity, tepor_slopes** out);
/* The same for a march that was told to record: at its end, at a time at which a step ended [s], of the integral over the
 * run [unit s], of the peak (its instant [s], and whether the derivative holds to one side only). TEPOR_MISSING (nothing
 * recorded), TEPOR_TOO_LARGE (the states did not fit), TEPOR_NOT_SUPPORTED, TEPOR_NO_ANSWER. */
TEPOR_C_API tepor_status tepor_gradient_at_end(tepor_session* session, const tepor_march* march,
                                               const tepor_quantity* quantity, tepor_slopes** out);
TEPOR_C_API tepor_status tepor_gradient_at(tepor_session* session, const tepor_march* march,
                                           const tepor_quantity* quantity, double time, tepor_slopes** out);
TEPOR_C_API tepor_status tepor_gradient_of_integral(tepor_session* session, const tepor_march* march,
                                                    const tepor_quantity* quantity, tepor_slopes** out);
TEPOR_C_API tepor_status tepor_gradient_of_peak(tepor_session* session, const tepor_march* march,
                                                const tepor_quantity* quantity, tepor_slopes** out, double* time,
                                                int32_t* one_sided);
TEPOR_C_API void tepor_slopes_free(tepor_slopes* slopes);
/* By one parameter [unit of the quantity per unit of the parameter]. TEPOR_UNUSED. */
TEPOR_C_API tepor_status tepor_slopes_by(tepor_session* session, const tepor_slopes* slopes,
                                         const tepor_parameter* parameter, double* derivative);
/* The quantity itself; NaN for NULL. */
TEPOR_C_API double tepor_slopes_value(const tepor_slopes* slopes);
/* Parameters there are; 0 for NULL. */
TEPOR_C_API size_t tepor_slopes_count(const tepor_slopes* slopes);
/* One parameter's share; the largest relative sensitivity has the rank 0. Set `size` to sizeof(tepor_slope). */
typedef struct tepor_slope {
    size_t size;
    const char* parameter; /* its name, valid as long as the slopes */
    double value;          /* of the parameter */
    double derivative;
    double relative; /* per cent of the quantity per per cent of the parameter; 0 when the quantity is 0 */
} tepor_slope;
TEPOR_C_API tepor_status tepor_slopes_ranked(tepor_session* session, const tepor_slopes* slopes, size_t rank,
                                             tepor_slope* slope);
/* By the position of every node [unit per metre], x and y in turn, 2 * node_count entries. */
TEPOR_C_API tepor_status tepor_slopes_nodes(tepor_session* session, const tepor_slopes* slopes, double* derivative,
                                            size_t entries);
/* 0 when a law's slopes come from differences, as those of callbacks do by their parameters. */
TEPOR_C_API int32_t tepor_slopes_exact(const tepor_slopes* slopes);

typedef enum tepor_target_kind { TEPOR_EQUAL_TO = 0, TEPOR_AT_MOST = 1, TEPOR_AT_LEAST = 2 } tepor_target_kind;

/* Where an answer is sought; start from tepor_size_options_default(). */
typedef struct tepor_size_options {
    size_t size;
    double from; /* bounds of the parameter; NaN: 1/100 and 100 times its value where it must be positive */
    double to;
    double tolerance; /* of the target, as a share of max(|target|, spread of the quantity between the bounds) */
    double certified_width;
    int32_t scan;           /* not 0: look for several answers even when the slope keeps its sign */
    int32_t certified_side; /* not 0: the bad end of the guaranteed interval keeps the limit */
    int64_t most_solves;
} tepor_size_options;
TEPOR_C_API tepor_size_options tepor_size_options_default(void);

typedef enum tepor_size_reason {
    TEPOR_SIZE_FOUND = 0,
    TEPOR_SIZE_ALWAYS_MET = 1,  /* every value between the bounds keeps the limit; the present one stays */
    TEPOR_SIZE_SEVERAL = 2,     /* `answers` lists them, `value` is the one nearest to the present value */
    TEPOR_SIZE_UNREACHABLE = 3, /* `value` comes nearest */
    TEPOR_SIZE_RUNAWAY = 4,     /* beyond failed_at no steady state was found */
    TEPOR_SIZE_FAILED = 5       /* beyond failed_at the body has no meaning: a table's range, a law */
} tepor_size_reason;

/* What a sizing found; the session's message holds the reason in words. Set `size` to sizeof(tepor_sized). */
typedef struct tepor_sized {
    size_t size;
    double value;   /* of the parameter */
    double reached; /* the quantity there */
    double failed_at;
    int64_t solves;
    int32_t reason; /* tepor_size_reason */
    int32_t answer_count;
    double lower; /* with certified_side: guaranteed bounds of the quantity at the answer */
    double upper;
    double answers[8]; /* rising; the first 8 */
} tepor_sized;
/* The value of a parameter at which a quantity meets a target. The body stays as it was. `options` may be NULL; `field` too,
 * else it receives the field at the answer. */
TEPOR_C_API tepor_status tepor_size_for(tepor_session* session, const tepor_body* body,
                                        const tepor_parameter* parameter, const tepor_quantity* quantity,
                                        tepor_target_kind kind, double target, const tepor_size_options* options,
                                        tepor_sized* result, tepor_field** field);

/* Makes the body for one value, for shapes that no parameter describes; it is taken over and freed. NULL stops with
 * TEPOR_CANCELLED. */
typedef tepor_body* (*tepor_body_maker)(double value, void* user_data);
/* The same over bodies made one after the other; both bounds have to be given. */
TEPOR_C_API tepor_status tepor_size_for_bodies(tepor_session* session, tepor_body_maker make, void* user_data,
                                               const tepor_quantity* quantity, tepor_target_kind kind, double target,
                                               const tepor_size_options* options, tepor_sized* result,
                                               tepor_field** field);

/* One of several parameters with its bounds (NaN: none), and one of several targets. */
typedef struct tepor_size_by {
    const tepor_parameter* parameter;
    double from;
    double to;
} tepor_size_by;
typedef struct tepor_size_to {
    const tepor_quantity* quantity;
    double target;
    int32_t kind; /* tepor_target_kind */
    int32_t reserved;
} tepor_size_to;
/* As many parameters for as many targets; `values` and `reached` have `count` entries, `reason` may be NULL. */
TEPOR_C_API tepor_status tepor_size_for_several(tepor_session* session, const tepor_body* body, const tepor_size_by* by,
                                                const tepor_size_to* to, size_t count,
                                                const tepor_size_options* options, double* values, double* reached,
                                                int32_t* reason, tepor_field** field);

#ifdef __cplusplus
}
#endif

#endif
