#include <cmath>
#include <numbers>
#include <random>
#include <vector>

#include <Eigen/Dense>
#include <doctest/doctest.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/fermion/entropy.hpp"
#include "support/near.hpp"

// Entropies of modes against extended precision and simple cases.

namespace chainmark::test {
namespace {

using fermion::Bounded;
using fermion::entropy_sites;
using fermion::modes_entropy;
using fermion::Real;
using fermion::RealMatrix;
using WideMatrix = Eigen::Matrix<Real, Eigen::Dynamic, Eigen::Dynamic>;

RealMatrix random_orthogonal(Eigen::Index n, std::mt19937_64& generator) {
    std::normal_distribution<double> normal;
    const RealMatrix m = RealMatrix::NullaryExpr(n, n, [&] { return normal(generator); });
    return Eigen::HouseholderQR<RealMatrix>(m).householderQ();
}

/// A covariance of `modes` modes with the given nu, turned by a random rotation: within or, where
/// `bipartite`, within the even and within the odd Majoranas.
RealMatrix covariance(const std::vector<double>& nu, bool bipartite, std::mt19937_64& generator) {
    const auto modes = static_cast<Eigen::Index>(nu.size());
    RealMatrix gamma = RealMatrix::Zero(2 * modes, 2 * modes);
    for (Eigen::Index k = 0; k < modes; ++k) {
        gamma(2 * k, 2 * k + 1) = nu[static_cast<std::size_t>(k)];
        gamma(2 * k + 1, 2 * k) = -gamma(2 * k, 2 * k + 1);
    }
    RealMatrix turn = random_orthogonal(2 * modes, generator);
    if (bipartite) {
        const auto even = Eigen::seqN(0, modes, 2);
        const auto odd = Eigen::seqN(1, modes, 2);
        turn.setZero();
        turn(even, even) = random_orthogonal(modes, generator);
        turn(odd, odd) = random_orthogonal(modes, generator);
    }
    RealMatrix result = turn * gamma * turn.transpose();
    return (result - result.transpose().eval()) / 2;
}

/// From the eigenvalues of Gamma^T Gamma in extended precision.
Real wide_entropy(const RealMatrix& gamma, int order) {
    const WideMatrix wide = gamma.cast<Real>();
    const WideMatrix square = wide.transpose() * wide;
    const Eigen::SelfAdjointEigenSolver<WideMatrix> solver(square, Eigen::EigenvaluesOnly);
    Real sum = 0.0L;
    for (Eigen::Index k = 0; k < square.rows(); ++k) {
        const Real nu = std::sqrt(std::clamp(solver.eigenvalues()(k), 0.0L, 1.0L));
        const Real p = (1 + nu) / 2;
        const Real q = 1 - p;
        if (order == 1) {
            sum -= p * std::log(p) + (q > 0 ? q * std::log(q) : 0.0L);
        } else {
            const Real n = static_cast<Real>(order);
            sum += std::log(std::pow(p, n) + std::pow(q, n)) / (1 - n);
        }
    }
    return sum / 2;  // every mode twice
}

TEST_CASE("entropies of modes in extended precision") {
    std::mt19937_64 generator(6);
    std::uniform_real_distribution<double> uniform(0.0, 1.0);
    for (const int modes : {1, 2, 5, 20, 60}) {
        for (const bool bipartite : {true, false}) {
            std::vector<double> nu;
            for (int k = 0; k < modes; ++k) {
                nu.push_back(k % 3 == 0 ? uniform(generator) : 1 - std::pow(10.0, -k));
            }
            const RealMatrix gamma = covariance(nu, bipartite, generator);
            for (const int order : {1, 2, 4}) {
                CAPTURE(modes);
                CAPTURE(bipartite);
                CAPTURE(order);
                const Bounded found = modes_entropy(gamma, bipartite, 0.0L, 0.0L, {order, false});
                CHECK_NEAR(static_cast<double>(found.value),
                           static_cast<double>(wide_entropy(gamma, order)),
                           bound(static_cast<double>(found.error)));
                CHECK(found.error < 1e-10L);
            }
        }
    }
}

TEST_CASE("a mode of nu = 0 has ln 2, one of nu = 1 nothing, in bits 1 and 0") {
    for (const int order : {1, 2, 3}) {
        RealMatrix gamma = RealMatrix::Zero(4, 4);
        gamma(0, 1) = 1.0;
        gamma(1, 0) = -1.0;
        const Bounded nats = modes_entropy(gamma, true, 0.0L, 0.0L, {order, false});
        const Bounded bits = modes_entropy(gamma, true, 0.0L, 0.0L, {order, true});
        CHECK_NEAR(static_cast<double>(nats.value), std::numbers::ln2, rounding(1, 2));
        CHECK_NEAR(static_cast<double>(bits.value), 1.0, rounding(1, 2));
    }
}

TEST_CASE("a perturbed covariance moves the entropy by no more than its bound") {
    std::mt19937_64 generator(7);
    for (const double size : {1e-12, 1e-8, 1e-4}) {
        for (const int order : {1, 2, 3}) {
            const RealMatrix gamma = covariance({1.0, 1.0, 0.9, 0.3, 0.999999}, false, generator);
            const RealMatrix noise = RealMatrix::Random(10, 10);
            RealMatrix moved = gamma + size * (noise - noise.transpose());
            moved /= std::max(1.0, Eigen::BDCSVD<RealMatrix>(moved).singularValues()(0));
            const Real distance = static_cast<Real>((moved - gamma).norm());
            const Bounded found = modes_entropy(gamma, false, distance, 0.0L, {order, false});
            CHECK_NEAR(static_cast<double>(found.value),
                       static_cast<double>(wide_entropy(moved, order)),
                       bound(static_cast<double>(found.error)));
        }
    }
}

TEST_CASE("which sites stand for a block") {
    using Sites = std::vector<int>;
    CHECK(entropy_sites({0, 1}, 6) == Sites{0, 1});
    CHECK(entropy_sites({2, 3}, 6) == Sites{2, 3});
    CHECK(entropy_sites({0, 1, 2, 3}, 6) == Sites{4, 5});
    CHECK(entropy_sites({0, 5}, 6) == Sites{0, 5});  // the others are consecutive
    CHECK(entropy_sites({0, 1, 4, 5}, 6) == Sites{2, 3});
    CHECK_FALSE(entropy_sites({0, 2}, 6).has_value());
    CHECK_FALSE(entropy_sites({0, 2, 3, 5}, 6).has_value());
}

}  // namespace
}  // namespace chainmark::test
