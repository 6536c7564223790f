#pragma once
// Quantities and their labels.

#include <tepor/base/text.hpp>
#include <tepor/describe/quantity.hpp>

namespace tepor {

TEPOR_INLINE Quantity::Quantity(Kind kind, std::string first, std::string second, Point place, double radius,
                                double sign)
    : kind_(kind), sign_(sign), place_(place), radius_(radius),
      names_(std::make_shared<const Names>(Names{std::move(first), std::move(second), {}})) {}

TEPOR_INLINE Quantity Quantity::named(std::string label) const {
    Quantity copy = *this;
    copy.names_ = std::make_shared<const Names>(Names{first(), second(), std::move(label)});
    return copy;
}

TEPOR_INLINE std::string Quantity::label() const {
    if (!names_->label.empty()) return names_->label;
    const auto quoted = [](const std::string& name) { return '"' + name + '"'; };
    switch (kind_) {
    case Kind::at: {
        std::string text = detail::text("temperature at (", place_.x, ", ", place_.y, ")");
        if (!first().empty()) text += " in " + quoted(first());
        return text;
    }
    case Kind::mean_in: return "mean in " + quoted(first());
    case Kind::mean_on: return "mean on " + quoted(first());
    case Kind::mean_around: return detail::text("mean around (", place_.x, ", ", place_.y, ")");
    case Kind::hottest_in: return "hottest in " + quoted(first());
    case Kind::coldest_in: return "coldest in " + quoted(first());
    case Kind::hottest_on: return "hottest on " + quoted(first());
    case Kind::coldest_on: return "coldest on " + quoted(first());
    case Kind::heat_out_through: return (sign_ < 0 ? "heat in through " : "heat out through ") + quoted(first());
    case Kind::heat_from: return "heat from " + quoted(first()) + " to " + quoted(second());
    case Kind::generated_in: return "generated in " + quoted(first());
    case Kind::stored_in: return "stored in " + quoted(first());
    case Kind::conductance_between: return "conductance between " + quoted(first()) + " and " + quoted(second());
    }
    return {};
}

} // namespace tepor
