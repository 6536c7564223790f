// Steady bodies in the plane, through Body and steady(), beside what one would put together from general-purpose libraries:
// triplets into an Eigen matrix, then Eigen's Cholesky, CHOLMOD, or hypre's conjugate gradients with BoomerAMG.
//
//   bench-bodies [--from N] [--up-to N] [--mesh lattice|general|shuffled] [--csv FILE] [--memory N] [--picture FILE.svg]
//
// Linear triangles on the unit square, conductivity a function of place, films all around. Figures are processor time of
// this process. Peers get the matrix in the numbering of the mesh as it is given, exact zeros dropped, and solve to a
// residual of 1e-8, as the engine does in the topics "system"; steady() goes on until the heat balances to 1e-10.

#include "support/bodies.hpp"
#include "support/hypre_cg.hpp"
#include "support/picture.hpp"
#include "support/ratios.hpp"
#include <Eigen/SparseCholesky>
#include <cmath>
#include <cstdlib>
#include <cstring>
#include <ctime>
#include <memory>
#include <string>
#include <sys/resource.h>
#include <sys/wait.h>
#include <tepor/solve/engine.hpp>
#include <tepor/solve/steady.hpp>
#include <unistd.h>
#include <vector>
#if defined(TEPOR_HAVE_CHOLMOD)
#include <tepor/linear/outside/cholmod.hpp>
#endif

namespace {

using namespace tepor;
using EigenMatrix = Eigen::SparseMatrix<double>;

/// A mesh, made when it is first needed and forgotten with the last topic that uses it.
struct Case {
    std::string mesh;
    Index wanted = 0;
    std::unique_ptr<Mesh<Triangle<1>>> made;
    std::unique_ptr<bodies::System> system;

    const Mesh<Triangle<1>>& get() {
        if (!made) made = std::make_unique<Mesh<Triangle<1>>>(bodies::mesh_of(mesh, wanted));
        return *made;
    }
    const bodies::System& assembled() {
        if (!system) system = std::make_unique<bodies::System>(bodies::by_triplets(get()));
        return *system;
    }
};

/// The matrix of a body in the engine and the residual of a body at 0 degC.
struct Prepared {
    explicit Prepared(const Mesh<Triangle<1>>& mesh) : body(bodies::body_of(mesh)), engine(body.model()) {
        const std::vector<double> cold(static_cast<std::size_t>(body.model()->unknowns), 0.0);
        Pass pass;
        pass.T = cold.data();
        pass.matrix = &engine.matrix;
        pass.residual = engine.residual.data();
        assemble(*body.model(), body.values(), engine.work, pass);
    }
    Body body;
    Engine engine;
};

void need(bool fine) {
    if (!fine) std::abort();
}

void solve_with_eigen(const bodies::System& s) {
    Eigen::SimplicialLDLT<EigenMatrix> solver(s.matrix);
    const Eigen::VectorXd x = solver.solve(s.right);
    need(x.squaredNorm() > 0.0);
}

#if defined(TEPOR_HAVE_CHOLMOD)
void solve_with_cholmod(const bodies::System& s) {
    SparseMatrix lower;
    lower.rows = s.matrix.cols();
    lower.start.assign(s.upper.outerIndexPtr(), s.upper.outerIndexPtr() + lower.rows + 1);
    lower.column.assign(s.upper.innerIndexPtr(), s.upper.innerIndexPtr() + s.upper.nonZeros());
    lower.lower.assign(s.upper.valuePtr(), s.upper.valuePtr() + s.upper.nonZeros());
    CholmodSolver solver;
    solver.analyze(lower, lower.rows);
    need(solver.factor(lower));
    std::vector<double> x(s.right.data(), s.right.data() + s.right.size());
    solver.solve(x.data());
}
#endif

#if defined(TEPOR_HAVE_HYPRE)
void solve_with_hypre(const bodies::System& s) {
    struct Rows {
        std::vector<int> start, column;
        std::vector<double> value;
    } rows;
    rows.start.assign(s.matrix.outerIndexPtr(), s.matrix.outerIndexPtr() + s.matrix.cols() + 1);
    rows.column.assign(s.matrix.innerIndexPtr(), s.matrix.innerIndexPtr() + s.matrix.nonZeros());
    rows.value.assign(s.matrix.valuePtr(), s.matrix.valuePtr() + s.matrix.nonZeros());
    const std::vector<double> b(s.right.data(), s.right.data() + s.right.size());
    need(ratios::hypre_solve(rows, b, 1e-8) < 200);
}
#endif

void add_case(ratios::Table& table, const std::shared_ptr<Case>& c) {
    const long n = static_cast<long>(c->wanted);
    const int few = n > 500000 ? 2 : 5;
    const int often = n > 500000 ? 3 : 9;
    using ratios::Side;

    const std::string whole = "steady, " + c->mesh + " mesh";
    table.ask(whole, c->mesh == "shuffled" ? 6.0 : 2.3);
    (void)c->get(); // meshes are made before anything is timed
    table.add(whole, n, "steady(body), from the mesh", Side::ours, often, [c] {
        const Body body = bodies::body_of(c->get());
        const Field field = steady(body);
        need(field.temperature()[0] > 0.0);
    });
    const auto triplets = [&](const char* solver, int times, void (*solve)(const bodies::System&)) {
        table.add(whole, n, std::string("triplets, ") + solver, Side::peer, times,
                  [c, solve] { solve(bodies::by_triplets(c->get())); });
    };
    if (n <= 150000) triplets("Eigen SimplicialLDLT", few, solve_with_eigen);
#if defined(TEPOR_HAVE_CHOLMOD)
    triplets("CHOLMOD (AMD)", n > 500000 ? 1 : few, solve_with_cholmod);
#endif
#if defined(TEPOR_HAVE_HYPRE)
    triplets("CG with BoomerAMG", few, solve_with_hypre);
#endif

    const std::string system = "system, " + c->mesh + " mesh";
    table.ask(system, c->mesh == "shuffled" ? 6.0 : 2.3);
    const auto prepared = std::make_shared<std::unique_ptr<Prepared>>();
    const auto ready = [c, prepared]() -> Prepared& {
        if (!*prepared) *prepared = std::make_unique<Prepared>(c->get());
        return **prepared;
    };
    (void)ready();
    (void)c->assembled();
    table.add(system, n, "engine, one solve to 1e-8", Side::ours, often, [ready] {
        Prepared& p = ready();
        Engine engine(p.body.model()); // new, so that no plan is at hand
        engine.matrix = p.engine.matrix;
        std::vector<double> b = p.engine.residual;
        double sum = 0.0;
        for (const double v : b) sum += std::abs(v);
        need(engine.factor(Purpose::one_solve) && engine.solve(b.data(), 1e-8 * sum));
    });
    if (n <= 200000)
        table.add(system, n, "engine, direct, first solve", Side::beside, few, [ready] {
            Prepared& p = ready();
            Engine engine(p.body.model());
            engine.matrix = p.engine.matrix;
            std::vector<double> b = p.engine.residual;
            need(engine.factor(Purpose::many_solves) && engine.solve(b.data(), 0.0));
        });
    if (n <= 150000)
        table.add(system, n, "Eigen SimplicialLDLT", Side::peer, few, [c] { solve_with_eigen(c->assembled()); });
#if defined(TEPOR_HAVE_CHOLMOD)
    table.add(system, n, "CHOLMOD (AMD)", Side::peer, n > 500000 ? 1 : few,
              [c] { solve_with_cholmod(c->assembled()); });
#endif
#if defined(TEPOR_HAVE_HYPRE)
    table.add(system, n, "CG with BoomerAMG", Side::peer, few, [c] { solve_with_hypre(c->assembled()); });
#endif
    table.add(system, n, "a product with the whole matrix", Side::beside, 15, [c] {
        const bodies::System& s = c->assembled();
        const Eigen::VectorXd y = s.matrix.selfadjointView<Eigen::Upper>() * s.right;
        need(y[0] == y[0]);
    });
}

/// Bytes copied a second, the yardstick of everything that streams [GB/s].
double copy_speed() {
    std::vector<char> from(std::size_t{256} << 20U, 1), to(from.size(), 2);
    double best = 1e30;
    for (int run = 0; run < 5; ++run) {
        const std::clock_t begin = std::clock();
        std::memcpy(to.data(), from.data(), to.size());
        best = std::min(best, static_cast<double>(std::clock() - begin) / CLOCKS_PER_SEC);
        from[0] = to[to.size() - 1];
    }
    return 1e-9 * static_cast<double>(to.size()) / best;
}

/// Largest resident memory of a process that makes a mesh of n nodes and solves a body on it once [bytes].
double memory_of(Index n) {
    const pid_t child = fork();
    if (child == 0) {
        const Body body = bodies::body_of(bodies::mesh_of("lattice", n));
        const Field field = steady(body);
        _exit(field.temperature()[0] > 0.0 ? 0 : 1);
    }
    int status = 0;
    rusage usage{};
    if (child < 0 || wait4(child, &status, 0, &usage) < 0 || status != 0) return 0.0;
    return 1024.0 * static_cast<double>(usage.ru_maxrss);
}

} // namespace

int main(int count, char** words) {
    Index least = 0;
    Index most = 1100000;
    std::string only;
    Index memory = 1000000;
    const char* csv = nullptr;
    const char* picture = nullptr;
    for (int i = 1; i + 1 < count; i += 2) {
        if (std::strcmp(words[i], "--up-to") == 0) most = static_cast<Index>(std::atof(words[i + 1]));
        if (std::strcmp(words[i], "--from") == 0) least = static_cast<Index>(std::atof(words[i + 1]));
        if (std::strcmp(words[i], "--mesh") == 0) only = words[i + 1];
        if (std::strcmp(words[i], "--csv") == 0) csv = words[i + 1];
        if (std::strcmp(words[i], "--picture") == 0) picture = words[i + 1];
        if (std::strcmp(words[i], "--memory") == 0) memory = static_cast<Index>(std::atof(words[i + 1]));
    }
    ratios::Table table;
    if (memory > 0 && memory >= least && memory <= most) { // before anything else has filled this process
        const double spent = memory_of(memory) - memory_of(100);
        table.note("memory", static_cast<long>(memory), "bytes per unknown, mesh and solve included (to reach: 450)",
                   spent / static_cast<double>(memory));
    }
    table.note("memory copy", 0, "GB/s", copy_speed());
#if defined(TEPOR_HAVE_HYPRE)
    MPI_Init(&count, &words);
    HYPRE_Init();
#endif
    int none = 1;
    benchmark::Initialize(&none, words);
    if (picture) {
        for (Index n = 1000; n <= most; n *= 2) {
            const auto c = std::make_shared<Case>(Case{"lattice", n, nullptr, nullptr});
            (void)c->get();
            table.add("cost of steady(body)", static_cast<long>(n), "steady(body), from the mesh", ratios::Side::beside,
                      n > 500000 ? 2 : 7, [c] { (void)steady(bodies::body_of(c->get())); });
        }
    } else {
        for (const Index n : {10000, 100000, 1000000})
            for (const char* mesh : {"lattice", "general", "shuffled"})
                if (n >= least && n <= most && (only.empty() || only == mesh))
                    add_case(table, std::make_shared<Case>(Case{mesh, n, nullptr, nullptr}));
    }
    benchmark::RunSpecifiedBenchmarks(&table);
    table.print();
    bool fine = !csv || table.write(csv);
    if (picture) {
        std::vector<std::pair<double, double>> cost;
        for (const ratios::Entry& e : table.entries())
            cost.emplace_back(static_cast<double>(e.size), ratios::Table::least(e));
        fine = bodies::draw_cost(picture, cost) && fine;
    }
#if defined(TEPOR_HAVE_HYPRE)
    HYPRE_Finalize();
    MPI_Finalize();
#endif
    return fine ? 0 : 1;
}
