/* compact: a small model of a body for control. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_COMPACT_H
#define TEPOR_C_TEPOR_COMPACT_H

#include <tepor/c/tepor_march.h>

#ifdef __cplusplus
extern "C" {
#endif

/* What the small model is for and how good it has to be; start from tepor_compact_options_default(). */
typedef struct tepor_compact_options {
    size_t size;
    const tepor_parameter* const* inputs; /* powers, fluxes, fluid temperatures, prescribed temperatures */
    size_t input_count;
    const tepor_quantity* const* outputs; /* temperatures, means, heats */
    size_t output_count;
    double sample_time;         /* [s], > 0 */
    double tolerance;           /* error bound as a share of the peak gain (scaled) */
    double highest_frequency;   /* [rad/s] up to which the basis is made; 0: pi / sample_time */
    const double* input_scale;  /* expected size of each input's change; NULL: 1 each */
    const double* output_scale; /* what counts as one at each output; NULL: 1 each */
    int64_t order;              /* this many states whatever the tolerance; 0: as the tolerance asks */
    int32_t passive;            /* not 0: the symmetric form, every state decays by itself */
    int32_t capacity;           /* tepor_capacity */
} tepor_compact_options;
TEPOR_C_API tepor_compact_options tepor_compact_options_default(void);

/* A linear model of few states around the steady state at the body's present values: x := A x + B (u - u0),
 * y = y0 + C x + D (u - u0), exact in time for inputs held over each step. TEPOR_MISSING, TEPOR_UNUSED,
 * TEPOR_NOT_SUPPORTED (an input that multiplies temperature, an extreme as output, k(T), latent heat, data over time),
 * TEPOR_NOT_CONVERGED (the tolerance cannot be certified), TEPOR_SINGULAR. */
TEPOR_C_API tepor_status tepor_compact(tepor_session* session, const tepor_body* body,
                                       const tepor_compact_options* options, tepor_model** out);
TEPOR_C_API void tepor_model_free(tepor_model* model);

/* Set `size` to sizeof(tepor_model_facts). */
typedef struct tepor_model_facts {
    size_t size;
    int64_t order; /* states */
    int64_t inputs;
    int64_t outputs;
    double sample_time; /* [s] */
    double peak_gain;   /* largest gain over frequency from scaled inputs to scaled outputs */
    double error_bound; /* L2 norm of the scaled output error over that of the scaled input, at most; same measure */
    double basis_error; /* the part of it certified at sampled frequencies only, an estimate between them */
    int64_t basis_size;
    int64_t factorisations;
    int32_t linearised; /* the body is not linear: its slope at the operating point, good near it */
    int32_t reserved;
} tepor_model_facts;
TEPOR_C_API tepor_status tepor_model_facts_of(tepor_session* session, const tepor_model* model,
                                              tepor_model_facts* facts);

typedef enum tepor_model_part {
    TEPOR_MODEL_A = 1,            /* order x order, row by row */
    TEPOR_MODEL_B = 2,            /* order x inputs */
    TEPOR_MODEL_C = 3,            /* outputs x order */
    TEPOR_MODEL_D = 4,            /* outputs x inputs */
    TEPOR_MODEL_U0 = 5,           /* inputs at the operating point */
    TEPOR_MODEL_Y0 = 6,           /* outputs there */
    TEPOR_MODEL_CONTINUOUS_A = 7, /* x' = Ac x + Bc (u - u0) */
    TEPOR_MODEL_CONTINUOUS_B = 8,
    TEPOR_MODEL_STATE = 9 /* the present state */
} tepor_model_part;
TEPOR_C_API tepor_status tepor_model_numbers(tepor_session* session, const tepor_model* model, tepor_model_part part,
                                             double* numbers, size_t entries);

/* One step with the inputs held at `u`; `y` receives the outputs. Neither fails nor allocates; NULLs do nothing. */
TEPOR_C_API void tepor_model_advance(tepor_model* model, const double* u, double* y);
/* Back to the operating point. */
TEPOR_C_API void tepor_model_reset(tepor_model* model);
/* Gain of output i by input j at rest, and its real and imaginary part at the angular frequency w [rad/s]. */
TEPOR_C_API tepor_status tepor_model_steady_gain(tepor_session* session, const tepor_model* model, int64_t output,
                                                 int64_t input, double* gain);
TEPOR_C_API tepor_status tepor_model_gain(tepor_session* session, const tepor_model* model, int64_t output,
                                          int64_t input, double w, double* re, double* im);
/* C99 source of the model (a struct NAME_state, NAME_reset, NAME_advance, no dependency), and all its numbers as CSV. */
TEPOR_C_API tepor_status tepor_model_c_source(tepor_session* session, const tepor_model* model, const char* name,
                                              tepor_text** out);
TEPOR_C_API tepor_status tepor_model_csv(tepor_session* session, const tepor_model* model, tepor_text** out);

#ifdef __cplusplus
}
#endif

#endif
