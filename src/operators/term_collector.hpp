#pragma once

#include <complex>
#include <map>
#include <vector>

#include "chainmark/base/error.hpp"
#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/site_matrix.hpp"
#include "chainmark/operators/term_list.hpp"

/// From products of site operators to a canonical term list.
namespace chainmark {

struct PlacedMatrix {
    int site = 0;  ///< may lie past the end of a ring
    SiteMatrix matrix;
};

/// A string with its coefficient before that is rounded to double.
struct WideTerm {
    OperatorString string;
    std::complex<long double> coefficient;
};

/// A product written out as a sum of strings; sites as in the product.
using Expansion = std::vector<WideTerm>;

/// The product, leftmost factor first; factors of the same site are multiplied out. Needs matrices
/// of the spin two_s / 2.
Expansion expand(const std::vector<PlacedMatrix>& product, int two_s);

/// The Hermitian conjugate.
Expansion conjugate(const Expansion& expansion);

/// Collects products of site operators into a canonical list.
class TermCollector {
public:
    /// `cell`: sites per unit cell, used on the infinite chain alone.
    explicit TermCollector(Chain chain, int cell = 1) : chain_(chain), cell_(cell) {}

    /// Adds coefficient times the expansion moved up by `shift` sites. On a ring, sites past L-1
    /// are brought back with the phase of the boundary; on the infinite chain strings are shifted
    /// into the first cell. Needs strings that span at most L sites and end before site 2L.
    void add(std::complex<double> coefficient, const Expansion& expansion, int shift = 0);

    /// The same for a product, leftmost factor first.
    void add(std::complex<double> coefficient, const std::vector<PlacedMatrix>& product);

    /// The same for the Hermitian conjugate of coefficient times the product.
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

    /// Moves `string` to its place on the chain; returns the phase that comes with it.
    std::complex<long double> place(OperatorString& string, int shift) const;

    Chain chain_;
    int cell_;
    std::map<OperatorString, Sum> sums_;
};

}  // namespace chainmark
