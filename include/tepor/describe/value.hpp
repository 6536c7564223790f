#pragma once
// Value: whatever a description takes where a number is asked for.

#include <memory>
#include <optional>
#include <tepor/describe/law.hpp>
#include <tepor/describe/number.hpp>
#include <tepor/describe/schedule.hpp>
#include <tepor/describe/table.hpp>
#include <type_traits>
#include <utility>

namespace tepor {

/// A number, a Parameter, a Table, a Law or a Schedule. Default-constructed it says nothing.
class Value {
  public:
    enum class Kind { none, number, parameter, table, law, schedule };

    Value() = default;
    template <class T>
    requires std::is_arithmetic_v<T> Value(T number)
        : kind_(Kind::number), number_(static_cast<double>(number)) {} // NOLINT: all of these convert
    Value(Parameter p) : kind_(Kind::parameter), number_(p.value()), parameter_(std::move(p)) {}            // NOLINT
    Value(Number n) : Value(n.parameter() ? Value(*n.parameter()) : Value(n.number())) {}                   // NOLINT
    Value(Table t) : kind_(Kind::table), table_(std::make_shared<const Table>(std::move(t))) {}             // NOLINT
    Value(Law l) : kind_(Kind::law), law_(std::make_shared<const Law>(std::move(l))) {}                     // NOLINT
    Value(Schedule s) : kind_(Kind::schedule), schedule_(std::make_shared<const Schedule>(std::move(s))) {} // NOLINT

    [[nodiscard]] Kind kind() const noexcept { return kind_; }
    [[nodiscard]] bool given() const noexcept { return kind_ != Kind::none; }
    [[nodiscard]] bool is_number() const noexcept { return kind_ == Kind::number; }
    [[nodiscard]] bool is_parameter() const noexcept { return kind_ == Kind::parameter; }

    /// The number, or the value a parameter was made with; 0 for the other kinds.
    [[nodiscard]] double number() const noexcept { return number_; }
    [[nodiscard]] const Parameter& parameter() const noexcept { return *parameter_; }
    [[nodiscard]] const Table& table() const noexcept { return *table_; }
    [[nodiscard]] const Law& law() const noexcept { return *law_; }
    [[nodiscard]] const Schedule& schedule() const noexcept { return *schedule_; }

    /// Said with `kelvin(...)`: low absolute temperatures are meant.
    [[nodiscard]] bool is_kelvin() const noexcept { return kelvin_; }

  private:
    friend Value kelvin(Number temperature);

    Kind kind_ = Kind::none;
    bool kelvin_ = false;
    double number_ = 0.0;
    std::optional<Parameter> parameter_;
    std::shared_ptr<const Table> table_;
    std::shared_ptr<const Law> law_;
    std::shared_ptr<const Schedule> schedule_;
};

/// A low absolute temperature [K] that is meant: in a kelvin body a radiating face refuses numbers below 100 otherwise,
/// because they are nearly always degrees Celsius by mistake.
inline Value kelvin(Number temperature) {
    Value v(std::move(temperature));
    v.kelvin_ = true;
    return v;
}

} // namespace tepor
