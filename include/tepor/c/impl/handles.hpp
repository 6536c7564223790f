#pragma once
// What the C handles hold, and the one gate through which every call runs.

#include <algorithm>
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
    tepor::Drawn last{};
    std::vector<tepor::NamedSize> size_in{};
    std::vector<tepor::NamedSize> size_on{};
    tepor::SizeLaw size_by{};
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
    std::vector<tepor::Probe> probes{};
    std::vector<tepor::Input> inputs{};
    std::vector<tepor::Integral> integrals{};
    std::vector<tepor::Peak> peaks{};
};
struct tepor_checkpoint {
    tepor::Checkpoint checkpoint;
};
struct tepor_text {
    std::string text;
};
/// A mesh whose element type is only known at run time.
struct tepor_mesh {
    tepor_mesh() = default;
    tepor_mesh(const tepor_mesh&) = delete;
    tepor_mesh& operator=(const tepor_mesh&) = delete;
    virtual ~tepor_mesh() = default;
    [[nodiscard]] virtual const tepor::MeshData& data() const = 0;
    [[nodiscard]] virtual tepor::Body body(const tepor::BodyOptions& options) const = 0;
    /// The statements of another body on this mesh.
    [[nodiscard]] virtual tepor::Body body(const tepor::Body& like) const = 0;
    [[nodiscard]] virtual tepor_mesh* finer() const = 0;
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

/// Copies what the caller's struct has room for: `size` leads every struct that may grow.
template <class Struct>
void give(Struct full, Struct* to) {
    const std::size_t room = to->size;
    if (room < sizeof(std::size_t)) misuse("set `size` of the result to sizeof its type before the call");
    full.size = room;
    std::memcpy(to, &full, std::min(room, sizeof full));
}

/// Takes what the caller's struct holds over the defaults in `full`.
template <class Struct>
void take(const Struct* given, Struct& full) {
    if (given->size < sizeof(std::size_t)) misuse("set `size` of the struct to sizeof its type before the call");
    std::memcpy(&full, given, std::min(given->size, sizeof full));
}

inline void copy_out(const std::vector<double>& from, double* to, std::size_t entries) {
    if (entries != from.size())
        misuse(tepor::detail::text("the array has ", entries, " entries, expected ", from.size()));
    std::copy(from.begin(), from.end(), to);
}

/// A remark beside a result that is there, where the session's message stands.
inline void remark(tepor_session* session, const std::string& words) noexcept {
    copy_text(session->message, words.c_str());
    copy_text(session->offender, "");
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
