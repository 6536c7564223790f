#pragma once
// Coefficient: a Value compiled for one body, its parameters turned into slots, evaluated on batches of points.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/base/error.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/describe/value.hpp>
#include <vector>

namespace tepor {

/// The instant (from == to) or the step a coefficient is evaluated for. Over a step schedules give their exact mean, and
/// functions of time (1 - theta) of their value at its start and theta of that at its end. At an instant a schedule that jumps
/// there gives the value after its jump, or before it where `before` says so.
struct TimeSpan {
    double from = 0.0;
    double to = 0.0;
    double theta = 1.0;
    bool before = false;
};

/// What a coefficient may be.
enum class Range {
    any,
    positive,
    not_negative,
    fraction,            ///< 0 to 1
    celsius_temperature, ///< at or above absolute zero in degC
    kelvin_temperature,  ///< at or above 0 K
    kelvin_radiating     ///< outside a radiating face, at or above 100 K: less is nearly always degrees Celsius
};

/// A batch of points: arrays of `count` entries.
struct Points {
    Index count = 0;
    const double* temperature = nullptr; ///< body's scale; null when not at hand (then nothing may depend on it)
    const double* fluid = nullptr;
    const double* x = nullptr;
    const double* y = nullptr;
};

class Coefficient;

/// Why an evaluation cannot be used; kept as plain data because marching neither throws nor allocates.
struct Fault {
    enum class Kind {
        none,
        not_finite,
        out_of_range,
        law_stopped,
        unresolved,           ///< the points of an exact cell cannot follow it
        place_and_temperature ///< a conductivity of both, which the exact cell does not take
    };
    Kind kind = Kind::none;
    const Coefficient* coefficient = nullptr;
    Index point = -1; ///< position in the batch
    Index cell = -1;  ///< the cell in the user's numbering, filled by who knows it
    double value = 0.0;
    double temperature = 0.0;
    double x = 0.0;
    double y = 0.0;
    double time = 0.0;
    int status = 0; ///< what the law returned
    explicit operator bool() const noexcept { return kind != Kind::none; }
};

/// The rule of a range in words, such as `expected a number > 0`.
[[nodiscard]] TEPOR_INLINE const char* rule_of(Range range) noexcept;

/// Throws the Error a fault stands for: bad_value, or bad_law with name, cell, place and temperature.
[[noreturn]] TEPOR_INLINE void raise(const Fault& fault);

/// A Value with slots for its parameters. Immutable after compilation; evaluation allocates nothing (laws with more than
/// 16 parameters excepted).
class Coefficient {
  public:
    [[gnu::cold]] TEPOR_INLINE Coefficient();

    /// @param slots  slot of each parameter in the order the value lists them
    /// @param label  for messages, such as `conductivity of "backing"`
    [[gnu::cold]] TEPOR_INLINE Coefficient(Value value, std::vector<Id> slots, std::string label, Range range);
    [[gnu::cold]] TEPOR_INLINE Coefficient(const Coefficient& other);
    [[gnu::cold]] TEPOR_INLINE Coefficient(Coefficient&& other) noexcept;
    [[gnu::cold]] TEPOR_INLINE Coefficient& operator=(const Coefficient& other);
    [[gnu::cold]] TEPOR_INLINE Coefficient& operator=(Coefficient&& other) noexcept;
    [[gnu::cold]] TEPOR_INLINE ~Coefficient();

    [[nodiscard]] bool given() const noexcept { return value_.given(); }
    [[nodiscard]] const Value& value() const noexcept { return value_; }
    [[nodiscard]] const std::string& label() const noexcept { return label_; }
    [[nodiscard]] const std::vector<Id>& slots() const noexcept { return slots_; }
    [[nodiscard]] Range range() const noexcept { return range_; }

    /// The same value at all points whatever the temperature.
    [[nodiscard]] bool uniform() const noexcept {
        return value_.kind() != Value::Kind::table &&
               !(value_.kind() == Value::Kind::law &&
                 (value_.law().uses().temperature || value_.law().uses().place || !value_.law().parameters().empty()));
    }
    [[nodiscard]] bool depends_on_temperature() const noexcept {
        return value_.kind() == Value::Kind::table ||
               (value_.kind() == Value::Kind::law && value_.law().uses().temperature);
    }
    [[nodiscard]] bool depends_on_time() const noexcept {
        return value_.kind() == Value::Kind::schedule ||
               (value_.kind() == Value::Kind::law && value_.law().uses().time);
    }
    [[nodiscard]] bool depends_on(Id slot) const noexcept {
        for (const Id s : slots_)
            if (s == slot) return true;
        return false;
    }

    /// Value of a uniform coefficient.
    [[nodiscard]] TEPOR_INLINE double uniform_value(const double* slot_values, TimeSpan time) const;

    /// Values and, when `slope` is not null, derivatives by temperature at all points.
    [[nodiscard]] TEPOR_INLINE Fault evaluate(const double* slot_values, TimeSpan time, const Points& points,
                                              double* value, double* slope) const;

    /// Derivative by one slot at all points (zero where it does not depend on it).
    TEPOR_INLINE void slot_derivative(Id slot, const double* slot_values, TimeSpan time, const Points& points,
                                      double* derivative) const;

    /// All derivatives of a law: `derivative[lane * points.count + i]` for the lanes of LawLane. Only for laws.
    /// @throws Error bad_law  the law stopped
    TEPOR_INLINE void lane_derivatives(const double* slot_values, TimeSpan time, const Points& points,
                                       std::vector<double>& derivative) const;

    /// Derivative of a law by place and by the fluid's temperature, for moving nodes and parameters behind a film law:
    /// lane as in LawLane. Zero for the other kinds.
    TEPOR_INLINE void lane_derivative(int lane, const double* slot_values, TimeSpan time, const Points& points,
                                      double* derivative) const;

    /// Integral of the value over temperature from `low` to `high`, for the exact cell with k(T) (place is not told).
    [[nodiscard]] TEPOR_INLINE double integral_over_temperature(const double* slot_values, TimeSpan time, double low,
                                                                double high) const;

    /// The temperature lies within the range of a table that refuses to be read outside it.
    [[nodiscard]] bool covers(double temperature) const noexcept {
        if (value_.kind() != Value::Kind::table || value_.table().outside() == Outside::hold) return true;
        // a temperature held at the table's end may come back from a solve a rounding beyond it
        const double first = value_.table().first();
        const double last = value_.table().last();
        const double slack = 1e-9 * (1.0 + (last > -first ? last : -first));
        return temperature >= first - slack && temperature <= last + slack;
    }

    /// Checks a value against the range.
    [[nodiscard]] bool allows(double v) const noexcept {
        switch (range_) {
        case Range::any: return v - v == 0.0;
        case Range::positive: return v > 0.0 && v - v == 0.0;
        case Range::not_negative: return v >= 0.0 && v - v == 0.0;
        case Range::fraction: return v >= 0.0 && v <= 1.0;
        case Range::celsius_temperature: return v >= -zero_celsius && v - v == 0.0;
        case Range::kelvin_temperature: return v >= 0.0 && v - v == 0.0;
        case Range::kelvin_radiating: return v >= 100.0 && v - v == 0.0;
        }
        return false;
    }

  private:
    [[nodiscard]] TEPOR_INLINE Fault check(const Points& points, TimeSpan time, const double* value) const noexcept;
    [[nodiscard]] TEPOR_INLINE int call(const double* slot_values, double time, const Points& points, double* value,
                                        double* slope) const;

    Value value_;
    std::vector<Id> slots_;
    std::string label_;
    Range range_ = Range::any;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/body/impl/coefficient.hpp>
#endif
