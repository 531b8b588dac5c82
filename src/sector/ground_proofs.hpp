#pragma once

#include <optional>
#include <vector>

#include "chainmark/sector/hamiltonian.hpp"

/// Statements about where a ground state can be, proved from the term list without solving.
namespace chainmark::sector {

/// The rotation of Perron and Frobenius' theorem. Nothing where none is found, or the connection is
/// not seen from single-quantum exchanges along bonds that join all sites. For a bipartite
/// antiferromagnet it is Marshall's rotation of one sublattice (W. Marshall, Proc. R. Soc. London A
/// 232, 48 (1955)).
std::optional<SignRotation> find_sign_rotation(const Chain& chain,
                                               const Symmetries& symmetries,
                                               const std::vector<Term>& terms);

/// Whether a sector of its up count is the one that holds the positive state: the characters are
/// those of (-1)^(sum a n) under the sector's maps.
bool holds_positive_state(const SignRotation& rotation, const Sector& sector);

/// Whether H is such that no up count has a level below the lowest one at Sz = 0.
///
/// Cut an even chain in two halves that are mirror images. Turn the right half by pi about y and
/// write a state as sum C_ab |a>|b'>, b' the mirror image of b: total Sz is m_a - m_b. Where all
/// terms are real, those of the turned right half are the mirror images of the left half's (no
/// field: spin inversion holds, too) and those that cross the cut join a site with its own mirror
/// image as
///   J (Sx Sx + Sy Sy) + J_z Sz Sz,   J, J_z >= 0,
/// they become  -c Tr(C* A C A^T) with real A and c >= 0, and by Schwarz' inequality
///   <H>_C >= (<H>_P + <H>_Q)/2,   P = (C C*)^(1/2), Q = (C* C)^(1/2),
/// whose states have m_a = m_b. This is reflection positivity (F. J. Dyson, E. H. Lieb and B.
/// Simon, J. Stat. Phys. 18, 335 (1978); T. Kennedy, E. H. Lieb and B. S. Shastry, Phys. Rev. Lett.
/// 61, 2582 (1988); both quoted from memory).
bool lowest_at_zero_sz(const SectorHamiltonian& hamiltonian);

/// Why an up count cannot have the only ground state, known without solving anything.
enum class Excluded {
    no,
    by_inversion,   ///< the opposite Sz has the same levels, and no less favour from the field
    by_spin,        ///< its multiplets reach a smaller |Sz|
    by_positivity,  ///< lowest_at_zero_sz
};
Excluded excluded(const SectorHamiltonian& hamiltonian, int up_count, double field);

/// A lower bound of all levels with the given up count, by Gershgorin's theorem: every quantum away
/// from the empty (or from the full) chain changes the diagonal and the sum of the off-diagonal
/// elements of a row by a limited amount. S = 1/2; minus infinity otherwise.
double lower_bound_of(const SectorHamiltonian& hamiltonian, int up_count);

}  // namespace chainmark::sector
