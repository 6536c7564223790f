// Chains solved by running sums, piece by piece.
#include "../../support/dense_system.hpp"
#include <cmath>
#include <doctest/doctest.h>
#include <tepor/linear/chain_sweep.hpp>
#include <tepor/linear/tridiagonal.hpp>

using namespace tepor;

namespace {

struct Chain {
    std::vector<double> resistance; ///< per link
    std::vector<double> load, sink; ///< per row
};

Chain random_chain(int rows, test::Random& random) {
    Chain chain;
    for (int i = 0; i < rows; ++i) {
        chain.load.push_back(random.between(-1.0, 2.0));
        chain.sink.push_back(0.0);
        if (i > 0) chain.resistance.push_back(random.between(0.2, 5.0));
    }
    return chain;
}

/// The chain's temperatures by the two-ended elimination of its matrix.
std::vector<double> eliminated(const Chain& chain) {
    const auto rows = chain.load.size();
    std::vector<double> diagonal = chain.sink;
    std::vector<double> off(rows, 0.0);
    for (std::size_t i = 0; i + 1 < rows; ++i) {
        off[i] = -1.0 / chain.resistance[i];
        diagonal[i] -= off[i];
        diagonal[i + 1] -= off[i];
    }
    std::vector<double> x = chain.load;
    std::vector<double> work(rows);
    REQUIRE(solve_tridiagonal(static_cast<Index>(rows), diagonal.data(), off.data(), x.data(), work.data()) == -1);
    return x;
}

/// There and back in pieces that end at every sink; `residual` per row.
std::vector<double> swept(const Chain& chain, int most, std::vector<double>& residual) {
    const int last = static_cast<int>(chain.load.size()) - 1;
    const auto at = [](int i) { return static_cast<std::size_t>(i); };
    std::vector<int> start;
    std::vector<ChainState> reached;
    ChainState state;
    int row = 0;
    while (row < last) {
        state.enter(chain.load[at(row)], chain.sink[at(row)]);
        start.push_back(row);
        int end = row + 1;
        while (end < last && end - row < most && chain.sink[at(end)] == 0.0) ++end;
        run_chain(end - row, chain.resistance.data() + row, chain.load.data() + row, state);
        reached.push_back(state);
        row = end;
    }
    state.enter(chain.load[at(last)], chain.sink[at(last)]);
    CHECK(state.grounded);
    std::vector<double> T = chain.resistance;
    T.push_back(state.sum);
    residual = chain.load;
    double flow = 0.0;
    for (std::size_t p = start.size(); p-- > 0;) {
        const int end = p + 1 < start.size() ? start[p + 1] : last;
        const ChainSums sums =
            return_chain(end - start[p], T.data() + start[p], residual.data() + start[p], reached[p], T[at(end)]);
        residual[at(end)] = flow - sums.flow_last + chain.sink[at(end)] * T[at(end)] - residual[at(end)];
        flow = sums.flow_first;
    }
    residual[0] = flow + chain.sink[0] * T[0] - residual[0];
    return T;
}

} // namespace

TEST_CASE("running sums agree with elimination wherever the chain is tied to a temperature") {
    test::Random random(31);
    for (const int rows : {2, 3, 4, 5, 6, 7, 9, 40, 300})
        for (const int most : {1, 3, 4, 7, chain_piece})
            for (const int tie : {0, 1, 2, 3}) { // to the left end, the right, the middle, and three places
                CAPTURE(rows);
                CAPTURE(most);
                CAPTURE(tie);
                Chain chain = random_chain(rows, random);
                if (tie == 0 || tie == 3) chain.sink.front() = 0.7;
                if (tie == 1 || tie == 3) chain.sink.back() = 1.9;
                if (tie >= 2) chain.sink[static_cast<std::size_t>(rows / 2)] = 0.4;
                std::vector<double> residual;
                const std::vector<double> T = swept(chain, most, residual);
                const std::vector<double> expected = eliminated(chain);
                // elimination subtracts: 300 links tied at one end cost it two digits
                CHECK(test::largest_difference(T, expected) <= 1e-11 * test::largest(expected));
                CHECK(test::largest(residual) <= 1e-13 * test::largest(expected));
            }
}

TEST_CASE("a row held at a temperature is where a chain may begin") {
    const double r[3] = {0.5, 1.0, 0.25};
    double T[3] = {0.5, 1.0, 0.25};
    const double given[3] = {0.0, 2.0, 0.0}; // heat at row 1
    double load[3] = {0.0, 2.0, 0.0};
    ChainState state{true, 0.0, 10.0};
    run_chain(3, r, given, state);
    const ChainState reached = state;
    const double held = 10.0;
    // by hand: all heat but what the last row takes flows through 0.5 K/W to the row held at 10
    state.enter(0.0, 4.0); // 1 / 4 K/W to ground
    const double flow = (10.0 + 2.0 * 0.5) / (0.5 + 1.0 + 0.25 + 0.25);
    CHECK(std::abs(state.sum - flow * 0.25) <= 1e-15);
    const ChainSums sums = return_chain(3, T, load, reached, state.sum, &held);
    CHECK(T[0] == 10.0);
    CHECK(std::abs(T[1] - flow * 1.5) <= 1e-14);
    CHECK(std::abs(T[2] - flow * 0.5) <= 1e-14);
    CHECK(std::abs(sums.flow_last - flow) <= 1e-14);
    CHECK(std::abs(sums.flow_first - (flow - 2.0)) <= 1e-14);
    CHECK(sums.residual <= 1e-14);
    CHECK(sums.hottest == 10.0);
    CHECK(sums.conductance == 7.0);
}

TEST_CASE("a full piece in lanes gives what its rows give one after the other") {
    test::Random random(77);
    for (const int tie : {0, 1, 2}) { // to the left, to nothing there, and to the left by next to nothing
        for (const bool loaded : {true, false}) {
            CAPTURE(tie);
            CAPTURE(loaded);
            std::vector<double> r(chain_piece), load(chain_piece), in_lanes(chain_piece), left(chain_piece),
                right(chain_piece);
            for (int c = 0; c < chain_piece; ++c) {
                const auto entry = static_cast<std::size_t>((c % chain_steps) * chain_lanes + c / chain_steps);
                r[static_cast<std::size_t>(c)] = in_lanes[entry] = random.between(0.2, 5.0);
                if (!loaded) continue;
                left[entry] = random.between(-1.0, 2.0);
                right[entry] = random.between(-1.0, 2.0);
                load[static_cast<std::size_t>(c)] += left[entry];
                if (c + 1 < chain_piece) load[static_cast<std::size_t>(c + 1)] += right[entry];
            }
            load[0] = 3.0;
            ChainState state;
            state.enter(load[0], tie == 0 ? 0.7 : tie == 1 ? 0.0 : 1e-9);
            ChainState other = state;
            run_chain(chain_piece, r.data(), load.data(), state);
            std::vector<double> T(chain_piece), residual(chain_piece);
            residual[0] = 3.0;
            ChainLanes lanes;
            run_lanes(in_lanes.data(), loaded ? left.data() : nullptr, right.data(), T.data(), residual.data(), lanes,
                      other);
            CHECK(other.grounded == state.grounded);
            CHECK(std::abs(other.resistance - state.resistance) <= 1e-14 * state.resistance);
            CHECK(std::abs(other.sum - state.sum) <= 1e-13 * std::abs(state.sum));

            const ChainSums got = return_lanes(T.data(), residual.data(), lanes, other, 40.0);
            const ChainSums expected = return_chain(chain_piece, r.data(), load.data(), state, 40.0);
            const double size = test::largest(r); // temperatures by now
            CHECK(test::largest_difference(T, r) <= 1e-12 * size);
            CHECK(residual[0] == 3.0);
            residual[0] = 0.0;
            CHECK(test::largest(residual) <= 1e-13 * size);
            CHECK(got.residual <= 1e-11 * size);
            CHECK(std::abs(got.conductance - expected.conductance) <= 1e-13 * expected.conductance);
            CHECK(std::abs(got.hottest - expected.hottest) <= 1e-12 * size);
            CHECK(std::abs(got.flow_first - expected.flow_first) <= 1e-12 * size);
            CHECK(std::abs(got.flow_last - expected.flow_last) <= 1e-12 * size);
        }
    }
}

TEST_CASE("no digits are lost in a chain of a million links") {
    // Ends tied by conductances 1e-3 and 1, links of 1 K/W, heat 1 W in the middle: T = W / sum of conductances seen there
    const int links = 1000000;
    const int middle = links / 2;
    ChainState state;
    state.enter(0.0, 1e-3);
    std::vector<double> r(chain_piece, 1.0);
    std::vector<double> load(chain_piece, 0.0);
    for (int row = 0; row < links; row += 100) {
        if (row == middle) state.enter(1.0, 0.0);
        run_chain(100, r.data(), load.data(), state);
        state.enter(0.0, 0.0);
    }
    state.enter(0.0, 1.0);
    // heat splits as the resistances 501000 and 500001 on both sides; what leaves at the right end flows through 1 K/W
    const double expected = 501000.0 / (501000.0 + 500001.0);
    CHECK(std::abs(state.sum - expected) <= 1e-12);
}
