#pragma once

#include <complex>
#include <vector>

#include <Eigen/Core>

namespace chainmark {

/// P A = L U: U on and above the diagonal of `packed`, L below it (its diagonal is 1). P exchanges
/// row i with row exchanged[i], i = 0, 1, ... in this order.
template <class Scalar>
struct LuFactors {
    Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic> packed;
    std::vector<Eigen::Index> exchanged;
};

/// Factors of a square matrix by LAPACK with partial pivoting (dgetrf, zgetrf): |L| <= 1, O(n^3). A
/// singular matrix has zeros on the diagonal of U.
LuFactors<double> lu_factors(Eigen::MatrixXd matrix);
LuFactors<std::complex<double>> lu_factors(Eigen::MatrixXcd matrix);

}  // namespace chainmark
