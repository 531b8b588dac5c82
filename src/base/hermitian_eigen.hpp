#pragma once

#include <complex>

#include <Eigen/Core>

namespace chainmark {

/// All eigenvalues, ascending, with orthonormal eigenvectors in the columns of `vectors`.
template <class Scalar>
struct HermitianEigen {
    Eigen::VectorXd values;
    Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic> vectors;
};

/// Full solution of a real symmetric or complex Hermitian matrix by LAPACK's divide and conquer
/// (dsyevd, zheevd), O(n^3) time and about 4 n^2 numbers of memory. Only the lower triangle is
/// read. The matrix is overwritten by the vectors. Throws std::runtime_error if LAPACK fails.
HermitianEigen<double> hermitian_eigen(Eigen::MatrixXd matrix);
HermitianEigen<std::complex<double>> hermitian_eigen(Eigen::MatrixXcd matrix);

/// The eigenvalues of a real symmetric matrix alone, ascending, from its lower triangle.
Eigen::VectorXd symmetric_eigenvalues(Eigen::MatrixXd matrix);

/// Error bounds of the eigenvalues of one Hermitian matrix from the residual norms r_i of an
/// orthonormal set of approximate eigenvectors. Approximations whose intervals value +- r_i overlap
/// form a cluster; a cluster's R has ||R||_2 <= sqrt(sum r_i^2), and that many eigenvalues lie that
/// near (Kahan's residual theorem, Parlett, The Symmetric Eigenvalue Problem, 11.5; quoted from
/// memory). `values` ascending; same order in the result.
Eigen::VectorXd cluster_bounds(const Eigen::VectorXd& values, const Eigen::VectorXd& residuals);

/// Error bounds of the ranks of a list that was merged from several, each value with a bound of its
/// own: values whose intervals overlap may stand in each other's place, so each takes the largest
/// bound of its cluster. `values` ascending; same order in the result.
Eigen::VectorXd rank_bounds(const Eigen::VectorXd& values, const Eigen::VectorXd& bounds);

}  // namespace chainmark
