#pragma once
// A place in the body: x (or r) and y (or z) in metres.

#include <cmath>

namespace tepor {

/// A place [m]. In 1D only x counts; in cylindrical and spherical frames x is the radius, and in r-z y is the axial coordinate.
struct Point {
    double x = 0.0;
    double y = 0.0;

    friend constexpr Point operator+(Point a, Point b) noexcept { return {a.x + b.x, a.y + b.y}; }
    friend constexpr Point operator-(Point a, Point b) noexcept { return {a.x - b.x, a.y - b.y}; }
    friend constexpr Point operator*(double s, Point a) noexcept { return {s * a.x, s * a.y}; }
    friend constexpr bool operator==(Point a, Point b) noexcept { return a.x == b.x && a.y == b.y; }
};

constexpr double dot(Point a, Point b) noexcept {
    return a.x * b.x + a.y * b.y;
}

/// z component of the cross product: positive when b lies counter-clockwise of a.
constexpr double cross(Point a, Point b) noexcept {
    return a.x * b.y - a.y * b.x;
}

inline double distance(Point a, Point b) noexcept {
    return std::hypot(a.x - b.x, a.y - b.y);
}

} // namespace tepor
