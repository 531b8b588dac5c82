#include <cmath>
#include <map>

#include <doctest/doctest.h>

#include "chainmark/base/hermitian_eigen.hpp"
#include "chainmark/dense/route.hpp"
#include "chainmark/sector/krylov.hpp"
#include "chainmark/sector/route.hpp"
#include "chainmark/sector/solution.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

constexpr std::uint64_t seed = 4711;

std::vector<RandomChain> random_chains() {
    std::vector<RandomChain> chains;
    for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
        for (const bool uniform : {true, false}) {
            for (const bool complex : {true, false}) {
                chains.push_back({ring(8), keeps, uniform, complex});
                chains.push_back({ring(7, pi), keeps, uniform, complex});
                chains.push_back({open_chain(7), keeps, uniform, complex});
            }
        }
    }
    chains.push_back({ring(8, 0.7), Keeps::sz, true, false});
    chains.push_back({ring(7, -2.1), Keeps::sz, true, true});
    chains.push_back({ring(7, 1.3), Keeps::sz, false, true});
    return chains;
}

void check_same_spectra(const Problem& problem) {
    const Reference a = ask(sector_route(), problem, QuantityId::spectrum);
    const Reference b = ask(dense_route(), problem, QuantityId::spectrum);
    REQUIRE(a.value.data.size() == b.value.data.size());
    for (std::size_t i = 0; i < a.value.data.size(); ++i) {
        CHECK_NEAR(a.value.real_at(i), b.value.real_at(i), bound(a.bound[i] + b.bound[i]));
        CHECK(a.bound[i] < 1e-12);
    }
}

}  // namespace

TEST_CASE("all sectors together have the levels of the full matrix") {
    std::mt19937_64 generator(seed);
    INFO("seed " << seed);
    for (const RandomChain& chain : random_chains()) {
        for (int repeat = 0; repeat < 2; ++repeat) {
            check_same_spectra(random_problem(chain, generator, 0.37));
        }
    }
}

TEST_CASE("momentum blocks are found where the list allows, and their labels count the levels") {
    const Problem problem = family_problem("xxz", {1.0, 0.6}, ring(8), 0.2);
    const Reference spectrum = ask(sector_route(), problem, QuantityId::spectrum);
    std::map<std::pair<double, int>, int> counts;
    for (const Labels& labels : spectrum.labels) {
        ++counts[{labels.sz.value(), labels.momentum.value()}];
    }
    CHECK(counts[{0.0, 0}] == 10);  // Moreau 1872, see test_basis.cpp
    CHECK(counts[{0.0, 1}] == 8);
    CHECK(counts[{0.0, -2}] == 9);
    CHECK(counts[{0.0, 4}] == 10);
}

TEST_CASE("traces of H and H^2 from levels: XXZ ring in a field") {
    // Tr H = 0, Tr H^2 / 2^L = L [(2 + Delta^2)/16 + h^2/4] for J = 1 (elementary).
    const double delta = 0.7;
    const double h = 0.3;
    const Reference spectrum =
        ask(sector_route(), family_problem("xxz", {1.0, delta}, ring(6), h), QuantityId::spectrum);
    double first = 0.0;
    double second = 0.0;
    for (std::size_t i = 0; i < 64; ++i) {
        first += spectrum.value.real_at(i) / 64;
        second += std::pow(spectrum.value.real_at(i), 2) / 64;
    }
    CHECK_NEAR(first, 0.0, rounding(2.0, 16));
    CHECK_NEAR(second, 6 * ((2 + delta * delta) / 16 + h * h / 4), rounding(4.0, 16));
}

TEST_CASE("Heisenberg ring: moments Tr H^k / 2^L for k = 1 to 4") {
    // L = 8: 0, 3L/16, -3L/32 and 5.8125 (elementary; the fourth recomputed from a full spectrum).
    const Reference spectrum =
        ask(sector_route(), family_problem("heisenberg", {1.0}, ring(8)), QuantityId::spectrum);
    const std::vector<double> expected = {0.0, 1.5, -0.75, 5.8125};
    for (std::size_t k = 1; k <= 4; ++k) {
        double moment = 0.0;
        for (std::size_t i = 0; i < 256; ++i) {
            moment += std::pow(spectrum.value.real_at(i), k) / 256;
        }
        CHECK_NEAR(moment, expected[k - 1], rounding(100.0, 16));
    }
}

TEST_CASE("Heisenberg ring at h = 0: the sectors of m and -m have the same levels") {
    const Reference spectrum =
        ask(sector_route(), family_problem("heisenberg", {1.0}, ring(7)), QuantityId::spectrum);
    std::map<double, std::vector<double>> by_sz;
    for (std::size_t i = 0; i < spectrum.labels.size(); ++i) {
        by_sz[spectrum.labels[i].sz.value()].push_back(spectrum.value.real_at(i));
    }
    for (const auto& [sz, levels] : by_sz) {
        const std::vector<double>& mirrored = by_sz.at(-sz);
        REQUIRE(levels.size() == mirrored.size());
        for (std::size_t i = 0; i < levels.size(); ++i) {
            CHECK_NEAR(levels[i], mirrored[i], rounding(7.0, 64));
        }
    }
}

TEST_CASE("Krylov levels: every copy of a degenerate level is found") {
    // XX ring, Sz = 0: E1 is fourfold. L = 16: E0 = -1/sin(pi/16); E1 = -4.7356502514508 is the
    // closed-form free-fermion value (recomputed by exact sums over occupations).
    const Problem problem = family_problem("xx", {1.0}, ring(16));
    const sector::SectorBasis basis({sector::Conserved::up_count, 8}, 16);
    const auto terms = sector::bit_terms(problem.terms->terms);
    const auto matrix = sector::build_matrix<double>(basis, terms, 2);
    std::vector<sector::EigenPair> found;
    for (int i = 0; i < 6; ++i) {
        found.push_back(sector::lowest_outside(matrix, found, context()));
    }
    CHECK_NEAR(found[0].value, -1 / std::sin(pi / 16), bound(found[0].residual));
    for (int copy = 1; copy <= 4; ++copy) {
        const auto& pair = found[static_cast<std::size_t>(copy)];
        CHECK_NEAR(pair.value, -4.7356502514508, published(13));
        CHECK(pair.residual < 1e-11);
    }
    CHECK(found[5].value > -4.7356502514508 + 1e-3);
}

TEST_CASE("the twelve lowest levels by Krylov solves are those of LAPACK") {
    // J1-J2 ring at the Majumdar-Ghosh point, Sz = 0: a degenerate ground level and multiplets
    const Problem problem = family_problem("j1j2", {1.0, 0.5}, ring(12));
    const sector::SectorBasis basis({sector::Conserved::up_count, 6}, 12);
    const auto matrix =
        sector::build_matrix<double>(basis, sector::bit_terms(problem.terms->terms), 2);
    const Eigen::VectorXd complete = hermitian_eigen(matrix.as_dense()).values;
    std::vector<sector::EigenPair> found;
    for (Eigen::Index i = 0; i < 12; ++i) {
        found.push_back(sector::lowest_outside(matrix, found, context()));
        CHECK_NEAR(found.back().value, complete[i], bound(found.back().residual + 1e-13));
        CHECK(found.back().residual < 1e-11);
    }
    CHECK_NEAR(complete[1] - complete[0], 0.0, rounding(12.0, 64));
}

TEST_CASE("a list over all sectors is sorted and counts copies") {
    // Heisenberg ring of 13 sites: sectors of 1716 and 1287 states go through Krylov solves. The
    // ground level is fourfold, so are its copies in Sz = 1/2 and -1/2 twofold each.
    const Problem problem = family_problem("heisenberg", {1.0}, ring(13));
    sector::Solution solution(problem, context());
    const auto levels = solution.lowest(problem, 6);
    REQUIRE(levels.size() == 6);
    for (std::size_t i = 1; i < 4; ++i) {
        CHECK_NEAR(levels[i].energy, levels[0].energy, bound(levels[i].bound + levels[0].bound));
    }
    CHECK(levels[4].energy > levels[0].energy + 1e-3);
}

TEST_CASE("a twisted chain with large sectors is refused with the reason, not answered wrongly") {
    const Problem problem = family_problem("xx", {1.0}, ring(14, 0.4));
    const Coverage coverage = sector_route().plan({{problem}, {query(QuantityId::ground_energy)}});
    CHECK(coverage.refusal[0].find("complex") != std::string::npos);
}

TEST_CASE("levels that cancel to zero keep an honest bound") {
    // XX rings at h = 0: hops with k = pi/2 cancel, the blocks are rounding noise. The exact levels
    // of L = 4 are 0, +-1, +-sqrt2 with 8 zeros (free fermions; Lieb, Schultz, Mattis 1961).
    for (const Problem& problem : {family_problem("xx", {1.0}, ring(4)),
                                   family_problem("xx", {1.0}, ring(6)),
                                   family_problem("xx", {1.0}, ring(8)),
                                   family_problem("xx", {1.0}, ring(6, pi)),
                                   family_problem("xx", {1.0}, ring(8, 0.4))}) {
        const Reference a = ask(sector_route(), problem, QuantityId::spectrum);
        const Reference b = ask(dense_route(), problem, QuantityId::spectrum);
        for (std::size_t i = 0; i < a.value.data.size(); ++i) {
            CHECK_NEAR(a.value.real_at(i), b.value.real_at(i), bound(a.bound[i] + b.bound[i]));
            CHECK((a.bound[i] >= 1e-16 || a.value.real_at(i) == 0.0));
        }
    }
    const Reference four =
        ask(sector_route(), family_problem("xx", {1.0}, ring(4)), QuantityId::spectrum);
    for (std::size_t i = 0; i < 16; ++i) {
        const double x = std::abs(four.value.real_at(i));
        const double exact = x < 0.5 ? 0.0 : x < 1.2 ? 1.0 : std::sqrt(2.0);
        CHECK_NEAR(x, exact, bound(four.bound[i]));
    }
}
