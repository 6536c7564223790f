// A sweep of values of one linear body: what each value costs through Body::set and steady(body, field), beside a body solved
// anew for each and beside CHOLMOD, which factors again for every matrix and solves only for every load.
//
//   bench-sweep [--values N] [--csv FILE]
//
// Linear triangles on a bar sixteen times as long as wide, a film on its short ends. Figures are processor time of this process
// for all N values (1,000 as a rule), or for a tenth of them where it says so.

#include "support/bodies.hpp"
#include "support/ratios.hpp"
#include <cstdlib>
#include <cstring>
#include <memory>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/steady.hpp>
#if defined(TEPOR_HAVE_CHOLMOD)
#include <tepor/linear/outside/cholmod.hpp>
#endif

namespace {

using namespace tepor;
using ratios::Side;

void need(bool fine) {
    if (!fine) std::abort();
}

/// About n unknowns, 16 times as many along as across.
struct Swept {
    explicit Swept(Index n) {
        const Index across = static_cast<Index>(std::sqrt(static_cast<double>(n) / 16.0));
        Tiles drawing;
        drawing.add("bar", {0.0, 0.0}, {1.6, 0.1});
        drawing.split_x({.from = 0.0, .to = 1.6, .cells = 16 * across})
            .split_y({.from = 0.0, .to = 0.1, .cells = across});
        made = std::make_unique<Body>(tiles<Triangle<1>>(drawing));
        made->in("bar", Material{.conductivity = k});
        made->in("bar", Generation{.per_volume = source});
        made->on("left", Film{.coefficient = film, .fluid = 20.0});
        made->on("right", Film{.coefficient = 40.0, .fluid = 10.0});
        steady(*made, field);
    }
    Parameter k{"k", 5.0}, source{"source", 1e3}, film{"film", 25.0};
    std::unique_ptr<Body> made;
    Field field;
};

void add_size(ratios::Table& table, Index n, Index values) {
    const long size = static_cast<long>(n);
    const std::string topic = "a sweep of values, " + std::to_string(values) + " of them";
    const auto swept = [&](const char* what, int times, Index count, auto change) {
        const auto kept = std::make_shared<Swept>(n);
        table.add(topic, size, what, Side::beside, times, [kept, count, change] {
            for (Index v = 0; v < count; ++v) {
                change(*kept, 1.0 + 0.001 * static_cast<double>(v + 1));
                steady(*kept->made, kept->field);
            }
        });
    };
    swept("loads alone (source)", 3, values, [](Swept& s, double f) { s.made->set(s.source, 1e3 * f); });
    swept("film of the short end", 3, values, [](Swept& s, double f) { s.made->set(s.film, 25.0 * f); });
    swept("conductivity, a tenth of the values", 3, values / 10, [](Swept& s, double f) { s.made->set(s.k, 5.0 * f); });
    table.add(topic, size, "a new body each, a tenth of the values", Side::beside, 2, [n, values] {
        for (Index v = 0; v < values / 10; ++v) need(Swept(n).field.temperature()[0] > 0.0);
    });
#if defined(TEPOR_HAVE_CHOLMOD)
    const auto kept = std::make_shared<Swept>(n);
    const auto engine = std::make_shared<Engine>(kept->made->model());
    const std::vector<double> cold(static_cast<std::size_t>(kept->made->model()->unknowns), 0.0);
    Pass pass;
    pass.T = cold.data();
    pass.matrix = &engine->matrix;
    pass.residual = engine->residual.data();
    assemble(*kept->made->model(), kept->made->values(), engine->work, pass);
    const auto cholmod = std::make_shared<CholmodSolver>();
    cholmod->analyze(engine->matrix, engine->matrix.rows);
    need(cholmod->factor(engine->matrix));
    table.add(topic, size, "CHOLMOD: factor and solve, a tenth of the values", Side::beside, 2,
              [engine, cholmod, values] {
                  for (Index v = 0; v < values / 10; ++v) {
                      need(cholmod->factor(engine->matrix));
                      std::vector<double> x = engine->residual;
                      cholmod->solve(x.data());
                  }
              });
    table.add(topic, size, "CHOLMOD: solve", Side::beside, 3, [engine, cholmod, values] {
        for (Index v = 0; v < values; ++v) {
            std::vector<double> x = engine->residual;
            cholmod->solve(x.data());
        }
    });
#endif
}

} // namespace

int main(int count, char** words) {
    Index values = 1000;
    const char* csv = nullptr;
    for (int i = 1; i + 1 < count; i += 2) {
        if (std::strcmp(words[i], "--values") == 0) values = static_cast<Index>(std::atof(words[i + 1]));
        if (std::strcmp(words[i], "--csv") == 0) csv = words[i + 1];
    }
    int none = 1;
    benchmark::Initialize(&none, words);
    ratios::Table table;
    for (const Index n : {2500, 10000, 40000}) add_size(table, n, values);
    benchmark::RunSpecifiedBenchmarks(&table);
    table.print();
    return csv && !table.write(csv) ? 1 : 0;
}
