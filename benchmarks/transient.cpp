// Marching a body in the plane, through March, beside CHOLMOD's factor and solve, and beside a general-purpose integrator of
// stiff differential equations (SUNDIALS CVODE, variable order, with KLU) on the same semi-discrete problem.
//
//   bench-transient [--unknowns N] [--csv FILE]
//
// Linear triangles, capacity lumped, film all around, a source; from 20 degC. Figures are processor time of this process.

#include "support/bodies.hpp"
#include "support/cvode_march.hpp"
#include "support/ratios.hpp"
#include <cmath>
#include <cstdlib>
#include <cstring>
#include <memory>
#include <optional>
#include <tepor/solve/march.hpp>
#if defined(TEPOR_HAVE_CHOLMOD)
#include <tepor/linear/outside/cholmod.hpp>
#endif

namespace {

using namespace tepor;
using ratios::Side;

/// Slow enough that a step of a second is short: rho c = 1e4 J/(m3 K).
Body plate(Index n) {
    Body body = bodies::body_of(bodies::mesh_of("lattice", n));
    body.replace("plate", Material{.conductivity = of_place([](const auto& p) { return 1.0 + 0.5 * p.x + 0.25 * p.y; }),
                                   .density = 10.0,
                                   .specific_heat = 1000.0});
    return body;
}

/// M T' = F - K T as matrices, by triplets.
struct SemiDiscrete {
    explicit SemiDiscrete(const MeshData& mesh) : system(bodies::by_triplets(mesh)) {
        capacity = Eigen::VectorXd::Zero(mesh.node_count());
        for (Index c = 0; c < mesh.cell_count(); ++c) {
            const Id* id = mesh.cell(c);
            const auto place = [&mesh, id](int i) { return mesh.nodes[static_cast<std::size_t>(id[i])]; };
            const double area = 0.5 * cross(place(1) - place(0), place(2) - place(0));
            for (int i = 0; i < 3; ++i) capacity[id[i]] += 1e4 * area / 3.0;
        }
    }
    bodies::System system;
    Eigen::VectorXd capacity;
};

void need(bool fine) {
    if (!fine) std::abort();
}

#if defined(TEPOR_HAVE_CHOLMOD)
/// M + dt/2 K, its upper triangle by columns, which is the lower one by rows.
SparseMatrix step_matrix(const SemiDiscrete& s, double dt) {
    Eigen::SparseMatrix<double> a = 0.5 * dt * s.system.upper;
    for (Index i = 0; i < a.cols(); ++i) a.coeffRef(i, i) += s.capacity[i];
    SparseMatrix out;
    out.rows = a.cols();
    out.start.assign(a.outerIndexPtr(), a.outerIndexPtr() + a.cols() + 1);
    out.column.assign(a.innerIndexPtr(), a.innerIndexPtr() + a.nonZeros());
    out.lower.assign(a.valuePtr(), a.valuePtr() + a.nonZeros());
    return out;
}
#endif

void steps(ratios::Table& table, Index n) {
    const double dt = 20.0;
    const auto body = std::make_shared<Body>(plate(n));
    (void)body->model();
    const auto semi = std::make_shared<SemiDiscrete>(bodies::mesh_of("lattice", n));
    const long size = static_cast<long>(n);
    const auto march = [body, dt](Index expected) {
        return std::make_unique<March>(
            *body, initial(20.0), Theta{.theta = 0.5, .step = dt, .damped_start = false, .expected_steps = expected});
    };
    const std::string many = "many steps, set-up", few = "few steps, set-up";
    table.ask(many, 1.0);
    table.ask(few, 4.0);
    table.add(many, size, "March, direct", Side::ours, 5, [march] { (void)march(0); });
    table.add(few, size, "March, 2 steps expected", Side::ours, 5, [march] { (void)march(2); });
    const std::string step = "many steps, ten steps", step_few = "few steps, two steps";
    table.ask(step, 1.0 / 0.8);
    table.ask(step_few, 1.0 / 1.1);
    table.add(step, size, "March, direct", Side::ours, 9, [kept = std::shared_ptr<March>(march(0))] {
        for (int k = 0; k < 10; ++k) need(kept->advance().ok());
    });
    const auto fresh = std::make_shared<std::vector<std::unique_ptr<March>>>();
    for (int k = 0; k < 5; ++k) fresh->push_back(march(2));
    table.add(step_few, size, "March, 2 steps expected", Side::ours, 5, [fresh] {
        for (int k = 0; k < 2; ++k) need(fresh->back()->advance().ok());
        fresh->pop_back();
    });
#if defined(TEPOR_HAVE_CHOLMOD)
    const auto matrix = std::make_shared<SparseMatrix>(step_matrix(*semi, dt));
    const auto made = std::make_shared<std::optional<CholmodSolver>>();
    const auto factor = [matrix, made] {
        made->emplace();
        (*made)->analyze(*matrix, matrix->rows);
        need((*made)->factor(*matrix));
    };
    table.add(many, size, "CHOLMOD (AMD), analyze and factor", Side::peer, 3, factor);
    table.add(few, size, "CHOLMOD (AMD), analyze and factor", Side::peer, 3, factor);
    // as one would step by hand: rise from M + dt/2 K, load less product
    const auto by_hand = [semi, made, dt](int count) {
        Eigen::VectorXd T = Eigen::VectorXd::Constant(semi->capacity.size(), 20.0);
        std::vector<double> b(static_cast<std::size_t>(T.size()));
        Eigen::Map<Eigen::VectorXd> rise(b.data(), T.size());
        for (int k = 0; k < count; ++k) {
            rise.noalias() = dt * semi->system.right;
            rise.noalias() -= dt * (semi->system.matrix * T);
            (*made)->solve(b.data());
            T += rise;
        }
        need(T[0] > 0.0);
    };
    table.add(step, size, "CHOLMOD's solve and a product", Side::peer, 5, [by_hand] { by_hand(10); });
    table.add(step_few, size, "CHOLMOD's solve and a product", Side::peer, 5, [by_hand] { by_hand(2); });
#endif
}

#if defined(TEPOR_HAVE_CVODE_KLU)
/// To t = end with the same error at the end, at most 5e-5 of the largest rise anywhere: the largest steps and tolerances
/// that reach it.
void whole_run(ratios::Table& table, Index n) {
    const double end = 2000.0;
    const auto semi = std::make_shared<SemiDiscrete>(bodies::mesh_of("lattice", n));
    const auto body = std::make_shared<Body>(plate(n));
    const Mesh<Triangle<1>> mesh = bodies::mesh_of("lattice", n);
    const std::vector<double> exact = bodies::cvode_march(semi->system, semi->capacity, 20.0, end, 1e-9, 1e-8);
    const double asked = 5e-5 * (*std::max_element(exact.begin(), exact.end()) - 20.0);
    const auto error_of = [&](const std::vector<double>& T) {
        double worst = 0.0;
        for (std::size_t i = 0; i < T.size(); ++i) worst = std::max(worst, std::abs(T[i] - exact[i]));
        return worst;
    };
    const auto nodal = [&](const March& march) {
        std::vector<double> T;
        const Field field = march.field();
        for (const Point p : mesh.nodes) T.push_back(field.at(p));
        return T;
    };
    const auto fixed = [body, end](Index count) {
        auto march = std::make_unique<March>(*body, initial(20.0),
                                             Theta{.theta = 0.5, .step = end / static_cast<double>(count)});
        for (Index k = 0; k < count; ++k) need(march->advance().ok());
        return march;
    };
    const auto adaptive = [body, end](double tolerance) {
        auto march = std::make_unique<March>(*body, initial(20.0), Adaptive{.tolerance = tolerance});
        march->advance_to(end);
        return march;
    };
    Index count = 8;
    while (error_of(nodal(*fixed(count))) > asked && count < 4096) count *= 2;
    double tolerance = 1.0;
    while (error_of(nodal(*adaptive(tolerance))) > asked && tolerance > 1e-7) tolerance *= 0.5;
    double relative = 1e-2;
    while (error_of(bodies::cvode_march(semi->system, semi->capacity, 20.0, end, relative, 20.0 * relative)) > asked &&
           relative > 1e-9)
        relative *= 0.5;
    std::printf("errors at the end, K (asked %.1e): Theta %.1e in %ld steps, Adaptive %.1e, CVODE %.1e\n", asked,
                error_of(nodal(*fixed(count))), static_cast<long>(count), error_of(nodal(*adaptive(tolerance))),
                error_of(bodies::cvode_march(semi->system, semi->capacity, 20.0, end, relative, 20.0 * relative)));
    const long size = static_cast<long>(n);
    const std::string by_step = "march to one error, fixed step", by_error = "march to one error, adaptive";
    table.ask(by_step, 15.0);
    table.ask(by_error, 2.0);
    table.add(by_step, size, "March, Theta", Side::ours, 5, [fixed, count] { (void)fixed(count); });
    table.add(by_error, size, "March, Adaptive", Side::ours, 5, [adaptive, tolerance] { (void)adaptive(tolerance); });
    for (const std::string& topic : {by_step, by_error})
        table.add(topic, size, "CVODE (BDF) with KLU", Side::peer, 3, [semi, end, relative] {
            (void)bodies::cvode_march(semi->system, semi->capacity, 20.0, end, relative, 20.0 * relative);
        });
}
#endif

} // namespace

int main(int count, char** words) {
    Index n = 100000, run = 10000;
    const char* csv = nullptr;
    for (int i = 1; i + 1 < count; i += 2) {
        if (std::strcmp(words[i], "--unknowns") == 0) n = run = static_cast<Index>(std::atof(words[i + 1]));
        if (std::strcmp(words[i], "--csv") == 0) csv = words[i + 1];
    }
    int none = 1;
    benchmark::Initialize(&none, words);
    ratios::Table table;
    steps(table, n);
#if defined(TEPOR_HAVE_CVODE_KLU)
    whole_run(table, run);
#else
    std::printf("SUNDIALS with KLU not found: its comparison is skipped\n");
    static_cast<void>(run);
#endif
    benchmark::RunSpecifiedBenchmarks(&table);
    table.print();
    return csv && !table.write(csv) ? 1 : 0;
}
