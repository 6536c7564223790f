#pragma once
// Tables of what is certain and what is likely.

#include <algorithm>
#include <tepor/output/certainty.hpp>
#include <tepor/output/table.hpp>

namespace tepor {

TEPOR_INLINE std::string to_text(const Bracket& bracket) {
    using detail::significant;
    std::string out =
        fmt::format("guaranteed: {} <= {} <= {}, {} wide\n", significant(bracket.lower, 9),
                    significant(bracket.value, 9), significant(bracket.upper, 9), significant(bracket.width(), 3));
    out += fmt::format("  {}: {} cells, {} unknowns, {} passes\n",
                       bracket.reached ? "as narrow as asked" : "not as narrow as asked, the budget is spent",
                       bracket.cells, bracket.unknowns, bracket.passes.size());
    if (!bracket.remark.empty()) out += fmt::format("  {}\n", bracket.remark);
    detail::TextTable table({"cells", "unknowns", "lower", "upper", "seconds"});
    for (const BracketPass& pass : bracket.passes)
        table.row({fmt::format("{}", pass.cells), fmt::format("{}", pass.unknowns), significant(pass.lower, 9),
                   significant(pass.upper, 9), significant(pass.seconds, 2)});
    return out + table.text();
}

TEPOR_INLINE std::string to_text(const ErrorBound& bound) {
    using detail::significant;
    std::string out =
        fmt::format("error in the energy norm at most {} (W K)^(1/2), {} of the field's {}\n", significant(bound.total),
                    significant(bound.relative(), 3), significant(bound.field_energy));
    out += fmt::format("  of it left over by the solver {}, rounding {}\n", significant(bound.residual, 2),
                       significant(bound.rounding, 2));
    std::vector<double> parts = bound.per_cell;
    std::sort(parts.begin(), parts.end(), [](double a, double b) { return a > b; });
    double all = 0.0, sum = 0.0;
    for (const double part : parts) all += part * part;
    std::size_t most = 0;
    while (most < parts.size() && sum < 0.5 * all) sum += parts[most] * parts[most], ++most;
    out += fmt::format("  {} of {} cells hold half of its square\n", most, parts.size());
    if (!bound.remark.empty()) out += fmt::format("  {}\n", bound.remark);
    return out;
}

TEPOR_INLINE std::string to_text(const Estimate& estimate) {
    using detail::significant;
    std::string out = fmt::format("{}, likely within {} (an estimate, not a bound)\n", significant(estimate.value, 9),
                                  significant(estimate.likely_error, 2));
    out += fmt::format("  {}; {}\n",
                       estimate.reached ? "as accurate as asked" : "not as accurate as asked, the budget is spent",
                       estimate.order > 0.0 ? fmt::format("the error falls as h^{}", significant(estimate.order, 2))
                                            : std::string("no order to be seen"));
    detail::TextTable table({"cells", "unknowns", "value", "seconds"});
    for (const EstimatePass& pass : estimate.passes)
        table.row({fmt::format("{}", pass.cells), fmt::format("{}", pass.unknowns), significant(pass.value, 9),
                   significant(pass.seconds, 2)});
    return out + table.text();
}

} // namespace tepor
