#pragma once

#include <cmath>
#include <complex>
#include <vector>

#include <Eigen/Dense>
#include <Eigen/Sparse>
#include <unsupported/Eigen/KroneckerProduct>

#include "chainmark/operators/term_list.hpp"

/// Matrices over the whole space, built here from the definitions of the spin operators. Site 0 is
/// the rightmost factor of the Kronecker product; states of a site ascend in m.
namespace chainmark::test {

using Matrix = Eigen::MatrixXcd;
using Sparse = Eigen::SparseMatrix<std::complex<double>>;

struct SpinMatrices {
    Matrix plus, minus, x, y, z, one;

    explicit SpinMatrices(int two_s) {
        const int dim = two_s + 1;
        const double spin = two_s / 2.0;
        plus = Matrix::Zero(dim, dim);
        z = Matrix::Zero(dim, dim);
        one = Matrix::Identity(dim, dim);
        for (int i = 0; i < dim; ++i) {
            const double m = i - spin;
            z(i, i) = m;
            if (i + 1 < dim) {
                plus(i + 1, i) = std::sqrt(spin * (spin + 1) - m * (m + 1));
            }
        }
        minus = plus.transpose();
        x = (plus + minus) / 2.0;
        y = (plus - minus) / std::complex<double>(0.0, 2.0);
    }
};

/// `matrix` on `site` of `length`, the identity elsewhere.
inline Sparse on_site(const Matrix& matrix, int site, int length) {
    const Matrix one = Matrix::Identity(matrix.rows(), matrix.cols());
    Sparse result(Matrix::Identity(1, 1).sparseView());
    for (int j = 0; j < length; ++j) {
        const Sparse factor((j == site ? matrix : one).sparseView());
        result = Eigen::kroneckerProduct(factor, result).eval();
    }
    return result;
}

/// S_i.S_j
inline Sparse dot(const SpinMatrices& spin, int i, int j, int length) {
    return on_site(spin.x, i, length) * on_site(spin.x, j, length) +
           on_site(spin.y, i, length) * on_site(spin.y, j, length) +
           on_site(spin.z, i, length) * on_site(spin.z, j, length);
}

/// Sz[degree]: the powers of Sz made orthogonal one after the other (Gram-Schmidt).
inline Matrix orthogonal_power(const SpinMatrices& spin, int degree) {
    std::vector<Matrix> lower;
    Matrix power = spin.one;
    for (int k = 0; k <= degree; ++k) {
        Matrix next = power;
        for (int pass = 0; pass < 2; ++pass) {  // twice: once loses digits
            for (const Matrix& p : lower) {
                next -= (p * next).trace() / (p * p).trace() * p;
            }
        }
        lower.push_back(next);
        power = power * spin.z;
    }
    return lower.back();
}

/// The matrix of a term list on `length` sites.
inline Matrix matrix_of(const TermList& list, int two_s, int length) {
    const SpinMatrices spin(two_s);
    const auto size = static_cast<Eigen::Index>(std::llround(std::pow(two_s + 1, length)));
    Matrix sum = list.constant * Matrix::Identity(size, size);
    for (const Term& term : list.terms) {
        std::vector<Sparse> ops(static_cast<std::size_t>(length), Sparse(spin.one.sparseView()));
        for (const SiteFactor& factor : term.string) {
            Matrix op = Matrix::Zero(two_s + 1, two_s + 1);
            if (factor.op.is_diagonal()) {
                op = orthogonal_power(spin, factor.op.degree);
            } else {
                op(factor.op.to, factor.op.from) = 1.0;
            }
            ops[static_cast<std::size_t>(factor.site)] = op.sparseView();
        }
        Sparse product(Matrix::Identity(1, 1).sparseView());
        for (const Sparse& op : ops) {
            product = Eigen::kroneckerProduct(op, product).eval();
        }
        sum += term.coefficient * product;
    }
    return sum;
}

/// Largest |element| of a - b.
inline double distance(const Matrix& a, const Matrix& b) {
    return (a - b).cwiseAbs().maxCoeff();
}

}  // namespace chainmark::test
