#pragma once
// A number or a Parameter.

#include <concepts>
#include <tepor/describe/parameter.hpp>
#include <utility>

namespace tepor {

/// What stands in a table: a plain number or a Parameter.
class Number {
  public:
    template <class T>
    requires std::is_arithmetic_v<T> Number(T number)
        : number_(static_cast<double>(number)) {} // NOLINT: a number is a Number
    Number(Parameter parameter) : number_(parameter.value()), parameter_(std::move(parameter)) {} // NOLINT

    /// The plain number, or the value the parameter was made with.
    [[nodiscard]] double number() const noexcept { return number_; }
    /// The parameter, null when it is a plain number.
    [[nodiscard]] const Parameter* parameter() const noexcept { return parameter_.given() ? &parameter_ : nullptr; }

  private:
    double number_;
    Parameter parameter_{Parameter::Nothing{}};
};

} // namespace tepor
