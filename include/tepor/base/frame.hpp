#pragma once
// Frames: what one unit of the coordinates stands for in space, and the size all watts are for.

#include <tepor/base/numbers.hpp>

namespace tepor {

/// A slab of `area` [m2] in 1D, or a plane section of `depth` [m] in 2D.
struct Planar {
    double area = 1.0;  ///< [m2], 1D only
    double depth = 1.0; ///< [m], 2D only
};

/// In 1D a wall around an axis, x = r, of `length` [m]. In 2D a body of revolution with x = r, y = z (length does not count).
struct Cylindrical {
    double length = 1.0; ///< [m], 1D only
};

/// A shell or ball, x = r; the whole sphere. 1D only.
struct Spherical {};

/// Any of the three frames as plain data. The measure of the volume element is `factor * r^power dx (dy)`.
class Frame {
  public:
    enum class Kind : int { planar, cylindrical, spherical };

    Frame() = default;
    Frame(Planar planar) : kind_(Kind::planar), area_(planar.area), depth_(planar.depth) {} // NOLINT
    Frame(Cylindrical cylindrical) : kind_(Kind::cylindrical), area_(cylindrical.length) {} // NOLINT
    Frame(Spherical) : kind_(Kind::spherical) {}                                            // NOLINT

    [[nodiscard]] Kind kind() const noexcept { return kind_; }

    /// Exponent n of r in the volume element: 0, 1 or 2.
    [[nodiscard]] int power() const noexcept { return static_cast<int>(kind_); }

    /// Constant factor of the volume element in `dim` dimensions: area, depth, 2 pi length, 2 pi or 4 pi.
    [[nodiscard]] double factor(int dim) const noexcept {
        switch (kind_) {
        case Kind::planar: return dim == 1 ? area_ : depth_;
        case Kind::cylindrical: return dim == 1 ? 2.0 * pi * area_ : 2.0 * pi;
        case Kind::spherical: return 4.0 * pi;
        }
        return 1.0;
    }

    /// The size as given: area [m2] or depth [m] (planar), length [m] (cylindrical, 1D).
    [[nodiscard]] double size(int dim) const noexcept { return kind_ == Kind::planar && dim == 2 ? depth_ : area_; }

  private:
    Kind kind_ = Kind::planar;
    double area_ = 1.0;
    double depth_ = 1.0;
};

} // namespace tepor
