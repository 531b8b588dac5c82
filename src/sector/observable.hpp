#pragma once

#include <complex>
#include <map>
#include <optional>
#include <utility>
#include <vector>

#include "chainmark/operators/chain.hpp"
#include "chainmark/operators/term_collector.hpp"
#include "chainmark/operators/term_list.hpp"
#include "chainmark/reference/quantity.hpp"

/// What is averaged: sums of operator strings.
namespace chainmark::sector {

/// Strings with their coefficients; the empty string is the identity.
using StringSum = std::map<OperatorString, std::complex<double>>;

/// The strings as a list, without the identity.
std::vector<Term> terms_of(const StringSum& sum);

/// A sum of products, Hermitian or not, as strings on the sites 0 ... L-1.
struct Observable {
    StringSum strings;
    double norm = 0.0;  ///< sum of the norms of the products: bounds the norm
};

/// Adds weight times the product, leftmost factor first. Sites past L-1 of a ring are brought back
/// with the phase of the boundary.
void add_product(Observable& observable,
                 std::complex<double> weight,
                 const std::vector<PlacedMatrix>& product,
                 const Chain& chain);

/// Upper bound of the largest singular value of a string.
double norm_of(const OperatorString& string, int two_s);

SiteMatrix spin_matrix(Axis axis, int two_s);

/// Pairs of sites whose mean is one element of an answer with `pairs` or `distance`.
std::vector<std::vector<std::pair<int, int>>> pairs_of(const Chain& chain, const Options& options);

/// weight * <A_i B_j>
struct PairTerm {
    PlacedMatrix a;
    PlacedMatrix b;
    std::complex<double> weight;
};

/// One element of an answer.
using PairSum = std::vector<PairTerm>;

Observable observable_of(const PairSum& sum, const Chain& chain);

/// spin_correlation: one sum for each of `pairs` or of `distance`.
std::vector<PairSum> correlations(const Chain& chain, const Options& options);

/// structure_factor: S(q) = (1/L) sum_ij exp(-i q (i-j)) <A_i B_j>, q = 2 pi n/L, n = 0 ... L-1.
std::vector<PairSum> structure_factors(const Chain& chain, const Options& options);

/// local_magnetization: S_j along the axis for every site.
std::vector<Observable> local_spins(const Chain& chain, Axis axis);

/// magnetization: (1/L) sum_j Sz_j.
Observable mean_sz(const Chain& chain);

/// An average with its error bound; for a degenerate ground space the extreme eigenvalues of P A P.
struct Average {
    std::complex<double> value = 0.0;
    double bound = 0.0;
    std::optional<std::pair<double, double>> range = {};
};

/// Subtracts sum weight <A_i><B_j>. `factors`: the averages of A and B of each term in turn. No
/// range is left.
void subtract_products(Average& average, const PairSum& sum, const std::vector<Average>& factors);

/// The observables of `subtract_products`.
std::vector<Observable> factors_of(const PairSum& sum, const Chain& chain);

}  // namespace chainmark::sector
