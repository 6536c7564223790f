#pragma once
// A field with temperatures of one's own choice: what quantities and balances read, without a solve.

#include <tepor/body/assemble.hpp>
#include <tepor/field/field.hpp>
#include <vector>

namespace tepor::test {

/// The field of a body whose temperature at each place is f(place), with the residual that belongs to it.
template <class F>
Field given_field(const Body& body, F f) {
    const std::shared_ptr<const Model>& model = body.model();
    Values values = body.values();
    std::vector<double> T(detail::as_size(model->unknowns));
    for (std::size_t u = 0; u < T.size(); ++u) T[u] = f(model->places_of(values)[u]);
    std::vector<double> residual(T.size());
    Workspace work = model->kernels->workspace();
    Pass pass;
    pass.T = T.data();
    pass.residual = residual.data();
    assemble(*model, values, work, pass);
    if (pass.fault) raise(pass.fault);
    return Field(model, std::move(values), std::move(T), std::move(residual));
}

} // namespace tepor::test
