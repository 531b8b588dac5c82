#pragma once

#include <complex>
#include <cstdint>
#include <optional>

#include <Eigen/SparseCore>

namespace chainmark::sector {

/// The eigenvalues of A below a shift, counted: A - shift = L D L* has as many negative pivots
/// (Sylvester's law of inertia).
struct Inertia {
    std::int64_t below = 0;  ///< negative pivots
    /// A has at most `below` eigenvalues under shift - error and at least as many under
    /// shift + error: the computed factors belong to a matrix that near to A - shift
    /// (N. J. Higham, Accuracy and Stability of Numerical Algorithms, section 10.1; quoted from
    /// memory:  |E| <= gamma_(n+1) |L| |D| |L*|).
    double error = 0.0;
};

/// Nothing where the factors would take more than `most_operations` multiplications, or a pivot
/// vanishes. Only the lower triangle of the Hermitian matrix is read.
template <class Scalar>
std::optional<Inertia> count_below(const Eigen::SparseMatrix<Scalar>& matrix,
                                   double shift,
                                   double most_operations);

extern template std::optional<Inertia> count_below(const Eigen::SparseMatrix<double>&,
                                                   double,
                                                   double);
extern template std::optional<Inertia> count_below(const Eigen::SparseMatrix<std::complex<double>>&,
                                                   double,
                                                   double);

}  // namespace chainmark::sector
