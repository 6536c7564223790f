#pragma once
// Rules by their degree.

#include <tepor/base/numbers.hpp>
#include <tepor/quadrature/rules.hpp>

namespace tepor {

#if defined(TEPOR_BUILDING) // and not beside the class, where every user would pay for the check
static_assert(QuadratureRule<Rule<1>> && QuadratureRule<Rule<2>>);
#endif

TEPOR_INLINE Rule<1> line_rule(int degree) {
    return gauss_legendre(degree < 1 ? 1 : degree / 2 + 1);
}

TEPOR_INLINE Rule<2> square_rule(int n) {
    const auto line = gauss_legendre(n);
    Rule<2> rule(line.degree, line.size() * line.size());
    for (Index j = 0; j < line.size(); ++j)
        for (Index i = 0; i < line.size(); ++i)
            rule.add({line.point(i)[0], line.point(j)[0]}, line.weight(i) * line.weight(j));
    return rule;
}

} // namespace tepor
