#pragma once

#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/term_list.hpp"

namespace chainmark {

/// True if the list commutes with total Sz and total S+ (a Hermitian one is then invariant under
/// all rotations of the spins), as far as coefficients that were rounded to double can tell: every
/// coefficient of the commutator is within the rounding of what cancels in it. False on a ring with
/// a twist, where the total spin is no symmetry. A field that is kept apart from the list is not
/// looked at.
bool is_rotation_invariant(const TermList& list, const Chain& chain);

}  // namespace chainmark
