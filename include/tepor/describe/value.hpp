#pragma once
// Value: whatever a description takes where a number is asked for.

#include <memory>
#include <tepor/base/config.hpp>
#include <tepor/describe/law.hpp>
#include <tepor/describe/number.hpp>
#include <tepor/describe/schedule.hpp>
#include <tepor/describe/table.hpp>
#include <type_traits>
#include <utility>

namespace tepor {

namespace detail {
TEPOR_INLINE std::shared_ptr<const void> hold(Parameter parameter);
TEPOR_INLINE std::shared_ptr<const void> hold(Table table);
TEPOR_INLINE std::shared_ptr<const void> hold(Law law);
TEPOR_INLINE std::shared_ptr<const void> hold(Schedule schedule);
} // namespace detail

/// A number, a Parameter, a Table, a Law or a Schedule. Default-constructed it says nothing.
class Value {
  public:
    enum class Kind { none, number, parameter, table, law, schedule };

    Value() = default;
    template <class T>
    requires std::is_arithmetic_v<T> Value(T number)
        : kind_(Kind::number), number_(static_cast<double>(number)) {} // NOLINT: all of these convert
    Value(Parameter p) : kind_(Kind::parameter), number_(p.value()), held_(detail::hold(std::move(p))) {}   // NOLINT
    Value(const Number& n) : Value(n.parameter() != nullptr ? Value(*n.parameter()) : Value(n.number())) {} // NOLINT
    Value(Table t) : kind_(Kind::table), held_(detail::hold(std::move(t))) {}                               // NOLINT
    Value(Law l) : kind_(Kind::law), held_(detail::hold(std::move(l))) {}                                   // NOLINT
    Value(Schedule s) : kind_(Kind::schedule), held_(detail::hold(std::move(s))) {}                         // NOLINT

    TEPOR_INLINE Value(const Value& other);
    Value(Value&& other) noexcept = default;
    TEPOR_INLINE Value& operator=(const Value& other);
    Value& operator=(Value&& other) noexcept = default;
    TEPOR_INLINE ~Value();

    [[nodiscard]] Kind kind() const noexcept { return kind_; }
    [[nodiscard]] bool given() const noexcept { return kind_ != Kind::none; }
    [[nodiscard]] bool is_number() const noexcept { return kind_ == Kind::number; }
    [[nodiscard]] bool is_parameter() const noexcept { return kind_ == Kind::parameter; }

    /// The number, or the value a parameter was made with; 0 for the other kinds.
    [[nodiscard]] double number() const noexcept { return number_; }
    [[nodiscard]] const Parameter& parameter() const noexcept { return held<Parameter>(); }
    [[nodiscard]] const Table& table() const noexcept { return held<Table>(); }
    [[nodiscard]] const Law& law() const noexcept { return held<Law>(); }
    [[nodiscard]] const Schedule& schedule() const noexcept { return held<Schedule>(); }

    /// Said with `kelvin(...)`: low absolute temperatures are meant.
    [[nodiscard]] bool is_kelvin() const noexcept { return kelvin_; }

  private:
    friend Value kelvin(const Number& temperature);

    template <class Held>
    [[nodiscard]] const Held& held() const noexcept {
        return *static_cast<const Held*>(held_.get());
    }

    Kind kind_ = Kind::none;
    bool kelvin_ = false;
    double number_ = 0.0;
    // One owner for all kinds: values are copied, moved and destroyed in many places.
    std::shared_ptr<const void> held_;
};

/// A low absolute temperature [K] that is meant: in a kelvin body a radiating face refuses numbers below 100 otherwise,
/// because they are nearly always degrees Celsius by mistake.
inline Value kelvin(const Number& temperature) {
    Value v(temperature);
    v.kelvin_ = true;
    return v;
}

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/describe/impl/value.hpp>
#endif
