#pragma once

#include <string>

#include "chainmark/reference/problem.hpp"

namespace chainmark::sector {

/// What counts the up spins.
enum class Conserved { nothing, parity, up_count };

/// The symmetries used by the route, as found in a term list. Where one is absent, the string says
/// which term breaks it or why it is not looked for.
struct Symmetries {
    Conserved conserved = Conserved::nothing;
    bool translation = false;  ///< by one site around the ring, with the boundary's phase
    bool real = false;         ///< H is a real matrix in the basis of up and down
    std::string why_no_sz;
    std::string why_no_parity;
    std::string why_no_translation;
    std::string why_not_real;
};

/// Looks at every string of the list. A finite chain.
Symmetries find_symmetries(const Chain& chain, const TermList& terms);

/// Several lines for people: every symmetry, present or absent and why, and the largest sector.
std::string describe_symmetries(const Problem& problem);

}  // namespace chainmark::sector
