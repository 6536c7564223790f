#pragma once
// Tables of answers.

#include <cmath>
#include <tepor/output/answers.hpp>
#include <tepor/output/table.hpp>

namespace tepor {

TEPOR_INLINE std::string to_text(const Gradient& gradient) {
    using detail::significant;
    std::string out = fmt::format("{} = {} {}\n", gradient.quantity().label(), significant(gradient.value()),
                                  gradient.quantity().unit());
    detail::TextTable table({"parameter", "value", "derivative", "% per %"});
    for (const Gradient::Entry& e : gradient.ranked())
        table.row({e.parameter.name(), significant(e.value), significant(e.derivative), significant(e.relative, 4)});
    if (table.empty()) return out + "  the body has no parameters\n";
    out += table.text();
    if (!gradient.exact()) out += "  an own law of plain doubles takes part: slopes by differences, about six digits\n";
    return out;
}

TEPOR_INLINE std::string to_text(const Sized& sized) {
    std::string out = fmt::format("{}{}\n", sized ? "" : "no single answer: ", sized.message);
    if (sized.solves > 0) out += fmt::format("  {} steady solves\n", sized.solves);
    return out;
}

TEPOR_INLINE std::string to_text(const Fitted& fitted) {
    using detail::significant;
    detail::TextTable table({"parameter", "value", "uncertainty", "from", "to (95 %)"});
    for (const Parameter& p : fitted.parameters()) {
        const Estimated e = fitted[p];
        table.row(
            {p.name(), significant(e.value), significant(e.uncertainty, 3), significant(e.low), significant(e.high)});
    }
    std::string out = table.text();
    const std::vector<double>& C = fitted.covariance();
    const std::size_t m = fitted.parameters().size();
    for (std::size_t i = 0; i < m; ++i)
        for (std::size_t j = i + 1; j < m; ++j) {
            const double r = C[i * m + j] / std::sqrt(C[i * m + i] * C[j * m + j]);
            if (std::abs(r) > 0.9)
                out += fmt::format("  \"{}\" and \"{}\" move together: correlation {:.3f}\n",
                                   fitted.parameters()[i].name(), fitted.parameters()[j].name(), r);
        }
    for (const Parameter& p : fitted.on_bounds()) out += fmt::format("  \"{}\" ended on its bound\n", p.name());
    out +=
        fmt::format("  chi-square {} for {} degrees of freedom, probability {}\n", significant(fitted.chi_square(), 4),
                    fitted.degrees_of_freedom(), significant(fitted.goodness(), 3));
    return out;
}

TEPOR_INLINE std::string to_text(const StateSpace& model) {
    using detail::significant;
    std::string out = fmt::format("{} states, step {} s, {} inputs, {} outputs\n", model.order,
                                  significant(model.sample_time), model.inputs, model.outputs);
    out +=
        fmt::format("  error at most {} of the peak gain (scaled L2 norms; the basis' share of it, {}, certified at {} "
                    "frequencies)\n",
                    significant(model.error_bound / model.peak_gain, 3),
                    significant(model.basis_error / model.peak_gain, 3), model.frequencies.size());
    if (model.linearised) out += "  linearised at the operating point\n";
    detail::TextTable table({"steady gain by", "input at", "of output", "at", "unit", "gain"});
    for (Index j = 0; j < model.inputs; ++j)
        for (Index i = 0; i < model.outputs; ++i)
            table.row({model.input_names[detail::as_size(j)], significant(model.u0[detail::as_size(j)]),
                       model.output_names[detail::as_size(i)], significant(model.y0[detail::as_size(i)]),
                       model.output_units[detail::as_size(i)], significant(model.steady_gain(i, j))});
    return out + table.text();
}

} // namespace tepor
