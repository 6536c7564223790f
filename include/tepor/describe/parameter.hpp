#pragma once
// A named number: set it, differentiate by it, drive it, fit it.

#include <memory>
#include <string>
#include <tepor/base/config.hpp>

namespace tepor {

/// A named number, usable wherever a description takes a number.
///
/// Free-standing: it belongs to no body, and bodies that use it keep a value of their own (`Body::set`), which starts as
/// the value given here. Copies are the same parameter; two parameters of equal name in one body are refused.
class Parameter {
  public:
    /// @throws Error bad_name (empty name), bad_value (value not finite)
    TEPOR_INLINE Parameter(std::string name, double value);

    [[nodiscard]] const std::string& name() const noexcept { return info_->name; }

    /// The value it was made with, in the unit of where it is used.
    [[nodiscard]] double value() const noexcept { return info_->value; }

    /// Same parameter (not: same value).
    friend bool operator==(const Parameter& a, const Parameter& b) noexcept { return a.info_ == b.info_; }

  private:
    friend class Number;
    struct Nothing {};
    explicit Parameter(Nothing) noexcept {} // of a Number that is a plain number
    [[nodiscard]] bool given() const noexcept { return info_ != nullptr; }

    struct Info {
        std::string name;
        double value;
    };
    std::shared_ptr<const Info> info_;
};

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/describe/impl/parameter.hpp>
#endif
