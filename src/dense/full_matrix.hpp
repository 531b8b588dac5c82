#pragma once

#include <complex>
#include <vector>

#include <Eigen/SparseCore>

#include "chainmark/operators/term_list.hpp"

namespace chainmark::dense {

template <class Scalar>
using FullMatrix = Eigen::SparseMatrix<Scalar, Eigen::RowMajor>;

/// sum_i coefficient_i string_i as a 2^length x 2^length matrix, built by Kronecker products
///   A_{L-1} x ... x A_1 x A_0,
/// so that bit j of a row's number is site j, 1 = up. Scalar double needs real coefficients (the
/// imaginary parts are dropped). The identity's constant is not included.
template <class Scalar>
FullMatrix<Scalar> full_matrix(const std::vector<Term>& terms, int length);

extern template FullMatrix<double> full_matrix(const std::vector<Term>&, int);
extern template FullMatrix<std::complex<double>> full_matrix(const std::vector<Term>&, int);

/// Diagonal of sum_j Sz_j in the same basis.
Eigen::VectorXd total_sz(int length);

}  // namespace chainmark::dense
