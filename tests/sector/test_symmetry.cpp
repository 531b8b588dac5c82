#include <doctest/doctest.h>

#include "chainmark/sector/symmetry.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::sector;
using namespace chainmark::test;

namespace {

Symmetries found_in(const Problem& problem) {
    return find_symmetries(problem.chain, *problem.terms);
}

}  // namespace

TEST_CASE("symmetries are read off the term list") {
    const Symmetries xx = found_in(family_problem("xx", {1.0}, ring(6)));
    CHECK(xx.conserved == Conserved::up_count);
    CHECK(xx.translation);
    CHECK(xx.real);

    const Symmetries ising = found_in(family_problem("tfim", {1.0}, ring(6)));
    CHECK(ising.conserved == Conserved::parity);
    CHECK(ising.why_no_sz.find("changes it") != std::string::npos);

    // gamma = 0 is the XX chain whatever the family is called
    CHECK(found_in(family_problem("xy", {1.0, 0.0}, ring(6))).conserved == Conserved::up_count);
}

TEST_CASE("translation needs a ring with equal couplings") {
    CHECK(!found_in(family_problem("xx", {1.0}, open_chain(6))).translation);
    CHECK(!found_in(family_problem("dimer_xx", {1.0, 0.2}, ring(6))).translation);
    CHECK(!found_in(family_problem("dimer_xx", {1.0, 0.2}, ring(7))).translation);
    CHECK(found_in(family_problem("dimer_xx", {1.0, 0.0}, ring(7))).translation);
    CHECK(found_in(family_problem("j1j2", {1.0, 0.3}, ring(7))).translation);
}

TEST_CASE("a twisted ring keeps a translation with the boundary's phase") {
    const Symmetries twisted = found_in(family_problem("xxz", {1.0, 0.5}, ring(6, 0.9)));
    CHECK(twisted.translation);
    CHECK(!twisted.real);
    CHECK(found_in(family_problem("xxz", {1.0, 0.5}, ring(6, pi))).real);
}
