#include "chainmark/fermion/entropy.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "chainmark/base/hermitian_eigen.hpp"

namespace chainmark::fermion {
namespace {

bool consecutive(const std::vector<int>& sites) {
    return sites.empty() || sites.back() - sites.front() + 1 == static_cast<int>(sites.size());
}

/// -p ln p - (1-p) ln(1-p) for 0 <= p <= 1/2.
Real binary_entropy(Real p) {
    return p > 0 ? -p * std::log(p) - (1 - p) * std::log1p(-p) : 0.0L;
}

/// Entropy of a mode from nu^2. Decreases with it.
Real mode_entropy(Real square, int order) {
    const Real w = std::clamp(square, 0.0L, 1.0L);
    const Real nu = std::sqrt(w);
    const Real p = (1 - w) / (1 + nu) / 2;  // (1 - nu)/2
    if (order == 1) {
        return binary_entropy(p);
    }
    const Real n = static_cast<Real>(order);
    const Real ratio = p / (1 - p);
    return (n * std::log1p(-p) + std::log1p(std::pow(ratio, n))) / (1 - n);
}

/// nu_k^2, ascending, one of each: the eigenvalues of G^T G, or every second one of Gamma^T Gamma.
Eigen::VectorXd squares(const RealMatrix& gamma, bool bipartite) {
    const Eigen::Index modes = gamma.rows() / 2;
    if (!bipartite) {
        const Eigen::VectorXd twice = symmetric_eigenvalues(gamma.transpose() * gamma);
        Eigen::VectorXd once(modes);
        for (Eigen::Index k = 0; k < modes; ++k) {
            once(k) = (twice(2 * k) + twice(2 * k + 1)) / 2;
        }
        return once;
    }
    RealMatrix g(modes, modes);
    for (Eigen::Index i = 0; i < modes; ++i) {
        for (Eigen::Index j = 0; j < modes; ++j) {
            g(i, j) = gamma(2 * i, 2 * j + 1);
        }
    }
    return symmetric_eigenvalues(g.transpose() * g);
}

/// What a change of all nu by `sum` |d nu| in total can do.
Real spread_error(Real sum, Real modes, int order) {
    if (order > 1) {
        const Real n = static_cast<Real>(order);
        return n / (n - 1) * sum;
    }
    return modes * binary_entropy(std::min(0.5L, sum / (2 * modes)));
}

Real tilt_error(Real tilt, Real modes, int order) {
    if (order == 1) {
        return tilt * modes * std::numbers::ln2_v<Real> + binary_entropy(std::min(0.5L, tilt));
    }
    const Real frobenius = 4 * tilt / std::sqrt((1 - tilt) * (1 + tilt));
    return spread_error(std::sqrt(2 * modes) / 2 * frobenius, modes, order);
}

}  // namespace

std::optional<std::vector<int>> entropy_sites(const std::vector<int>& block, int length) {
    std::vector<int> others;
    auto next = block.begin();
    for (int site = 0; site < length; ++site) {
        if (next != block.end() && *next == site) {
            ++next;
        } else {
            others.push_back(site);
        }
    }
    if (!consecutive(block) && !consecutive(others)) {
        return std::nullopt;
    }
    return block.size() <= others.size() ? block : others;
}

Bounded modes_entropy(const RealMatrix& gamma,
                      bool bipartite,
                      Real gamma_error,
                      Real tilt,
                      const EntropyOptions& options) {
    const Real modes = static_cast<Real>(gamma.rows()) / 2;
    const Eigen::VectorXd found = squares(gamma, bipartite);
    // Product and eigenvalues: a few roundings each, of random signs over the length of a sum.
    // Common practice, no source; compared with extended precision in the tests.
    const Real step = 8 * double_rounding * std::sqrt(2 * modes);
    CompensatedSum sum;
    Real error = 0.0L;
    for (const double square : found) {
        const Real own = mode_entropy(square, options.order);
        sum.add(own);
        error += std::max(mode_entropy(square - step, options.order) - own,
                          own - mode_entropy(square + step, options.order));
    }
    const Real frobenius = gamma_error + double_rounding * static_cast<Real>(gamma.norm());
    error += spread_error(std::sqrt(2 * modes) / 2 * frobenius, modes, options.order) +
             tilt_error(std::min(tilt, 0.99L), modes, options.order) +
             16 * real_epsilon * sum.value();
    const Real largest = modes * std::numbers::ln2_v<Real>;
    const Real unit = options.log2 ? std::numbers::ln2_v<Real> : 1.0L;
    return {sum.value() / unit, std::min(error, largest) / unit};
}

}  // namespace chainmark::fermion
