#pragma once

#include <functional>
#include <vector>

#include "chainmark/dense/ground.hpp"
#include "chainmark/operators/chain.hpp"
#include "chainmark/reference/quantity.hpp"

/// Correlations and other averages as sums of products of one-site operators.
namespace chainmark::dense {

/// weight * <A_i B_j>
struct PairTerm {
    Factor a;
    Factor b;
    std::complex<double> weight = 1.0;
};

/// One element of an answer: the sum of its terms.
using PairSum = std::vector<PairTerm>;

/// (1/L) sum_j S_j along an axis.
std::vector<Product> mean_spin(Axis axis, const Chain& chain);

/// spin_correlation: one sum for each of `pairs` and of `distance`. At a distance r site i + r may
/// lie past L-1 of a ring; its operator is then that of site i + r - L with the boundary's phase.
std::vector<PairSum> correlations(const Chain& chain, const Options& options);

/// structure_factor: S(q) = (1/L) sum_ij exp(-i q (i-j)) <A_i B_j> for q = 2 pi n/L, n = 0 ... L-1.
std::vector<PairSum> structure_factors(const Chain& chain, const Options& options);

/// string_order: Sa_i [prod_{i<k<j} U_k] Sa_j, one sum for each of `pairs` and of `distance`.
std::vector<std::vector<Product>> strings(const Chain& chain, const Options& options);

/// The average of a sum of products.
using Measure = std::function<Average(const std::vector<Product>&)>;

/// The averages of sums of pairs; with `connected` less sum weight <A_i><B_j>, and without range.
std::vector<Average> measure_pairs(const std::vector<PairSum>& sums,
                                   bool connected,
                                   const Chain& chain,
                                   const Measure& measure);

}  // namespace chainmark::dense
