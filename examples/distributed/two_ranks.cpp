// A plate whose linear system is solved by hypre, spread over the ranks of an MPI run:
//
//   mpirun -n 2 example-two_ranks
//
// Every rank describes the same body. The linear solver takes each rank's share of the rows, solves with all ranks
// together, and hands every rank the whole solution; steady() then judges the heat balance as always. Memory and time of the
// linear system are shared; the mesh and its assembly are not.

#define OMPI_SKIP_MPICXX 1 // the C interface is all that is used
#include <HYPRE.h>
#include <HYPRE_IJ_mv.h>
#include <HYPRE_krylov.h>
#include <HYPRE_parcsr_ls.h>
#include <algorithm>
#include <cmath>
#include <cstdio>
#include <mpi.h>
#include <tepor/tepor.hpp>

using namespace tepor;

namespace {

/// Conjugate gradients with hypre's BoomerAMG over all ranks of MPI_COMM_WORLD; meets LinearSolver.
class DistributedSolver {
  public:
    DistributedSolver() {
        MPI_Comm_rank(MPI_COMM_WORLD, &rank_);
        MPI_Comm_size(MPI_COMM_WORLD, &ranks_);
    }
    DistributedSolver(const DistributedSolver&) = delete;
    DistributedSolver& operator=(const DistributedSolver&) = delete;
    DistributedSolver(DistributedSolver&& other) noexcept : rank_(other.rank_), ranks_(other.ranks_) {}
    ~DistributedSolver() { release(); }

    /// Which rows are whose.
    void analyze(const SparseMatrix&, Index n, const Point*) {
        first_.clear();
        for (Index r = 0; r <= ranks_; ++r) first_.push_back(static_cast<int>(n * r / ranks_));
    }

    /// Hands over the rows of this rank, whole: the matrix stores the lower triangle by rows.
    [[nodiscard]] bool factor(const SparseMatrix& matrix) {
        release();
        const int begin = first_[at(rank_)], end = first_[at(rank_ + 1)];
        std::vector<std::vector<int>> columns(at(end - begin));
        std::vector<std::vector<double>> values(at(end - begin));
        const auto put = [&](int row, int column, double value) {
            if (row < begin || row >= end) return;
            columns[at(row - begin)].push_back(column);
            values[at(row - begin)].push_back(value);
        };
        for (int i = 0; i < first_.back(); ++i) {
            for (Id p = matrix.start[at(i)]; p < matrix.start[at(i) + 1]; ++p) {
                const int j = matrix.column[at(p)];
                put(i, j, matrix.lower[at(p)]);
                if (j != i) put(j, i, matrix.lower[at(p)]);
            }
        }
        HYPRE_IJMatrixCreate(MPI_COMM_WORLD, begin, end - 1, begin, end - 1, &matrix_);
        HYPRE_IJMatrixSetObjectType(matrix_, HYPRE_PARCSR);
        HYPRE_IJMatrixInitialize(matrix_);
        for (int i = begin; i < end; ++i) {
            int count = static_cast<int>(columns[at(i - begin)].size());
            HYPRE_IJMatrixSetValues(matrix_, 1, &count, &i, columns[at(i - begin)].data(),
                                    values[at(i - begin)].data());
        }
        HYPRE_IJMatrixAssemble(matrix_);
        HYPRE_BoomerAMGCreate(&amg_);
        HYPRE_BoomerAMGSetTol(amg_, 0.0);
        HYPRE_BoomerAMGSetMaxIter(amg_, 1);
        HYPRE_BoomerAMGSetPrintLevel(amg_, 0);
        HYPRE_BoomerAMGSetRelaxType(amg_, 6); // symmetric, as conjugate gradients need it
        HYPRE_ParCSRPCGCreate(MPI_COMM_WORLD, &cg_);
        HYPRE_PCGSetTol(cg_, 1e-12);
        HYPRE_PCGSetMaxIter(cg_, 200);
        HYPRE_PCGSetTwoNorm(cg_, 1);
        HYPRE_PCGSetPrecond(cg_, reinterpret_cast<HYPRE_PtrToSolverFcn>(HYPRE_BoomerAMGSolve),
                            reinterpret_cast<HYPRE_PtrToSolverFcn>(HYPRE_BoomerAMGSetup), amg_);
        ready_ = false;
        return true;
    }

    /// b := A^-1 b; all ranks call it with the same b and leave with the same solution.
    bool solve(double* b) {
        HYPRE_IJVector right = vector(b);
        const std::vector<double> zero(at(first_.back()), 0.0);
        HYPRE_IJVector solution = vector(zero.data());
        HYPRE_ParCSRMatrix a = object<HYPRE_ParCSRMatrix>(matrix_);
        HYPRE_ParVector par_b = object<HYPRE_ParVector>(right), par_x = object<HYPRE_ParVector>(solution);
        if (!ready_) HYPRE_ParCSRPCGSetup(cg_, a, par_b, par_x);
        ready_ = true;
        HYPRE_ParCSRPCGSolve(cg_, a, par_b, par_x);
        HYPRE_ClearAllErrors(); // "not converged" is judged by the caller, who looks at the residual itself
        std::vector<int> own, share, offset(first_.begin(), first_.end() - 1);
        for (int i = first_[at(rank_)]; i < first_[at(rank_ + 1)]; ++i) own.push_back(i);
        for (std::size_t r = 0; r + 1 < first_.size(); ++r) share.push_back(first_[r + 1] - first_[r]);
        std::vector<double> part(own.size());
        HYPRE_IJVectorGetValues(solution, static_cast<int>(own.size()), own.data(), part.data());
        MPI_Allgatherv(part.data(), static_cast<int>(part.size()), MPI_DOUBLE, b, share.data(), offset.data(),
                       MPI_DOUBLE, MPI_COMM_WORLD);
        HYPRE_IJVectorDestroy(right);
        HYPRE_IJVectorDestroy(solution);
        return true;
    }

    [[nodiscard]] Index singular_row() const { return -1; }

  private:
    static std::size_t at(int i) { return static_cast<std::size_t>(i); }

    template <class Object, class Handle>
    static Object object(Handle handle) {
        void* out = nullptr;
        if constexpr (std::is_same_v<Handle, HYPRE_IJMatrix>)
            HYPRE_IJMatrixGetObject(handle, &out);
        else
            HYPRE_IJVectorGetObject(handle, &out);
        return static_cast<Object>(out);
    }

    HYPRE_IJVector vector(const double* values) const {
        const int begin = first_[at(rank_)], end = first_[at(rank_ + 1)];
        HYPRE_IJVector out = nullptr;
        HYPRE_IJVectorCreate(MPI_COMM_WORLD, begin, end - 1, &out);
        HYPRE_IJVectorSetObjectType(out, HYPRE_PARCSR);
        HYPRE_IJVectorInitialize(out);
        std::vector<int> rows;
        for (int i = begin; i < end; ++i) rows.push_back(i);
        HYPRE_IJVectorSetValues(out, end - begin, rows.data(), values + begin);
        HYPRE_IJVectorAssemble(out);
        return out;
    }

    void release() {
        if (!matrix_) return;
        HYPRE_ParCSRPCGDestroy(cg_);
        HYPRE_BoomerAMGDestroy(amg_);
        HYPRE_IJMatrixDestroy(matrix_);
        matrix_ = nullptr;
    }

    int rank_ = 0, ranks_ = 1;
    bool ready_ = false;
    std::vector<int> first_; // row of each rank
    HYPRE_IJMatrix matrix_ = nullptr;
    HYPRE_Solver amg_ = nullptr, cg_ = nullptr;
};

static_assert(LinearSolver<DistributedSolver>);

/// @return whether the distributed solve finds the temperatures of the library's own
bool compare(int rank) {
    Tiles drawing;
    drawing.add("plate", {0.0, 0.0}, {0.6, 0.4});
    Body plate{tiles<Triangle<1>>(drawing, {.size = 0.004})};
    plate.in("plate", Material{.conductivity = 45.0});
    plate.in("plate", Generation{.per_volume = 2e4});
    plate.on("bottom", FixedTemperature{30.0});
    plate.on("top", Film{.coefficient = 250.0, .fluid = 20.0});
    plate.on("right", Radiation{.emissivity = 0.85, .surroundings = 20.0});

    const auto distributed = any_solver(DistributedSolver());
    const Field spread = steady(plate, {.solver = distributed.get()});
    const Field alone = steady(plate);
    double apart = 0.0, hottest = 0.0;
    for (std::size_t i = 0; i < alone.temperature().size(); ++i) {
        apart = std::max(apart, std::abs(alone.temperature()[i] - spread.temperature()[i]));
        hottest = std::max(hottest, alone.temperature()[i]);
    }
    if (rank == 0)
        std::printf(
            "%zu unknowns, hottest %.4f degC, heat out through the top %.3f W; the two solvers differ by %.1e K\n",
            alone.temperature().size(), hottest, spread[heat_out_through("top")], apart);
    return hottest > 31.0 && apart <= 1e-7;
}

} // namespace

int main(int count, char** words) {
    MPI_Init(&count, &words);
    HYPRE_Init();
    int rank = 0;
    MPI_Comm_rank(MPI_COMM_WORLD, &rank);
    bool fine = false;
    try {
        fine = compare(rank);
    } catch (const Error& error) {
        std::printf("rank %d: %s\n", rank, error.what());
    }
    HYPRE_Finalize();
    MPI_Finalize();
    return fine ? 0 : 1;
}
