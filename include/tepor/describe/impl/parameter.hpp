#pragma once
// Making a Parameter.

#include <cmath>
#include <tepor/base/error.hpp>
#include <tepor/base/text.hpp>
#include <tepor/describe/parameter.hpp>
#include <utility>

namespace tepor {

TEPOR_INLINE Parameter::Parameter(std::string name, double value) {
    if (name.empty())
        throw Error(ErrorCode::bad_name, "", "Parameter: the name is empty; give it the name reports should show");
    if (!std::isfinite(value))
        throw Error(ErrorCode::bad_value, name,
                    detail::text("Parameter \"", name, "\": value = ", value, ", expected a finite number"));
    info_ = std::make_shared<const Info>(Info{std::move(name), value});
}

} // namespace tepor
