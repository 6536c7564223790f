#pragma once
// OfPlace: any callable that takes a Point, copied and kept; cell sizes and tests of place.

#include <concepts>
#include <memory>
#include <tepor/base/point.hpp>
#include <type_traits>
#include <utility>

namespace tepor {

/// A callable `Result(Point)` of any type; empty by default. Copies share the callable.
template <class Result>
class OfPlace {
  public:
    OfPlace() = default;

    template <class Call>
    requires(!std::same_as<std::remove_cvref_t<Call>, OfPlace> &&
             std::is_invocable_r_v<Result, const std::remove_cvref_t<Call>&, Point>)
        OfPlace(Call&& call) // NOLINT: meant to convert
        : state_(std::make_shared<const std::remove_cvref_t<Call>>(std::forward<Call>(call))),
          call_([](const void* state, Point p) -> Result {
              return (*static_cast<const std::remove_cvref_t<Call>*>(state))(p);
          }) {}

    explicit operator bool() const noexcept { return call_ != nullptr; }

    /// The result at a place; only when not empty.
    Result operator()(Point p) const { return call_(state_.get(), p); }

  private:
    std::shared_ptr<const void> state_;
    Result (*call_)(const void*, Point) = nullptr;
};

/// Cell size [m] by place.
using SizeLaw = OfPlace<double>;

/// Yes or no by place.
using PlaceTest = OfPlace<bool>;

} // namespace tepor
