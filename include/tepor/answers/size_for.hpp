#pragma once
// size_for: the value of a parameter at which a quantity meets a target.

#include <memory>
#include <optional>
#include <string>
#include <tepor/answers/sized.hpp>
#include <tepor/answers/target.hpp>
#include <tepor/base/config.hpp>
#include <tepor/body/body.hpp>
#include <tepor/describe/quantity.hpp>
#include <tepor/field/field.hpp>
#include <vector>

namespace tepor {

/// The value of a parameter at which a quantity meets a target.
///
/// Both bounds and the present value are tried, then inverse interpolation with adjoint slopes closes in, the bracket kept
/// throughout. Where the slope changes sign between the bounds (or on request) a scan looks for several answers. For a
/// limit (at_most, at_least) the answer is the value where it is just kept. The body stays as it was.
///
///     Sized sized = size_for(wall, backing_thickness, loss, 900.0);
///     Sized cool = size_for(wall, backing_thickness, mean_on("outer"), at_most(60.0), {.from = 0.05, .to = 0.4});
///
/// @throws Error unused (the body does not use the parameter), missing (a parameter that needs bounds), bad_value (bounds,
///         tolerance), not_certifiable (certified_side with a value to meet, an extreme, or a body no bound exists for), and whatever the description or the quantity gets wrong
[[nodiscard]] TEPOR_INLINE Sized size_for(const Body& body, const Parameter& parameter, const Quantity& quantity,
                                          Target target, const SizeOptions& options = {});

/// Bodies made one after the other by a function of one number, for shapes: what cannot be a Parameter.
class BodyMaker {
  public:
    BodyMaker() = default;
    BodyMaker(const BodyMaker&) = delete;
    BodyMaker& operator=(const BodyMaker&) = delete;
    virtual ~BodyMaker() = default;
    [[nodiscard]] virtual Body make(double value) const = 0;
};
[[nodiscard]] TEPOR_INLINE Sized size_for(const BodyMaker& maker, const Quantity& quantity, Target target,
                                          const SizeOptions& options);

/// The same for a function `double -> Body`: a new drawing and mesh at every value. Needs both bounds; slopes are not at hand,
/// so it takes a few solves more.
template <class Make>
requires std::is_invocable_r_v<Body, const Make&, double>
[[nodiscard]] Sized size_for(const Make& make, const Quantity& quantity, Target target, const SizeOptions& options) {
    struct Maker final : BodyMaker {
        explicit Maker(const Make& function) : function_(function) {}
        [[nodiscard]] Body make(double value) const override { return function_(value); }
        const Make& function_;
    };
    return size_for(static_cast<const BodyMaker&>(Maker(make)), quantity, target, options);
}

/// One of several parameters, with its bounds.
struct SizeBy {
    Parameter parameter;
    std::optional<double> from{};
    std::optional<double> to{};
};
/// One of several targets.
struct SizeTo {
    Quantity quantity;
    Target target;
};

/// What a sizing by several parameters found.
struct SizedTogether {
    std::vector<double> values; ///< in the order of the parameters
    Field field;
    std::vector<double> reached; ///< in the order of the targets
    SizeReason reason = SizeReason::found;
    std::string message;
    Index solves = 0;
    explicit operator bool() const noexcept { return reason == SizeReason::found; }
};

/// As many parameters for as many targets: damped Newton on the adjoint slopes within the bounds. Limits are met on their
/// good side.
/// @throws Error as above; contradiction when the numbers of parameters and targets differ
[[nodiscard]] TEPOR_INLINE SizedTogether size_for(const Body& body, const std::vector<SizeBy>& parameters,
                                                  const std::vector<SizeTo>& targets, const SizeOptions& options = {});

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/size_for.hpp>
#include <tepor/answers/impl/size_for_several.hpp>
#endif
