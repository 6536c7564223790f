// The solvers of linear/ beside general-purpose ones, on systems of linear triangles on the unit square.
//
//   bench-linear [--up-to N] [--csv FILE]
//
// Every figure is processor time of this process, the least of several runs, so that a busy machine disturbs it little.
// Peers get the same matrix (exact zeros dropped), solve to the same residual of 1e-8 and are skipped with a word where
// they are not installed. Ratios are to one product of the matrix, stored in full by rows, with a vector.

#include "../tests/support/square.hpp"

#include <Eigen/SparseCholesky>
#include <cstdio>
#include <cstdlib>
#include <cstring>
#include <ctime>
#include <string>
#include <tepor/linear/banded.hpp>
#include <tepor/linear/cholesky.hpp>
#include <tepor/linear/multigrid_solver.hpp>
#include <tepor/linear/tridiagonal.hpp>
#if defined(TEPOR_HAVE_CHOLMOD)
#include <tepor/linear/outside/cholmod.hpp>
#endif
#include "support/hypre_cg.hpp"

namespace {

using tepor::Id;
using tepor::Index;
using tepor::SparseMatrix;
namespace test = tepor::test;

double seconds() {
    std::timespec t{};
    clock_gettime(CLOCK_PROCESS_CPUTIME_ID, &t);
    return static_cast<double>(t.tv_sec) + 1e-9 * static_cast<double>(t.tv_nsec);
}

/// Least time of a few runs, about a second of them at most.
template <class Work>
double least(Work work) {
    double best = 1e30, spent = 0.0;
    for (int run = 0; run < 15 && (run < 3 || spent < 1.0); ++run) {
        const double begin = seconds();
        work();
        const double took = seconds() - begin;
        best = took < best ? took : best;
        spent += took;
        if (took > 2.0) break;
    }
    return best;
}

/// The whole matrix by rows, as peers and the yardstick take it.
struct Full {
    std::vector<int> start, column;
    std::vector<double> value;
};

Full full(const SparseMatrix& a) {
    const auto size = [](auto i) { return static_cast<std::size_t>(i); };
    Full out;
    out.start.assign(size(a.rows) + 1, 0);
    for (Index i = 0; i < a.rows; ++i) {
        for (Index p = a.start[size(i)]; p < a.start[size(i) + 1]; ++p) {
            const Index j = a.column[size(p)];
            ++out.start[size(i) + 1];
            if (j != i) ++out.start[size(j) + 1];
        }
    }
    for (std::size_t i = 1; i < out.start.size(); ++i) out.start[i] += out.start[i - 1];
    out.column.resize(size(out.start.back()));
    out.value.resize(out.column.size());
    std::vector<int> next(out.start.begin(), out.start.end() - 1);
    for (Index i = 0; i < a.rows; ++i) {
        for (Index p = a.start[size(i)]; p < a.start[size(i) + 1]; ++p) {
            const Index j = a.column[size(p)];
            const auto put = [&](Index row, Index column) {
                const std::size_t at = size(next[size(row)]++);
                out.column[at] = static_cast<int>(column);
                out.value[at] = a.lower[size(p)];
            };
            put(i, j);
            if (j != i) put(j, i);
        }
    }
    return out;
}

void full_product(const Full& a, const double* x, double* y) {
    const int* start = a.start.data();
    const int* column = a.column.data();
    const double* value = a.value.data();
    const std::ptrdiff_t n = static_cast<std::ptrdiff_t>(a.start.size()) - 1;
    for (std::ptrdiff_t i = 0; i < n; ++i) {
        double sum = 0.0;
        for (std::ptrdiff_t p = start[i]; p < start[i + 1]; ++p) sum += value[p] * x[column[p]];
        y[i] = sum;
    }
}

class Table {
  public:
    explicit Table(const char* csv) : csv_(csv ? std::fopen(csv, "w") : nullptr) {
        if (csv_) std::fprintf(csv_, "mesh,unknowns,what,milliseconds,products,note\n");
    }
    Table(const Table&) = delete;
    Table& operator=(const Table&) = delete;
    ~Table() {
        if (csv_) std::fclose(csv_);
    }

    void begin(std::string mesh, Index unknowns, double product) {
        mesh_ = std::move(mesh);
        unknowns_ = unknowns;
        product_ = product;
        std::printf("\n%s, %ld unknowns; one product %.5f ms\n", mesh_.c_str(), static_cast<long>(unknowns),
                    product * 1e3);
    }
    void row(const char* what, double time, const std::string& note = "") {
        std::printf("  %-34s %12.5f ms %8.1f products  %s\n", what, time * 1e3, time / product_, note.c_str());
        std::fflush(stdout);
        if (!csv_) return;
        std::fprintf(csv_, "%s,%ld,%s,%.6f,%.2f,%s\n", mesh_.c_str(), static_cast<long>(unknowns_), what, time * 1e3,
                     time / product_, note.c_str());
    }

  private:
    std::FILE* csv_;
    std::string mesh_;
    Index unknowns_ = 0;
    double product_ = 1.0;
};

std::string iterations(Index count) {
    return std::to_string(count) + " iterations";
}

void run(Table& table, const char* name, const test::Square& square) {
    const SparseMatrix& a = square.matrix;
    const Index n = a.rows;
    test::Random random(3);
    const std::vector<double> b = test::random_vector(n, random);
    std::vector<double> x(b.size()), y(b.size());
    const Full whole = full(a);
    table.begin(name, n, least([&] { full_product(whole, b.data(), y.data()); }));
    table.row("memory copy of the matrix", least([copy = whole.value, &whole]() mutable {
                  std::memcpy(copy.data(), whole.value.data(), copy.size() * sizeof(double));
              }));
    table.row("product from the lower triangle", least([&] { multiply(a, n, b.data(), y.data()); }));

    {
        tepor::IterationReport report;
        double setup = 0.0;
        const double all = least([&] {
            tepor::MultigridSolver solver({.tolerance = 1e-8, .most = 200});
            solver.analyze(a, n);
            const double begin = seconds();
            if (!solver.factor(a)) std::abort();
            setup = seconds() - begin;
            for (double& v : x) v = 0.0;
            report = solver.solve(b.data(), x.data());
            if (!report.converged) std::abort();
        });
        table.row("multigrid, set-up", setup);
        table.row("multigrid, all to 1e-8", all, iterations(report.iterations));
    }
    if (n < 2000000) {
        tepor::SparseCholesky solver;
        const double plan = least([&] { solver.analyze(a, n, square.places.data()); });
        const double factor = least([&] {
            if (!solver.factor(a)) std::abort();
        });
        const double solve = least([&] {
            x = b;
            solver.solve(x.data());
        });
        table.row("Cholesky, plan", plan);
        table.row("Cholesky, factor", factor);
        table.row("Cholesky, one solve", solve);
        std::vector<double> many(4 * b.size(), 1.0);
        table.row("Cholesky, four solves at once", least([&] { solver.solve(many.data(), Index{4}); }));
        table.row("Cholesky, all", plan + factor + solve, std::to_string(solver.factor_entries()) + " values");
    }
#if defined(TEPOR_HAVE_CHOLMOD)
    if (n < 2000000) {
        double plan = 0.0, factor = 0.0, solve = 0.0;
        const double all = least([&] {
            tepor::CholmodSolver solver;
            double begin = seconds();
            solver.analyze(a, n);
            plan = seconds() - begin;
            begin = seconds();
            if (!solver.factor(a)) std::abort();
            factor = seconds() - begin;
            begin = seconds();
            x = b;
            solver.solve(x.data());
            solve = seconds() - begin;
        });
        table.row("CHOLMOD (AMD), plan", plan);
        table.row("CHOLMOD (AMD), factor", factor);
        table.row("CHOLMOD (AMD), one solve", solve);
        table.row("CHOLMOD (AMD), all", all);
    }
#else
    std::printf("  CHOLMOD not found: skipped\n");
#endif
#if defined(TEPOR_HAVE_HYPRE)
    {
        int count = 0;
        const double all = least([&] { count = ratios::hypre_solve(whole, b, 1e-8); });
        table.row("BoomerAMG with CG, all to 1e-8", all, iterations(count));
    }
#else
    std::printf("  hypre not found: skipped\n");
#endif
    if (n < 150000) {
        using EigenMatrix = Eigen::SparseMatrix<double>;
        const Eigen::Map<const EigenMatrix> view(n, n, static_cast<Index>(whole.value.size()), whole.start.data(),
                                                 whole.column.data(), whole.value.data());
        const EigenMatrix matrix = view;
        const Eigen::Map<const Eigen::VectorXd> right(b.data(), n);
        const double all = least([&] {
            Eigen::SimplicialLDLT<EigenMatrix> solver(matrix);
            const Eigen::VectorXd solution = solver.solve(right);
            if (!(solution.squaredNorm() >= 0.0)) std::abort();
        });
        table.row("Eigen SimplicialLDLT, all", all);
    }
}

void run_chains(Table& table) {
    for (const Index n : {50, 1000000}) {
        const std::size_t size = static_cast<std::size_t>(n);
        std::vector<double> diagonal(size, 2.1), off(size, -1.0), b(size, 1.0), x(size), work(size);
        const Index many = n < 1000 ? 20000 : 1;
        const double per = static_cast<double>(many);
        double product = 0.0;
        product = least([&] {
                      for (Index k = 0; k < many; ++k) {
                          x[0] = diagonal[0] * b[0] + off[0] * b[1];
                          for (std::size_t i = 1; i + 1 < size; ++i)
                              x[i] = off[i - 1] * b[i - 1] + diagonal[i] * b[i] + off[i] * b[i + 1];
                          x[size - 1] = off[size - 2] * b[size - 2] + diagonal[size - 1] * b[size - 1];
                          b[size / 2] = x[size / 2] * 1e-9 + 1.0;
                      }
                  }) /
                  per;
        table.begin("chain", n, product);
        tepor::Tridiagonal solver;
        if (!solver.factor(n, diagonal.data(), off.data())) std::abort();
        x = b;
        table.row("two-ended, solve with a factor", least([&] {
                                                        for (Index k = 0; k < many; ++k) solver.solve(x.data());
                                                        x = b;
                                                    }) / per);
        table.row("two-ended, factor and solve once",
                  least([&] {
                      for (Index k = 0; k < many; ++k) {
                          x[size / 2] = 1.0;
                          if (tepor::solve_tridiagonal(n, diagonal.data(), off.data(), x.data(), work.data()) >= 0)
                              std::abort();
                      }
                      x = b;
                  }) / per);
        // By hand, from one end.
        table.row("one-ended by hand, once", least([&] {
                                                 for (Index k = 0; k < many; ++k) {
                                                     double pivot = diagonal[0];
                                                     for (std::size_t i = 0; i + 1 < size; ++i) {
                                                         work[i] = off[i] / pivot;
                                                         x[i] /= pivot;
                                                         pivot = diagonal[i + 1] - work[i] * off[i];
                                                         x[i + 1] -= off[i] * x[i];
                                                     }
                                                     x[size - 1] /= pivot;
                                                     for (std::size_t i = size - 1; i-- > 0;)
                                                         x[i] -= work[i] * x[i + 1];
                                                 }
                                                 x = b;
                                             }) / per);
    }
}

} // namespace

int main(int count, char** words) {
    Index most = 1100000;
    const char* csv = nullptr;
    for (int i = 1; i + 1 < count; i += 2) {
        if (std::strcmp(words[i], "--up-to") == 0) most = static_cast<Index>(std::atof(words[i + 1]));
        if (std::strcmp(words[i], "--csv") == 0) csv = words[i + 1];
    }
#if defined(TEPOR_HAVE_HYPRE)
    MPI_Init(&count, &words);
    HYPRE_Init();
#endif
    {
        Table table(csv);
        run_chains(table);
        for (const Index cells : {100, 316, 1000, 2000}) {
            if ((cells + 1) * (cells + 1) > most) continue;
            run(table, "lattice", test::square(cells, false, false, 1));
            run(table, "general", test::square(cells, true, false, 1));
            if (cells <= 316) run(table, "shuffled", test::square(cells, true, true, 1));
        }
    }
#if defined(TEPOR_HAVE_HYPRE)
    HYPRE_Finalize();
    MPI_Finalize();
#endif
}
