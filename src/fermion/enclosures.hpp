#pragma once

#include <optional>

#include "chainmark/base/context.hpp"
#include "chainmark/reference/problem.hpp"
#include "chainmark/reference/quantity.hpp"
#include "chainmark/reference/value.hpp"

/// Certified digits by ball arithmetic.
///
/// Sums over the momenta of both parity classes are taken directly from the couplings, in balls
/// that hold every rounding; nothing here is shared with the floating-point modes. Which class
/// holds the ground state, and that it is the only one within the ground window, is decided by
/// balls that lie apart.
namespace chainmark::fermion {

/// False in a build without Arb: `enclose` then has no answer.
bool can_enclose();

/// The answer to a query with `context.digits` significant digits (as many decimals where it is
/// nearly 0), as `Reference::enclosure`; `value` and `bound` are the nearest double and its
/// distance. Nothing where this is not covered: other chains than uniform rings (periodic or
/// antiperiodic; XX, XY, Ising along x or y, in a field) and uniform open XX chains; other
/// quantities than the ground energy, the gap, the magnetization and zz correlations; a
/// temperature; and, but for the energy, ground spaces with more than one state.
///
/// Sources: E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961); S. Katsura, Phys. Rev.
/// 127, 1508 (1962). Arithmetic: F. Johansson, IEEE Trans. Comput. 66, 1281 (2017).
std::optional<Reference> enclose(const Problem& problem,
                                 const Query& query,
                                 const Context& context);

}  // namespace chainmark::fermion
