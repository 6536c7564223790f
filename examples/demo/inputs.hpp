#pragma once
// The inputs of a demonstration, each with the place it comes from.

#include <fmt/core.h>
#include <string>
#include <vector>

namespace demo {

struct Input {
    std::string what;
    std::string value;
    std::string origin; ///< a source, or "common practice, no source"
};

inline constexpr const char* practice = "common practice, no source";

inline void print(const std::vector<Input>& inputs) {
    std::size_t what = 0;
    std::size_t value = 0;
    for (const Input& i : inputs) {
        what = std::max(what, i.what.size());
        value = std::max(value, i.value.size());
    }
    fmt::print("Inputs and where they come from\n");
    for (const Input& i : inputs) fmt::print("  {:<{}}  {:<{}}  {}\n", i.what, what, i.value, value, i.origin);
}

/// A statement that must hold; counts those that do not.
class Checks {
  public:
    void holds(bool condition, const std::string& statement) {
        fmt::print("  {} {}\n", condition ? "ok    " : "FAILED", statement);
        if (!condition) ++failed_;
    }
    [[nodiscard]] int failed() const { return failed_; }

  private:
    int failed_ = 0;
};

} // namespace demo
