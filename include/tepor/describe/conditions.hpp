#pragma once
// What a body is made of and what acts on it: plain data with named members.

#include <tepor/base/point.hpp>
#include <tepor/describe/value.hpp>

namespace tepor {

/// Does the body speak degrees Celsius or kelvin?
enum class TemperatureScale { celsius, kelvin };

namespace detail {
/// First member of statements that must be written with named members: nothing converts to it.
class NamedOnly {
  public:
    struct Key {
        explicit Key() = default;
    };
    explicit constexpr NamedOnly(Key) noexcept {}
};
} // namespace detail

/// Conductivity [W/(m K)]: a Value, or one per direction, or a symmetric tensor in 2D.
class Conductivity {
  public:
    Conductivity() = default;
    template <class T>
    requires std::is_constructible_v<Value, T> Conductivity(T&& value)
        : xx_(std::forward<T>(value)) {} // NOLINT: a value is an isotropic conductivity

    [[nodiscard]] bool given() const noexcept { return xx_.given(); }
    [[nodiscard]] bool isotropic() const noexcept { return !yy_.given(); }
    [[nodiscard]] bool full_tensor() const noexcept { return xy_.given(); }
    [[nodiscard]] const Value& xx() const noexcept { return xx_; }
    [[nodiscard]] const Value& yy() const noexcept { return yy_; }
    [[nodiscard]] const Value& xy() const noexcept { return xy_; }

  private:
    friend Conductivity orthotropic(Value along_x, Value along_y);
    friend Conductivity tensor(Value xx, Value xy, Value yy);
    Value xx_, yy_, xy_;
};

/// Conductivities along x (r) and y (z) [W/(m K)]; 2D.
inline Conductivity orthotropic(Value along_x, Value along_y) {
    Conductivity k(std::move(along_x));
    k.yy_ = std::move(along_y);
    return k;
}

/// A symmetric positive definite conductivity tensor [W/(m K)]; 2D.
inline Conductivity tensor(Value xx, Value xy, Value yy) {
    Conductivity k(std::move(xx));
    k.xy_ = std::move(xy);
    k.yy_ = std::move(yy);
    return k;
}

/// Latent heat taken up between solidus and liquidus (equal is allowed).
struct Latent {
    Value heat{};     ///< [J/kg]
    Value solidus{};  ///< [degC]
    Value liquidus{}; ///< [degC], at least the solidus
};

/// What a region is made of. Density and specific heat count in marching only.
struct Material {
    Conductivity conductivity{}; ///< [W/(m K)]
    Value density{};             ///< [kg/m3]
    Value specific_heat{};       ///< [J/(kg K)]
    Latent latent{};
};

/// Convection to a fluid: q = coefficient (T - fluid).
struct Film {
    Value coefficient{}; ///< [W/(m2 K)]; a law is told the surface temperature and the fluid's
    Value fluid{};       ///< [degC]
};

/// Grey radiation to large surroundings: q = emissivity sigma (T^4 - surroundings^4), absolute inside.
struct Radiation {
    Value emissivity{};   ///< 0..1
    Value surroundings{}; ///< [degC]
};

/// A given heat flux [W/m2]; say which way: `.into` or `.out_of` the body. Named members only.
struct Flux {
    detail::NamedOnly named_only{detail::NamedOnly::Key{}};
    Value into{};
    Value out_of{};
};

/// A surface held at a temperature [degC]. One that varies along the face is interpolated by the shape functions.
struct FixedTemperature {
    Value temperature{};
};

/// An imperfect joint: q = conductance times the jump of temperature. Named members only.
struct Contact {
    detail::NamedOnly named_only{detail::NamedOnly::Key{}};
    Value conductance{}; ///< [W/(m2 K)]
    Value resistance{};  ///< [m2 K/W], may stand for the conductance
};

/// Heat generated in a region. Named members only.
struct Generation {
    detail::NamedOnly named_only{detail::NamedOnly::Key{}};
    Value per_volume{}; ///< [W/m3]
    Value total{};      ///< [W] in all cells of the region together, for the size the frame states
};

/// Loss from the sides of a fin or a thin plate: coefficient (T - fluid) per wetted area.
/// Say the wetted `perimeter` of a bar whose section is the frame's area (1D), or the `thickness` of a plate or disc.
struct SideFilm {
    detail::NamedOnly named_only{detail::NamedOnly::Key{}};
    Value coefficient{}; ///< [W/(m2 K)]
    Value fluid{};       ///< [degC]
    Value perimeter{};   ///< [m], 1D planar
    Value thickness{};   ///< [m]
    int wet_sides = 2;   ///< of the plate: 1 or 2
};

/// Heat released at one place: in 1D a heating plane, in 2D a line source (per depth of the frame) of given radius.
struct LocalHeat {
    detail::NamedOnly named_only{detail::NamedOnly::Key{}};
    Value total{};       ///< [W]
    double radius = 0.0; ///< [m], 2D: reading a temperature inside it is an Error
};

} // namespace tepor
