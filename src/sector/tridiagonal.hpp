#pragma once

#include <vector>

namespace chainmark::sector {

/// The lowest eigenvalues of a real symmetric tridiagonal matrix with their unit eigenvectors.
struct TridiagonalPairs {
    std::vector<double> values;                ///< ascending
    std::vector<std::vector<double>> vectors;  ///< one per value
};

/// `count` lowest (at most all). alpha: the diagonal, beta: the off-diagonal, one entry fewer.
/// LAPACK dstevx. Throws std::runtime_error if it fails.
TridiagonalPairs lowest_of_tridiagonal(std::vector<double> alpha,
                                       std::vector<double> beta,
                                       int count);

}  // namespace chainmark::sector
