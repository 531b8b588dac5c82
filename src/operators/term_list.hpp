#pragma once

#include <compare>
#include <complex>
#include <string>
#include <vector>

#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/site_operator.hpp"

/// Hamiltonians as sums of operator strings.
namespace chainmark {

struct SiteFactor {
    int site = 0;
    SiteOperator op = SiteOperator::z;
    auto operator<=>(const SiteFactor&) const = default;
};

/// A product of site operators, ascending in the site, at most one factor per site; empty is the
/// identity.
using OperatorString = std::vector<SiteFactor>;

struct Term {
    OperatorString string;
    std::complex<double> coefficient;
    bool operator==(const Term&) const = default;
};

/// The string of the Hermitian conjugate: |a><b| becomes |b><a|.
OperatorString conjugate(const OperatorString& string);

/// By how much the string changes total Sz.
int raises_by(const OperatorString& string);

/// "S+_3 S-_4", "I" for the identity; "|+1><0|_3 Sz[2]_4" where S is not 1/2.
std::string to_string(const OperatorString& string, int two_s = 1);

/// A sum of operator strings in canonical form: every string once, sorted, no zero coefficients,
/// the identity kept apart. Two lists are equal exactly if they are the same operator term by term.
///
/// On the infinite chain the list holds one unit cell: strings whose first site lies in
/// 0 ... cell-1, to be repeated with period `cell`; `constant` is then per cell.
struct TermList {
    double constant = 0.0;
    std::vector<Term> terms;
    int cell = 1;  ///< sites per unit cell; used on the infinite chain alone

    bool operator==(const TermList&) const = default;
};

/// Largest |coupling|: the largest |coefficient| with that of a string with a |a><b| counted twice,
/// so that for S = 1/2 J (Sx Sx + Sy Sy) and J Sz Sz both count as |J|. For larger S the elements
/// of S+ and S- are part of the coefficients, so the former counts as |J| times the largest squared
/// element: S(S+1) for whole S, (S+1/2)^2 otherwise. 0 for an empty list.
double largest_coupling(const TermList& list);

/// True if all coefficients are real: H is then a real matrix in the basis of digits.
bool is_real(const TermList& list);

/// The list with -field sum_j Sz_j added on sites 0 ... length-1.
TermList with_field(const TermList& list, double field, int length);

/// The part of a list that is a uniform field: the h of -h sum_j Sz_j where all L sites carry
/// exactly the same single-site Sz coefficient, and the list without it. 0 otherwise.
struct SplitField {
    double field = 0.0;
    TermList rest;
};
SplitField split_uniform_field(const TermList& list, const Chain& chain);

}  // namespace chainmark
