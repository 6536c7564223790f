#pragma once
// What the C handles hold, and the one gate through which every call runs.

#include <cstring>
#include <memory>
#include <new>
#include <string>
#include <tepor/c/tepor.h>
#include <tepor/tepor.hpp>

struct tepor_session {
    // fixed: reporting an error cannot fail itself
    char message[2048] = "";
    char offender[256] = "";
};
struct tepor_parameter {
    tepor::Parameter parameter;
};
struct tepor_function {
    tepor::Value value;
};
struct tepor_tiles {
    tepor::Tiles tiles;
};
struct tepor_section {
    tepor::Section section;
};
struct tepor_quantity {
    tepor::Quantity quantity;
};
struct tepor_body {
    tepor::Body body;
};
struct tepor_field {
    tepor::Field field;
};
struct tepor_march {
    tepor::March march;
    std::vector<tepor::Probe> probes;
    std::vector<tepor::Input> inputs;
};
/// A mesh whose element type is only known at run time.
struct tepor_mesh {
    tepor_mesh() = default;
    tepor_mesh(const tepor_mesh&) = delete;
    tepor_mesh& operator=(const tepor_mesh&) = delete;
    virtual ~tepor_mesh() = default;
    [[nodiscard]] virtual const tepor::MeshData& data() const = 0;
    [[nodiscard]] virtual tepor::Body body(tepor::TemperatureScale scale) const = 0;
};

namespace tepor::c {

template <std::size_t N>
void copy_text(char (&to)[N], const char* from) noexcept {
    std::size_t n = std::strlen(from);
    if (n >= N) n = N - 1;
    std::memcpy(to, from, n);
    to[n] = '\0';
}

inline tepor_status refuse(tepor_session* session, tepor_status status, const char* message,
                           const char* offender) noexcept {
    copy_text(session->message, message);
    copy_text(session->offender, offender);
    return status;
}

/// Runs a call: no exception crosses the border. The first argument is the session, `given` whether all pointers are there.
template <class Call>
tepor_status run(tepor_session* session, bool given, Call call) noexcept {
    if (!session) return TEPOR_INVALID_ARGUMENT;
    if (!given)
        return refuse(session, TEPOR_INVALID_ARGUMENT,
                      "a pointer is NULL; every handle, name and result has to be given", "");
    try {
        call();
        return TEPOR_OK;
    } catch (const Error& error) {
        return refuse(session, static_cast<tepor_status>(error.code()), error.what(), error.offender().c_str());
    } catch (const std::bad_alloc&) {
        return refuse(session, TEPOR_OUT_OF_MEMORY, "memory has run out", "");
    } catch (const std::exception& error) {
        return refuse(session, TEPOR_INTERNAL, error.what(), "");
    } catch (...) {
        return refuse(session, TEPOR_INTERNAL, "something that is no exception was thrown", "");
    }
}

[[noreturn]] inline void misuse(const std::string& what) {
    throw Error(static_cast<ErrorCode>(TEPOR_INVALID_ARGUMENT), "", what);
}

/// The C++ value of a C one.
inline Value value_of(const tepor_value& v) {
    switch (v.kind) {
    case 0: return {};
    case 1: return v.number;
    case 2:
        if (v.object) return static_cast<const tepor_parameter*>(v.object)->parameter;
        break;
    case 3:
        if (v.object) return static_cast<const tepor_function*>(v.object)->value;
        break;
    case 4: return kelvin(v.number);
    default: break;
    }
    misuse("a tepor_value is none of those that tepor_number, tepor_of, tepor_by, tepor_kelvin and tepor_nothing make");
}

/// Where only a number or a parameter makes sense, such as a thickness.
inline Number number_of(const tepor_value& v) {
    if (v.kind == 1) return v.number;
    if (v.kind == 2 && v.object) return static_cast<const tepor_parameter*>(v.object)->parameter;
    misuse("a length is a number or a parameter; make it with tepor_number or tepor_of");
}

inline Frame frame_of(const tepor_frame& frame) {
    switch (frame.kind) {
    case TEPOR_PLANAR: return Planar{frame.size, frame.size};
    case TEPOR_CYLINDRICAL: return Cylindrical{frame.size};
    case TEPOR_SPHERICAL: return Spherical{};
    default: misuse("a tepor_frame is none of those that tepor_planar, tepor_cylindrical and tepor_spherical make");
    }
}

} // namespace tepor::c
