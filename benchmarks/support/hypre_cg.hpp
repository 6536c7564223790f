#pragma once
// hypre as a plain linear solver: conjugate gradients with BoomerAMG, on one processor.

#if defined(TEPOR_HAVE_HYPRE)
#define OMPI_SKIP_MPICXX 1 // the C interface is all that is used
#include <HYPRE.h>
#include <HYPRE_IJ_mv.h>
#include <HYPRE_krylov.h>
#include <HYPRE_parcsr_ls.h>
#include <mpi.h>
#include <vector>

namespace ratios {

/// BoomerAMG (its defaults for one processor) as preconditioner of hypre's conjugate gradients, on a matrix given by rows
/// (start, column, value). Returns the iterations.
template <class Full>
int hypre_solve(const Full& a, const std::vector<double>& b, double tolerance) {
    const int n = static_cast<int>(b.size());
    HYPRE_IJMatrix matrix;
    HYPRE_IJMatrixCreate(MPI_COMM_SELF, 0, n - 1, 0, n - 1, &matrix);
    HYPRE_IJMatrixSetObjectType(matrix, HYPRE_PARCSR);
    std::vector<int> rows(b.size()), counts(b.size());
    for (int i = 0; i < n; ++i) {
        rows[static_cast<std::size_t>(i)] = i;
        counts[static_cast<std::size_t>(i)] =
            a.start[static_cast<std::size_t>(i) + 1] - a.start[static_cast<std::size_t>(i)];
    }
    HYPRE_IJMatrixSetRowSizes(matrix, counts.data());
    HYPRE_IJMatrixInitialize(matrix);
    HYPRE_IJMatrixSetValues(matrix, n, counts.data(), rows.data(), a.column.data(), a.value.data());
    HYPRE_IJMatrixAssemble(matrix);
    void* object = nullptr;
    HYPRE_IJMatrixGetObject(matrix, &object);
    HYPRE_ParCSRMatrix parcsr = static_cast<HYPRE_ParCSRMatrix>(object);
    const auto vector = [&](const double* values, HYPRE_IJVector& ij) {
        HYPRE_IJVectorCreate(MPI_COMM_SELF, 0, n - 1, &ij);
        HYPRE_IJVectorSetObjectType(ij, HYPRE_PARCSR);
        HYPRE_IJVectorInitialize(ij);
        HYPRE_IJVectorSetValues(ij, n, rows.data(), values);
        HYPRE_IJVectorAssemble(ij);
        void* part = nullptr;
        HYPRE_IJVectorGetObject(ij, &part);
        return static_cast<HYPRE_ParVector>(part);
    };
    HYPRE_IJVector right, solution;
    const std::vector<double> zero(b.size(), 0.0);
    HYPRE_ParVector par_b = vector(b.data(), right);
    HYPRE_ParVector par_x = vector(zero.data(), solution);
    HYPRE_Solver amg, cg;
    HYPRE_BoomerAMGCreate(&amg);
    HYPRE_BoomerAMGSetTol(amg, 0.0);
    HYPRE_BoomerAMGSetMaxIter(amg, 1);
    HYPRE_BoomerAMGSetPrintLevel(amg, 0);
    HYPRE_BoomerAMGSetRelaxType(amg, 6);
    HYPRE_ParCSRPCGCreate(MPI_COMM_SELF, &cg);
    HYPRE_PCGSetTol(cg, tolerance);
    HYPRE_PCGSetMaxIter(cg, 200);
    HYPRE_PCGSetTwoNorm(cg, 1);
    HYPRE_PCGSetPrecond(cg, reinterpret_cast<HYPRE_PtrToSolverFcn>(HYPRE_BoomerAMGSolve),
                        reinterpret_cast<HYPRE_PtrToSolverFcn>(HYPRE_BoomerAMGSetup), amg);
    HYPRE_ParCSRPCGSetup(cg, parcsr, par_b, par_x);
    HYPRE_ParCSRPCGSolve(cg, parcsr, par_b, par_x);
    int count = 0;
    HYPRE_PCGGetNumIterations(cg, &count);
    HYPRE_ParCSRPCGDestroy(cg);
    HYPRE_BoomerAMGDestroy(amg);
    HYPRE_IJVectorDestroy(right);
    HYPRE_IJVectorDestroy(solution);
    HYPRE_IJMatrixDestroy(matrix);
    return count;
}

} // namespace ratios

#endif
