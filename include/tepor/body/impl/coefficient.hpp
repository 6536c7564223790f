#pragma once
// Evaluation of coefficients.

#include <bit>
#include <cmath>
#include <cstdint>
#include <limits>
#include <tepor/base/processor.hpp>
#include <tepor/base/text.hpp>
#include <tepor/body/coefficient.hpp>
#include <tepor/body/table_points.hpp>

namespace tepor {

// Models are full of coefficients: their copies and ends are written once.
TEPOR_INLINE Coefficient::Coefficient() = default;
TEPOR_INLINE Coefficient::Coefficient(Value value, std::vector<Id> slots, std::string label, Range range)
    : value_(std::move(value)), slots_(std::move(slots)), label_(std::move(label)), range_(range) {}
TEPOR_INLINE Coefficient::Coefficient(const Coefficient&) = default;
TEPOR_INLINE Coefficient::Coefficient(Coefficient&&) noexcept = default;
TEPOR_INLINE Coefficient& Coefficient::operator=(const Coefficient&) = default;
TEPOR_INLINE Coefficient& Coefficient::operator=(Coefficient&&) noexcept = default;
TEPOR_INLINE Coefficient::~Coefficient() = default;

namespace detail {

/// Present values of a law's parameters: on the stack for the usual few.
class SlotGather {
  public:
    SlotGather(const std::vector<Id>& slots, const double* values) {
        double* to = few_;
        if (slots.size() > few) {
            many_.resize(slots.size());
            to = many_.data();
        }
        data_ = to;
        for (std::size_t i = 0; i < slots.size(); ++i) to[i] = values[slots[i]];
    }
    [[nodiscard]] const double* data() const noexcept { return data_; }

  private:
    static constexpr std::size_t few = 16;
    double few_[few] = {};
    std::vector<double> many_;
    const double* data_ = nullptr;
};

/// Whether values need a closer look. One pass over the bits, which vectorises where comparisons of doubles do not: the top bit is
/// the sign, one more in the exponent carries into it when the value is infinite or no number, and the bits of zero less one have it.
TEPOR_IN_BOTH bool strange(Range range, Index count, const double* value) noexcept {
    static_assert(std::numeric_limits<double>::is_iec559);
    constexpr std::uint64_t top = std::uint64_t{1} << 63U;
    constexpr std::uint64_t one_exponent = std::uint64_t{1} << 52U;
    std::uint64_t found = 0;
    if (range == Range::any) {
        for (Index i = 0; i < count; ++i) found |= (std::bit_cast<std::uint64_t>(value[i]) & ~top) + one_exponent;
    } else if (range == Range::positive) {
        for (Index i = 0; i < count; ++i) {
            const auto bits = std::bit_cast<std::uint64_t>(value[i]);
            found |= bits | (bits + one_exponent) | (bits - 1);
        }
    } else if (range == Range::not_negative) {
        for (Index i = 0; i < count; ++i) {
            const auto bits = std::bit_cast<std::uint64_t>(value[i]);
            found |= bits | (bits + one_exponent);
        }
    } else {
        return true;
    }
    return (found & top) != 0;
}

TEPOR_WIDE inline bool strange_wide(Range range, Index count, const double* value) noexcept {
    return strange(range, count, value);
}

} // namespace detail

TEPOR_INLINE const char* rule_of(Range range) noexcept {
    switch (range) {
    case Range::any: return "expected a finite number";
    case Range::positive: return "expected a number > 0";
    case Range::not_negative: return "expected a number >= 0";
    case Range::fraction: return "expected a number from 0 to 1";
    case Range::celsius_temperature: return "expected a temperature at or above absolute zero, -273.15 degC";
    case Range::kelvin_temperature: return "expected a temperature at or above 0 K";
    case Range::kelvin_radiating:
        return "expected at least 100 K outside a radiating face; write kelvin(...) in its place if less is meant";
    }
    return "";
}

TEPOR_INLINE void raise(const Fault& fault) {
    const std::string& label = fault.coefficient->label();
    std::string where = detail::text(" at (", fault.x, ", ", fault.y, ")");
    if (fault.cell >= 0) where += detail::text(" in cell ", fault.cell);
    if (fault.coefficient->depends_on_temperature()) where += detail::text(", temperature ", fault.temperature);
    if (fault.time != 0.0) where += detail::text(", time ", fault.time, " s");
    if (fault.kind == Fault::Kind::unresolved)
        throw Error(ErrorCode::not_supported, label,
                    detail::text(label, " bends too sharply for the points of the exact cell", where,
                                 "; end a layer where it bends or jumps, give the layer more cells, raise "
                                 "BodyOptions::extra_degree, or use Segment<2>"),
                    fault.cell);
    if (fault.kind == Fault::Kind::place_and_temperature)
        throw Error(ErrorCode::not_supported, label,
                    detail::text(label, " depends on place and on temperature", where,
                                 "; an ExactSegment takes one of the two, use Segment<2> for both"),
                    fault.cell);
    const bool own = fault.coefficient->value().kind() == Value::Kind::law;
    const std::string name = own ? fault.coefficient->value().law().name() : label;
    if (fault.kind == Fault::Kind::law_stopped)
        throw Error(ErrorCode::bad_law, name,
                    detail::text(label, ": ", name, " stopped with status ", fault.status, where), fault.cell);
    const std::string rule =
        fault.kind == Fault::Kind::out_of_range ? rule_of(fault.coefficient->range()) : "expected a finite number";
    if (own)
        throw Error(
            ErrorCode::bad_law, name,
            detail::text(label, ": ", name, " returned ", fault.value, where, ", ", rule, "; guard the law there"),
            fault.cell);
    throw Error(ErrorCode::bad_value, label,
                detail::text(label, " = ", fault.value, where, ", ", rule, "; check value and unit"), fault.cell);
}

TEPOR_INLINE double Coefficient::uniform_value(const double* slot_values, TimeSpan time) const {
    switch (value_.kind()) {
    case Value::Kind::number: return value_.number();
    case Value::Kind::parameter: return slot_values[slots_[0]];
    case Value::Kind::schedule:
        return time.before && time.from == time.to ? value_.schedule().before(time.to)
                                                   : value_.schedule().mean(time.from, time.to);
    case Value::Kind::law: {
        const double nowhere = 0.0;
        const Points one{1, nullptr, nullptr, &nowhere, &nowhere};
        double v = 0.0;
        if (const Fault fault = evaluate(slot_values, time, one, &v, nullptr)) raise(fault);
        return v;
    }
    default: return 0.0;
    }
}

TEPOR_INLINE int Coefficient::call(const double* slot_values, double time, const Points& points, double* value,
                                   double* slope) const {
    const Law& law = value_.law();
    const detail::SlotGather parameters(slots_, slot_values);
    const LawPoints at{points.count, points.temperature, points.fluid, points.x, points.y, time, parameters.data()};
    return law.function().evaluate(at, value, law.uses().temperature ? slope : nullptr);
}

TEPOR_INLINE Fault Coefficient::evaluate(const double* slot_values, TimeSpan time, const Points& points, double* value,
                                         double* slope) const {
    const Index n = points.count;
    if (slope && !depends_on_temperature())
        for (Index i = 0; i < n; ++i) slope[i] = 0.0;
    switch (value_.kind()) {
    case Value::Kind::none:
        for (Index i = 0; i < n; ++i) value[i] = 0.0;
        return {};
    case Value::Kind::number:
    case Value::Kind::parameter:
    case Value::Kind::schedule: {
        const double v = uniform_value(slot_values, time);
        for (Index i = 0; i < n; ++i) value[i] = v;
        return check({1, points.temperature, points.fluid, points.x, points.y}, time, value);
    }
    case Value::Kind::table: {
        const auto& p = value_.table().points();
        if (p.size() <= detail::ShortTable::most) {
            detail::ShortTable(p, slots_, slot_values).read(n, points.temperature, value, slope);
            return check(points, time, value);
        }
        for (Index i = 0; i < n; ++i) {
            const double t = points.temperature[i];
            const std::size_t at = detail::table_interval(p, t);
            const double here = detail::table_entry(p[at], slots_[at], slot_values);
            if (at + 1 == p.size() || t < p[0].at) {
                value[i] = here; // held flat outside; the range is judged on the converged field
                if (slope) slope[i] = 0.0;
                continue;
            }
            const double next = detail::table_entry(p[at + 1], slots_[at + 1], slot_values);
            const double rise = (next - here) / (p[at + 1].at - p[at].at);
            value[i] = here + rise * (t - p[at].at);
            if (slope) slope[i] = rise;
        }
        return check(points, time, value);
    }
    case Value::Kind::law: {
        const bool over_step = value_.law().uses().time && time.to > time.from && time.theta < 1.0;
        int status = call(slot_values, time.to, points, value, slope);
        if (status == 0 && over_step) {
            // the step's start weighs 1 - theta; done in pieces that fit the stack
            constexpr Index piece = 128;
            double early[piece];
            double early_slope[piece];
            for (Index from = 0; from < n && status == 0; from += piece) {
                const Index m = n - from < piece ? n - from : piece;
                const auto moved = [from](const double* a) { return a ? a + from : nullptr; };
                const Points part{m, moved(points.temperature), moved(points.fluid), points.x + from, points.y + from};
                status = call(slot_values, time.from, part, early, slope ? early_slope : nullptr);
                for (Index i = 0; i < m; ++i) {
                    value[from + i] = time.theta * value[from + i] + (1.0 - time.theta) * early[i];
                    if (slope && depends_on_temperature())
                        slope[from + i] = time.theta * slope[from + i] + (1.0 - time.theta) * early_slope[i];
                }
            }
        }
        if (status != 0) {
            Fault fault;
            fault.kind = Fault::Kind::law_stopped;
            fault.coefficient = this;
            fault.status = status;
            fault.point = 0;
            fault.x = points.x[0];
            fault.y = points.y[0];
            fault.temperature = points.temperature ? points.temperature[0] : 0.0;
            fault.time = time.to;
            return fault;
        }
        Fault fault = check(points, time, value);
        if (fault || !slope || !depends_on_temperature()) return fault;
        // a slope that cannot be used (differences that reach beyond a law's domain) would look like a singular matrix
        for (Index i = 0; i < n; ++i)
            if (!std::isfinite(slope[i])) {
                fault.kind = Fault::Kind::not_finite;
                fault.coefficient = this;
                fault.point = i;
                fault.value = slope[i];
                fault.temperature = points.temperature ? points.temperature[i] : 0.0;
                fault.x = points.x[i];
                fault.y = points.y[i];
                fault.time = time.to;
                break;
            }
        return fault;
    }
    }
    return {};
}

TEPOR_INLINE Fault Coefficient::check(const Points& points, TimeSpan time, const double* value) const noexcept {
    if (!(detail::wide_processor() ? detail::strange_wide(range_, points.count, value)
                                   : detail::strange(range_, points.count, value)))
        return {};
    for (Index i = 0; i < points.count; ++i) {
        if (allows(value[i])) continue;
        Fault fault;
        fault.kind = std::isfinite(value[i]) ? Fault::Kind::out_of_range : Fault::Kind::not_finite;
        fault.coefficient = this;
        fault.point = i;
        fault.value = value[i];
        fault.temperature = points.temperature ? points.temperature[i] : 0.0;
        fault.x = points.x[i];
        fault.y = points.y[i];
        fault.time = time.to;
        return fault;
    }
    return {};
}

TEPOR_INLINE void Coefficient::slot_derivative(Id slot, const double* slot_values, TimeSpan time, const Points& points,
                                               double* derivative) const {
    const Index n = points.count;
    for (Index i = 0; i < n; ++i) derivative[i] = 0.0;
    switch (value_.kind()) {
    case Value::Kind::parameter:
        if (slots_[0] == slot)
            for (Index i = 0; i < n; ++i) derivative[i] = 1.0;
        return;
    case Value::Kind::table: {
        const auto& p = value_.table().points();
        for (Index i = 0; i < n; ++i) {
            const double t = points.temperature[i];
            const std::size_t at = detail::table_interval(p, t);
            double s = 0.0;
            if (at + 1 < p.size() && t >= p[0].at) s = (t - p[at].at) / (p[at + 1].at - p[at].at);
            if (slots_[at] == slot) derivative[i] += 1.0 - s;
            if (at + 1 < p.size() && slots_[at + 1] == slot) derivative[i] += s;
        }
        return;
    }
    case Value::Kind::law:
        for (std::size_t j = 0; j < slots_.size(); ++j) {
            if (slots_[j] != slot) continue;
            std::vector<double> one(detail::as_size(n));
            lane_derivative(law_parameter_lane + static_cast<int>(j), slot_values, time, points, one.data());
            for (Index i = 0; i < n; ++i) derivative[i] += one[detail::as_size(i)];
        }
        return;
    default: return;
    }
}

TEPOR_INLINE void Coefficient::lane_derivatives(const double* slot_values, TimeSpan time, const Points& points,
                                                std::vector<double>& derivative) const {
    const Law& law = value_.law();
    const detail::SlotGather parameters(slots_, slot_values);
    const auto entries = detail::as_size((law_parameter_lane + static_cast<Index>(slots_.size())) * points.count);
    const auto call_at = [&](double at, std::vector<double>& out) {
        out.resize(entries);
        const LawPoints where{points.count, points.temperature, points.fluid, points.x, points.y,
                              at,           parameters.data()};
        if (const int status = law.function().derivatives(where, out.data()); status != 0)
            throw Error(ErrorCode::bad_law, law.name(),
                        detail::text(label_, ": the derivatives of ", law.name(), " stopped with status ", status));
    };
    call_at(time.to, derivative);
    if (!(law.uses().time && time.to > time.from && time.theta < 1.0)) return;
    std::vector<double> early;
    call_at(time.from, early);
    for (std::size_t i = 0; i < entries; ++i)
        derivative[i] = time.theta * derivative[i] + (1.0 - time.theta) * early[i];
}

TEPOR_INLINE void Coefficient::lane_derivative(int lane, const double* slot_values, TimeSpan time, const Points& points,
                                               double* derivative) const {
    const Index n = points.count;
    for (Index i = 0; i < n; ++i) derivative[i] = 0.0;
    if (value_.kind() != Value::Kind::law) return;
    std::vector<double> all;
    lane_derivatives(slot_values, time, points, all);
    for (Index i = 0; i < n; ++i) derivative[i] = all[detail::as_size(lane * n + i)];
}

TEPOR_INLINE double Coefficient::integral_over_temperature(const double* slot_values, TimeSpan time, double low,
                                                           double high) const {
    if (low == high) return 0.0;
    if (low > high) return -integral_over_temperature(slot_values, time, high, low);
    // Gauss-Legendre with 5 points between the kinks of a table, or on 8 equal pieces of a law; nodes and weights: DLMF 3.5(v)
    static constexpr double place[5] = {0.046910077030668, 0.230765344947158, 0.5, 0.769234655052842,
                                        0.953089922969332};
    static constexpr double weight[5] = {0.118463442528095, 0.239314335249683, 0.284444444444444, 0.239314335249683,
                                         0.118463442528095};
    const auto piece = [&](double a, double b) {
        double T[5];
        double value[5];
        static constexpr double zero[5] = {};
        for (int i = 0; i < 5; ++i) T[i] = a + (b - a) * place[i];
        if (const Fault fault = evaluate(slot_values, time, {5, T, nullptr, zero, zero}, value, nullptr)) raise(fault);
        double sum = 0.0;
        for (int i = 0; i < 5; ++i) sum += weight[i] * value[i];
        return sum * (b - a);
    };
    double total = 0.0;
    if (value_.kind() == Value::Kind::table) {
        double from = low;
        for (const TablePoint& p : value_.table().points())
            if (p.at > from && p.at < high) {
                total += piece(from, p.at);
                from = p.at;
            }
        return total + piece(from, high);
    }
    constexpr int pieces = 8;
    for (int i = 0; i < pieces; ++i) {
        const double step = (high - low) / pieces;
        total += piece(low + i * step, i + 1 == pieces ? high : low + (i + 1) * step);
    }
    return total;
}

} // namespace tepor
