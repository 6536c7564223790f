#pragma once
// The system of a body in an engine, as a solve would form it.

#include <tepor/solve/engine.hpp>
#include <vector>

namespace tepor::test {

/// The matrix of the body and the residual of `T` in the engine.
inline void form_system(const Body& body, Engine& engine, const std::vector<double>& T) {
    Pass pass;
    pass.T = T.data();
    pass.matrix = &engine.matrix;
    pass.residual = engine.residual.data();
    assemble(*body.model(), body.values(), engine.work, pass);
}

/// The same at 20 degrees throughout.
inline void form_system(const Body& body, Engine& engine) {
    form_system(body, engine, std::vector<double>(static_cast<std::size_t>(body.model()->unknowns), 20.0));
}

} // namespace tepor::test
