#pragma once
// Sessions, versions and texts.

#include <tepor/c/impl/handles.hpp>
#include <tepor/version.hpp>

extern "C" {

const char* tepor_version(void) {
    return TEPOR_VERSION;
}
int32_t tepor_abi_version(void) {
    return TEPOR_ABI_VERSION;
}

const char* tepor_status_name(tepor_status status) {
    switch (status) {
    case TEPOR_OK: return "ok";
    case TEPOR_INVALID_ARGUMENT: return "invalid_argument";
    case TEPOR_OUT_OF_MEMORY: return "out_of_memory";
    default: return tepor::name_of(static_cast<tepor::ErrorCode>(status));
    }
}
const char* tepor_status_text(tepor_status status) {
    switch (status) {
    case TEPOR_OK: return "the call did what it was asked";
    case TEPOR_INVALID_ARGUMENT: return "a pointer is NULL, or a number is no member of its enumeration";
    case TEPOR_OUT_OF_MEMORY: return "memory has run out";
    default: return tepor::text_of(static_cast<tepor::ErrorCode>(status));
    }
}

tepor_session* tepor_session_create(void) {
    return new (std::nothrow) tepor_session;
}
void tepor_session_free(tepor_session* session) {
    delete session;
}
const char* tepor_session_message(const tepor_session* session) {
    return session ? session->message : "";
}
const char* tepor_session_offender(const tepor_session* session) {
    return session ? session->offender : "";
}

} // extern "C"

// The statuses are the library's error codes under their C names.
#define TEPOR_SAME_CODE(c_name, name)                                                                                  \
    static_assert(static_cast<int>(c_name) == static_cast<int>(tepor::ErrorCode::name))
TEPOR_SAME_CODE(TEPOR_BAD_VALUE, bad_value);
TEPOR_SAME_CODE(TEPOR_BAD_NAME, bad_name);
TEPOR_SAME_CODE(TEPOR_BAD_UNIT, bad_unit);
TEPOR_SAME_CODE(TEPOR_WRONG_DIMENSION, wrong_dimension);
TEPOR_SAME_CODE(TEPOR_BAD_GEOMETRY, bad_geometry);
TEPOR_SAME_CODE(TEPOR_BAD_MESH, bad_mesh);
TEPOR_SAME_CODE(TEPOR_OUTSIDE, outside);
TEPOR_SAME_CODE(TEPOR_NO_LEVEL, no_level);
TEPOR_SAME_CODE(TEPOR_MISSING, missing);
TEPOR_SAME_CODE(TEPOR_CONTRADICTION, contradiction);
TEPOR_SAME_CODE(TEPOR_UNUSED, unused);
TEPOR_SAME_CODE(TEPOR_BAD_CONTACT, bad_contact);
TEPOR_SAME_CODE(TEPOR_OUTSIDE_TABLE, outside_table);
TEPOR_SAME_CODE(TEPOR_BAD_LAW, bad_law);
TEPOR_SAME_CODE(TEPOR_NOT_CONVERGED, not_converged);
TEPOR_SAME_CODE(TEPOR_SINGULAR, singular);
TEPOR_SAME_CODE(TEPOR_NO_ANSWER, no_answer);
TEPOR_SAME_CODE(TEPOR_NOT_CERTIFIABLE, not_certifiable);
TEPOR_SAME_CODE(TEPOR_NOT_SUPPORTED, not_supported);
TEPOR_SAME_CODE(TEPOR_CANCELLED, cancelled);
TEPOR_SAME_CODE(TEPOR_BAD_FILE, bad_file);
TEPOR_SAME_CODE(TEPOR_TOO_LARGE, too_large);
TEPOR_SAME_CODE(TEPOR_INTERNAL, internal);
#undef TEPOR_SAME_CODE
