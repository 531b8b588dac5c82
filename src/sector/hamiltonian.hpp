#pragma once

#include <optional>
#include <vector>

#include "chainmark/sector/packed_string.hpp"
#include "chainmark/sector/symmetry.hpp"

namespace chainmark::sector {

/// A rotation of single sites about z that makes every off-diagonal element of H zero or negative,
///   |s> -> (-1)^(sum_j a_j n_j) |s>,   n_j the digits, a_j = 0 or 1,
/// while every two configurations of equal up count are connected by H. By the theorem of Perron
/// and Frobenius (R. A. Horn and C. R. Johnson, Matrix Analysis, section 8.4; quoted from memory)
/// the lowest level of each up count is then single, and its state, rotated, has no zero and one
/// sign everywhere.
struct SignRotation {
    std::vector<int> rotated;  ///< a_j
};

/// H (without its constant, and without a uniform field that commutes with it) as the sectors use
/// it.
struct SectorHamiltonian {
    Chain chain;
    Symmetries symmetries;
    std::vector<Term> terms;  ///< with the gauge of the symmetries applied
    PackedOperator packed;
    std::optional<SignRotation> sign_rotation;  ///< where one is found

    SectorHamiltonian(const Chain& on, const Symmetries& found, const std::vector<Term>& strings);
};

}  // namespace chainmark::sector
