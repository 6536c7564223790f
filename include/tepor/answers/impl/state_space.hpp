#pragma once
// Running a small model, and writing it as C.

#include <charconv>
#include <complex>
#include <tepor/answers/impl/dense.hpp>
#include <tepor/answers/state_space.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>

namespace tepor {

TEPOR_INLINE void StateSpace::reset() {
    x_ = x0;
    next_.assign(x0.size(), 0.0);
    y_ = y0;
}

// Column by column, so that the C source can be told to sum in the same order.
TEPOR_INLINE void StateSpace::advance(const double* u, double* y) noexcept {
    const Index n = order;
    double* next = next_.data();
    const double* x = x_.data();
    for (Index i = 0; i < n; ++i) next[i] = 0.0;
    for (Index j = 0; j < n; ++j)
        for (Index i = 0; i < n; ++i) next[i] += A[detail::as_size(i * n + j)] * x[j];
    for (Index j = 0; j < inputs; ++j) {
        const double d = u[j] - u0[detail::as_size(j)];
        for (Index i = 0; i < n; ++i) next[i] += B[detail::as_size(i * inputs + j)] * d;
    }
    x_.swap(next_);
    x = x_.data();
    for (Index i = 0; i < outputs; ++i) y[i] = y0[detail::as_size(i)];
    for (Index j = 0; j < n; ++j)
        for (Index i = 0; i < outputs; ++i) y[i] += C[detail::as_size(i * n + j)] * x[j];
    for (Index j = 0; j < inputs; ++j) {
        const double d = u[j] - u0[detail::as_size(j)];
        for (Index i = 0; i < outputs; ++i) y[i] += D[detail::as_size(i * inputs + j)] * d;
    }
}

TEPOR_INLINE StateSpace::Gain StateSpace::gain(Index i, Index j, double w) const {
    // (i w - Ac) x = Bc column as a real system of twice the size
    const auto n = detail::as_size(order);
    detail::Dense S(2 * n, 2 * n);
    detail::Dense b(2 * n, 1);
    for (std::size_t r = 0; r < n; ++r) {
        for (std::size_t c = 0; c < n; ++c) S(r, c) = S(n + r, n + c) = -Ac[r * n + c];
        S(r, n + r) -= w;
        S(n + r, r) += w;
        b(r, 0) = Bc[r * detail::as_size(inputs) + detail::as_size(j)];
    }
    const detail::Dense x = detail::solve(std::move(S), std::move(b));
    Gain out{D[detail::as_size(i * inputs + j)], 0.0};
    for (std::size_t c = 0; c < n; ++c) {
        out.re += C[detail::as_size(i) * n + c] * x(c, 0);
        out.im += C[detail::as_size(i) * n + c] * x(n + c, 0);
    }
    return out;
}

TEPOR_INLINE double StateSpace::steady_gain(Index i, Index j) const {
    return gain(i, j, 0.0).re;
}

namespace detail {

/// A double as a C99 hexadecimal constant: exact, and read alike by every compiler.
inline std::string hexadecimal(double v) {
    char buffer[40];
    const bool negative = v < 0.0 || (v == 0.0 && 1.0 / v < 0.0);
    const auto end = std::to_chars(buffer, buffer + sizeof buffer, negative ? -v : v, std::chars_format::hex).ptr;
    return (negative ? "-0x" : "0x") + std::string(buffer, end);
}

inline std::string exact_decimal(double v) {
    char buffer[40];
    const auto end = std::to_chars(buffer, buffer + sizeof buffer, v).ptr;
    return std::string(buffer, end);
}

/// One constant array, column by column.
inline void c_array(std::string& out, const std::string& name, const std::vector<double>& values, Index rows,
                    Index columns) {
    if (rows * columns == 0) {
        out += "static const double " + name + "[1] = {0.0};\n";
        return;
    }
    out += text("static const double ", name, "[", rows * columns, "] = {");
    Index written = 0;
    for (Index j = 0; j < columns; ++j)
        for (Index i = 0; i < rows; ++i, ++written) {
            out += written % 4 == 0 ? "\n    " : " ";
            out += hexadecimal(values[as_size(i * columns + j)]);
            if (written + 1 < rows * columns) out += ",";
        }
    out += "};\n";
}

/// Text inside a C comment.
inline std::string commented(const std::string& words) {
    std::string out;
    for (const char c : words) out += c == '*' || c == '/' || c == '\\' || c == '\n' || c == '?' ? ' ' : c;
    return out;
}

inline bool c_identifier(const std::string& name) {
    if (name.empty() || (name[0] >= '0' && name[0] <= '9')) return false;
    for (const char c : name)
        if (!((c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '_')) return false;
    return true;
}

} // namespace detail

TEPOR_INLINE std::string StateSpace::c_source(const std::string& name) const {
    using detail::text;
    if (!detail::c_identifier(name))
        throw Error(ErrorCode::bad_name, name,
                    text("c_source: \"", name, "\" is no C identifier; use letters, digits and underscores"));
    std::string out = text("/* ", order, " states, step ", sample_time, " s. Inputs:");
    for (Index j = 0; j < inputs; ++j)
        out += text(j > 0 ? "; " : " ", detail::commented(input_names[detail::as_size(j)]));
    out += ".\n   Outputs:";
    for (Index i = 0; i < outputs; ++i)
        out += text(i > 0 ? "; " : " ", detail::commented(output_names[detail::as_size(i)]), " [",
                    output_units[detail::as_size(i)], "]");
    out += text(".\n   Error at most ", error_bound, " of a peak gain of ", peak_gain,
                " (scaled L2 norms; C99, sums in a fixed order). */\n");
    out += "#include <stddef.h>\n\n";
    detail::c_array(out, name + "_A", A, order, order);
    detail::c_array(out, name + "_B", B, order, inputs);
    detail::c_array(out, name + "_C", C, outputs, order);
    detail::c_array(out, name + "_D", D, outputs, inputs);
    detail::c_array(out, name + "_u0", u0, inputs, 1);
    detail::c_array(out, name + "_y0", y0, outputs, 1);
    detail::c_array(out, name + "_x0", x0, order, 1);
    const Index n = order;
    const Index states = n > 0 ? n : 1;
    out += text("\ntypedef struct {\n    double x[", states, "];\n} ", name, "_state;\n\n");
    out += text("void ", name, "_reset(", name, "_state *s) {\n    size_t i;\n    for (i = 0; i < ", n,
                "; ++i) s->x[i] = ", name, "_x0[i];\n}\n\n");
    out += text("/* u: ", inputs, " inputs held over the step; y: ", outputs, " outputs at its end */\n");
    out += text("void ", name, "_advance(", name, "_state *s, const double *u, double *y) {\n    double next[", states,
                "];\n    size_t i, j;\n");
    out += text("    for (i = 0; i < ", n, "; ++i) next[i] = 0.0;\n");
    out += text("    for (j = 0; j < ", n, "; ++j)\n        for (i = 0; i < ", n, "; ++i) next[i] += ", name, "_A[j * ",
                n, " + i] * s->x[j];\n");
    out +=
        text("    for (j = 0; j < ", inputs, "; ++j) {\n        const double d = u[j] - ", name,
             "_u0[j];\n        for (i = 0; i < ", n, "; ++i) next[i] += ", name, "_B[j * ", n, " + i] * d;\n    }\n");
    out += text("    for (i = 0; i < ", n, "; ++i) s->x[i] = next[i];\n");
    out += text("    for (i = 0; i < ", outputs, "; ++i) y[i] = ", name, "_y0[i];\n");
    out += text("    for (j = 0; j < ", n, "; ++j)\n        for (i = 0; i < ", outputs, "; ++i) y[i] += ", name,
                "_C[j * ", outputs, " + i] * s->x[j];\n");
    out += text("    for (j = 0; j < ", inputs, "; ++j) {\n        const double d = u[j] - ", name,
                "_u0[j];\n        for (i = 0; i < ", outputs, "; ++i) y[i] += ", name, "_D[j * ", outputs,
                " + i] * d;\n    }\n}\n");
    return out;
}

TEPOR_INLINE std::string StateSpace::csv() const {
    std::string out = "name,row,values\n";
    const auto matrix = [&out](const char* name, const std::vector<double>& values, Index rows, Index columns) {
        for (Index i = 0; i < rows; ++i) {
            out += detail::text(name, ",", i);
            for (Index j = 0; j < columns; ++j) {
                out += ',';
                out += detail::exact_decimal(values[detail::as_size(i * columns + j)]);
            }
            out += "\n";
        }
    };
    matrix("A", A, order, order);
    matrix("B", B, order, inputs);
    matrix("C", C, outputs, order);
    matrix("D", D, outputs, inputs);
    matrix("x0", x0, order, 1);
    matrix("u0", u0, inputs, 1);
    matrix("y0", y0, outputs, 1);
    matrix("sample_time", {sample_time}, 1, 1);
    matrix("error_bound", {error_bound}, 1, 1);
    return out;
}

} // namespace tepor
