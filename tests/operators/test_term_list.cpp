#include <doctest/doctest.h>

#include "chainmark/base/numerics.hpp"
#include "chainmark/operators/term_collector.hpp"

using namespace chainmark;

namespace {

const Chain five_ring{5, BoundaryKind::ring, 0.0};

TermList one_product(const Chain& chain,
                     std::complex<double> coefficient,
                     const std::vector<PlacedMatrix>& product,
                     bool conjugate = false) {
    TermCollector collector(chain);
    collector.add(coefficient, product);
    if (conjugate) {
        collector.add_conjugate(coefficient, product);
    }
    return collector.finish().value();
}

OperatorString string_of(std::initializer_list<SiteFactor> factors) {
    return factors;
}

constexpr auto z = SiteOperator::z;
constexpr auto plus = SiteOperator::plus;
constexpr auto minus = SiteOperator::minus;

}  // namespace

TEST_CASE("Sx Sx + Sy Sy is half of S+S- and its conjugate, to the last bit") {
    TermCollector collector(five_ring);
    collector.add(1.0, {{0, SiteMatrix::sx()}, {1, SiteMatrix::sx()}});
    collector.add(1.0, {{0, SiteMatrix::sy()}, {1, SiteMatrix::sy()}});
    const TermList list = collector.finish().value();
    REQUIRE(list.terms.size() == 2);
    for (const Term& term : list.terms) {
        CHECK(term.coefficient == 0.5);
        CHECK(raises_by(term.string) == 0);
    }
    CHECK(largest_coupling(list) == 1.0);
}

TEST_CASE("the algebra of one spin 1/2") {
    // Sx^2 = 1/4
    CHECK(one_product(five_ring, 1.0, {{2, SiteMatrix::sx()}, {2, SiteMatrix::sx()}}).constant ==
          0.25);
    // S+ S- = 1/2 + Sz
    const TermList number =
        one_product(five_ring, 1.0, {{2, SiteMatrix::raising()}, {2, SiteMatrix::lowering()}});
    CHECK(number.constant == 0.5);
    REQUIRE(number.terms.size() == 1);
    CHECK(number.terms[0] == Term{string_of({{2, z}}), 1.0});
    // Sx Sy = (i/2) Sz is not Hermitian alone; with the conjugate it vanishes
    CHECK(one_product(five_ring, 1.0, {{2, SiteMatrix::sx()}, {2, SiteMatrix::sy()}}, true) ==
          TermList{});
    // S+ S+ = 0
    CHECK(one_product(
              five_ring, 1.0, {{1, SiteMatrix::raising()}, {1, SiteMatrix::raising()}}, true) ==
          TermList{});
}

TEST_CASE("order of factors on different sites does not matter, on the same site it does") {
    const auto ab = one_product(
        five_ring, 1.0, {{0, SiteMatrix::raising()}, {3, SiteMatrix::lowering()}}, true);
    const auto ba = one_product(
        five_ring, 1.0, {{3, SiteMatrix::lowering()}, {0, SiteMatrix::raising()}}, true);
    CHECK(ab == ba);
    const auto down_up =
        one_product(five_ring, 1.0, {{2, SiteMatrix::lowering()}, {2, SiteMatrix::raising()}});
    CHECK(down_up.terms[0].coefficient == -1.0);  // S- S+ = 1/2 - Sz
}

TEST_CASE("the wrap bond carries the boundary's phase") {
    // (1/2)(exp(i phi) S+_{L-1} S-_0 + h.c.)
    const double phi = 0.4;
    const Chain twisted{5, BoundaryKind::ring, phi};
    const TermList list =
        one_product(twisted, 0.5, {{4, SiteMatrix::raising()}, {5, SiteMatrix::lowering()}}, true);
    REQUIRE(list.terms.size() == 2);
    for (const Term& term : list.terms) {
        const bool raises_last = term.string == string_of({{0, minus}, {4, plus}});
        const std::complex<double> expected = 0.5 * std::polar(1.0, raises_last ? phi : -phi);
        CHECK(std::abs(term.coefficient - expected) < 1e-16);
    }
    // antiperiodic: exactly -1, and Sz Sz keeps its sign
    const Chain antiperiodic{5, BoundaryKind::ring, pi};
    CHECK(one_product(
              antiperiodic, 0.5, {{4, SiteMatrix::raising()}, {5, SiteMatrix::lowering()}}, true)
              .terms[0]
              .coefficient == -0.5);
    CHECK(one_product(antiperiodic, 1.0, {{4, SiteMatrix::sz()}, {5, SiteMatrix::sz()}})
              .terms[0]
              .coefficient == 1.0);
}

TEST_CASE("a list that is not Hermitian is refused with the string") {
    TermCollector collector(five_ring);
    collector.add(1.0, {{0, SiteMatrix::raising()}, {1, SiteMatrix::lowering()}});
    const auto result = collector.finish();
    REQUIRE(!result.has_value());
    CHECK(result.error().code == ErrorCode::not_hermitian);
    CHECK(result.error().found.find("S+_0 S-_1") != std::string::npos);
}

TEST_CASE("what cancels is dropped, a small rest of large numbers is kept") {
    TermCollector collector(five_ring);
    for (const double coefficient : {1e10, 0.1, -1e10}) {
        collector.add(coefficient, {{0, SiteMatrix::sz()}});
    }
    for (const double coefficient : {0.7, -0.5, -0.2}) {
        collector.add(coefficient, {{1, SiteMatrix::sz()}});
    }
    for (const double coefficient : {0.3, -0.3}) {
        collector.add(coefficient, {{2, SiteMatrix::sz()}});
    }
    collector.add({1e-4, 1e12}, {{3, SiteMatrix::sz()}});
    collector.add_conjugate({1e-4, 1e12}, {{3, SiteMatrix::sz()}});
    const TermList list = collector.finish().value();
    REQUIRE(list.terms.size() == 3);
    CHECK(std::abs(list.terms[0].coefficient - 0.1) < 1e-9);  // 1e10 * 2^-64
    // the doubles 0.7 - 0.5 - 0.2 do not cancel: what is left is theirs, exactly
    CHECK(
        list.terms[1].coefficient.real() ==
        static_cast<double>(static_cast<long double>(0.7) - 0.5L - static_cast<long double>(0.2)));
    CHECK(list.terms[2].string == string_of({{3, z}}));
    CHECK(list.terms[2].coefficient == 2e-4);
}

TEST_CASE("a uniform field is split off only where it is the same on every site") {
    TermCollector uniform(five_ring);
    TermCollector broken(five_ring);
    for (int site = 0; site < 5; ++site) {
        uniform.add(-0.3, {{site, SiteMatrix::sz()}});
        broken.add(site == 4 ? -0.31 : -0.3, {{site, SiteMatrix::sz()}});
    }
    const SplitField split = split_uniform_field(uniform.finish().value(), five_ring);
    CHECK(split.field == 0.3);
    CHECK(split.rest.terms.empty());
    CHECK(split_uniform_field(broken.finish().value(), five_ring).field == 0.0);
    // and it comes back
    CHECK(with_field(split.rest, split.field, 5) == uniform.finish().value());
}

TEST_CASE("strings print as people write them") {
    CHECK(to_string(string_of({{3, plus}, {4, minus}})) == "S+_3 S-_4");
    CHECK(to_string(OperatorString{}) == "I");
    CHECK(conjugate(string_of({{3, plus}, {4, z}})) == string_of({{3, minus}, {4, z}}));
}

TEST_CASE("the infinite chain keeps one cell") {
    const Chain infinite{{}, BoundaryKind::ring, 0.0};
    TermCollector collector(infinite);
    collector.add(1.0, {{0, SiteMatrix::identity()}, {1, SiteMatrix::sz()}});
    const TermList list = collector.finish().value();
    REQUIRE(list.terms.size() == 1);
    CHECK(list.terms[0].string == string_of({{0, z}}));
}
