#pragma once
// SUNDIALS CVODE on M T' = F - K T with a diagonal M: variable-order BDF, Newton's method with KLU on the exact Jacobian.

#include <Eigen/SparseCore>
#include <vector>

#if defined(TEPOR_HAVE_SUNDIALS) && __has_include(<sunlinsol/sunlinsol_klu.h>)
#define TEPOR_HAVE_CVODE_KLU 1
#include "bodies.hpp"
#include <cstdlib>
#include <cvode/cvode.h>
#include <nvector/nvector_serial.h>
#include <sunlinsol/sunlinsol_klu.h>
#include <sunmatrix/sunmatrix_sparse.h>

namespace bodies {

struct CvodeProblem {
    const System* system;
    const Eigen::VectorXd* capacity;
};

inline int cvode_rate(realtype, N_Vector y, N_Vector rate, void* data) {
    const auto* p = static_cast<const CvodeProblem*>(data);
    const Index n = p->capacity->size();
    const Eigen::Map<const Eigen::VectorXd> T(N_VGetArrayPointer(y), n);
    Eigen::Map<Eigen::VectorXd> out(N_VGetArrayPointer(rate), n);
    out = p->system->right;
    out.noalias() -= p->system->matrix * T;
    out.array() /= p->capacity->array();
    return 0;
}

inline int cvode_slope(realtype, N_Vector, N_Vector, SUNMatrix slope, void* data, N_Vector, N_Vector, N_Vector) {
    const auto* p = static_cast<const CvodeProblem*>(data);
    const Eigen::SparseMatrix<double>& K = p->system->matrix; // symmetric: by columns or by rows
    sunindextype* start = SUNSparseMatrix_IndexPointers(slope);
    sunindextype* row = SUNSparseMatrix_IndexValues(slope);
    realtype* value = SUNSparseMatrix_Data(slope);
    for (Index j = 0; j <= K.cols(); ++j) start[j] = K.outerIndexPtr()[j];
    for (Index e = 0; e < K.nonZeros(); ++e) {
        row[e] = K.innerIndexPtr()[e];
        value[e] = -K.valuePtr()[e] / (*p->capacity)[K.innerIndexPtr()[e]];
    }
    return 0;
}

/// Temperatures at t = end from the same temperature everywhere.
inline std::vector<double> cvode_march(const System& system, const Eigen::VectorXd& capacity, double start, double end,
                                       double relative, double absolute) {
    const auto need = [](bool fine) {
        if (!fine) std::abort();
    };
    const Index n = capacity.size();
    CvodeProblem problem{&system, &capacity};
    SUNContext context = nullptr;
    need(SUNContext_Create(nullptr, &context) == 0);
    N_Vector y = N_VNew_Serial(n, context);
    N_VConst(start, y);
    void* cvode = CVodeCreate(CV_BDF, context);
    need(CVodeInit(cvode, cvode_rate, 0.0, y) == CV_SUCCESS);
    need(CVodeSStolerances(cvode, relative, absolute) == CV_SUCCESS);
    need(CVodeSetUserData(cvode, &problem) == CV_SUCCESS);
    need(CVodeSetMaxNumSteps(cvode, 1000000) == CV_SUCCESS);
    SUNMatrix slope = SUNSparseMatrix(n, n, system.matrix.nonZeros(), CSC_MAT, context);
    SUNLinearSolver solver = SUNLinSol_KLU(y, slope, context);
    need(CVodeSetLinearSolver(cvode, solver, slope) == CV_SUCCESS);
    need(CVodeSetJacFn(cvode, cvode_slope) == CV_SUCCESS);
    need(CVodeSetStopTime(cvode, end) == CV_SUCCESS);
    realtype reached = 0.0;
    need(CVode(cvode, end, y, &reached, CV_NORMAL) >= 0);
    const double* T = N_VGetArrayPointer(y);
    std::vector<double> out(T, T + n);
    CVodeFree(&cvode);
    SUNLinSolFree(solver);
    SUNMatDestroy(slope);
    N_VDestroy(y);
    SUNContext_Free(&context);
    return out;
}

} // namespace bodies

#endif
