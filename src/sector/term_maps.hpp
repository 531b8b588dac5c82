#pragma once

#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/term_list.hpp"

/// The images of a string under the maps of the sites and of the digits.
namespace chainmark::sector {

/// T^step A T^-step, 0 <= step < L: what leaves the end comes back at the other with the phase
/// `wrap_phase` of a raising operator carried around the ring.
Term translated(Term term, const Chain& chain, int step, std::complex<double> wrap_phase);

/// R A R: site j to L-1-j.
Term reflected(Term term, const Chain& chain);

/// Z A Z, Z: m to -m: |a><b| becomes |2S-a><2S-b|, Sz[k] becomes (-1)^k Sz[k].
Term inverted(Term term, const Chain& chain);

}  // namespace chainmark::sector
