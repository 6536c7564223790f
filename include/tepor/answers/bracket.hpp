#pragma once
// bracket: a guaranteed interval for a quantity, refined until it is as narrow as asked.

#include <string>
#include <tepor/base/config.hpp>
#include <tepor/body/body.hpp>
#include <tepor/describe/quantity.hpp>
#include <vector>

namespace tepor {

/// How narrow, and what it may cost. With neither width given: 1 % of |value|; with both: the one reached first.
struct BracketOptions {
    double relative_width = 0.0;  ///< of |value|
    double absolute_width = 0.0;  ///< in the unit of the quantity
    Index max_unknowns = 200'000; ///< no pass on a mesh with more, the first one excepted
    double max_seconds = 60.0;    ///< no pass that would end later, judged by the one before
};

/// One pass of a bracket.
struct BracketPass {
    Index cells = 0;
    Index unknowns = 0;
    double lower = 0.0; ///< of this pass alone
    double upper = 0.0;
    double seconds = 0.0;
};

/// Guaranteed: lower <= exact value <= upper, rounding and solver error included.
struct Bracket {
    double lower = 0.0;
    double value = 0.0; ///< the best single number, inside
    double upper = 0.0;
    Index cells = 0; ///< of the last pass
    Index unknowns = 0;
    bool reached = false;            ///< the width asked for was reached; else a budget was spent first
    std::vector<BracketPass> passes; ///< what it did
    std::string remark;              ///< what the interval is for, when not for the body as drawn: "of the polygon ..."

    [[nodiscard]] double width() const noexcept { return upper - lower; }
    [[nodiscard]] double relative_width() const noexcept { return width() / (value < 0.0 ? -value : value); }
};

/// A guaranteed lower and upper bound of a quantity of the steady state at the present parameter values.
///
/// Each pass solves for the temperature and for the influence of errors on the quantity (the adjoint), finds equilibrated fluxes
/// of both, and bisects the cells that carry half of the width. Body's own mesh is the first; curved sides are replaced by their
/// chords, and the interval is then that of the polygon. Nothing estimated comes back.
///
/// Means over regions, faces and spots, heat through faces, contacts and between films, temperatures at points inside one material
/// (or on its straight insulated edge), conductances between two faces. Bodies: triangles of order 1 and 2, segments. Faces may
/// radiate where no heat is given: then the temperatures between which the body lies are known, and with them how the law of
/// radiation bends (all but conductances; not in r-z).
/// @throws Error not_certifiable  naming the term or quantity for which no bound exists
///               bad_value        an option
Bracket bracket(const Body& body, const Quantity& quantity, const BracketOptions& options = {});

} // namespace tepor

#ifndef TEPOR_COMPILED
#include <tepor/answers/impl/bracket.hpp>
#endif
