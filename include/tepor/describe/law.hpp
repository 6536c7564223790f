#pragma once
// Own laws: functions of temperature, place, time and parameters, called on batches of points with exact slopes.

#include <array>
#include <cmath>
#include <concepts>
#include <cstddef>
#include <memory>
#include <string>
#include <tepor/base/dual.hpp>
#include <tepor/base/numbers.hpp>
#include <tepor/base/point.hpp>
#include <tepor/describe/parameter.hpp>
#include <tepor/describe/spot.hpp>
#include <type_traits>
#include <utility>
#include <vector>

namespace tepor {

/// A batch of points at which a law is evaluated: arrays of `count` entries.
struct LawPoints {
    Index count = 0;
    const double* temperature = nullptr;
    const double* fluid = nullptr; ///< null inside a body
    const double* x = nullptr;
    const double* y = nullptr;
    double time = 0.0;
    const double* parameters = nullptr; ///< present values of the law's parameters, in their order
};

/// Lanes of the derivatives of a law; parameter i is lane `law_parameter_lane + i`.
enum LawLane : int {
    law_temperature_lane = 0,
    law_fluid_lane = 1,
    law_x_lane = 2,
    law_y_lane = 3,
    law_parameter_lane = 4
};

/// A law with its type erased: one virtual call per batch. Derive from it to bring laws from other languages.
class LawFunction {
  public:
    LawFunction() = default;
    LawFunction(const LawFunction&) = delete;
    LawFunction& operator=(const LawFunction&) = delete;
    virtual ~LawFunction() = default;

    /// Values and, when `slope` is not null, derivatives by temperature at each point.
    /// @return 0; anything else stops the solve with an Error that shows the number
    virtual int evaluate(const LawPoints& points, double* value, double* slope) const = 0;

    /// All derivatives: `derivative[lane * points.count + i]` for the lanes of LawLane. Same return.
    virtual int derivatives(const LawPoints& points, double* derivative) const = 0;
};

/// A law as it stands in a description. Copies share the function.
class Law {
  public:
    /// What the function may depend on besides its parameters.
    struct Uses {
        bool temperature = true;
        bool place = true;
        bool time = true;
    };

    Law(std::shared_ptr<const LawFunction> function, std::vector<Parameter> parameters, Uses uses, bool exact_slope)
        : function_(std::move(function)), parameters_(std::move(parameters)), uses_(uses), exact_slope_(exact_slope) {}

    [[nodiscard]] const LawFunction& function() const noexcept { return *function_; }
    [[nodiscard]] const std::vector<Parameter>& parameters() const noexcept { return parameters_; }
    [[nodiscard]] Uses uses() const noexcept { return uses_; }
    /// False when slopes are taken by differences (laws of plain doubles, C callbacks).
    [[nodiscard]] bool exact_slope() const noexcept { return exact_slope_; }
    [[nodiscard]] const std::string& name() const noexcept { return name_; }

    /// The same law under a name, for messages and reports.
    [[nodiscard]] Law named(std::string name) const {
        Law copy = *this;
        copy.name_ = std::move(name);
        return copy;
    }

  private:
    std::shared_ptr<const LawFunction> function_;
    std::vector<Parameter> parameters_;
    Uses uses_;
    bool exact_slope_;
    std::string name_ = "own law";
};

namespace detail {

/// Step of a central difference about v: near the cube root of the rounding unit, relative to the size of v.
inline double difference_step(double v) noexcept {
    return 6.0e-6 * (std::abs(v) + 1.0);
}

template <class S, std::size_t>
using Repeat = S;

template <class F, class SpotType, class S, class Sequence>
struct TakesImpl;
template <class F, class SpotType, class S, std::size_t... I>
struct TakesImpl<F, SpotType, S, std::index_sequence<I...>>
    : std::bool_constant<std::is_invocable_v<const F&, const SpotType&, Repeat<S, I>...>> {};

/// The callable can be called with a spot and P arguments of type S.
template <class F, class SpotType, class S, std::size_t P>
inline constexpr bool takes = TakesImpl<F, SpotType, S, std::make_index_sequence<P>>::value;

template <class F, class SpotType, class S, std::size_t... I>
auto call_with(const F& f, const SpotType& spot, [[maybe_unused]] const S* parameters, std::index_sequence<I...>) {
    return f(spot, parameters[I]...);
}

/// A generic callable (`const auto&`): values and slopes by dual numbers. At<S> is what it is told about its point.
template <class F, std::size_t P, template <class> class At>
class DualLaw final : public LawFunction {
  public:
    explicit DualLaw(F f) : f_(std::move(f)) {}

    int evaluate(const LawPoints& points, double* value, double* slope) const override {
        using S = Dual<1>;
        std::array<S, P + 1> parameters{};
        for (std::size_t j = 0; j < P; ++j) parameters[j] = S(points.parameters[j]);
        for (Index i = 0; i < points.count; ++i) {
            At<S> spot;
            spot.x = S(points.x[i]);
            spot.y = S(points.y[i]);
            if constexpr (uses_time) spot.time = points.time;
            if constexpr (uses_temperature) {
                spot.temperature = S::variable(points.temperature[i], 0);
                spot.fluid = S(points.fluid ? points.fluid[i] : 0.0);
            }
            const S result = S(call_with(f_, spot, parameters.data(), std::make_index_sequence<P>{}));
            value[i] = result.value;
            if (slope) slope[i] = result.slope[0];
        }
        return 0;
    }

    int derivatives(const LawPoints& points, double* derivative) const override {
        constexpr std::size_t lanes = law_parameter_lane + P;
        using S = Dual<static_cast<int>(lanes)>;
        std::array<S, P + 1> parameters{};
        for (std::size_t j = 0; j < P; ++j)
            parameters[j] = S::variable(points.parameters[j], law_parameter_lane + static_cast<int>(j));
        for (Index i = 0; i < points.count; ++i) {
            At<S> spot;
            spot.x = S::variable(points.x[i], law_x_lane);
            spot.y = S::variable(points.y[i], law_y_lane);
            if constexpr (uses_time) spot.time = points.time;
            if constexpr (uses_temperature) {
                spot.temperature = S::variable(points.temperature[i], law_temperature_lane);
                spot.fluid = S::variable(points.fluid ? points.fluid[i] : 0.0, law_fluid_lane);
            }
            const S result = S(call_with(f_, spot, parameters.data(), std::make_index_sequence<P>{}));
            for (std::size_t lane = 0; lane < lanes; ++lane)
                derivative[static_cast<Index>(lane) * points.count + i] = result.slope[lane];
        }
        return 0;
    }

  private:
    static constexpr bool uses_temperature = std::is_same_v<At<double>, Spot>;
    static constexpr bool uses_time = !std::is_same_v<At<double>, PlaceWithoutTime<double>>;
    F f_;
};

/// A callable of plain doubles: slopes by central differences, or its own when it returns something with `.slope`.
template <class F, std::size_t P, class SpotType>
class PlainLaw final : public LawFunction {
  public:
    explicit PlainLaw(F f) : f_(std::move(f)) {}

    int evaluate(const LawPoints& points, double* value, double* slope) const override {
        for (Index i = 0; i < points.count; ++i) {
            std::array<double, 4> at = state(points, i);
            const auto result = call(at, points.time, points.parameters);
            value[i] = plain(result);
            if (!slope) continue;
            if constexpr (requires { result.slope; })
                slope[i] = static_cast<double>(result.slope);
            else if constexpr (std::is_same_v<SpotType, Spot>)
                slope[i] = difference(points, i, law_temperature_lane);
            else
                slope[i] = 0.0;
        }
        return 0;
    }

    int derivatives(const LawPoints& points, double* derivative) const override {
        for (int lane = 0; lane < law_parameter_lane + static_cast<int>(P); ++lane)
            for (Index i = 0; i < points.count; ++i) derivative[lane * points.count + i] = difference(points, i, lane);
        return 0;
    }

  private:
    static std::array<double, 4> state(const LawPoints& points, Index i) {
        return {points.temperature ? points.temperature[i] : 0.0, points.fluid ? points.fluid[i] : 0.0, points.x[i],
                points.y[i]};
    }

    [[nodiscard]] auto call(const std::array<double, 4>& at, double time, const double* parameters) const {
        if constexpr (std::is_same_v<SpotType, Spot>)
            return call_with(f_, Spot{at[0], at[1], at[2], at[3], time}, parameters, std::make_index_sequence<P>{});
        else if constexpr (std::is_same_v<SpotType, Place>)
            return call_with(f_, Place{at[2], at[3], time}, parameters, std::make_index_sequence<P>{});
        else
            return call_with(f_, Point{at[2], at[3]}, parameters, std::make_index_sequence<P>{});
    }

    template <class Result>
    static double plain(const Result& result) {
        if constexpr (requires { result.value; })
            return static_cast<double>(result.value);
        else
            return static_cast<double>(result);
    }

    [[nodiscard]] double difference(const LawPoints& points, Index i, int lane) const {
        std::array<double, 4> at = state(points, i);
        std::array<double, P + 1> parameters{};
        for (std::size_t j = 0; j < P; ++j) parameters[j] = points.parameters[j];
        double& moved = lane < law_parameter_lane ? at[static_cast<std::size_t>(lane)]
                                                  : parameters[static_cast<std::size_t>(lane - law_parameter_lane)];
        const double centre = moved;
        // parameters may be of any size, and stepping past zero can leave their domain: keep their step relative
        const double step =
            lane >= law_parameter_lane && centre != 0.0 ? 6.0e-6 * std::abs(centre) : difference_step(centre);
        moved = centre + step;
        const double above = plain(call(at, points.time, parameters.data()));
        moved = centre - step;
        const double below = plain(call(at, points.time, parameters.data()));
        return (above - below) / (2.0 * step);
    }

    F f_;
};

template <std::size_t P>
std::vector<Parameter> listed(const Parameter (&parameters)[P]) {
    return std::vector<Parameter>(parameters, parameters + P);
}

template <std::size_t P, class F>
Law make_law(std::vector<Parameter> parameters, F f) {
    constexpr Law::Uses uses{true, true, true};
    if constexpr (takes<F, BasicSpot<Dual<1>>, Dual<1>, P>) {
        return Law(std::make_shared<const DualLaw<F, P, BasicSpot>>(std::move(f)), std::move(parameters), uses, true);
    } else {
        static_assert(takes<F, Spot, double, P>, "tepor law: the callable must take a spot (`const auto&` or `const "
                                                 "tepor::Spot&`) and then one argument for each listed parameter");
        return Law(std::make_shared<const PlainLaw<F, P, Spot>>(std::move(f)), std::move(parameters), uses, false);
    }
}

/// `Timed`: generic callables get the time too.
template <std::size_t P, bool Timed, class F>
Law make_place_law(std::vector<Parameter> parameters, F f) {
    constexpr Law::Uses timed{false, true, true};
    constexpr Law::Uses untimed{false, true, false};
    // a generic callable is never tried with a Point, whose coordinates are plain doubles
    if constexpr (Timed && takes<F, BasicPlace<Dual<1>>, Dual<1>, P>) {
        return Law(std::make_shared<const DualLaw<F, P, BasicPlace>>(std::move(f)), std::move(parameters), timed, true);
    } else if constexpr (!Timed && takes<F, PlaceWithoutTime<Dual<1>>, Dual<1>, P>) {
        return Law(std::make_shared<const DualLaw<F, P, PlaceWithoutTime>>(std::move(f)), std::move(parameters),
                   untimed, true);
    } else if constexpr (takes<F, Point, double, P>) {
        return Law(std::make_shared<const PlainLaw<F, P, Point>>(std::move(f)), std::move(parameters), untimed, false);
    } else {
        static_assert(takes<F, Place, double, P>,
                      "tepor of_place: the callable must take a place (`const auto&`, `const tepor::Place&` or "
                      "`tepor::Point`) and then one argument for each listed parameter");
        return Law(std::make_shared<const PlainLaw<F, P, Place>>(std::move(f)), std::move(parameters), timed, false);
    }
}

} // namespace detail

/// A law of temperature, place and time: `law([](const auto& s) { return 1.3 * pow(abs(s.temperature - s.fluid), 0.25); })`.
///
/// With `const auto&` the law is called with dual numbers and its slopes are exact: write `exp`, `max`, `abs` unqualified
/// and let all returns have one type. With `const Spot&` it gets plain doubles and slopes come from differences, unless it
/// returns `Sloped{value, slope}`. A law that does not depend on temperature is better said with `of_place`: the body
/// then stays linear.
template <class F>
Law law(F f) {
    return detail::make_law<0>({}, std::move(f));
}

/// The same with parameters: `law({current}, [](const auto& spot, auto amps) { ... })`, one argument per parameter.
template <std::size_t P, class F>
Law law(const Parameter (&parameters)[P], F f) {
    return detail::make_law<P>(detail::listed(parameters), std::move(f));
}

/// A law of place alone: `of_place([](const auto& p) { return 5e4 * exp(-p.x / 0.02); })`; also of a `Point`. It is integrated
/// once, also when marching. A callable that takes a `const Place&` may read the time as well, and is sampled step by step.
template <class F>
Law of_place(F f) {
    return detail::make_place_law<0, false>({}, std::move(f));
}
template <std::size_t P, class F>
Law of_place(const Parameter (&parameters)[P], F f) {
    return detail::make_place_law<P, false>(detail::listed(parameters), std::move(f));
}

/// A law of place and time with exact slopes: `of_place_and_time([](const auto& p) { return p.x * std::exp(-p.time); })`.
template <class F>
Law of_place_and_time(F f) {
    return detail::make_place_law<0, true>({}, std::move(f));
}
template <std::size_t P, class F>
Law of_place_and_time(const Parameter (&parameters)[P], F f) {
    return detail::make_place_law<P, true>(detail::listed(parameters), std::move(f));
}

/// A function of time alone, sampled where a step needs it: `of_time([](double t) { return 20.0 + 5.0 * std::sin(t); })`.
/// For jumps and pulses use `schedule`, whose energy is exact whatever the step.
template <class F>
requires std::is_invocable_r_v<double, const F&, double> Law of_time(F f) {
    auto at_place = [f = std::move(f)](const Place& place) { return static_cast<double>(f(place.time)); };
    using At = decltype(at_place);
    return Law(std::make_shared<const detail::PlainLaw<At, 0, Place>>(std::move(at_place)), {},
               Law::Uses{false, false, true}, true);
}

} // namespace tepor
