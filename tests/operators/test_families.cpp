#include <cmath>

#include <doctest/doctest.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/operators/hamiltonian.hpp"
#include "operators/kronecker.hpp"
#include "support/random_lists.hpp"

// Families for several spins against their formulas, written out with matrices.
using namespace chainmark;
using namespace chainmark::test;

namespace {

Chain with_spin(Chain chain, int two_s) {
    chain.two_s = two_s;
    return chain;
}

Matrix family_matrix(const char* name, const std::vector<double>& values, const Chain& chain) {
    return matrix_of(*family_problem(name, values, chain).terms, chain.two_s, chain.length());
}

/// sum over bonds j of x_j SxSx + y_j SySy + z_j SzSz on a ring
Matrix ring_exchange(int two_s, int length, double x, double y, double z) {
    const SpinMatrices spin(two_s);
    const auto size = static_cast<Eigen::Index>(std::llround(std::pow(two_s + 1, length)));
    Matrix sum = Matrix::Zero(size, size);
    for (int j = 0; j < length; ++j) {
        const int k = (j + 1) % length;
        sum += x * Matrix(on_site(spin.x, j, length) * on_site(spin.x, k, length)) +
               y * Matrix(on_site(spin.y, j, length) * on_site(spin.y, k, length)) +
               z * Matrix(on_site(spin.z, j, length) * on_site(spin.z, k, length));
    }
    return sum;
}

std::string refusal(const char* name, const std::vector<double>& values, const Chain& chain) {
    const auto terms = family_terms(*find_family(name), values, chain);
    REQUIRE(!terms.has_value());
    CHECK(terms.error().code == ErrorCode::bad_chain);
    return to_string(terms.error());
}

}  // namespace

TEST_CASE("every family on a ring of spins 1/2, 1, 3/2") {
    for (const int two_s : {1, 2, 3}) {
        CAPTURE(two_s);
        const int length = 3;
        const Chain chain = with_spin(ring(length), two_s);
        const double tolerance = 1e-14 * two_s * two_s;
        CHECK(distance(family_matrix("xx", {1.3}, chain),
                       ring_exchange(two_s, length, 1.3, 1.3, 0.0)) < tolerance);
        CHECK(distance(family_matrix("xy", {1.3, 0.4}, chain),
                       ring_exchange(two_s, length, 1.3 * 1.4, 1.3 * 0.6, 0.0)) < tolerance);
        CHECK(distance(family_matrix("tfim", {1.3}, chain),
                       ring_exchange(two_s, length, 1.3, 0.0, 0.0)) < tolerance);
        CHECK(distance(family_matrix("xxz", {1.3, -0.2}, chain),
                       ring_exchange(two_s, length, 1.3, 1.3, -0.26)) < tolerance);
        CHECK(distance(family_matrix("heisenberg", {1.3}, chain),
                       ring_exchange(two_s, length, 1.3, 1.3, 1.3)) < tolerance);
    }
}

TEST_CASE("dimer_xx and j1j2 on open chains of spins 1") {
    const int length = 4;
    const SpinMatrices spin(2);
    const Chain chain = with_spin(open_chain(length), 2);
    Matrix dimer = Matrix::Zero(81, 81);
    Matrix frustrated = Matrix::Zero(81, 81);
    for (int j = 0; j + 1 < length; ++j) {
        const Sparse zz = on_site(spin.z, j, length) * on_site(spin.z, j + 1, length);
        dimer += (j % 2 == 0 ? 1.3 : 0.7) * (dot(spin, j, j + 1, length) - zz);
        frustrated += dot(spin, j, j + 1, length);
    }
    for (int j = 0; j + 2 < length; ++j) {
        frustrated += 0.4 * dot(spin, j, j + 2, length);
    }
    CHECK(distance(family_matrix("dimer_xx", {1.0, 0.3}, chain), dimer) < 1e-13);
    CHECK(distance(family_matrix("j1j2", {1.0, 0.4}, chain), frustrated) < 1e-13);
}

TEST_CASE("blbq is the bilinear and the squared product of the spins") {
    const SpinMatrices spin(2);
    for (const double theta : {-2.1, 0.0, 0.7, pi / 2}) {
        CAPTURE(theta);
        Matrix expected = Matrix::Zero(27, 27);
        for (int j = 0; j < 3; ++j) {
            const Matrix bond = dot(spin, j, (j + 1) % 3, 3);
            expected += 1.5 * (std::cos(theta) * bond + std::sin(theta) * bond * bond);
        }
        CHECK(distance(family_matrix("blbq", {1.5, theta}, with_spin(ring(3), 2)), expected) <
              1e-13);
    }
}

TEST_CASE("blbq at tan(theta) = 1/3: a bond is a projector on spin 2") {
    // S.S + (S.S)^2 / 3 = 2 P_2 - 2/3: Affleck, Kennedy, Lieb, Tasaki, Phys. Rev. Lett. 59, 799
    // (1987) (from memory). Two spins 1 make spin 2 (5 states), 1 (3 states) and 0 (1 state).
    const double theta = std::atan(1.0 / 3.0);
    const Matrix bond = family_matrix("blbq", {1.0, theta}, with_spin(open_chain(2), 2));
    const Eigen::SelfAdjointEigenSolver<Matrix> solver(bond / std::cos(theta));
    for (Eigen::Index i = 0; i < 9; ++i) {
        CHECK(std::abs(solver.eigenvalues()[i] - (i < 4 ? -2.0 / 3.0 : 4.0 / 3.0)) < 1e-14);
    }
}

TEST_CASE("inverse_square is the sum over all pairs, each once") {
    for (const int two_s : {1, 2}) {
        for (const int length : {3, 4, 5}) {
            CAPTURE(two_s);
            CAPTURE(length);
            const SpinMatrices spin(two_s);
            const auto size = static_cast<Eigen::Index>(std::llround(std::pow(two_s + 1, length)));
            Matrix expected = Matrix::Zero(size, size);
            for (int j = 0; j < length; ++j) {
                for (int i = 0; i < j; ++i) {
                    const double d = length / pi * std::sin(pi * (j - i) / length);
                    expected += 0.7 / (d * d) * dot(spin, i, j, length);
                }
            }
            const Matrix h = family_matrix("inverse_square", {0.7}, with_spin(ring(length), two_s));
            CHECK(distance(h, expected) < 1e-14);
        }
    }
}

TEST_CASE("inverse_square: the ground energy of Haldane and Shastry") {
    // E0 = -J (pi^2 / 24) (L + 5 / L) for S = 1/2 and even L: Haldane, Phys. Rev. Lett. 60, 635
    // (1988); Shastry, ibid. 639 (from memory).
    for (const int length : {4, 6, 8}) {
        const Matrix h = family_matrix("inverse_square", {1.0}, ring(length));
        const Eigen::SelfAdjointEigenSolver<Matrix> solver(h, Eigen::EigenvaluesOnly);
        CHECK(std::abs(solver.eigenvalues()[0] + pi * pi / 24 * (length + 5.0 / length)) < 1e-13);
    }
}

TEST_CASE("families say what they need, and refuse the rest") {
    CHECK(family_needs(*find_family("xx")).empty());
    CHECK(family_needs(*find_family("blbq")) == "spin 1");
    CHECK(refusal("blbq", {1.0, 0.3}, ring(4)) ==
          "the family 'blbq' does not exist on the ring of 4 sites of spin 1/2; it needs spin 1");
    CHECK(refusal("blbq", {1.0, 0.3}, with_spin(open_chain(4), 3)) ==
          "the family 'blbq' does not exist on the open chain of 4 sites of spin 3/2; it needs "
          "spin 1");
    const Chain infinite{.sites = {}};
    for (const Chain& chain : {open_chain(6), ring(6, pi), ring(6, 0.2), infinite, ring(1001)}) {
        CHECK(refusal("inverse_square", {1.0}, chain).find("it needs a periodic ring") !=
              std::string::npos);
    }
    for (const Family& family : families()) {
        Chain chain = ring(6);
        chain.two_s = family.two_s.value_or(1);
        CHECK(!family_obstacle(family, chain));
    }
}

TEST_CASE("more strings than can be added up are refused") {
    const Chain chain = with_spin(ring(1000000), 15);
    const auto terms = family_terms(*find_family("heisenberg"), std::vector{1.0}, chain).value();
    const auto list = build_terms(chain, terms, Coincident::refuse, 1);
    REQUIRE(!list.has_value());
    CHECK(list.error().code == ErrorCode::bad_chain);
    CHECK(list.error().found.find("more than 5e+07 operator strings") != std::string::npos);
}
