#pragma once
// What a Value holds, on the heap.

#include <tepor/describe/value.hpp>

namespace tepor::detail {

TEPOR_INLINE std::shared_ptr<const void> hold(Parameter parameter) {
    return std::make_shared<const Parameter>(std::move(parameter));
}
TEPOR_INLINE std::shared_ptr<const void> hold(Table table) {
    return std::make_shared<const Table>(std::move(table));
}
TEPOR_INLINE std::shared_ptr<const void> hold(Law law) {
    return std::make_shared<const Law>(std::move(law));
}
TEPOR_INLINE std::shared_ptr<const void> hold(Schedule schedule) {
    return std::make_shared<const Schedule>(std::move(schedule));
}

} // namespace tepor::detail

namespace tepor {

// Apart from the class because descriptions are full of them.
TEPOR_INLINE Value::Value(const Value& other) = default;
TEPOR_INLINE Value& Value::operator=(const Value& other) = default;
TEPOR_INLINE Value::~Value() = default;

} // namespace tepor
