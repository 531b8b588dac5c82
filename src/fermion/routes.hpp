#pragma once

#include "chainmark/reference/route.hpp"

namespace chainmark {

/// Finite chains whose terms become quadratic in fermions by the Jordan-Wigner transformation: xx,
/// yy, xy and yx couplings of any range with Sz on every site between, complex hops, pairs and
/// twists, fields along z. The modes of each parity of the up count are found separately (closed
/// forms for uniform chains up to 10^6 sites, matrices up to 2000 sites otherwise), many-body
/// levels and expectation values follow from the filled modes alone. Sources: P. Jordan, E.
/// Wigner, Z. Phys. 47, 631 (1928); E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
const Route& fermion_route();

/// Infinite chains of free fermions between neighbours, in the ground state and at T > 0: the XX
/// and XY chains, the Ising chain in a transverse field and the alternating XX chain. Closed forms
/// where they exist, integrals over momenta with an error estimate otherwise.
/// Sources: E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961); S. Katsura, Phys. Rev.
/// 127, 1508 (1962); P. Pfeuty, Ann. Phys. (NY) 57, 79 (1970).
const Route& limit_route();

}  // namespace chainmark
