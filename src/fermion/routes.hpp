#pragma once

#include "chainmark/reference/route.hpp"

namespace chainmark {

/// Finite chains whose terms become free fermions by the Jordan-Wigner transformation: hops between
/// neighbours and single Sz. The modes of each parity of the up count are found separately (closed
/// forms for uniform chains up to 10^6 sites, an L x L matrix up to 2000 sites otherwise),
/// many-body levels and expectation values follow from occupations alone. Sources: P. Jordan, E.
/// Wigner, Z. Phys. 47, 631 (1928); E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
const Route& fermion_route();

/// Closed forms of the uniform infinite XX chain in a field at T = 0.
/// Sources: S. Katsura, Phys. Rev. 127, 1508 (1962); E. Lieb, T. Schultz, D. Mattis,
/// Ann. Phys. (NY) 16, 407 (1961).
const Route& limit_route();

}  // namespace chainmark
