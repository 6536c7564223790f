// The library's verified cases on this machine, with this compiler and these flags.

#include <fmt/core.h>
#include <tepor/check/self_check.hpp>
#include <tepor/output/text.hpp>

int main() {
    const tepor::SelfCheck check = tepor::self_check();
    fmt::print("{}", tepor::to_text(check, tepor::Detail::full));
    return check.passed() ? 0 : 1;
}
