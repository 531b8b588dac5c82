#include "chainmark/fermion/bulk_entropy.hpp"

#include <algorithm>
#include <cmath>

#include <Eigen/Core>
#include <Eigen/SVD>

#include "chainmark/fermion/bulk_correlations.hpp"

namespace chainmark::fermion {
namespace {

using RealMatrix = Eigen::Matrix<Real, Eigen::Dynamic, Eigen::Dynamic>;

/// Entropy of the weights (1 + s)/2 and (1 - s)/2, 0 <= s <= 1.
Real two_level_entropy(Real s, int order) {
    const Real p = (1 + s) / 2;
    const Real q = (1 - s) / 2;
    if (q <= 0.0L) {
        return 0.0L;
    }
    if (order == 1) {
        return -p * std::log1p(-q) - q * std::log(q);
    }
    const Real n = order;
    // p^n + q^n = p^n (1 + (q/p)^n)
    return (n * std::log1p(-q) + std::log1p(std::pow(q / p, n))) / (1 - n);
}

}  // namespace

bool is_one_piece(const std::vector<int>& block) {
    return block.back() - block.front() + 1 == static_cast<int>(block.size());
}

Bounded block_entropy(const Bands& bands, const Options& options) {
    const int first = options.block.front();
    const auto sites = static_cast<int>(options.block.size());
    const Contractions contractions(bands, std::nullopt, sites);
    RealMatrix inside(sites, sites);
    for (int l = 0; l < sites; ++l) {
        for (int m = 0; m < sites; ++m) {
            inside(l, m) = contractions.at(first + l, first + m);
        }
    }
    const Eigen::JacobiSVD<RealMatrix> svd(inside);
    const Real n = static_cast<Real>(sites);
    // Singular values move by at most the norm of a change; that of the solver is backward stable.
    const Real shift = n * contractions.largest_error() + 8 * n * real_epsilon;
    CompensatedSum sum;
    Real error = 0.0L;
    for (Eigen::Index i = 0; i < svd.singularValues().size(); ++i) {
        const Real s = std::min(1.0L, svd.singularValues()(i));
        const Real value = two_level_entropy(s, options.order);
        sum.add(value);
        // The entropy falls with s: it lies between those of s -+ shift.
        const Real above = two_level_entropy(std::max(0.0L, s - shift), options.order) - value;
        const Real below = value - two_level_entropy(std::min(1.0L, s + shift), options.order);
        error += std::max(above, below) + 8 * real_epsilon * (value + real_epsilon);
    }
    const Real unit = options.log2 ? std::log(2.0L) : 1.0L;
    return {sum.value() / unit, error / unit + 2 * real_epsilon * sum.value()};
}

}  // namespace chainmark::fermion
