#pragma once

#include <optional>
#include <string>

#include "chainmark/fermion/bands.hpp"
#include "chainmark/reference/quantity.hpp"

/// Ground-state phases of infinite chains, and how things behave next to their borders.
namespace chainmark::fermion {

enum class Phase {
    trivial,           ///< no coupling and no field: every state is a ground state
    critical,          ///< XX: a partly filled band; XY and Ising: the border between the others
    saturation_point,  ///< the upper end of a partly filled band's fields
    saturated_up,
    saturated_down,
    ordered_x,
    ordered_y,
    disordered,
    dimerized,  ///< alternating XX: the field lies between the bands
    gap_edge,   ///< ... at the edge of the upper one
};

Phase phase_of(const InfiniteChain& chain);

/// The word in the output; empty for `trivial`.
std::string to_string(Phase phase);

/// The gap of long rings: smallest |e|, above an ordered phase's two ground states twice that (a
/// pair of domain walls).
Bounded gap_of(const Bands& bands);

/// At a border where a band of no width begins or ends (an alternating chain that falls into
/// dimers): the ground space grows with the chain and a derivative in the field does not exist.
bool at_flat_band(const InfiniteChain& chain);

/// How finite chains with the boundary of `chain` come near, where it is known.
/// Sources: H. W. J. Bloete, J. L. Cardy, M. P. Nightingale, Phys. Rev. Lett. 56, 742 (1986);
/// I. Affleck, Phys. Rev. Lett. 56, 746 (1986); J. L. Cardy, J. Phys. A 17, L385 (1984).
std::optional<Approach> approach_of(const Bands& bands, const Chain& chain, QuantityId id);

/// The law next to the nearest critical field, where there is one.
std::optional<CriticalLaw> critical_law(const Bands& bands, QuantityId id);

}  // namespace chainmark::fermion
