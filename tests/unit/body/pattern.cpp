// The pattern and the scatter map against the plain way: a set of pairs per row, and a search for each.

#include <algorithm>
#include <doctest/doctest.h>
#include <set>
#include <tepor/base/error.hpp>
#include <tepor/body/pattern.hpp>
#include <vector>

using namespace tepor;

namespace {

using Pairs = std::vector<std::pair<Id, Id>>;

/// What build_pattern() has to give, from sets.
void check_plain(Index unknowns, int nodes, const std::vector<Id>& cells, const Pairs& extra) {
    SparseMatrix made;
    const detail::Scatter scatter = detail::build_pattern(unknowns, nodes, cells, extra, made);
    std::vector<std::set<Id>> rows(detail::as_size(unknowns));
    for (Index u = 0; u < unknowns; ++u) rows[detail::as_size(u)].insert(detail::as_id(u));
    const auto couple = [&](Id a, Id b) { rows[detail::as_size(std::max(a, b))].insert(std::min(a, b)); };
    const std::size_t n = detail::as_size(nodes);
    for (std::size_t e = 0; e < cells.size(); e += n)
        for (std::size_t i = 0; i < n; ++i)
            for (std::size_t j = 0; j < i; ++j) couple(cells[e + i], cells[e + j]);
    for (const auto& [a, b] : extra) couple(a, b);

    std::vector<Id> start{0};
    std::vector<Id> column;
    for (const std::set<Id>& row : rows) {
        column.insert(column.end(), row.begin(), row.end());
        start.push_back(detail::as_id(column.size()));
    }
    CHECK(made.rows == unknowns);
    CHECK(made.start == start);
    CHECK(made.column == column);
    CHECK(made.lower.empty());

    const auto place = [&](Id a, Id b) {
        const auto row = detail::as_size(std::max(a, b));
        return start[row] + static_cast<Id>(std::distance(rows[row].begin(), rows[row].find(std::min(a, b))));
    };
    std::vector<Id> map;
    for (std::size_t e = 0; e < cells.size(); e += n)
        for (std::size_t i = 0; i < n; ++i)
            for (std::size_t j = 0; j <= i; ++j) map.push_back(place(cells[e + i], cells[e + j]));
    CHECK(scatter.cells == map);
    std::vector<Id> other;
    for (const auto& [a, b] : extra) other.push_back(place(a, b));
    CHECK(scatter.extra == other);
}

/// `cells` cells of `nodes` unknowns each, different ones within a cell.
std::vector<Id> scattered(Index unknowns, int nodes, int cells) {
    std::vector<Id> all;
    unsigned state = 12345;
    for (int c = 0; c < cells; ++c) {
        std::set<Id> cell;
        while (static_cast<int>(cell.size()) < nodes) {
            state = state * 1664525U + 1013904223U; // from memory: a linear congruential generator of common practice
            const Id u = static_cast<Id>((state >> 8U) % static_cast<unsigned>(unknowns));
            if (cell.insert(u).second) all.push_back(u);
        }
    }
    return all;
}

} // namespace

TEST_CASE("rows hold what meets in a cell or a contact, and the map finds every pair") {
    for (const int nodes : {2, 3, 4, 6, 9, 16}) {
        CAPTURE(nodes);
        check_plain(60, nodes, scattered(60, nodes, 40), {});
        check_plain(400, nodes, scattered(400, nodes, 30), {{3, 250}, {250, 3}, {399, 0}, {17, 17}});
    }
}

TEST_CASE("an unknown that many cells share, the last or the first of all, keeps its row") {
    for (const Id hub : {0, 500, 1000}) {
        CAPTURE(hub);
        std::vector<Id> fan;
        for (Id u = 0; u < 1000; ++u) {
            const auto rim = [hub](Id v) { return v < hub ? v : v + 1; };
            fan.insert(fan.end(), {rim(u), hub, rim((u + 1) % 1000)});
        }
        check_plain(1001, 3, fan, {});
    }
}

TEST_CASE("a body of no cells, and one without a neighbour, have patterns") {
    check_plain(0, 3, {}, {});
    check_plain(3, 2, {2, 0}, {}); // the unknown in between stands alone
}
