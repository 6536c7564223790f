// The numeric pass over plane bodies, element by element and conductivity by conductivity, through Body and its model, beside
// triplets into an Eigen matrix and a scatter written by hand for the one case with the same arithmetic.
//
//   bench-assembly [--up-to N] [--csv FILE]
//
// Figures are processor time. Triplets keep their list from pass to pass and take the element matrices of the scatter by hand:
// what is left is the price of the list. "map" is what a model finds once: pattern and places of all entries.

#include "support/bodies.hpp"
#include "support/by_hand.hpp"
#include "support/ratios.hpp"
#include <Eigen/SparseCore>
#include <cstdlib>
#include <cstring>
#include <memory>
#include <string>
#include <tepor/body/assemble.hpp>
#include <tepor/body/pattern.hpp>
#include <tepor/element/quadrilateral.hpp>

namespace {

using namespace tepor;
using ratios::Side;

template <class K>
Value conductivity() {
    if constexpr (K::of_place) return of_place([](const auto& p) { return 1.0 + 0.5 * p.x; });
    if constexpr (K::of_temperature) {
        using by_hand::knot, by_hand::knot_value;
        return table({{knot[0], knot_value[0]}, {knot[1], knot_value[1]}, {knot[2], knot_value[2]}});
    }
    return by_hand::constant;
}

/// A body with its matrix, temperatures and all that is used again from pass to pass.
template <class E, class K>
struct Job {
    explicit Job(Mesh<E> mesh) : body(std::move(mesh)) {
        body.in("plate", Material{.conductivity = conductivity<K>()});
        body.on("left", FixedTemperature{0.0});
        model = body.model();
        prepare_matrix(*model, matrix);
        work = model->kernels->workspace();
        for (const Point p : model->places) T.push_back(700.0 * p.x * p.y);
    }

    void library() {
        Pass pass;
        pass.T = T.data();
        pass.matrix = &matrix;
        assemble(*model, body.values(), work, pass);
        benchmark::DoNotOptimize(matrix.lower.data());
    }
    void scatter() {
        by_hand::scatter<E, K>(block, *model, T.data(), matrix);
        benchmark::DoNotOptimize(matrix.lower.data());
    }
    void triplets() {
        constexpr int N = E::nodes, W = by_hand::Cells<E, K>::W;
        list.clear();
        const auto cells = static_cast<Index>(model->user_cell.size());
        list.reserve(static_cast<std::size_t>(cells) * N * N);
        for (Index first = 0; first < cells; first += W) {
            const int count = static_cast<int>(std::min<Index>(W, cells - first));
            const Id* ids = model->cell(first);
            block.form(ids, count, model->places.data(), T.data());
            for (int c = 0; c < count; ++c, ids += N)
                for (int i = 0; i < N; ++i)
                    for (int j = 0; j < N; ++j) {
                        double v = block.m[i > j ? i * (i + 1) / 2 + j : j * (j + 1) / 2 + i][c];
                        if constexpr (K::of_temperature) v += block.s[i * N + j][c];
                        list.emplace_back(ids[i], ids[j], v);
                    }
        }
        Eigen::SparseMatrix<double> sum(model->unknowns, model->unknowns);
        sum.setFromTriplets(list.begin(), list.end());
        benchmark::DoNotOptimize(sum.valuePtr());
    }
    void map() {
        SparseMatrix pattern;
        const auto found = detail::build_pattern(model->unknowns, E::nodes, model->cell_unknowns, {}, pattern);
        benchmark::DoNotOptimize(found.cells.data());
    }
    /// Largest difference of the two passes' matrices over the largest entry.
    double difference() {
        library();
        const SparseMatrix ours = matrix;
        scatter();
        double largest = 0.0;
        double worst = 0.0;
        for (std::size_t e = 0; e < ours.lower.size(); ++e) {
            largest = std::max(largest, std::abs(ours.lower[e]));
            worst = std::max(worst, std::abs(ours.lower[e] - matrix.lower[e]));
        }
        for (std::size_t e = 0; e < ours.upper.size(); ++e)
            worst = std::max(worst, std::abs(ours.upper[e] - matrix.upper[e]));
        return worst / largest;
    }

    Body body;
    std::shared_ptr<const Model> model;
    SparseMatrix matrix;
    Workspace work;
    std::vector<double> T;
    by_hand::Cells<E, K> block;
    std::vector<Eigen::Triplet<double>> list;
};

template <class E>
Mesh<E> lattice(Index unknowns) {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {1.0, 1.0});
    const auto cells = static_cast<Index>(std::sqrt(static_cast<double>(unknowns)) / E::order);
    drawing.split_x({.from = 0.0, .to = 1.0, .cells = cells}).split_y({.from = 0.0, .to = 1.0, .cells = cells});
    return tiles<E>(drawing);
}

std::shared_ptr<void>& the_job() {
    static std::shared_ptr<void> job;
    return job;
}

constexpr const char* our_pass = "assemble(), the numeric pass";
constexpr const char* by_hand_pass = "scatter by hand";

/// A job is made by the first work on it, in whose place the one before goes: memory for one at a time.
template <class E, class K>
void add(ratios::Table& table, const std::string& topic, Index size, double asked, Mesh<E> (*mesh)(Index)) {
    auto made = std::make_shared<std::weak_ptr<Job<E, K>>>();
    const auto get = [made, size, mesh, topic]() -> Job<E, K>& {
        if (made->expired()) {
            the_job().reset();
            auto job = std::make_shared<Job<E, K>>(mesh(size));
            if (!(job->difference() <= 1e-12)) {
                std::fprintf(stderr, "%s: the two passes differ\n", topic.c_str());
                std::exit(1);
            }
            *made = job;
            the_job() = job;
        }
        return *made->lock();
    };
    const auto n = static_cast<long>(size);
    const bool large = size > 200'000;
    const int times = large ? 7 : 25;
    table.add(topic, n, our_pass, Side::ours, times, [get] { get().library(); });
    table.add(topic, n, by_hand_pass, Side::beside, times, [get] { get().scatter(); });
    table.add(topic, n, "map, found once", Side::beside, 3, [get] { get().map(); });
    table.add(topic, n, "triplets, Eigen", Side::peer, large ? 3 : 5, [get] { get().triplets(); });
    table.ask(topic, asked, n);
}

template <class E>
void add_element(ratios::Table& table, const std::string& name, Index size) {
    const bool large = size > 200'000;
    const double asked = E::order == 1 ? (large ? 15.0 : 7.0) : (large ? 8.0 : 3.0);
    const std::string topic = "assembly, " + name;
    add<E, by_hand::Constant>(table, topic + ", constant k", size, asked, lattice<E>);
    add<E, by_hand::OfPlace>(table, topic + ", own law of place", size, asked, lattice<E>);
    add<E, by_hand::Tabled>(table, topic + ", k tabled over T", size, asked, lattice<E>);
}

/// Ratios that are no times over peers.
void note_ratios(ratios::Table& table) {
    const auto entries = table.entries();
    const auto least = [&](const std::string& topic, long size, const std::string& what) {
        for (const ratios::Entry& e : entries)
            if (e.topic == topic && e.size == size && e.what == what && !e.milliseconds.empty())
                return ratios::Table::least(e);
        return 0.0;
    };
    for (const ratios::Entry& e : entries) {
        if (e.what != our_pass || e.milliseconds.empty()) continue;
        const double ours = ratios::Table::least(e);
        table.note(e.topic, e.size, "pass over scatter by hand (to reach 1.25)",
                   ours / least(e.topic, e.size, by_hand_pass));
        table.note(e.topic, e.size, "map over pass (to reach 5)", least(e.topic, e.size, "map, found once") / ours);
        if (e.topic == "assembly, general mesh, shuffled")
            table.note(e.topic, e.size, "pass over the pass in good order (to reach 1.3)",
                       ours / least("assembly, general mesh", e.size, our_pass));
    }
}

} // namespace

int main(int count, char** arguments) {
    Index up_to = 1'000'000;
    const char* csv = nullptr;
    for (int i = 1; i + 1 < count; i += 2) {
        if (std::strcmp(arguments[i], "--up-to") == 0) up_to = std::atol(arguments[i + 1]);
        if (std::strcmp(arguments[i], "--csv") == 0) csv = arguments[i + 1];
    }
    ratios::Table table;
    for (const Index size : {Index{100'000}, Index{1'000'000}}) {
        if (size > up_to) continue;
        add_element<Triangle<1>>(table, "triangles of order 1", size);
        add_element<Triangle<2>>(table, "triangles of order 2", size);
        add_element<Quadrilateral<1>>(table, "quadrilaterals of order 1", size);
        add_element<Quadrilateral<2>>(table, "quadrilaterals of order 2", size);
        const double asked = size > 200'000 ? 15.0 : 7.0;
        add<Triangle<1>, by_hand::OfPlace>(table, "assembly, general mesh", size, asked,
                                           [](Index n) { return bodies::mesh_of("general", n); });
        add<Triangle<1>, by_hand::OfPlace>(table, "assembly, general mesh, shuffled", size, asked,
                                           [](Index n) { return bodies::mesh_of("shuffled", n); });
    }
    int none = 1;
    benchmark::Initialize(&none, arguments);
    benchmark::RunSpecifiedBenchmarks(&table);
    note_ratios(table);
    table.print();
    return csv && !table.write(csv) ? 1 : 0;
}
