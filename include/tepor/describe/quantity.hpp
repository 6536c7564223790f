#pragma once
// Quantity: a named scalar asked of a temperature field.

#include <memory>
#include <string>
#include <tepor/base/point.hpp>
#include <tepor/base/text.hpp>
#include <utility>

namespace tepor {

/// A scalar asked of a temperature field: read it, bracket it, differentiate it, output it. Free-standing: it names
/// faces and regions by name and is resolved by each body it is asked of. Made by the functions below.
class Quantity {
  public:
    enum class Kind {
        at,                 ///< temperature at a point [degC]
        mean_in,            ///< mean temperature of a region [degC]
        mean_on,            ///< mean temperature of a face [degC]
        mean_around,        ///< weighted mean temperature in a disc [degC]
        hottest_in,         ///< [degC]
        coldest_in,         ///< [degC]
        hottest_on,         ///< [degC]
        coldest_on,         ///< [degC]
        heat_out_through,   ///< [W]
        heat_from,          ///< [W], from the first region to the second
        generated_in,       ///< [W]
        stored_in,          ///< heat content above 0 of the body's scale [J]
        conductance_between ///< [W/K]
    };

    Quantity(Kind kind, std::string first, std::string second, Point place, double radius, double sign)
        : kind_(kind), sign_(sign), place_(place), radius_(radius),
          names_(std::make_shared<const Names>(Names{std::move(first), std::move(second), {}})) {}

    [[nodiscard]] Kind kind() const noexcept { return kind_; }
    [[nodiscard]] double sign() const noexcept { return sign_; } ///< -1 for `heat_in_through`
    [[nodiscard]] Point place() const noexcept { return place_; }
    [[nodiscard]] double radius() const noexcept { return radius_; }
    [[nodiscard]] const std::string& first() const noexcept { return names_->first; }
    [[nodiscard]] const std::string& second() const noexcept { return names_->second; }

    /// The same quantity under a name of your own, for reports.
    [[nodiscard]] Quantity named(std::string label) const {
        Quantity copy = *this;
        copy.names_ = std::make_shared<const Names>(Names{first(), second(), std::move(label)});
        return copy;
    }
    /// The given name, or one made from the question, such as `heat out through "outer"`.
    [[nodiscard]] std::string label() const;

    /// Unit for reports: "degC", "W", "J" or "W/K" (a kelvin body shows K for degC).
    [[nodiscard]] const char* unit() const noexcept {
        switch (kind_) {
        case Kind::heat_out_through:
        case Kind::heat_from:
        case Kind::generated_in: return "W";
        case Kind::stored_in: return "J";
        case Kind::conductance_between: return "W/K";
        default: return "degC";
        }
    }
    [[nodiscard]] bool is_temperature() const noexcept { return unit()[0] == 'd'; }

  private:
    struct Names {
        std::string first, second, label;
    };
    Kind kind_;
    double sign_ = 1.0;
    Point place_{};
    double radius_ = 0.0;
    std::shared_ptr<const Names> names_;
};

/// Temperature at a place; with a region where a contact gives the place two temperatures.
inline Quantity at(double x, std::string region = {}) {
    return {Quantity::Kind::at, std::move(region), {}, {x, 0.0}, 0.0, 1.0};
}
inline Quantity at(Point place, std::string region = {}) {
    return {Quantity::Kind::at, std::move(region), {}, place, 0.0, 1.0};
}
/// Mean temperature over the volume of a region.
inline Quantity mean_in(std::string region) {
    return {Quantity::Kind::mean_in, std::move(region), {}, {}, 0.0, 1.0};
}
/// Mean temperature over the area of a face.
inline Quantity mean_on(std::string face) {
    return {Quantity::Kind::mean_on, std::move(face), {}, {}, 0.0, 1.0};
}
/// Mean temperature over the disc of `radius` around a place (2D), which must lie in one region.
inline Quantity mean_around(Point centre, double radius) {
    return {Quantity::Kind::mean_around, {}, {}, centre, radius, 1.0};
}
/// Highest temperature of the finite element function in a region, inside cells too.
inline Quantity hottest_in(std::string region) {
    return {Quantity::Kind::hottest_in, std::move(region), {}, {}, 0.0, 1.0};
}
inline Quantity coldest_in(std::string region) {
    return {Quantity::Kind::coldest_in, std::move(region), {}, {}, 0.0, 1.0};
}
inline Quantity hottest_on(std::string face) {
    return {Quantity::Kind::hottest_on, std::move(face), {}, {}, 0.0, 1.0};
}
inline Quantity coldest_on(std::string face) {
    return {Quantity::Kind::coldest_on, std::move(face), {}, {}, 0.0, 1.0};
}
/// Heat leaving the body through a face [W], for the size the frame states.
inline Quantity heat_out_through(std::string face) {
    return {Quantity::Kind::heat_out_through, std::move(face), {}, {}, 0.0, 1.0};
}
/// Heat entering the body through a face [W].
inline Quantity heat_in_through(std::string face) {
    return {Quantity::Kind::heat_out_through, std::move(face), {}, {}, 0.0, -1.0};
}
/// Heat passing from one region to another through all their interfaces [W].
inline Quantity heat_from(std::string region, std::string to) {
    return {Quantity::Kind::heat_from, std::move(region), std::move(to), {}, 0.0, 1.0};
}
/// Heat generated in a region [W], local heat included.
inline Quantity generated_in(std::string region) {
    return {Quantity::Kind::generated_in, std::move(region), {}, {}, 0.0, 1.0};
}
/// Heat content of a region above 0 of the body's scale [J], latent heat included.
inline Quantity stored_in(std::string region) {
    return {Quantity::Kind::stored_in, std::move(region), {}, {}, 0.0, 1.0};
}
/// Heat flow from the first face to the second per kelvin between them, both isothermal or behind films [W/K].
inline Quantity conductance_between(std::string face, std::string to) {
    return {Quantity::Kind::conductance_between, std::move(face), std::move(to), {}, 0.0, 1.0};
}

inline std::string Quantity::label() const {
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
