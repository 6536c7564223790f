#pragma once
// Sensible heat between two temperatures: exact for tables, by Gauss points for laws.

#include <algorithm>
#include <limits>
#include <tepor/base/text.hpp>
#include <tepor/body/enthalpy.hpp>

namespace tepor {

TEPOR_INLINE Enthalpy::Enthalpy(const RegionModel& region, const Values& values)
    : region_(&region), lowest_(-std::numeric_limits<double>::infinity()),
      highest_(std::numeric_limits<double>::infinity()) {
    using detail::text;
    const auto need = [&](const Coefficient& c, const char* what, const char* member) {
        if (!c.given())
            throw Error(ErrorCode::missing, region.name,
                        text("region \"", region.name, "\" has no ", what, ", which stored heat needs; say Material{.",
                             member, " = ...}"));
        if (c.value().kind() == Value::Kind::schedule)
            throw Error(ErrorCode::not_supported, region.name,
                        text(c.label(), " is a schedule, but stored heat must not depend on time; use a number, a "
                                        "Parameter, a table or a law of temperature"));
    };
    need(region.density, "density", "density");
    need(region.specific_heat, "specific heat", "specific_heat");
    constant_ = !region.density.depends_on_temperature() && !region.specific_heat.depends_on_temperature();
    const auto plain = [](const Coefficient& c) { return c.value().kind() != Value::Kind::law; };
    tabled_ = !constant_ && plain(region.density) && plain(region.specific_heat);
    if (tabled_) {
        const auto knots = [&](const Coefficient& c, std::vector<Knot>& out) {
            if (c.value().kind() != Value::Kind::table) {
                out.push_back({0.0, c.uniform_value(values.slots.data(), {})});
                return;
            }
            const auto& points = c.value().table().points();
            for (std::size_t i = 0; i < points.size(); ++i) {
                const Id slot = c.slots()[i];
                out.push_back(
                    {points[i].at, slot < 0 ? points[i].value.number() : values.slots[detail::as_size(slot)]});
                kinks_.push_back(points[i].at);
            }
        };
        knots(region.density, density_);
        knots(region.specific_heat, specific_heat_);
        std::sort(kinks_.begin(), kinks_.end());
        kinks_.erase(std::unique(kinks_.begin(), kinks_.end()), kinks_.end());
    }
    for (const Coefficient* c : {&region.density, &region.specific_heat})
        if (c->value().kind() == Value::Kind::table && c->value().table().outside() == Outside::refuse) {
            lowest_ = std::max(lowest_, c->value().table().first());
            highest_ = std::min(highest_, c->value().table().last());
        }
    if (!region.latent.given()) return;
    for (const Coefficient* c : {&region.latent, &region.solidus, &region.liquidus})
        if (!c->uniform() || c->depends_on_time())
            throw Error(ErrorCode::not_supported, region.name,
                        text(c->label(),
                             " must be a number or a Parameter; a range of temperature is said with solidus "
                             "and liquidus"));
    latent_heat_ = region.latent.uniform_value(values.slots.data(), {});
    solidus_ = region.solidus.uniform_value(values.slots.data(), {});
    liquidus_ = region.liquidus.uniform_value(values.slots.data(), {});
    if (!(solidus_ <= liquidus_))
        throw Error(ErrorCode::bad_value, region.name,
                    text("latent heat of \"", region.name, "\": solidus = ", solidus_,
                         " lies above liquidus = ", liquidus_, "; swap them"));
}

inline double Enthalpy::read(const std::vector<Knot>& knots, double T) noexcept {
    if (T <= knots.front().at || knots.size() == 1) return knots.front().value;
    if (T >= knots.back().at) return knots.back().value;
    std::size_t low = 0;
    std::size_t high = knots.size();
    while (high - low > 1) {
        const std::size_t middle = (low + high) / 2;
        (knots[middle].at <= T ? low : high) = middle;
    }
    const Knot& a = knots[low];
    const Knot& b = knots[low + 1];
    return a.value + (b.value - a.value) * ((T - a.at) / (b.at - a.at));
}

inline double Enthalpy::table_integral(double from, double to) const noexcept {
    if (from > to) return -table_integral(to, from);
    // between kinks the product of two tables is a parabola, which Simpson's rule integrates exactly
    const auto piece = [this](double a, double b) {
        const double middle = 0.5 * (a + b);
        return (b - a) / 6.0 * (product(a) + 4.0 * product(middle) + product(b));
    };
    double sum = 0.0;
    double a = from;
    for (auto kink = std::upper_bound(kinks_.begin(), kinks_.end(), from); kink != kinks_.end() && *kink < to; ++kink) {
        sum += piece(a, *kink);
        a = *kink;
    }
    return sum + piece(a, to);
}

TEPOR_INLINE Fault Enthalpy::sensible(const double* slots, const Points& at, const double* to, double* rise,
                                      double* slope) const {
    if (tabled_) {
        for (Index i = 0; i < at.count; ++i) {
            rise[i] = table_integral(at.temperature[i], to[i]);
            if (slope) slope[i] = product(to[i]);
        }
        return {};
    }
    constexpr Index piece = 128;
    for (Index from = 0; from < at.count; from += piece) {
        const Index n = std::min(piece, at.count - from);
        const Points part{n, at.temperature + from, nullptr, at.x + from, at.y + from};
        double* by = slope ? slope + from : nullptr;
        Fault fault;
        if (constant_) {
            double density[piece];
            double heat[piece];
            fault = region_->density.evaluate(slots, {}, part, density, nullptr);
            if (!fault) fault = region_->specific_heat.evaluate(slots, {}, part, heat, nullptr);
            if (!fault)
                for (Index i = 0; i < n; ++i) {
                    const double product = density[i] * heat[i];
                    rise[from + i] = product * (to[from + i] - part.temperature[i]);
                    if (by) by[i] = product;
                }
        } else {
            fault = law_integral(slots, part, to + from, rise + from, by);
        }
        if (fault) {
            fault.point += from;
            return fault;
        }
    }
    return {};
}

TEPOR_INLINE Fault Enthalpy::law_integral(const double* slots, const Points& at, const double* to, double* rise,
                                          double* slope) const {
    // Gauss-Legendre with 5 points; nodes and weights: DLMF 3.5(v)
    static constexpr double place[5] = {0.046910077030668, 0.230765344947158, 0.5, 0.769234655052842,
                                        0.953089922969332};
    static constexpr double weight[5] = {0.118463442528095, 0.239314335249683, 0.284444444444444, 0.239314335249683,
                                         0.118463442528095};
    constexpr Index most = 128;
    double T[most];
    double density[most];
    double heat[most];
    const Index n = at.count;
    Points here = at;
    here.temperature = T;
    for (Index i = 0; i < n; ++i) rise[i] = 0.0;
    for (int g = 0; g < (slope ? 6 : 5); ++g) {
        const double s = g < 5 ? place[g] : 1.0;
        for (Index i = 0; i < n; ++i) T[i] = at.temperature[i] + s * (to[i] - at.temperature[i]);
        if (Fault fault = region_->density.evaluate(slots, {}, here, density, nullptr)) return fault;
        if (Fault fault = region_->specific_heat.evaluate(slots, {}, here, heat, nullptr)) return fault;
        if (g < 5)
            for (Index i = 0; i < n; ++i) rise[i] += weight[g] * density[i] * heat[i] * (to[i] - at.temperature[i]);
        else
            for (Index i = 0; i < n; ++i) slope[i] = density[i] * heat[i];
    }
    return {};
}

TEPOR_INLINE Fault Enthalpy::latent_density(const double* slots, const Points& at, double* value) const {
    constexpr Index piece = 128;
    double T[piece];
    for (Index i = 0; i < piece; ++i) T[i] = solidus_;
    for (Index from = 0; from < at.count; from += piece) {
        const Index n = std::min(piece, at.count - from);
        Fault fault =
            region_->density.evaluate(slots, {}, {n, T, nullptr, at.x + from, at.y + from}, value + from, nullptr);
        if (fault) {
            fault.point += from;
            return fault;
        }
    }
    return {};
}

} // namespace tepor
