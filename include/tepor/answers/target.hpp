#pragma once
// Target: what a quantity is to be, to stay below or to reach.

#include <type_traits>

namespace tepor {

/// A value to meet, or a limit to keep. Plain numbers are values to meet.
struct Target {
    enum class Kind { equal, at_most, at_least };

    template <class T>
    requires std::is_arithmetic_v<T> Target(T number)
        : value(static_cast<double>(number)) {} // NOLINT: a number is a target
    Target(Kind what, double number) : kind(what), value(number) {}

    Kind kind = Kind::equal;
    double value = 0.0;

    [[nodiscard]] bool limit() const noexcept { return kind != Kind::equal; }
    /// The limit is kept (never true of a value to meet, except by accident).
    [[nodiscard]] bool kept_by(double q) const noexcept {
        return kind == Kind::at_most ? q <= value : (kind == Kind::at_least ? q >= value : q == value);
    }
};

/// The quantity may be this at most.
inline Target at_most(double value) {
    return {Target::Kind::at_most, value};
}
/// The quantity must be this at least.
inline Target at_least(double value) {
    return {Target::Kind::at_least, value};
}

} // namespace tepor
