/* Statuses, handles, messages and the version. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_SESSION_H
#define TEPOR_C_TEPOR_SESSION_H

#include <stddef.h>
#include <stdint.h>

#ifdef __cplusplus
extern "C" {
#endif

#if defined(_WIN32)
#define TEPOR_C_API
#elif defined(__GNUC__)
#define TEPOR_C_API __attribute__((visibility("default")))
#else
#define TEPOR_C_API
#endif

/* Raised when a program built against an older header can no longer use the library; it is the library's SONAME. */
#define TEPOR_ABI_VERSION 1

typedef enum tepor_status {
    TEPOR_OK = 0,
    TEPOR_INVALID_ARGUMENT = 1, /* a pointer is NULL, or a number is no member of its enumeration */
    TEPOR_OUT_OF_MEMORY = 2,
    TEPOR_BAD_VALUE = 10,       /* a value is not finite or outside its physical range */
    TEPOR_BAD_NAME = 11,        /* a region, face, parameter or quantity of that name does not exist or exists twice */
    TEPOR_BAD_UNIT = 12,        /* a value looks like another unit */
    TEPOR_WRONG_DIMENSION = 13, /* the statement does not fit the dimension or frame of the body */
    TEPOR_BAD_GEOMETRY = 20,
    TEPOR_BAD_MESH = 21,
    TEPOR_OUTSIDE = 22,  /* the place lies outside the body or has no single value */
    TEPOR_NO_LEVEL = 30, /* nothing sets the temperature level */
    TEPOR_MISSING = 31,
    TEPOR_CONTRADICTION = 32,
    TEPOR_UNUSED = 33, /* a statement or parameter has no effect */
    TEPOR_BAD_CONTACT = 34,
    TEPOR_OUTSIDE_TABLE = 40,
    TEPOR_BAD_LAW = 41, /* an own law returned a value that cannot be used, or stopped */
    TEPOR_NOT_CONVERGED = 50,
    TEPOR_SINGULAR = 51,
    TEPOR_NO_ANSWER = 52,
    TEPOR_NOT_CERTIFIABLE = 53,
    TEPOR_NOT_SUPPORTED = 54,
    TEPOR_CANCELLED = 55,
    TEPOR_BAD_FILE = 60,
    TEPOR_TOO_LARGE = 61,
    TEPOR_INTERNAL = 90
} tepor_status;

typedef struct tepor_session tepor_session;     /* the last message */
typedef struct tepor_parameter tepor_parameter; /* a named number */
typedef struct tepor_function tepor_function;   /* a table, a schedule or an own law */
typedef struct tepor_tiles tepor_tiles;         /* a drawing of rectangles */
typedef struct tepor_section tepor_section;     /* a drawing of any shapes */
typedef struct tepor_mesh tepor_mesh;
typedef struct tepor_body tepor_body;
typedef struct tepor_quantity tepor_quantity; /* a scalar asked of a temperature field */
typedef struct tepor_field tepor_field; /* a temperature field: a snapshot, later calls on the body do not touch it */
typedef struct tepor_march tepor_march; /* a body through time */
typedef struct tepor_periodic tepor_periodic;     /* a march that repeats */
typedef struct tepor_checkpoint tepor_checkpoint; /* the state of a march as bytes */
typedef struct tepor_slopes tepor_slopes;         /* derivatives of one quantity */
typedef struct tepor_fitted tepor_fitted;         /* parameters found from readings */
typedef struct tepor_model tepor_model;           /* a small model for control */
typedef struct tepor_record tepor_record;         /* quantities over time, for charts and tables */
typedef struct tepor_series tepor_series;         /* files of fields, one after the other */
typedef struct tepor_text tepor_text;             /* a text or file content the library made */

/* Version of the library, such as "0.1.0"; never NULL. */
TEPOR_C_API const char* tepor_version(void);
/* The TEPOR_ABI_VERSION the library was built with: compare before anything else. */
TEPOR_C_API int32_t tepor_abi_version(void);
/* Short name of a status, such as "bad_value", and a sentence on it; never NULL. */
TEPOR_C_API const char* tepor_status_name(tepor_status status);
TEPOR_C_API const char* tepor_status_text(tepor_status status);

/* NULL when memory has run out. */
TEPOR_C_API tepor_session* tepor_session_create(void);
TEPOR_C_API void tepor_session_free(tepor_session* session);
/* Full text of the last call that failed: what was given, what is wrong, what to do. "" when none has; never NULL. Valid
 * until the next call with this session. */
TEPOR_C_API const char* tepor_session_message(const tepor_session* session);
/* The name of the region, face, parameter, law or option at fault; "" when there is none; never NULL. */
TEPOR_C_API const char* tepor_session_offender(const tepor_session* session);

#ifdef __cplusplus
}
#endif

#endif
