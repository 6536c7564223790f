#pragma once
// Running the cases, and what the compiler tells of itself.

#include <cfenv>
#include <cfloat>
#include <exception>
#include <limits>
#include <tepor/base/text.hpp>
#include <tepor/check/cases.hpp>
#include <tepor/check/self_check.hpp>
#include <tepor/version.hpp>

namespace tepor {

TEPOR_INLINE bool CheckResult::passed() const noexcept {
    if (!error.empty() || rows.empty()) return false;
    for (const CheckRow& row : rows)
        if (!row.passed()) return false;
    return true;
}

TEPOR_INLINE Index SelfCheck::row_count() const noexcept {
    Index count = 0;
    for (const CheckResult& c : cases) count += static_cast<Index>(c.rows.size());
    return count;
}

TEPOR_INLINE Index SelfCheck::failed() const noexcept {
    Index count = 0;
    for (const CheckResult& c : cases) {
        if (!c.error.empty() || c.rows.empty()) ++count;
        for (const CheckRow& row : c.rows)
            if (!row.passed()) ++count;
    }
    return count;
}

TEPOR_INLINE BuildFacts build_facts() {
    BuildFacts facts;
    facts.version = TEPOR_VERSION;
#if defined(__clang__)
    facts.compiler = detail::text("clang++ ", __clang_major__, ".", __clang_minor__, ".", __clang_patchlevel__);
#elif defined(__GNUC__)
    facts.compiler = detail::text("g++ ", __GNUC__, ".", __GNUC_MINOR__, ".", __GNUC_PATCHLEVEL__);
#elif defined(_MSC_VER)
    facts.compiler = detail::text("MSVC ", _MSC_FULL_VER);
#else
    facts.compiler = "unknown compiler";
#endif
    facts.flags = detail::text("C++ ", __cplusplus);
#if defined(__OPTIMIZE__)
    facts.flags += ", optimised";
#elif defined(__GNUC__)
    facts.flags += ", not optimised";
#endif
#if defined(NDEBUG)
    facts.flags += ", assertions off";
#else
    facts.flags += ", assertions on";
#endif
#if defined(__AVX512F__)
    facts.flags += ", AVX-512";
#elif defined(__AVX2__)
    facts.flags += ", AVX2";
#elif defined(__AVX__)
    facts.flags += ", AVX";
#endif
#if defined(__FMA__) || defined(__ARM_FEATURE_FMA)
    facts.flags += ", fused multiply-add";
#endif
#if defined(TEPOR_COMPILED)
    facts.flags += ", compiled library";
#else
    facts.flags += ", header-only";
#endif
    facts.flags += detail::text(", FLT_EVAL_METHOD ", FLT_EVAL_METHOD);
#if defined(__FAST_MATH__) || (defined(__FINITE_MATH_ONLY__) && __FINITE_MATH_ONLY__ > 0) || defined(_M_FP_FAST)
    facts.fast_math = true;
#endif
    // volatile: the question is what the running program does, not what the compiler folds
    volatile double nan = std::numeric_limits<double>::quiet_NaN();
    volatile double also_nan = nan;
    facts.keeps_nan = !(nan == also_nan) && !(nan > 0.0) && !(nan <= 0.0);
    volatile double smallest = std::numeric_limits<double>::min();
    volatile double half = 0.5;
    volatile double denormal = smallest * half;
    facts.keeps_denormals = denormal > 0.0 && denormal * 2.0 == smallest;
    facts.rounds_to_nearest = std::fegetround() == FE_TONEAREST;
    return facts;
}

TEPOR_INLINE SelfCheck self_check() {
    SelfCheck report;
    report.build = build_facts();
    for (const CheckCase& c : verified_cases()) {
        CheckResult result{c.id, c.title, c.source, {}, {}};
        try {
            result.rows = c.run();
        } catch (const std::exception& e) {
            result.error = e.what();
            if (result.error.empty()) result.error = "stopped without a message";
        }
        report.cases.push_back(std::move(result));
    }
    return report;
}

} // namespace tepor
