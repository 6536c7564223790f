#pragma once
// Self-checks as text.

#include <algorithm>
#include <cmath>
#include <tepor/output/table.hpp>
#include <tepor/output/text.hpp>

namespace tepor {

namespace detail {

/// Largest share of its tolerance that a row of the case uses.
inline double worst_share(const CheckResult& result) {
    double worst = 0.0;
    for (const CheckRow& row : result.rows) {
        const double share = std::abs(row.got - row.expected) / row.tolerance;
        if (!(share <= worst)) worst = share;
    }
    return worst;
}

inline std::string check_rows(const CheckResult& result, Detail detail) {
    TextTable table({"", "", "expected", "got", "allowed", "unit"});
    for (const CheckRow& row : result.rows)
        if (detail == Detail::full || !row.passed())
            table.row({row.passed() ? "ok" : "FAILED", row.what, significant(row.expected, 10),
                       significant(row.got, 10), significant(row.tolerance, 2), row.unit});
    return table.empty() ? std::string() : table.text("      ");
}

} // namespace detail

TEPOR_INLINE std::string to_text(const SelfCheck& check, Detail how_much) {
    const BuildFacts& build = check.build;
    std::string out = fmt::format("Self-check of tepor {}\n  {}, {}\n", build.version, build.compiler, build.flags);
    if (build.fast_math) out += "  WARNING: built with value-changing optimisation (fast-math): no promise holds\n";
    if (!build.keeps_nan) out += "  WARNING: comparisons with NaN are not false: wrong input would pass\n";
    if (!build.keeps_denormals) out += "  WARNING: denormal numbers are flushed to zero (linked with fast-math?)\n";
    if (!build.rounds_to_nearest) out += "  WARNING: the rounding mode is not to nearest\n";
    if (build.sound()) out += "  arithmetic: sound (no fast-math, NaN and denormals kept, rounding to nearest)\n";
    std::size_t widest = 0;
    for (const CheckResult& c : check.cases) widest = std::max(widest, detail::width_of(c.title));
    for (const CheckResult& c : check.cases) {
        out += fmt::format("  {:<6} {:<10} {}{}", c.passed() ? "ok" : "FAILED", c.id, c.title,
                           std::string(widest - detail::width_of(c.title), ' '));
        out += c.error.empty() ? fmt::format("  {:>3} rows, worst at {:.0f} % of its tolerance\n", c.rows.size(),
                                             100.0 * detail::worst_share(c))
                               : fmt::format("  stopped: {}\n", c.error);
        if (how_much == Detail::full) out += fmt::format("      source: {}\n", c.source);
        out += detail::check_rows(c, how_much);
    }
    return out + fmt::format("{} of {} numbers within tolerance, {}\n",
                             check.row_count() - std::min(check.row_count(), check.failed()), check.row_count(),
                             check.passed() ? "self-check passed" : "SELF-CHECK FAILED");
}

} // namespace tepor
