#pragma once

#include <Eigen/Core>

/// Factorizations and products of real matrices by LAPACK and BLAS, which are several times faster
/// than Eigen's. All factorizations throw std::runtime_error if LAPACK fails.
namespace chainmark {

/// A = U diag(values) V^T, values descending, U and V orthogonal.
struct SingularValues {
    Eigen::VectorXd values;
    Eigen::MatrixXd u;
    Eigen::MatrixXd v;
};

/// Of a square matrix, by divide and conquer (dgesdd): O(n^3) time, about 7 n^2 numbers of memory.
SingularValues singular_values(Eigen::MatrixXd matrix);

/// A = Q T Q^T with Q a product of Householder reflections (dgehrd, dorghr); for an antisymmetric A
/// the Hessenberg matrix T is tridiagonal up to rounding. O(n^3) time, 4 n^2 numbers of memory.
struct Hessenberg {
    Eigen::VectorXd below;  ///< T_{i+1,i}
    Eigen::MatrixXd q;
};
Hessenberg hessenberg(Eigen::MatrixXd matrix);

/// Sign of the determinant of a square matrix that is well conditioned, by LU with pivots; 0 where
/// a pivot is exactly 0.
int determinant_sign(Eigen::MatrixXd matrix);

/// A B^T. Every element is a sum of products, each rounded once at most (dgemm).
Eigen::MatrixXd times_transpose(const Eigen::MatrixXd& a, const Eigen::MatrixXd& b);

}  // namespace chainmark
