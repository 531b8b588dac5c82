#pragma once

#include <complex>

#include <Eigen/Core>
#include <Eigen/SparseCore>

#include "chainmark/sector/halves_basis.hpp"
#include "chainmark/sector/orbit_rows.hpp"

namespace chainmark::sector {

/// A sector's matrix in the orthonormal basis sqrt(w_a) psi(a): H_ab sqrt(w_a / w_b).
template <class Scalar>
Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic> dense_matrix(const OrbitRows<Scalar>& rows);

/// The same, stored sparsely.
template <class Scalar>
Eigen::SparseMatrix<Scalar> sparse_matrix(const OrbitRows<Scalar>& rows);

/// The matrix between all configurations.
template <class Scalar>
Eigen::Matrix<Scalar, Eigen::Dynamic, Eigen::Dynamic> dense_matrix(const HalvesBasis& basis,
                                                                   const PackedOperator& op);

}  // namespace chainmark::sector
