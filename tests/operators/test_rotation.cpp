#include <random>

#include <doctest/doctest.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/operators/hamiltonian.hpp"
#include "chainmark/operators/rotation.hpp"
#include "operators/kronecker.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Chain with_spin(Chain chain, int two_s) {
    chain.two_s = two_s;
    return chain;
}

bool family_is_invariant(const char* name, const std::vector<double>& values, const Chain& chain) {
    return is_rotation_invariant(*family_problem(name, values, chain).terms, chain);
}

/// sum_{i<j} J_ij S_i.S_j, and J_ij (S_i.S_j)^2 besides for S > 1/2, J_ij random.
std::vector<PlacedTerm> random_exchange(const Chain& chain, std::mt19937_64& generator) {
    const std::array<SiteMatrix, 3> spin = {
        SiteMatrix::sx(chain.two_s), SiteMatrix::sy(chain.two_s), SiteMatrix::sz(chain.two_s)};
    std::vector<PlacedTerm> terms;
    for (int j = 0; j < chain.length(); ++j) {
        for (int i = 0; i < j; ++i) {
            const double linear = draw(generator) * std::pow(10.0, i - j);
            const double squared = chain.two_s == 1 ? 0.0 : draw(generator);
            for (const SiteMatrix& a : spin) {
                terms.push_back(
                    {.factors = {a, a}, .offsets = {i, j}, .coupling = {linear}, .fixed = true});
                for (const SiteMatrix& b : spin) {
                    terms.push_back({.factors = {a * b, a * b},
                                     .offsets = {i, j},
                                     .coupling = {squared},
                                     .fixed = true});
                }
            }
        }
    }
    return terms;
}

TermList list_of(const std::vector<PlacedTerm>& terms, const Chain& chain) {
    return build_terms(chain, terms, Coincident::refuse, 1).value();
}

}  // namespace

TEST_CASE("families that are rotation invariant, and those that are not") {
    for (const int two_s : {1, 2, 3, 7}) {
        CAPTURE(two_s);
        for (const Chain& shape : {ring(6), open_chain(5)}) {
            const Chain chain = with_spin(shape, two_s);
            CHECK(family_is_invariant("heisenberg", {0.7}, chain));
            CHECK(family_is_invariant("j1j2", {0.7, -0.3}, chain));
            CHECK(family_is_invariant("xxz", {0.7, 1.0}, chain));
            CHECK(!family_is_invariant("xxz", {0.7, 0.9}, chain));
            CHECK(!family_is_invariant("xxz", {0.7, 1.0 + 1e-9}, chain));
            CHECK(!family_is_invariant("xx", {0.7}, chain));
            CHECK(!family_is_invariant("tfim", {0.7}, chain));
            CHECK(!family_is_invariant("xy", {0.7, 0.1}, chain));
            CHECK(!family_is_invariant("dimer_xx", {0.7, 0.1}, chain));
        }
        CHECK(family_is_invariant("inverse_square", {0.7}, with_spin(ring(6), two_s)));
    }
    for (const double theta : {-2.5, 0.32, 1.1}) {
        CHECK(family_is_invariant("blbq", {1.0, theta}, with_spin(ring(5), 2)));
    }
}

TEST_CASE("a twist breaks it") {
    CHECK(!family_is_invariant("heisenberg", {1.0}, ring(6, pi)));
    CHECK(!family_is_invariant("heisenberg", {1.0}, ring(6, 0.1)));
}

TEST_CASE("on the infinite chain it is read off the cell") {
    const Chain infinite{.sites = {}, .two_s = 2};
    CHECK(family_is_invariant("heisenberg", {1.0}, infinite));
    CHECK(!family_is_invariant("xxz", {1.0, 0.5}, infinite));
}

TEST_CASE("random couplings between all pairs, and small perturbations of them") {
    std::mt19937_64 generator(99);
    for (const int two_s : {1, 2, 3}) {
        CAPTURE(two_s);
        const Chain chain = with_spin(open_chain(5), two_s);
        for (int trial = 0; trial < 5; ++trial) {
            const std::vector<PlacedTerm> terms = random_exchange(chain, generator);
            CHECK(is_rotation_invariant(list_of(terms, chain), chain));
            const SiteMatrix x = SiteMatrix::sx(two_s);
            const SiteMatrix z = SiteMatrix::sz(two_s);
            const std::vector<PlacedTerm> perturbations = {
                {.factors = {z}, .offsets = {2}, .coupling = {1e-9}, .fixed = true},
                {.factors = {x}, .offsets = {2}, .coupling = {1e-9}, .fixed = true},
                {.factors = {z, z}, .offsets = {1, 3}, .coupling = {1e-9}, .fixed = true},
                {.factors = {x, z, x}, .offsets = {0, 2, 4}, .coupling = {1e-9}, .fixed = true}};
            for (const PlacedTerm& small : perturbations) {
                std::vector<PlacedTerm> perturbed = terms;
                perturbed.push_back(small);
                CHECK(!is_rotation_invariant(list_of(perturbed, chain), chain));
            }
        }
    }
}

TEST_CASE("Sz^2 on one site breaks it for S >= 1 and is a constant for S = 1/2") {
    for (const int two_s : {1, 2, 3}) {
        const Chain chain = with_spin(open_chain(3), two_s);
        const SiteMatrix z = SiteMatrix::sz(two_s);
        const TermList list = list_of(
            {{.factors = {z * z}, .offsets = {1}, .coupling = {0.5}, .fixed = true}}, chain);
        CHECK(is_rotation_invariant(list, chain) == (two_s == 1));
    }
}

TEST_CASE("the chirality of three spins is invariant, one of its three parts is not") {
    // S_0.(S_1 x S_2): imaginary in the basis of Sz, so it needs complex coefficients
    for (const int two_s : {1, 2}) {
        const Chain chain = with_spin(open_chain(3), two_s);
        const std::array<SiteMatrix, 3> s = {
            SiteMatrix::sx(two_s), SiteMatrix::sy(two_s), SiteMatrix::sz(two_s)};
        std::vector<PlacedTerm> terms;
        for (std::size_t a = 0; a < 3; ++a) {
            const std::size_t b = (a + 1) % 3;
            const std::size_t c = (a + 2) % 3;
            terms.push_back(
                {.factors = {s[a], s[b], s[c]}, .offsets = {0, 1, 2}, .coupling = {0.3}});
            terms.push_back(
                {.factors = {s[a], s[c], s[b]}, .offsets = {0, 1, 2}, .coupling = {-0.3}});
        }
        CHECK(is_rotation_invariant(list_of(terms, chain), chain));
        terms.resize(2);
        CHECK(!is_rotation_invariant(list_of(terms, chain), chain));
    }
}

TEST_CASE("the answer agrees with the commutators of the matrices") {
    std::mt19937_64 generator(5);
    constexpr int length = 3;
    for (const int two_s : {1, 2}) {
        const Chain chain = with_spin(open_chain(length), two_s);
        const SpinMatrices spin(two_s);
        const auto size = static_cast<Eigen::Index>(std::llround(std::pow(two_s + 1, length)));
        Matrix raising = Matrix::Zero(size, size);
        for (int j = 0; j < length; ++j) {
            raising += on_site(spin.plus, j, length);
        }
        const TermList invariant = list_of(random_exchange(chain, generator), chain);
        const TermList other =
            list_of(random_terms({.chain = chain, .keeps = Keeps::sz}, generator), chain);
        for (const TermList& list : {invariant, other}) {
            const Matrix h = matrix_of(list, two_s, length);
            const bool commutes = distance(h * raising, raising * h) < 1e-12;
            CHECK(is_rotation_invariant(list, chain) == commutes);
        }
        CHECK(is_rotation_invariant(invariant, chain));
        CHECK(!is_rotation_invariant(other, chain));
    }
}
