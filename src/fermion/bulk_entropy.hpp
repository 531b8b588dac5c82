#pragma once

#include <vector>

#include "chainmark/fermion/answers.hpp"
#include "chainmark/fermion/bands.hpp"
#include "chainmark/reference/quantity.hpp"

namespace chainmark::fermion {

/// Longest block of an infinite chain.
inline constexpr int longest_block = 300;

/// The sites follow each other without a gap: their spins are then functions of their fermions.
bool is_one_piece(const std::vector<int>& block);

/// Entropy of a block of one piece in the only ground state of an infinite chain. With the singular
/// values s of G(l, m) = <b_l a_m> inside the block, each a two-level system of weights (1 +- s)/2:
///   order 1:  - sum p ln p - (1 - p) ln(1 - p);   order n:  sum ln(p^n + (1 - p)^n)/(1 - n).
/// Source: G. Vidal, J. I. Latorre, E. Rico, A. Kitaev, Phys. Rev. Lett. 90, 227902 (2003).
Bounded block_entropy(const Bands& bands, const Options& options);

}  // namespace chainmark::fermion
