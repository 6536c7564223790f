// The yardstick: a unit that solves a sparse system with Eigen's Cholesky.
#include <Eigen/SparseCholesky>
#include <vector>

int main() {
    const int n = 100;
    std::vector<Eigen::Triplet<double>> entries;
    for (int i = 0; i < n; ++i) {
        entries.emplace_back(i, i, 2.1);
        if (i > 0) entries.emplace_back(i, i - 1, -1.0);
        if (i > 0) entries.emplace_back(i - 1, i, -1.0);
    }
    Eigen::SparseMatrix<double> matrix(n, n);
    matrix.setFromTriplets(entries.begin(), entries.end());
    const Eigen::SimplicialLDLT<Eigen::SparseMatrix<double>> solver(matrix);
    const Eigen::VectorXd x = solver.solve(Eigen::VectorXd::Ones(n));
    return x[n / 2] > 0.0 ? 0 : 1;
}
