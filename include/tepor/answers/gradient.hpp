#pragma once
// gradient: the derivative of a quantity by every parameter and every node position at once.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/describe/parameter.hpp>
#include <tepor/describe/quantity.hpp>
#include <tepor/field/field.hpp>
#include <vector>

namespace tepor {

/// The derivative of one quantity by everything the body is described with.
class Gradient {
  public:
    /// One parameter's share.
    struct Entry {
        Parameter parameter;
        double value = 0.0;      ///< of the parameter, where the derivative was taken
        double derivative = 0.0; ///< dQ/dp [unit of the quantity per unit of the parameter]
        double relative = 0.0;   ///< p/Q dQ/dp: per cent of Q per per cent of p; 0 when Q is 0
    };

    Gradient(Quantity quantity, double value, std::vector<Entry> entries, std::vector<Point> nodes,
             std::vector<Point> places, bool exact)
        : quantity_(std::move(quantity)), value_(value), entries_(std::move(entries)), nodes_(std::move(nodes)),
          places_(std::move(places)), exact_(exact) {}

    [[nodiscard]] const Quantity& quantity() const noexcept { return quantity_; }
    /// The quantity itself.
    [[nodiscard]] double value() const noexcept { return value_; }

    /// Derivative by a parameter. @throws Error unused  no statement of the body uses it
    [[nodiscard]] TEPOR_INLINE double operator[](const Parameter& parameter) const;

    /// All parameters, in the order the body took them up.
    [[nodiscard]] const std::vector<Entry>& entries() const noexcept { return entries_; }
    /// The same, the largest relative sensitivity first. (That of a temperature depends on the zero of the body's scale.)
    [[nodiscard]] TEPOR_INLINE std::vector<Entry> ranked() const;

    /// Derivative by the position of each node of the mesh, in its numbering [unit per metre along x and y].
    /// A local heat moves with its cell; a node on the axis of revolution moves along it only.
    /// @throws Error not_supported  cells without fixed shape functions
    [[nodiscard]] TEPOR_INLINE const std::vector<Point>& nodes() const;

    /// Derivative when every node at p moves with the velocity v(p): moving a named circle or corner, turning, stretching.
    template <class Velocity>
    [[nodiscard]] double along(Velocity velocity) const {
        const std::vector<Point>& by_node = nodes();
        double sum = 0.0;
        for (std::size_t n = 0; n < by_node.size(); ++n) sum += dot(by_node[n], velocity(places_[n]));
        return sum;
    }

    /// False when an own law of plain doubles takes part, whose slopes come from differences (about six digits).
    [[nodiscard]] bool exact() const noexcept { return exact_; }

  private:
    Quantity quantity_;
    double value_;
    std::vector<Entry> entries_;
    std::vector<Point> nodes_;
    std::vector<Point> places_;
    bool exact_;
};

/// The derivative of a quantity of a steady field by every parameter of the body and every node position.
///
/// Discrete adjoint: one solve with the transposed converged slope, then one pass over the body, whatever the number of
/// parameters. Exact for the discrete problem up to rounding. The factor of the steady solve is used again while the body
/// lives and is linear.
/// @throws Error not_supported (a field of a march: ask gradient(march, quantity)), no_answer, bad_name, outside, singular,
///         and as reading the quantity does
[[nodiscard]] TEPOR_INLINE Gradient gradient(const Field& field, const Quantity& quantity);

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/gradient.hpp>
#endif
