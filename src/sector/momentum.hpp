#pragma once

#include <vector>

#include "chainmark/base/context.hpp"
#include "chainmark/operators/chain.hpp"
#include "chainmark/reference/value.hpp"
#include "chainmark/sector/basis.hpp"
#include "chainmark/sector/bit_terms.hpp"
#include "chainmark/sector/symmetry.hpp"

namespace chainmark::sector {

/// A level with the quantum numbers of its block.
struct LabelledLevel {
    double energy = 0.0;
    double bound = 0.0;
    Labels labels;
};

/// The configurations of one sector that are smallest among their translates, with the number of
/// different translates (the period of the orbit).
class Orbits {
public:
    Orbits(SectorLabel sector, const Chain& chain);

    struct Orbit {
        std::uint64_t representative;
        int period;
    };

    /// Orbits that carry a state of momentum k = (2 pi n + twist N)/L, N the sector's value (its up
    /// count or parity): those with T^period |s> = exp(-i k period) |s>.
    std::vector<Orbit> with_momentum(int n) const;

    /// Size of the largest momentum block of the sector.
    std::size_t largest_block() const;

private:
    SectorLabel sector_;
    Chain chain_;
    std::vector<Orbit> orbits_;
};

/// Number of orbits of the largest sector, an upper bound of every momentum block of the chain.
std::size_t largest_momentum_block(Conserved conserved, const Chain& chain);

/// All 2^L levels of a ring with translation symmetry, unsorted, each with its sector and momentum,
/// from complete solutions of all momentum blocks. Momentum states
///   |a, k> = sqrt(period_a) P_k |a>,   P_k = (1/L) sum_r exp(i k r) T^r,
/// so that H|a> = sum_i h_i |s_i> with |s_i> = c_i T^{l_i} |b_i> gives
///   <b, k| H |a, k> = sum_i h_i c_i exp(-i k l_i) sqrt(period_a / period_b).
/// For real terms on an untwisted ring the blocks of k and -k have the same levels, and only one
/// is solved.
std::vector<LabelledLevel> momentum_levels(const Chain& chain,
                                           Conserved conserved,
                                           const std::vector<BitTerm>& terms,
                                           bool real,
                                           const Context& context);

}  // namespace chainmark::sector
