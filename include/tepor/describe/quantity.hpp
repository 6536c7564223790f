#pragma once
// Quantity: a named scalar asked of a temperature field.

#include <memory>
#include <string>
#include <tepor/base/config.hpp>
#include <tepor/base/point.hpp>
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

    TEPOR_INLINE Quantity(Kind kind, std::string first, std::string second, Point place, double radius, double sign);

    [[nodiscard]] Kind kind() const noexcept { return kind_; }
    [[nodiscard]] double sign() const noexcept { return sign_; } ///< -1 for `heat_in_through`
    [[nodiscard]] Point place() const noexcept { return place_; }
    [[nodiscard]] double radius() const noexcept { return radius_; }
    [[nodiscard]] const std::string& first() const noexcept { return names_->first; }
    [[nodiscard]] const std::string& second() const noexcept { return names_->second; }

    /// The same quantity under a name of your own, for reports.
    [[nodiscard]] TEPOR_INLINE Quantity named(std::string label) const;
    /// The given name, or one made from the question, such as `heat out through "outer"`.
    [[nodiscard]] TEPOR_INLINE std::string label() const;

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

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/describe/impl/quantity.hpp>
#endif
