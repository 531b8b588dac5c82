#include "chainmark/sector/dense_matrix.hpp"

#include <cmath>
#include <vector>

#include "chainmark/sector/scalar.hpp"

namespace chainmark::sector {

template <class Scalar>
Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic> dense_matrix(const OrbitRows<Scalar>& rows) {
    const OrbitBasis& basis = rows.basis();
    const Eigen::Index n = basis.dim();
    Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic> matrix =
        Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic>::Zero(n, n);
    for_each_row(
        rows,
        0,
        n,
        [&](std::int64_t row, const std::uint32_t* column, const std::uint32_t* code, int count) {
            matrix(row, row) += rows.diagonal_element(row);
            for (int i = 0; i < count; ++i) {
                matrix(row, column[i]) += rows.coefficients()[code[i]] *
                                          std::sqrt(basis.weight(row) / basis.weight(column[i]));
            }
        });
    return matrix;
}

template <class Scalar>
Eigen::SparseMatrix<Scalar> sparse_matrix(const OrbitRows<Scalar>& rows) {
    const OrbitBasis& basis = rows.basis();
    std::vector<Eigen::Triplet<Scalar>> elements;
    for_each_row(
        rows,
        0,
        basis.dim(),
        [&](std::int64_t row, const std::uint32_t* column, const std::uint32_t* code, int count) {
            const int at = static_cast<int>(row);
            elements.emplace_back(at, at, Scalar(rows.diagonal_element(row)));
            for (int i = 0; i < count; ++i) {
                elements.emplace_back(at,
                                      static_cast<int>(column[i]),
                                      rows.coefficients()[code[i]] *
                                          std::sqrt(basis.weight(row) / basis.weight(column[i])));
            }
        });
    Eigen::SparseMatrix<Scalar> matrix(basis.dim(), basis.dim());
    matrix.setFromTriplets(elements.begin(), elements.end());
    return matrix;
}

template <class Scalar>
Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic> dense_matrix(const HalvesBasis& basis,
                                                                   const PackedOperator& op) {
    const Eigen::Index n = basis.dim();
    Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic> matrix =
        Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic>::Zero(n, n);
    std::vector<Word> words(op.most_hops() + 1);
    std::vector<std::uint32_t> which(op.most_hops() + 1);
    basis.for_each_in(0, basis.highs().size(), [&](std::int64_t row, Word word) {
        matrix(row, row) += op.diagonal_element(word);
        const int count = op.neighbours(word, words.data(), which.data());
        for (std::size_t i = 0; i < static_cast<std::size_t>(count); ++i) {
            matrix(row, basis.rank(words[i])) += as_scalar<Scalar>(op.amplitudes()[which[i]]);
        }
    });
    return matrix;
}

template Eigen::MatrixXd dense_matrix(const OrbitRows<double>&);
template Eigen::MatrixXcd dense_matrix(const OrbitRows<std::complex<double>>&);
template Eigen::SparseMatrix<double> sparse_matrix(const OrbitRows<double>&);
template Eigen::SparseMatrix<std::complex<double>> sparse_matrix(
    const OrbitRows<std::complex<double>>&);
template Eigen::MatrixXd dense_matrix(const HalvesBasis&, const PackedOperator&);
template Eigen::MatrixXcd dense_matrix(const HalvesBasis&, const PackedOperator&);

}  // namespace chainmark::sector
