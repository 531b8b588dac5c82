#pragma once

#include <complex>
#include <string>
#include <vector>

#include <tl/expected.hpp>

#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/term_list.hpp"

namespace chainmark::fermion {

enum class FormKind {
    uniform_ring,  ///< one hop everywhere, the wrap bond with the phase of the chain's twist
    uniform_open,  ///< one hop everywhere, no wrap bond
    general,
};

/// A chain of spins that is a chain of free fermions,
///   H = constant + sum_j hop_j (S+_j S-_{j+1}) + wrap S+_{L-1} S-_0 + h.c. + sum_j onsite_j Sz_j.
/// With S+_j = c+_j prod_{l<j} (1 - 2 n_l), n = c+ c, Sz = n - 1/2, for states of N up spins
///   H = constant + sum_ij A_ij c+_i c_j - (1/2) sum_j onsite_j,
///   A_{j,j+1} = hop_j,  A_{L-1,0} = (-1)^(N-1) wrap,  A_jj = onsite_j,  A Hermitian,
/// since the string of the wrap bond counts the other N - 1 fermions.
struct ChainForm {
    Chain chain;
    std::vector<std::complex<double>> hop;  ///< L - 1 of them
    std::complex<double> wrap;
    std::vector<double> onsite;  ///< L of them
    double constant = 0.0;
    FormKind kind = FormKind::general;

    int length() const { return chain.length(); }

    /// The hop of a uniform chain (0 for a single site).
    std::complex<double> uniform_hop() const { return hop.empty() ? 0.0 : hop.front(); }

    /// True where the two parities of N have different modes.
    bool parity_matters() const { return kind == FormKind::uniform_ring || wrap != 0.0; }

    /// |wrap - hop exp(i twist)|, the rounding of the wrap bond of a uniform ring.
    long double wrap_deviation() const;
};

/// Finds the form in a term list on a finite chain, or says why there is none: the spin is not 1/2,
/// or which string (the first in the list) is not of this kind, and why.
tl::expected<ChainForm, std::string> recognise(const Chain& chain, const TermList& terms);

}  // namespace chainmark::fermion
