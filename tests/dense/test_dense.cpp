#include <cmath>

#include <doctest/doctest.h>

#include "chainmark/dense/full_matrix.hpp"
#include "chainmark/dense/route.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::test;

TEST_CASE("two sites written out by hand") {
    // basis dd, ud (site 0 up), du, uu; H = Sx Sx + Sy Sy + Delta Sz Sz
    const Problem problem = family_problem("xxz", {1.0, 3.0}, open_chain(2));
    const Eigen::MatrixXd matrix = dense::full_matrix<double>(problem.terms->terms, 2);
    Eigen::MatrixXd expected(4, 4);
    expected << 0.75, 0, 0, 0, 0, -0.75, 0.5, 0, 0, 0.5, -0.75, 0, 0, 0, 0, 0.75;
    CHECK((matrix - expected).cwiseAbs().maxCoeff() == 0.0);
}

TEST_CASE("bit j of a row's number is site j, 1 is up") {
    const std::vector<Term> sz_1 = {{{{1, SiteOperator::z}}, 1.0}};
    const Eigen::VectorXd diagonal = dense::full_matrix<double>(sz_1, 3).diagonal();
    CHECK(diagonal[0b010] == 0.5);
    CHECK(diagonal[0b101] == -0.5);
    CHECK(dense::total_sz(3)[0b111] == 1.5);
}

TEST_CASE("Pauli-independent checks of small rings in closed form") {
    // exact: ring of four, H = J sum S.S; the pairs {0,2} and {1,3} have spin S_A, S_B and
    //   H = (S_tot^2 - S_A^2 - S_B^2)/2, lowest at S_tot = 0, S_A = S_B = 1: E0 = -2, E1 = -1.
    const Problem four = family_problem("heisenberg", {1.0}, ring(4));
    CHECK_NEAR(ask(dense_route(), four, QuantityId::ground_energy).value.real_at(0),
               -2.0,
               rounding(4.0, 20));
    CHECK_NEAR(ask(dense_route(), four, QuantityId::gap).value.real_at(0), 1.0, rounding(4.0, 20));
    // exact: three sites, S_tot = 1/2 twice (fourfold) at -3/4 and S_tot = 3/2 at 3/4
    const Reference three =
        ask(dense_route(), family_problem("heisenberg", {1.0}, ring(3)), QuantityId::spectrum);
    for (std::size_t i = 0; i < 8; ++i) {
        CHECK_NEAR(three.value.real_at(i), i < 4 ? -0.75 : 0.75, rounding(2.0, 20));
    }
}

TEST_CASE("one solution serves all fields where Sz is conserved") {
    // XX ring, L = 4: E(Sz) = 0, -1, -sqrt2, -1, 0, so the field's staircase is -1, 1 - sqrt2, ...
    std::vector<Problem> problems;
    for (const double field : {0.0, 0.2, 0.7, 1.5}) {
        problems.push_back(family_problem("xx", {1.0}, ring(4), field));
        problems.back().terms = problems.front().terms;
    }
    const Answers answers =
        dense_route().evaluate({problems, {query(QuantityId::ground_energy)}}, context());
    const std::vector<double> expected = {-std::sqrt(2.0), -std::sqrt(2.0), -1.0 - 0.7, -2.0 * 1.5};
    for (std::size_t i = 0; i < expected.size(); ++i) {
        const auto& found = std::get<Reference>(answers[i][0]);
        CHECK_NEAR(found.value.real_at(0), expected[i], bound(found.bound[0]));
        CHECK(found.bound[0] < 1e-13);
    }
}

TEST_CASE("jump fields of the XX ring with four sites") {
    // sqrt2 - 1 and 1 (Lieb, Schultz, Mattis 1961; Katsura 1962), both signs
    const Reference found =
        ask(dense_route(), family_problem("xx", {1.0}, ring(4)), QuantityId::jump_fields);
    const std::vector<double> expected = {-1.0, 1 - std::sqrt(2.0), std::sqrt(2.0) - 1, 1.0};
    REQUIRE(found.value.data.size() == 4);
    for (std::size_t i = 0; i < 4; ++i) {
        CHECK_NEAR(found.value.real_at(i), expected[i], bound(found.bound[i]));
    }
    CHECK(found.value.total_sz == std::vector<double>{-2, -1, 0, 1, 2});
}

TEST_CASE("what the route does not cover it refuses with a reason") {
    const Coverage large =
        dense_route().plan({{family_problem("xx", {1.0}, ring(13))}, {query(QuantityId::gap)}});
    CHECK(large.refusal[0] == "takes at most 12 sites");
    const Coverage ising = dense_route().plan(
        {{family_problem("tfim", {1.0}, ring(6))}, {query(QuantityId::jump_fields)}});
    CHECK(ising.refusal[0].find("Sz") != std::string::npos);
}
