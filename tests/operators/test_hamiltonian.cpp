#include <map>

#include <doctest/doctest.h>

#include "chainmark/operators/hamiltonian.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

std::map<std::string, std::complex<double>> coefficients(const Problem& problem) {
    std::map<std::string, std::complex<double>> result;
    for (const Term& term : problem.terms->terms) {
        result[to_string(term.string)] = term.coefficient;
    }
    return result;
}

PlacedTerm sz_at(std::vector<int> offsets) {
    return {.factors = std::vector<SiteMatrix>(offsets.size(), SiteMatrix::sz()),
            .offsets = std::move(offsets),
            .coupling = {1.0}};
}

}  // namespace

TEST_CASE("families have the signs and factors of their formulas") {
    auto xx = coefficients(family_problem("xx", {2.0}, ring(4)));
    CHECK(xx.size() == 8);
    CHECK(xx["S+_0 S-_1"] == 1.0);
    CHECK(xx["S-_0 S+_3"] == 1.0);  // wrap bond

    auto xy = coefficients(family_problem("xy", {1.0, 0.5}, open_chain(3)));
    CHECK(xy["S+_0 S-_1"] == 0.5);
    CHECK(xy["S+_0 S+_1"] == 0.25);  // (Jx - Jy)/4 = 2 gamma J / 4

    auto tfim = coefficients(family_problem("tfim", {1.0}, open_chain(2)));
    CHECK(tfim["S+_0 S-_1"] == 0.25);
    CHECK(tfim["S+_0 S+_1"] == 0.25);

    auto xxz = coefficients(family_problem("xxz", {2.0, 0.5}, ring(5)));
    CHECK(xxz["Sz_1 Sz_2"] == 1.0);
    CHECK(xxz["Sz_0 Sz_4"] == 1.0);

    auto heisenberg = coefficients(family_problem("heisenberg", {-1.0}, open_chain(3)));
    CHECK(heisenberg["Sz_0 Sz_1"] == -1.0);
    CHECK(heisenberg["S+_1 S-_2"] == -0.5);

    auto j1j2 = coefficients(family_problem("j1j2", {1.0, 0.5}, ring(6)));
    CHECK(j1j2["Sz_0 Sz_2"] == 0.5);
    CHECK(j1j2["Sz_1 Sz_5"] == 0.5);
    CHECK(j1j2.size() == 12 * 3);
}

TEST_CASE("dimers: odd rings have two strong bonds side by side") {
    auto even = coefficients(family_problem("dimer_xx", {1.0, 0.2}, ring(6)));
    CHECK(even["S+_0 S-_1"] == 0.6);
    CHECK(even["S+_1 S-_2"] == 0.4);
    CHECK(even["S-_0 S+_5"] == 0.4);
    auto odd = coefficients(family_problem("dimer_xx", {1.0, 0.2}, ring(5)));
    CHECK(odd["S-_0 S+_4"] == 0.6);
    CHECK(odd["S+_0 S-_1"] == 0.6);
}

TEST_CASE("a term that is longer than the chain is refused") {
    const std::vector<PlacedTerm> terms = {sz_at({0, 4})};
    const auto result = build_terms(open_chain(4), terms, Coincident::refuse, 1);
    REQUIRE(!result.has_value());
    CHECK(result.error().code == ErrorCode::bad_chain);
    CHECK(result.error().allowed == "at least 5 sites are needed");
}

TEST_CASE("placements that meet on the same sites: refused, added, or taken once") {
    // next neighbours on four sites: {0,2} and {1,3} are each met twice
    const std::vector<PlacedTerm> terms = {sz_at({0, 2})};
    CHECK(!build_terms(ring(4), terms, Coincident::refuse, 1).has_value());
    const TermList added = build_terms(ring(4), terms, Coincident::add, 1).value();
    const TermList once = build_terms(ring(4), terms, Coincident::once, 1).value();
    REQUIRE(added.terms.size() == 2);
    REQUIRE(once.terms.size() == 2);
    CHECK(added.terms[0].coefficient == 2.0);
    CHECK(once.terms[0].coefficient == 1.0);
    CHECK(build_terms(ring(5), terms, Coincident::refuse, 1).has_value());
}

TEST_CASE("placements on rings, open and infinite chains") {
    const PlacedTerm next = sz_at({0, 2});
    CHECK(placement_count(next, ring(6), 1) == 6);
    CHECK(placement_count(next, open_chain(6), 1) == 4);
    CHECK(placement_count(next, {{}, BoundaryKind::ring, 0.0}, 2) == 2);
    PlacedTerm fixed = sz_at({3, 5});
    fixed.fixed = true;
    CHECK(placement_count(fixed, ring(6), 1) == 1);
    const TermList list =
        build_terms(ring(6), std::vector<PlacedTerm>{fixed}, Coincident::refuse, 1).value();
    REQUIRE(list.terms.size() == 1);
    CHECK(to_string(list.terms[0].string) == "Sz_3 Sz_5");
}

TEST_CASE("every family is found by its name") {
    for (const Family& family : families()) {
        CHECK(find_family(family.name) == &family);
    }
    CHECK(find_family("ising") == nullptr);
}
