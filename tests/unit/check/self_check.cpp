#include <cfenv>
#include <doctest/doctest.h>
#include <limits>
#include <tepor/check/cases.hpp>
#include <tepor/check/self_check.hpp>

using namespace tepor;

TEST_CASE("the self-check runs every case, and this build passes it") {
    const SelfCheck check = self_check();
    CHECK(check.cases.size() == verified_cases().size());
    CHECK(check.failed() == 0);
    CHECK(check.passed());
    CHECK(check.row_count() > 200);
    for (const CheckResult& result : check.cases) CHECK(result.passed());
}

TEST_CASE("a self-check with a wrong number, an error or an empty case does not pass") {
    const CheckRow right{"T", 20.0, 20.0 + 1e-10, 1e-9, "degC"};
    const CheckRow wrong{"T", 20.0, 20.1, 1e-9, "degC"};
    const CheckRow nothing{"T", 20.0, std::numeric_limits<double>::quiet_NaN(), 1e9, "degC"};
    CHECK(right.passed());
    CHECK(!wrong.passed());
    CHECK(!nothing.passed());

    SelfCheck check;
    CHECK(!check.passed()); // nothing was run
    check.cases.push_back({"1", "", "", {right}, ""});
    CHECK(check.passed());
    check.cases.push_back({"2", "", "", {right, wrong, nothing}, ""});
    CHECK(check.failed() == 2);
    CHECK(!check.passed());
    check.cases.pop_back();
    check.cases.push_back({"3", "", "", {}, "stopped"});
    CHECK(check.failed() == 1);
    CHECK(!check.cases.back().passed());
    check.cases.pop_back();
    check.build.keeps_denormals = false;
    CHECK(check.failed() == 0);
    CHECK(!check.passed());
}

TEST_CASE("the facts of the build name the compiler, and notice a changed rounding mode") {
    const BuildFacts facts = build_facts();
    CHECK(facts.sound());
    CHECK(!facts.compiler.empty());
    CHECK(facts.flags.find("C++ 20") != std::string::npos);
    std::fesetround(FE_UPWARD);
    const bool nearest = build_facts().rounds_to_nearest;
    std::fesetround(FE_TONEAREST);
    CHECK(!nearest);
}
