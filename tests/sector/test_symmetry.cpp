#include <doctest/doctest.h>

#include "chainmark/sector/symmetry.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::sector;
using namespace chainmark::test;

namespace {

Symmetries found_in(const Problem& problem) {
    return find_symmetries(problem.chain, full_terms(problem));
}

Chain spins(int length, int two_s, BoundaryKind boundary = BoundaryKind::ring, double twist = 0.0) {
    return {length, boundary, twist, two_s};
}

bool holds(const std::string& text, const char* part) {
    return text.find(part) != std::string::npos;
}

/// What a symmetry search must find, written by hand.
struct Expected {
    const char* family;
    std::vector<double> values;
    Chain chain;
    Conserved conserved;
    int step;
    bool reflection, inversion, rotation;
};

Problem from_terms(const Chain& chain, const std::vector<PlacedTerm>& terms) {
    const Result<TermList> list = build_terms(chain, terms, Coincident::refuse, 1);
    return {chain, std::make_shared<const TermList>(list.value()), 0.0};
}

/// J (S+ S- exp(i angle) + h.c.)/2: a Dzyaloshinskii-Moriya coupling beside the exchange.
PlacedTerm hop_with_phase(double angle) {
    return {.factors = {SiteMatrix::raising(), SiteMatrix::lowering()},
            .offsets = {0, 1},
            .coupling = {std::polar(0.5, angle)},
            .add_conjugate = true};
}

}  // namespace

TEST_CASE("what holds for every family, on rings and open chains") {
    using enum Conserved;
    const double theta = 0.3;
    for (const Expected& e : std::vector<Expected>{
             {"xx", {1.0}, ring(6), up_count, 1, true, true, false},
             {"xx", {-1.0}, ring(7), up_count, 1, true, true, false},
             {"xx", {1.0}, open_chain(6), up_count, 0, true, true, false},
             {"xy", {1.0, 0.4}, ring(6), parity, 1, true, true, false},
             {"xy", {1.0, 0.0}, ring(6), up_count, 1, true, true, false},
             {"xy", {1.0, 0.4}, open_chain(5), parity, 0, true, true, false},
             {"tfim", {1.0}, ring(6), parity, 1, true, true, false},
             {"tfim", {1.0}, ring(5), parity, 1, true, true, false},
             {"tfim", {1.0}, open_chain(6), parity, 0, true, true, false},
             {"xxz", {1.0, 0.5}, ring(6), up_count, 1, true, true, false},
             {"xxz", {1.0, 1.0}, ring(6), up_count, 1, true, true, true},
             {"xxz", {1.0, 0.5}, open_chain(4), up_count, 0, true, true, false},
             {"heisenberg", {1.0}, ring(6), up_count, 1, true, true, true},
             {"heisenberg", {1.0}, open_chain(7), up_count, 0, true, true, true},
             {"heisenberg", {1.0}, spins(4, 2), up_count, 1, true, true, true},
             {"heisenberg", {1.0}, spins(4, 3), up_count, 1, true, true, true},
             {"dimer_xx", {1.0, 0.2}, ring(6), up_count, 2, true, true, false},
             {"dimer_xx", {1.0, 0.2}, ring(7), up_count, 0, false, true, false},
             {"dimer_xx", {1.0, 0.0}, ring(7), up_count, 1, true, true, false},
             {"dimer_xx", {1.0, 0.2}, open_chain(6), up_count, 0, true, true, false},
             {"dimer_xx", {1.0, 0.2}, open_chain(7), up_count, 0, false, true, false},
             {"j1j2", {1.0, 0.3}, ring(7), up_count, 1, true, true, true},
             {"j1j2", {1.0, 0.3}, open_chain(6), up_count, 0, true, true, true},
             {"blbq", {1.0, theta}, spins(4, 2), up_count, 1, true, true, true},
             {"blbq", {1.0, theta}, spins(4, 2, BoundaryKind::open), up_count, 0, true, true, true},
             {"inverse_square", {1.0}, ring(6), up_count, 1, true, true, true},
             {"inverse_square", {1.0}, ring(7), up_count, 1, true, true, true}}) {
        INFO(e.family << ", " << to_string(e.chain));
        const Symmetries found = found_in(family_problem(e.family, e.values, e.chain));
        CHECK(found.conserved == e.conserved);
        CHECK(found.step == e.step);
        CHECK(found.reflection == e.reflection);
        CHECK(found.inversion == e.inversion);
        CHECK(found.rotation == e.rotation);
        CHECK(found.real);
        CHECK(found.gauge == 0.0);
        CHECK(!found.wrap_sign);
        // A reason stands beside what is absent, and beside nothing else.
        CHECK(found.why_no_sz.empty() == (e.conserved == up_count));
        CHECK(found.why_no_parity.empty() == (e.conserved != nothing));
        CHECK(found.why_no_translation.empty() == (e.step == 1));
        CHECK(found.why_no_reflection.empty() == e.reflection);
        CHECK(found.why_no_inversion.empty() == e.inversion);
        CHECK(found.why_no_rotation.empty() == e.rotation);
        CHECK(found.why_not_real.empty());
    }
}

TEST_CASE("the table of families has no family that is not looked at above") {
    const std::vector<std::string> seen = {
        "xx", "xy", "tfim", "xxz", "heisenberg", "dimer_xx", "j1j2", "blbq", "inverse_square"};
    for (const Family& family : families()) {
        INFO(family.name);
        CHECK(std::find(seen.begin(), seen.end(), family.name) != seen.end());
    }
}

TEST_CASE("the reasons name the strings") {
    const Symmetries open = found_in(family_problem("xx", {1.0}, open_chain(5)));
    CHECK(open.why_no_translation == "the chain is open");
    const Symmetries ising = found_in(family_problem("tfim", {1.0}, ring(5)));
    CHECK(holds(ising.why_no_sz, "changes it"));
    const Symmetries dimer = found_in(family_problem("dimer_xx", {1.0, 0.2}, ring(6)));
    CHECK(holds(dimer.why_no_translation, "have different coefficients"));
    const Symmetries field = found_in(family_problem("heisenberg", {1.0}, ring(5), 0.2));
    CHECK(!field.inversion);
    CHECK(holds(field.why_no_inversion, "would change sign"));
    CHECK(!field.rotation);
    CHECK(holds(field.why_no_rotation, "S+"));
}

TEST_CASE("an antiperiodic ring keeps a translation with the sign of the boundary") {
    for (const int length : {5, 6}) {
        const Symmetries xxz = found_in(family_problem("xxz", {1.0, 0.5}, ring(length, pi)));
        CHECK(xxz.step == 1);
        CHECK(xxz.wrap_sign);
        CHECK(xxz.gauge == 0.0);
        CHECK(xxz.real);
        CHECK(xxz.reflection);
        CHECK(!xxz.inversion);
        CHECK(holds(xxz.why_no_inversion, "twisted"));
        CHECK(!xxz.rotation);
        // Parity is enough for the sign of the boundary.
        const Symmetries ising = found_in(family_problem("tfim", {1.0}, ring(length, pi)));
        CHECK(ising.conserved == Conserved::parity);
        CHECK(ising.step == 1);
        CHECK(ising.wrap_sign);
    }
}

TEST_CASE("a twist is spread over the ring: translation, no reflection, complex") {
    const Problem problem = family_problem("xxz", {1.0, 0.5}, ring(6, 0.9));
    const Symmetries twisted = found_in(problem);
    CHECK(twisted.step == 1);
    CHECK(!twisted.wrap_sign);
    CHECK_NEAR(twisted.gauge, 0.9 / 6, rounding(0.15, 1));
    CHECK(!twisted.real);
    CHECK(!twisted.reflection);
    CHECK(holds(twisted.why_no_reflection, "twist"));
    CHECK(!twisted.inversion);
    CHECK(!twisted.rotation);
    // In the gauge every hop carries exp(+-i twist/L), all of them with the same bits.
    std::optional<double> real_part;
    for (const Term& term : symmetric_terms(problem.chain, problem.terms->terms, twisted)) {
        if (!term.string.front().op.is_diagonal()) {
            CHECK_NEAR(std::abs(std::arg(term.coefficient)), 0.15, rounding(1.0, 4));
            CHECK(term.coefficient.real() == real_part.value_or(term.coefficient.real()));
            real_part = term.coefficient.real();
        }
    }
    CHECK(real_part.has_value());
    // With a term that does not conserve Sz there is nothing to spread, hence no such ring; without
    // translation the twist stays where it is.
    std::mt19937_64 generator(51);
    const Symmetries random =
        found_in(random_problem({ring(6, 0.9), Keeps::sz, false, false}, generator, 0.0));
    CHECK(random.step == 0);
    CHECK(random.gauge == 0.0);
    CHECK(!random.real);
}

TEST_CASE("random couplings leave nothing but what they were drawn to keep") {
    constexpr std::uint64_t seed = 52;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    for (const int two_s : {1, 2, 3}) {
        for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
            for (const bool complex : {false, true}) {
                for (const bool uniform : {false, true}) {
                    const Chain chain = spins(6, two_s);
                    const Symmetries found =
                        found_in(random_problem({chain, keeps, uniform, complex}, generator, 0.0));
                    CHECK(found.conserved == (keeps == Keeps::sz       ? Conserved::up_count
                                              : keeps == Keeps::parity ? Conserved::parity
                                                                       : Conserved::nothing));
                    CHECK(found.step == (uniform ? 1 : 0));
                    CHECK(found.real == !complex);
                    CHECK(found.reflection == (uniform && !complex));
                    CHECK(!found.inversion);  // a field in z was drawn
                    CHECK(!found.rotation);
                }
            }
        }
    }
}

TEST_CASE("a Dzyaloshinskii-Moriya coupling: complex, reflection and inversion each broken") {
    const Symmetries found = found_in(from_terms(ring(6), {hop_with_phase(0.3)}));
    CHECK(found.conserved == Conserved::up_count);
    CHECK(found.step == 1);
    CHECK(!found.real);
    CHECK(holds(found.why_not_real, "complex"));
    CHECK(!found.reflection);
    CHECK(!found.inversion);
    // A quarter turn leaves a coupling that only changes sign.
    const Symmetries pure = found_in(from_terms(ring(6), {hop_with_phase(pi / 2)}));
    CHECK(!pure.reflection);
    CHECK(!pure.inversion);
}

TEST_CASE("transverse fields and site-dependent fields") {
    const PlacedTerm sx = {.factors = {SiteMatrix::sx()}, .offsets = {0}, .coupling = {0.4}};
    const Symmetries transverse = found_in(from_terms(ring(6), {hop_with_phase(0.0), sx}));
    CHECK(transverse.conserved == Conserved::nothing);
    CHECK(holds(transverse.why_no_parity, "changes it"));
    CHECK(transverse.inversion);  // a rotation about x
    CHECK(transverse.step == 1);

    const PlacedTerm staggered = {.factors = {SiteMatrix::sz()},
                                  .offsets = {0},
                                  .coupling = {0.4, -0.4, 0.4, -0.4, 0.4, -0.4}};
    const Symmetries neel = found_in(from_terms(ring(6), {hop_with_phase(0.0), staggered}));
    CHECK(neel.step == 2);
    CHECK(!neel.reflection);  // site j to L-1-j exchanges the sublattices
    CHECK(!neel.inversion);
    CHECK(neel.conserved == Conserved::up_count);
}

TEST_CASE("sectors share the levels of their twins") {
    for (const double twist : {0.0, pi, 0.4}) {
        const Problem problem = family_problem("xxz", {1.0, 0.5}, ring(6, twist));
        const Symmetries found = found_in(problem);
        const std::vector<Sector> sectors = sectors_of(problem.chain, found);
        for (std::size_t i = 0; i < sectors.size(); ++i) {
            const Sector& sector = sectors[i];
            const Sector& twin = sectors[sector.twin];
            INFO(to_string(labels_of(problem.chain, found, sector)));
            CHECK(twin.twin == sector.twin);
            const bool own = sector.twin == i;
            CHECK(own == !(sector.inverted || sector.conjugated || sector.reflected));
            CHECK(
                count_states(
                    sector.group, sector.label.irrep, sector.label.conserved, sector.label.value) ==
                count_states(twin.group, twin.label.irrep, twin.label.conserved, twin.label.value));
            if (sector.inverted) {
                CHECK(twin.label.value == 6 - sector.label.value);
            } else {
                CHECK(twin.label.value == sector.label.value);
            }
        }
    }
    // Twisted and complex: nothing to share.
    const Problem twisted = family_problem("xxz", {1.0, 0.5}, ring(6, 0.4));
    const std::vector<Sector> alone = sectors_of(twisted.chain, found_in(twisted));
    for (std::size_t i = 0; i < alone.size(); ++i) {
        CHECK(alone[i].twin == i);
    }
    // Periodic: Sz and -Sz, n and -n share.
    const Problem periodic = family_problem("xxz", {1.0, 0.5}, ring(6));
    const Symmetries found = found_in(periodic);
    for (const Sector& sector : sectors_of(periodic.chain, found)) {
        CHECK(sector.inverted == (sector.label.value < 3));
        CHECK(sector.conjugated == (sector.label.irrep.momentum < 0));
    }
}

TEST_CASE("quantum numbers of a sector in words") {
    CHECK(to_string(Labels{}) == "all states");
    CHECK(to_string(Labels{.sz = 1.5, .momentum = -2}) == "Sz = 1.5, momentum -2");
    CHECK(to_string(Labels{.parity = -1, .reflection = 1, .inversion = -1}) ==
          "parity -1, reflection +1, inversion -1");
}

TEST_CASE("the symmetries in words: every one, with its reason, and the largest sector") {
    const std::string ring_text = describe_symmetries(family_problem("heisenberg", {1.0}, ring(8)));
    INFO(ring_text);
    CHECK(holds(ring_text, "ring of 8 sites\n"));
    CHECK(holds(ring_text, "total Sz                  yes\n"));
    CHECK(holds(ring_text, "total spin                yes\n"));
    CHECK(holds(ring_text, "translation               yes\n"));
    CHECK(holds(ring_text, "reflection                yes\n"));
    CHECK(holds(ring_text, "spin inversion            yes\n"));
    CHECK(holds(ring_text, "real matrix               yes\n"));
    // 7 states: the orbits of necklaces with four of eight up spins under reflection and inversion.
    CHECK(holds(ring_text, "the largest holds 7 of 256 states"));

    const std::string open_text =
        describe_symmetries(family_problem("tfim", {1.0}, open_chain(6), 0.3));
    INFO(open_text);
    CHECK(holds(open_text, "total Sz                  no   "));
    CHECK(holds(open_text, "changes it"));
    CHECK(holds(open_text, "translation               no   the chain is open"));
    CHECK(holds(open_text, "of 64 states"));

    const std::string dimer_text =
        describe_symmetries(family_problem("dimer_xx", {1.0, 0.3}, ring(8)));
    CHECK(holds(dimer_text, "by 2 sites; not by one"));
    const std::string twisted_text = describe_symmetries(family_problem("xx", {1.0}, ring(8, 0.4)));
    CHECK(holds(twisted_text, "with the phase of the boundary"));

    // Spins other than 1/2 have theirs described all the same.
    const std::string spin_one =
        describe_symmetries(family_problem("heisenberg", {1.0}, spins(6, 2)));
    INFO(spin_one);
    CHECK(holds(spin_one, "of 729 states"));
}
