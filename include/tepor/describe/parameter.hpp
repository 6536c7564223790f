#pragma once
// A named number: set it, differentiate by it, drive it, fit it.

#include <cmath>
#include <memory>
#include <string>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <utility>

namespace tepor {

/// A named number, usable wherever a description takes a number.
///
/// Free-standing: it belongs to no body, and bodies that use it keep a value of their own (`Body::set`), which starts as
/// the value given here. Copies are the same parameter; two parameters of equal name in one body are refused.
class Parameter {
  public:
    /// @throws Error bad_name (empty name), bad_value (value not finite)
    Parameter(std::string name, double value) {
        if (name.empty())
            throw Error(ErrorCode::bad_name, "", "Parameter: the name is empty; give it the name reports should show");
        if (!std::isfinite(value))
            throw Error(ErrorCode::bad_value, name,
                        detail::text("Parameter \"", name, "\": value = ", value, ", expected a finite number"));
        info_ = std::make_shared<const Info>(Info{std::move(name), value});
    }

    [[nodiscard]] const std::string& name() const noexcept { return info_->name; }

    /// The value it was made with, in the unit of where it is used.
    [[nodiscard]] double value() const noexcept { return info_->value; }

    /// Same parameter (not: same value).
    friend bool operator==(const Parameter& a, const Parameter& b) noexcept { return a.info_ == b.info_; }

  private:
    struct Info {
        std::string name;
        double value;
    };
    std::shared_ptr<const Info> info_;
};

} // namespace tepor
