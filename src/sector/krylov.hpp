#pragma once

#include <Eigen/Core>

#include "chainmark/base/context.hpp"
#include "chainmark/sector/sparse_matrix.hpp"

namespace chainmark::sector {

/// An eigenvector with what was measured on it.
struct EigenPair {
    double value = 0.0;     ///< Rayleigh quotient
    double residual = 0.0;  ///< ||H v - value v|| for unit v, with an allowance for its rounding
    Eigen::VectorXd vector;
};

/// The lowest eigenpair of H outside the span of `found` (eigenvectors of H, orthonormal), by
/// Spectra's thick-restart Lanczos on
///   H - c + sum_i (c - theta_i) v_i v_i^T,   c above the spectrum,
/// where every found vector is moved to 0 and everything else lies below. A single-vector method
/// finds one copy of a degenerate level; asking again with that copy moved away finds the next.
///
/// `found` are dim x k columns with their values. Deterministic (fixed start vector). Throws
/// std::runtime_error if the iteration does not converge, Interrupted on a stop request.
EigenPair lowest_outside(const SparseMatrix<double>& matrix,
                         const std::vector<EigenPair>& found,
                         const Context& context);

/// Bytes that `lowest_outside` needs beside the matrix, for a sector of `dim` states.
double krylov_bytes(double dim);

}  // namespace chainmark::sector
