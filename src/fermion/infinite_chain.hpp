#pragma once

#include <string>

#include <tl/expected.hpp>

#include "chainmark/fermion/angles.hpp"
#include "chainmark/reference/problem.hpp"

namespace chainmark::fermion {

/// An infinite spin-1/2 chain of nearest neighbours that is a chain of free fermions,
///   sum_j Jx Sx_j Sx_{j+1} + Jy Sy_j Sy_{j+1} - h Sz_j + constant,
/// with the same couplings on every bond, or with Jx = Jy = J alternating between two values.
struct InfiniteChain {
    bool alternating = false;
    Real jx = 0.0L;        ///< of every bond, or of the bonds 2j
    Real jy = 0.0L;        ///< of every bond; alternating: equal to jx
    Real j_odd = 0.0L;     ///< alternating: J of the bonds 2j + 1
    Real field = 0.0L;     ///< h
    Real constant = 0.0L;  ///< per site

    /// Total Sz is conserved: the fermions have no pairing.
    bool conserves_sz() const { return jx == jy; }
    bool is_uniform_xx() const { return !alternating && conserves_sz(); }
    bool is_decoupled() const { return jx == 0.0L && jy == 0.0L && j_odd == 0.0L; }

    /// (Jx + Jy)/2 and (Jx - Jy)/2, the amplitudes of cos k and sin k.
    Real hopping() const { return (jx + jy) / 2; }
    Real pairing() const { return (jx - jy) / 2; }

    /// Alternating: the band |J_even exp(ik) + J_odd|/2 runs from `band_bottom` to `band_top`.
    /// Uniform XX: from 0 to |J|.
    Real band_bottom() const;
    Real band_top() const;

    /// Largest single-particle energy, at most.
    Real scale() const;
};

/// Numbers of size `scale` that differ by no more than the rounding of couplings given as doubles:
/// a field at a critical point is then taken to be exactly there.
bool coincide(Real a, Real b, Real scale);

/// The chain of a problem, or why it is none of these. Looks at the strings, not at names.
tl::expected<InfiniteChain, std::string> recognise_infinite(const Problem& problem);

}  // namespace chainmark::fermion
