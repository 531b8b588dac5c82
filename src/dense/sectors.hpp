#pragma once

#include <string>

#include "chainmark/base/context.hpp"
#include "chainmark/dense/full_matrix.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/value.hpp"

namespace chainmark::dense {

/// Every level of H with the quantum numbers that were asked for.
struct SectorSpectrum {
    std::string refusal;       ///< why there is none; then nothing else is filled in
    Eigen::VectorXd energies;  ///< ascending
    Eigen::VectorXd bounds;
    Eigen::VectorXd residuals;
    Eigen::MatrixXcd states;  ///< in the basis of digits, one column a level
};

/// Projects H onto the states with all of `labels` and diagonalizes it there. The maps behind the
/// labels are permutations of the basis states with phases: with digits d_j (m = d_j - S)
///   T^t: site j to j + t, with exp(-i twist d_j) for each site carried past L-1;
///   reflection: site j to L-1-j;   inversion: d_j to 2S - d_j.
/// t is the smallest step around the ring that leaves H as it is, and
///   T^t |k> = exp(-i k t)|k>,   k = (2 pi n + twist N_up)/L,   n modulo L/t;
/// where H keeps the parity of N_up alone, N_up is that parity, 0 or 1. Refused, naming the label:
/// what does not commute with H, or with another label.
SectorSpectrum sector_spectrum(const Problem& problem,
                               const Labels& labels,
                               const Context& context);

}  // namespace chainmark::dense
