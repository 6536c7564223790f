// The library's verified cases on this machine, with this compiler and these flags.

#include "numbers.hpp"
#include <fmt/core.h>
#include <tepor/check/self_check.hpp>
#include <tepor/output/text.hpp>

int main() {
    const tepor::SelfCheck check = tepor::self_check();
    fmt::print("{}", tepor::to_text(check, tepor::Detail::full));
    example::number("cases", static_cast<double>(check.cases.size()));
    example::number("rows", static_cast<double>(check.row_count()));
    example::number("failed", static_cast<double>(check.failed()));
    return check.passed() ? 0 : 1;
}
