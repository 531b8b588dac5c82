#pragma once

#include <array>
#include <compare>
#include <complex>
#include <cstdint>
#include <map>
#include <optional>
#include <string>
#include <vector>

#include "chainmark/base/error.hpp"
#include "chainmark/operators/chain.hpp"

/// Hamiltonians as sums of operator strings.
namespace chainmark {

/// The three operators that, with the identity, span the operators of one spin 1/2.
enum class SiteOperator : std::uint8_t { z, plus, minus };

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

/// The string of the Hermitian conjugate: S+ and S- exchanged.
OperatorString conjugate(const OperatorString& string);

/// Number of S+ minus number of S-: by how much the string changes the number of up spins.
int raises_by(const OperatorString& string);

/// "S+_3 S-_4"; "I" for the identity.
std::string to_string(const OperatorString& string);

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

/// Largest |coupling|: the largest |coefficient| with that of a string with ladder operators
/// counted twice, so that J (Sx Sx + Sy Sy) and J Sz Sz both count as |J|. 0 for an empty list.
double largest_coupling(const TermList& list);

/// True if all coefficients are real: H is then a real matrix in the basis of up and down.
bool is_real(const TermList& list);

/// The list with -field sum_j Sz_j added on sites 0 ... length-1.
TermList with_field(const TermList& list, double field, int length);

/// One factor of a product that is still to be brought to canonical form: the operator
///   identity + z Sz + plus S+ + minus S-
/// on one site, as the 2 x 2 matrix in the basis (down, up).
struct SiteMatrix {
    std::array<std::complex<double>, 4> entries{};  ///< row major: dd, du, ud, uu

    static SiteMatrix identity();
    static SiteMatrix sx();
    static SiteMatrix sy();
    static SiteMatrix sz();
    static SiteMatrix raising();
    static SiteMatrix lowering();
};

SiteMatrix operator*(const SiteMatrix& a, const SiteMatrix& b);

struct PlacedMatrix {
    int site = 0;  ///< may lie past the end of a ring
    SiteMatrix matrix;
};

/// Collects products of site operators into a canonical list.
class TermCollector {
public:
    /// `cell`: sites per unit cell, used on the infinite chain alone.
    explicit TermCollector(Chain chain, int cell = 1) : chain_(chain), cell_(cell) {}

    /// Adds coefficient times the product, leftmost factor first. On a ring, sites past L-1 are
    /// brought back with the phase of the boundary; on the infinite chain strings are shifted into
    /// the first cell. Factors of the same site are multiplied out.
    void add(std::complex<double> coefficient, const std::vector<PlacedMatrix>& product);

    /// The same for the Hermitian conjugate of the product.
    void add_conjugate(std::complex<double> coefficient, const std::vector<PlacedMatrix>& product);

    /// The canonical list. What cancels to within the rounding of an extended-precision sum of its
    /// contributions is dropped; the coefficients are rounded to double once.
    /// Fails with `not_hermitian`, naming a string, where the sum is not Hermitian.
    Result<TermList> finish() const;

private:
    /// Summed in extended precision, so that a small rest of large numbers is kept.
    struct Sum {
        std::complex<long double> value;
        long double weight = 0.0L;  ///< sum of |contribution|, the scale of its rounding
    };

    Chain chain_;
    int cell_;
    std::map<OperatorString, Sum> sums_;
};

/// The part of a list that is a uniform field: the h of -h sum_j Sz_j where all L sites carry
/// exactly the same single-site Sz coefficient, and the list without it. 0 otherwise.
struct SplitField {
    double field = 0.0;
    TermList rest;
};
SplitField split_uniform_field(const TermList& list, const Chain& chain);

}  // namespace chainmark
