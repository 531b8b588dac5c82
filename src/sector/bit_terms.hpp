#pragma once

#include <bit>
#include <complex>
#include <cstdint>
#include <vector>

#include "chainmark/operators/term_list.hpp"

namespace chainmark::sector {

/// An operator string as bit masks: it acts on a configuration only if the sites of its S- are up
/// and those of its S+ are down, flips both, and gives a sign for every down spin under an Sz.
struct BitTerm {
    std::uint64_t flip = 0;
    std::uint64_t must_be_up = 0;
    std::uint64_t must_be_down = 0;
    std::uint64_t z = 0;
    std::complex<double> coefficient;  ///< with the 1/2 of every Sz

    bool acts_on(std::uint64_t state) const {
        return (state & must_be_up) == must_be_up && (state & must_be_down) == 0;
    }
    /// <state ^ flip| term |state> where it acts.
    std::complex<double> amplitude(std::uint64_t state) const {
        return std::popcount(~state & z) % 2 == 0 ? coefficient : -coefficient;
    }
};

/// The strings of a list, those with the same flip mask next to each other. The identity's
/// constant is not included.
std::vector<BitTerm> bit_terms(const std::vector<Term>& terms);

}  // namespace chainmark::sector
