#include <random>
#include <vector>

#include <Eigen/Dense>
#include <doctest/doctest.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/fermion/pfaffian.hpp"
#include "support/near.hpp"

// Pfaffians and determinants against their definitions and each other.

namespace chainmark::test {
namespace {

using fermion::determinant;
using fermion::Factored;
using fermion::Matrix;
using fermion::pfaffian;
using fermion::Real;
using Complex = std::complex<double>;

template <class Scalar>
Scalar random_number(std::mt19937_64& generator) {
    std::uniform_real_distribution<double> uniform(-1.0, 1.0);
    const double real = uniform(generator);
    if constexpr (std::is_same_v<Scalar, double>) {
        return real;
    } else {
        return {real, uniform(generator)};
    }
}

template <class Scalar>
Matrix<Scalar> random_matrix(Eigen::Index n, std::mt19937_64& generator) {
    return Matrix<Scalar>::NullaryExpr(n, n, [&] { return random_number<Scalar>(generator); });
}

template <class Scalar>
Matrix<Scalar> random_antisymmetric(Eigen::Index n, std::mt19937_64& generator) {
    const Matrix<Scalar> m = random_matrix<Scalar>(n, generator);
    return m - m.transpose();
}

/// The sum over pairings: the first index with each of the others, signs alternating.
template <class Scalar>
Scalar by_definition(const Matrix<Scalar>& a, const std::vector<Eigen::Index>& indices) {
    if (indices.empty()) {
        return 1.0;
    }
    Scalar sum = 0.0;
    for (std::size_t j = 1; j < indices.size(); ++j) {
        std::vector<Eigen::Index> others;
        for (std::size_t k = 1; k < indices.size(); ++k) {
            if (k != j) {
                others.push_back(indices[k]);
            }
        }
        const Scalar element = a(indices[0], indices[j]);
        sum += (j % 2 == 1 ? element : -element) * by_definition(a, others);
    }
    return sum;
}

template <class Scalar>
void check_definition(std::mt19937_64& generator) {
    for (const Eigen::Index n : {0, 2, 4, 6, 8}) {
        std::vector<Eigen::Index> indices;
        for (Eigen::Index i = 0; i < n; ++i) {
            indices.push_back(i);
        }
        for (int sample = 0; sample < 10; ++sample) {
            const Matrix<Scalar> a = random_antisymmetric<Scalar>(n, generator);
            const Factored<Scalar> found = pfaffian(a);
            const Complex expected = by_definition(a, indices);
            CHECK_NEAR(static_cast<double>(found.value.real()), expected.real(), rounding(50, 100));
            CHECK_NEAR(static_cast<double>(found.value.imag()), expected.imag(), rounding(50, 100));
        }
    }
}

TEST_CASE("Pfaffians: the sum over pairings") {
    std::mt19937_64 generator(1);
    check_definition<double>(generator);
    check_definition<Complex>(generator);
}

TEST_CASE("Pfaffians: the square is the determinant, Pf(B A B^T) = det B Pf A") {
    std::mt19937_64 generator(2);
    for (const Eigen::Index n : {2, 10, 24, 60, 120}) {
        // orthogonal congruence of a matrix of known Pfaffian keeps numbers near 1
        const Matrix<double> b =
            Eigen::HouseholderQR<Matrix<double>>(random_matrix<double>(n, generator))
                .householderQ();
        Matrix<double> blocks = Matrix<double>::Zero(n, n);
        double expected = b.determinant() > 0 ? 1.0 : -1.0;
        for (Eigen::Index k = 0; k < n; k += 2) {
            const double s = 1.0 - 0.1 * std::abs(random_number<double>(generator));
            blocks(k, k + 1) = k % 4 == 0 ? s : -s;
            blocks(k + 1, k) = -blocks(k, k + 1);
            expected *= blocks(k, k + 1);
        }
        Matrix<double> a = b * blocks * b.transpose();
        a = (a - a.transpose().eval()) / 2;
        const Factored<double> pf = pfaffian(a);
        const Factored<double> det = determinant(a);
        CHECK_NEAR(static_cast<double>(pf.value.real()),
                   expected,
                   rounding(1, 10 * static_cast<double>(n)));
        CHECK_NEAR(static_cast<double>((pf.value * pf.value).real()),
                   static_cast<double>(det.value.real()),
                   rounding(1, 10 * static_cast<double>(n)));
    }
}

TEST_CASE("Pfaffians and determinants of singular matrices are zero") {
    Matrix<double> a = Matrix<double>::Zero(6, 6);
    CHECK(pfaffian(a).value == std::complex<Real>(0.0L));
    CHECK(determinant(a).value == std::complex<Real>(0.0L));
    a(0, 1) = 1.0;
    a(1, 0) = -1.0;
    a(2, 3) = 0.5;
    a(3, 2) = -0.5;
    CHECK(pfaffian(a).value == std::complex<Real>(0.0L));
    CHECK(static_cast<double>(pfaffian(a).distance) == 0.0);
}

using WideMatrix = Eigen::Matrix<Real, Eigen::Dynamic, Eigen::Dynamic>;

/// By LU of Eigen in extended precision.
Real wide_determinant(const Matrix<double>& a) {
    return Eigen::PartialPivLU<WideMatrix>(a.cast<Real>()).determinant();
}

TEST_CASE("the measured distance bounds the error of contractions, and is not far above it") {
    std::mt19937_64 generator(3);
    for (const Eigen::Index n : {4, 16, 40, 80, 160}) {
        double largest = 0.0;
        double allowed = 0.0;
        for (int sample = 0; sample < 20; ++sample) {
            Matrix<double> g = random_matrix<double>(n, generator);
            g /= 1.0001 * Eigen::BDCSVD<Matrix<double>>(g).singularValues()(0);
            // shifted towards the identity the determinant does not vanish
            g = 0.1 * g + 0.9 * Matrix<double>::Identity(n, n);
            const Factored<double> found = determinant(g);
            const auto error =
                static_cast<double>(std::abs(found.value.real() - wide_determinant(g)));
            const auto bound_of_it =
                static_cast<double>(std::sqrt(static_cast<Real>(n)) * found.distance);
            CHECK(error <= bound_of_it);
            largest = std::max(largest, error);
            allowed = std::max(allowed, bound_of_it);
        }
        CHECK(allowed < 1e-12);
        MESSAGE("n = " << n << ": largest error " << largest << ", bound " << allowed);
    }
}

TEST_CASE("a perturbed contraction: |Pf(M+E) - Pf(M)| <= |E|_1 (1 + |E|)^(n-1) / 2") {
    std::mt19937_64 generator(4);
    for (const Eigen::Index n : {2, 4, 8, 20}) {
        for (const double size : {1e-6, 1e-2, 0.5}) {
            for (int sample = 0; sample < 20; ++sample) {
                Matrix<double> m = random_antisymmetric<double>(n, generator);
                m /= Eigen::BDCSVD<Matrix<double>>(m).singularValues()(0);
                Matrix<double> e = random_antisymmetric<double>(n, generator);
                e *= size / Eigen::BDCSVD<Matrix<double>>(e).singularValues()(0);
                const double trace_norm = Eigen::BDCSVD<Matrix<double>>(e).singularValues().sum();
                const auto moved = static_cast<double>(
                    std::abs(pfaffian<double>(m + e).value - pfaffian(m).value));
                CHECK(moved <=
                      trace_norm / 2 * std::pow(1 + size, static_cast<double>(n - 1)) + 1e-15);
            }
        }
    }
}

}  // namespace
}  // namespace chainmark::test
