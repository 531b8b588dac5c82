#pragma once

#include <complex>

#include <Eigen/Core>

#include "chainmark/fermion/angles.hpp"

namespace chainmark::fermion {

template <class Scalar>
using Matrix = Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic>;

/// Exactly the determinant or Pfaffian of a matrix within `distance` (Frobenius norm) of the one
/// that was given, but for the rounding of a product of n numbers.
///
/// The distance is measured: with E = A minus the product of the computed factors, |E|_F from all
/// elements of small matrices, in extended precision. Of larger ones it is taken from E x for a few
/// random x with elements +-1, the mean of |E x|^2 being |E|_F^2; the rounding of E x itself is of
/// the size of E x and adds to it.
template <class Scalar>
struct Factored {
    std::complex<Real> value;
    Real distance = 0.0L;
};

/// By LU with partial pivoting, O(n^3). Of an empty matrix 1.
template <class Scalar>
Factored<Scalar> determinant(const Matrix<Scalar>& a);

/// Pf of an antisymmetric matrix (n even, a^T = -a exactly), Pf^2 = det:
///   Pf(A) = sum over pairings {(a_1, b_1), ...} of the indices, a < b, of sign prod A_{a b},
/// the sign being that of the permutation a_1 b_1 a_2 b_2 ... By A = P^T L D L^T P, L unit lower
/// triangular, D made of blocks [[0, d], [-d, 0]]: column k = 0, 2, ... is eliminated with row k+1,
/// which holds the column's largest element after an exchange, by
///   A_ij <- A_ij - (u_i t_j - t_i u_j),  t_i = A_ik/A_{k+1,k},  u_i = A_{i,k+1},  |t| <= 1.
/// O(n^3). Method: B. N. Parlett, J. K. Reid, BIT 10, 386 (1970), every other step of theirs.
template <class Scalar>
Factored<Scalar> pfaffian(const Matrix<Scalar>& a);

}  // namespace chainmark::fermion
