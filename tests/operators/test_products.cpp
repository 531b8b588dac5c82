#include <random>

#include <doctest/doctest.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/operators/hamiltonian.hpp"
#include "operators/kronecker.hpp"
#include "support/random_lists.hpp"

// Products of spin operators for S = 1/2 ... 2 against matrices over the whole space.
using namespace chainmark;
using namespace chainmark::test;

namespace {

struct NamedFactor {
    SiteMatrix matrix;
    Matrix dense;
};

NamedFactor random_factor(int two_s, std::mt19937_64& generator) {
    const SpinMatrices spin(two_s);
    switch (std::uniform_int_distribution<int>(0, 5)(generator)) {
        case 0:
            return {SiteMatrix::sx(two_s), spin.x};
        case 1:
            return {SiteMatrix::sy(two_s), spin.y};
        case 2:
            return {SiteMatrix::raising(two_s), spin.plus};
        case 3:
            return {SiteMatrix::lowering(two_s), spin.minus};
        case 4:
            return {SiteMatrix::identity(two_s), spin.one};
        default:
            return {SiteMatrix::sz(two_s), spin.z};
    }
}

}  // namespace

TEST_CASE("random products plus their conjugates are the matrices they say") {
    std::mt19937_64 generator(20240611);
    constexpr int length = 3;
    for (int two_s = 1; two_s <= 4; ++two_s) {
        CAPTURE(two_s);
        const Chain chain{.sites = length, .boundary = BoundaryKind::open, .two_s = two_s};
        for (int trial = 0; trial < 8; ++trial) {
            CAPTURE(trial);
            const std::complex<double> coefficient(draw(generator), draw(generator));
            std::vector<PlacedMatrix> product;
            const auto size = static_cast<Eigen::Index>(std::llround(std::pow(two_s + 1, length)));
            Matrix expected = Matrix::Identity(size, size);
            for (int factors = 1 + trial % 5; factors > 0; --factors) {
                const int site = std::uniform_int_distribution<int>(0, length - 1)(generator);
                const NamedFactor factor = random_factor(two_s, generator);
                product.push_back({site, factor.matrix});
                expected = expected * on_site(factor.dense, site, length);
            }
            expected = (coefficient * expected).eval();
            expected = (expected + expected.adjoint()).eval();
            TermCollector collector(chain);
            collector.add(coefficient, product);
            collector.add_conjugate(coefficient, product);
            const TermList list = collector.finish().value();
            CHECK(distance(matrix_of(list, two_s, length), expected) <
                  1e-14 * (1 + expected.cwiseAbs().maxCoeff()));
            CHECK(std::abs(list.constant - expected.trace().real() / static_cast<double>(size)) <
                  1e-14 * (1 + expected.cwiseAbs().maxCoeff()));
        }
    }
}

TEST_CASE("a factor carried around the ring has the phase of its change of Sz") {
    // A_{j+L} = exp(-i twist n) A_j for an A that raises Sz by n: here S+^2 on spin 1.
    const double twist = 0.3;
    const Chain chain{.sites = 4, .twist = twist, .two_s = 2};
    const SiteMatrix plus = SiteMatrix::raising(2);
    const SiteMatrix minus = SiteMatrix::lowering(2);
    const std::vector<PlacedMatrix> product = {{3, minus * minus}, {4, plus * plus}};
    TermCollector collector(chain);
    collector.add(1.0, product);
    collector.add_conjugate(1.0, product);
    const TermList list = collector.finish().value();
    REQUIRE(list.terms.size() == 2);
    for (const Term& term : list.terms) {
        const int raised = term.string.front().op.raises_by();  // of site 0
        CHECK(std::abs(raised) == 2);
        CHECK(std::abs(term.coefficient - 4.0 * std::polar(1.0, -twist * raised)) < 1e-15);
    }
}

TEST_CASE("random chains of any spin are Hermitian and conserve what was asked for") {
    std::mt19937_64 generator(7);
    constexpr int length = 3;
    for (int two_s = 1; two_s <= 3; ++two_s) {
        CAPTURE(two_s);
        const SpinMatrices spin(two_s);
        Chain chain = ring(length);
        chain.two_s = two_s;
        const auto list_of = [&](Keeps keeps) {
            const auto terms =
                random_terms({.chain = chain, .keeps = keeps, .complex = true}, generator);
            return build_terms(chain, terms, Coincident::add, 1).value();
        };
        const auto size = static_cast<Eigen::Index>(std::llround(std::pow(two_s + 1, length)));
        Matrix total = Matrix::Zero(size, size);
        for (int j = 0; j < length; ++j) {
            total += on_site(spin.z, j, length);
        }
        for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
            const TermList list = list_of(keeps);
            const Matrix h = matrix_of(list, two_s, length);
            CHECK(distance(h, h.adjoint()) < 1e-14);
            const double broken = distance(h * total, total * h);
            CHECK((broken < 1e-13) == (keeps == Keeps::sz));
        }
    }
}

TEST_CASE("a field on spins 3/2 is split off and comes back") {
    const Chain chain{.sites = 4, .two_s = 3};
    const std::vector<PlacedTerm> terms = {
        {.factors = {SiteMatrix::sz(3)}, .offsets = {0}, .coupling = {-0.3}},
        {.factors = {SiteMatrix::sz(3), SiteMatrix::sz(3)}, .offsets = {0, 0}, .coupling = {0.7}}};
    const TermList list = build_terms(chain, terms, Coincident::refuse, 1).value();
    CHECK(list.terms.size() == 8);
    CHECK(std::abs(list.constant - 4 * 0.7 * 1.25) < 1e-15);  // S(S+1)/3 = 5/4
    const SplitField split = split_uniform_field(list, chain);
    CHECK(split.field == 0.3);
    CHECK(split.rest.terms.size() == 4);
    CHECK(with_field(split.rest, split.field, 4) == list);
}

TEST_CASE("matrices of another spin are our mistake, not a wrong answer") {
    TermCollector collector(Chain{.sites = 4, .two_s = 2});
    CHECK_THROWS_AS(collector.add(1.0, {{0, SiteMatrix::sx(1)}}), std::logic_error);
}
