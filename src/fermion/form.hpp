#pragma once

#include <complex>
#include <string>
#include <vector>

#include <tl/expected.hpp>

#include "chainmark/fermion/angles.hpp"
#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/term_list.hpp"

namespace chainmark::fermion {

/// Parity of the number N of up spins; P = (-1)^N.
enum class UpCount { even = 0, odd = 1 };

/// P of a class: +1 or -1.
inline int parity_of(UpCount up_count) {
    return up_count == UpCount::even ? 1 : -1;
}

enum class FormKind {
    uniform_ring,  ///< every bond of a range the same, wrapping ones with the phase of the twist
    uniform_open,  ///< one hop between neighbours everywhere, free ends, nothing else but fields
    general,
};

/// hop c+_i c_j + pair c+_i c+_j + h.c., i = first, j = (first + range) mod L. A bond with
/// first + range >= L wraps: its string goes the other way round and it enters with the factor -P.
struct Bond {
    int first = 0;
    int range = 0;  ///< 1 ... L-1
    std::complex<double> hop;
    std::complex<double> pair;
};

/// A chain of spins that is a chain of free fermions. With S+_j = c+_j prod_{l<j} (1 - 2 n_l),
/// Sz = n - 1/2, a product of two S+- needs Sz on all sites between them and nowhere else,
///   S+_i Sz_{i+1} ... Sz_{j-1} S-_j = (-1/2)^(j-i-1) c+_i c_j,
///   S+_i Sz_{i+1} ... Sz_{j-1} S+_j = (-1/2)^(j-i-1) c+_i c+_j,
/// or on all sites outside and none between: the same of the sites j, j+1, ... i around the ring,
/// times -P. Sz_j alone, and the product of all others (times P), are fields; that of all is P.
///   H = constant + P constant_times_parity + sum of bonds
///       + sum_j (onsite_j + P onsite_times_parity_j) (n_j - 1/2).
struct QuadraticForm {
    Chain chain;
    std::vector<Bond> bonds;   ///< ascending in (range, first), every (range, first) once
    std::vector<Real> onsite;  ///< L of them
    std::vector<Real> onsite_times_parity = {};  ///< L of them, or empty
    Real constant = 0.0L;
    Real constant_times_parity = 0.0L;
    FormKind kind = FormKind::general;
    /// Uniform rings: bound on the norm of what the wrapping bonds, rounded to double, differ by
    /// from the first one times the exact phase.
    Real wrap_deviation = 0.0L;

    int length() const { return chain.length(); }
    bool wraps(const Bond& bond) const { return bond.first + bond.range >= length(); }

    /// True where no bond pairs: N is conserved and a uniform field shifts every mode alike.
    bool conserves_number() const;

    /// True where the two classes have different modes.
    bool parity_matters() const;

    /// The coefficient of n_j - 1/2 in a class.
    Real field_at(int site, UpCount up_count) const;
    Real constant_of(UpCount up_count) const;

    /// The bonds of site 0: one a range. Uniform chains.
    std::vector<Bond> bonds_of_first_site() const;

    /// Adds -field sum_j Sz_j.
    void add_field(double field);
};

/// Finds the form in a term list on a finite chain, or says why there is none: the spin is not 1/2,
/// or which string (the first in the list) is not of this kind, and why. O(length of all strings)
/// and the sorting of the bonds.
tl::expected<QuadraticForm, std::string> recognise(const Chain& chain, const TermList& terms);

}  // namespace chainmark::fermion
