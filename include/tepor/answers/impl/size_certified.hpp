#pragma once
// Sizing for a limit that the bad end of a bracket keeps.

#include <cmath>
#include <tepor/answers/bracket.hpp>
#include <tepor/answers/sized.hpp>
#include <tepor/answers/target.hpp>
#include <tepor/base/text.hpp>

namespace tepor::detail {

/// Sizes for a limit drawn in by what the bracket may be off, until its bad end keeps the limit itself.
/// `run(Target)` sizes, `make(value)` gives the body there.
template <class Run, class Make>
Sized size_certified(const Run& run, const Make& make, const Quantity& quantity, Target target,
                     const SizeOptions& options) {
    using Kind = Quantity::Kind;
    const Kind kind = quantity.kind();
    if (!target.limit())
        throw Error(ErrorCode::not_certifiable, quantity.label(),
                    text("size_for: certified_side needs a limit, at_most(", target.value, ") or at_least(",
                         target.value, "); a value to meet has no good side"));
    if (kind == Kind::hottest_in || kind == Kind::hottest_on || kind == Kind::coldest_in || kind == Kind::coldest_on)
        throw Error(ErrorCode::not_certifiable, quantity.label(),
                    text("size_for: no certified bound on the bad side of ", quantity.label(),
                         " exists; ask for a mean or a place"));
    const bool below = target.kind == Target::Kind::at_most;
    Target drawn_in = target;
    BracketOptions width;
    width.relative_width = options.certified_width;
    Index solves = 0;
    for (int pass = 0; pass < 8; ++pass) {
        Sized sized = run(drawn_in);
        if (pass == 0) solves = sized.solves;
        sized.solves = solves;
        if (!sized) return sized;
        const Bracket certain = bracket(make(sized.value), quantity, width);
        sized.lower = certain.lower;
        sized.upper = certain.upper;
        const double bad = below ? certain.upper : certain.lower;
        if (target.kept_by(bad)) {
            sized.message += text("; certified between ", certain.lower, " and ", certain.upper);
            return sized;
        }
        // a little more than the bracket says, so that the next pass ends on the good side
        const double gap = 1.05 * std::abs(bad - sized.reached) + 1e-12 * std::abs(target.value);
        drawn_in.value = target.value + (below ? -gap : gap);
    }
    throw Error(ErrorCode::not_converged, quantity.label(),
                text("size_for: the bad end of the bracket does not come to keep the limit ", target.value,
                     "; refine the mesh or widen the bounds"));
}

} // namespace tepor::detail
