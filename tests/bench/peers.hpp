#pragma once

#include <vector>

#include "bench/csr.hpp"

/// Solvers that are compared with ours, on a matrix in compressed rows.
namespace chainmark::bench {

struct Solved {
    std::vector<double> values;  ///< ascending
    double residual = 0.0;       ///< of the lowest: measured, or estimated where there is no vector
    int products = 0;
};

/// The lowest eigenvalue by the plain three-term Lanczos recurrence with two vectors in memory, on
/// all threads, until the estimate of its residual falls to `tolerance`. No eigenvector.
Solved plain_lanczos(const CsrMatrix& matrix, double tolerance);

/// The `count` lowest eigenvalues with vectors by Spectra's restarted Lanczos solver with 20
/// vectors and the tolerance 1e-12, products on all threads. Throws std::runtime_error where it
/// does not report success.
Solved by_spectra(const CsrMatrix& matrix, int count);

}  // namespace chainmark::bench
