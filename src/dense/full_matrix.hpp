#pragma once

#include <complex>
#include <vector>

#include <Eigen/SparseCore>

#include "chainmark/dense/local_matrix.hpp"
#include "chainmark/operators/term_list.hpp"

/// Operators on the whole chain, of dimension (2S+1)^L. They are built by Kronecker products
///   A_{L-1} x ... x A_1 x A_0,
/// so that the j-th base-(2S+1) digit of a row's number is the state of site j, 0 = lowest m.
namespace chainmark::dense {

template <class Scalar>
using FullMatrix = Eigen::SparseMatrix<Scalar, Eigen::RowMajor>;

/// (2S+1)^length
Eigen::Index full_dim(int length, int two_s);

/// sum_i coefficient_i string_i. Scalar double needs real coefficients (the imaginary parts are
/// dropped). The identity's constant is not included.
template <class Scalar>
FullMatrix<Scalar> full_matrix(const std::vector<Term>& terms, int length, int two_s = 1);

extern template FullMatrix<double> full_matrix(const std::vector<Term>&, int, int);
extern template FullMatrix<std::complex<double>> full_matrix(const std::vector<Term>&, int, int);

/// How large the roundings of a matrix can be.
struct MatrixScale {
    double weight = 0.0;  ///< largest row sum of sum_i |coefficient_i string_i|: bounds ||H||, also
                          ///< where contributions cancel
    double noise =
        0.0;  ///< bounds the rounding of the matrix and of its product with a unit vector
};

/// With n_r strings that have an element in row r, both are sums of at most n_r + 2 roundings of
/// numbers whose sizes sum up to at most `weight`.
MatrixScale scale_of(const std::vector<Term>& terms, int length, int two_s);

/// Diagonal of sum_j Sz_j in the same basis.
Eigen::VectorXd total_sz(int length, int two_s = 1);

struct Factor {
    int site = 0;
    LocalMatrix matrix;
};

/// weight * the product of its factors; those of the same site are multiplied in their order.
struct Product {
    std::complex<double> weight = 1.0;
    std::vector<Factor> factors;
};

/// An operator A = real + i imaginary with an upper bound of ||A||.
struct FullOperator {
    FullMatrix<double> real;
    FullMatrix<double> imaginary;
    double norm = 0.0;
};

/// The sum of the products.
FullOperator full_operator(const std::vector<Product>& products, int length, int two_s);

}  // namespace chainmark::dense
