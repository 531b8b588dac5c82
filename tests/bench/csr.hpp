#pragma once

#include <Eigen/SparseCore>

#include "bench/rings.hpp"

/// What is compared with: the same matrix as general-purpose libraries hold it.
namespace chainmark::bench {

/// Compressed rows with 8 bytes a value and 4 a column. Eigen multiplies them by a vector on all
/// OpenMP threads.
using CsrMatrix = Eigen::SparseMatrix<double, Eigen::RowMajor, std::int32_t>;

/// H in the full sector; rows and columns are positions in `basis`.
CsrMatrix csr_matrix(const sector::HalvesBasis& basis,
                     const sector::PackedOperator& op,
                     const Context& context);

/// The elements of one row, ascending in the column.
using CsrRow = std::vector<std::pair<std::int32_t, double>>;
CsrRow csr_row(const sector::HalvesBasis& basis,
               const sector::PackedOperator& op,
               sector::Word word);

/// y = A x
void multiply(const CsrMatrix& matrix, const double* x, double* y);
/// y += A x
void add_product(const CsrMatrix& matrix, const double* x, double* y);

/// Least traffic of a product: matrix and x read once, y written once.
double csr_bytes(const CsrMatrix& matrix);

}  // namespace chainmark::bench
