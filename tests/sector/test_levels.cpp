#include <cmath>
#include <map>

#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "chainmark/sector/route.hpp"
#include "chainmark/sector/symmetry.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Chain spins(int length, int two_s, BoundaryKind boundary = BoundaryKind::ring, double twist = 0.0) {
    return {length, boundary, twist, two_s};
}

std::vector<RandomChain> random_chains() {
    std::vector<RandomChain> chains;
    for (const bool uniform : {true, false}) {
        for (const bool complex : {true, false}) {
            for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
                chains.push_back({ring(8), keeps, uniform, complex});
                chains.push_back({ring(7, pi), keeps, uniform, complex});
                chains.push_back({open_chain(7), keeps, uniform, complex});
                chains.push_back({spins(5, 2), keeps, uniform, complex});
                chains.push_back({spins(5, 2, BoundaryKind::ring, pi), keeps, uniform, complex});
                chains.push_back({spins(4, 3, BoundaryKind::open), keeps, uniform, complex});
            }
            chains.push_back({ring(8, 0.7), Keeps::sz, uniform, complex});
            chains.push_back({ring(7, -2.1), Keeps::sz, uniform, complex});
            chains.push_back({spins(5, 2, BoundaryKind::ring, 1.3), Keeps::sz, uniform, complex});
        }
    }
    return chains;
}

Options sector_option(int count, const Labels& labels) {
    Options options;
    options.count = count;
    options.sector = labels;
    return options;
}

void check_same(const Reference& a, const Reference& b) {
    REQUIRE(a.value.data.size() == b.value.data.size());
    for (std::size_t i = 0; i < a.value.data.size(); ++i) {
        CHECK_NEAR(a.value.real_at(i), b.value.real_at(i), bound(a.bound[i] + b.bound[i]));
        CHECK(a.bound[i] < 1e-11);
    }
}

std::string reason_of(const Answer& found) {
    const auto* refused = std::get_if<NotCovered>(&found);
    const auto* undecided = std::get_if<Undecided>(&found);
    return refused != nullptr ? refused->reason : undecided != nullptr ? undecided->reason : "";
}

/// Levels with the given label, ascending.
std::vector<double> levels_with(const Reference& list, double sz) {
    std::vector<double> levels;
    for (std::size_t i = 0; i < list.labels.size(); ++i) {
        if (list.labels[i].sz == sz) {
            levels.push_back(list.value.real_at(i));
        }
    }
    return levels;
}

/// Both routes name Sz, in different order within a degenerate level: compared by Sz.
void check_labels(const Reference& a, const Reference& b, const Chain& chain) {
    REQUIRE(a.labels.size() == a.value.data.size());
    REQUIRE(a.labels.front().sz.has_value());
    if (b.labels.empty() || !b.labels.front().sz) {
        return;
    }
    for (double sz = -chain.length() * chain.spin(); sz <= chain.length() * chain.spin(); ++sz) {
        const std::vector<double> left = levels_with(a, sz);
        const std::vector<double> right = levels_with(b, sz);
        REQUIRE(left.size() == right.size());
        for (std::size_t i = 0; i < left.size(); ++i) {
            CHECK_NEAR(left[i], right[i], bound(1e-11));
        }
    }
}

}  // namespace

TEST_CASE("spectra and lowest levels of random chains: sectors and full matrix agree") {
    constexpr std::uint64_t seed = 4711;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    for (const RandomChain& chain : random_chains()) {
        INFO(to_string(chain.chain)
             << (chain.uniform ? ", uniform" : "") << (chain.complex ? ", complex" : ""));
        const Problem problem = random_problem(chain, generator, 0.37);
        const Reference a = ask(sector_route(), problem, QuantityId::spectrum);
        const Reference b = ask(dense_route(), problem, QuantityId::spectrum);
        check_same(a, b);
        CHECK(a.complete == Completeness::proved);
        if (chain.keeps == Keeps::sz) {
            check_labels(a, b, chain.chain);
        }
        Options seven;
        seven.count = 7;
        const Reference lowest = ask(sector_route(), problem, QuantityId::levels, seven);
        REQUIRE(lowest.value.data.size() == 7);
        for (std::size_t i = 0; i < 7; ++i) {
            CHECK_NEAR(
                lowest.value.real_at(i), b.value.real_at(i), bound(lowest.bound[i] + b.bound[i]));
        }
    }
}

TEST_CASE("levels of one sector, by every quantum number, are those of the full matrix") {
    struct Row {
        Problem problem;
        std::vector<Labels> sectors;
    };
    std::mt19937_64 generator(72);
    for (const auto& [problem, sectors] :
         {Row{family_problem("xxz", {1.0, 0.6}, ring(8), 0.2),
              {{.sz = 1.0},
               {.momentum = 3},
               {.sz = 0.0, .momentum = 4},
               {.sz = -2.0, .momentum = -1},
               {.parity = -1},
               {.sz = 0.0, .momentum = 0, .reflection = 1},
               {.sz = 0.0, .momentum = 4, .reflection = -1}}},
          Row{family_problem("heisenberg", {1.0}, ring(7)),
              {{.sz = 0.5, .momentum = 2},
               {.sz = -0.5},
               {.momentum = 0, .reflection = -1},
               {.reflection = -1},
               {.sz = 0.5, .reflection = 1},
               {.inversion = -1},
               {.reflection = 1, .inversion = -1},
               {.momentum = 2, .inversion = 1}}},
          Row{family_problem("heisenberg", {1.0}, ring(8)),
              {{.sz = 0.0, .inversion = -1},
               {.inversion = 1},
               {.parity = -1, .inversion = 1},
               {.parity = 1, .reflection = -1},
               {.sz = 0.0, .momentum = 0, .reflection = 1, .inversion = 1}}},
          Row{family_problem("tfim", {1.0}, ring(7), 0.4),
              {{.momentum = 1, .parity = 1},
               {.reflection = -1},
               {.parity = -1},
               {.momentum = 0, .parity = -1}}},
          Row{family_problem("xxz", {1.0, 0.6}, ring(7, pi)),
              {{.sz = 0.5, .momentum = 0},
               {.sz = -1.5, .momentum = 2},
               {.momentum = -3},
               {.reflection = -1},
               {.sz = 0.5, .reflection = 1}}},
          Row{family_problem("xxz", {1.0, 0.6}, ring(7, 0.9)),
              {{.sz = 0.5, .momentum = 0}, {.sz = -1.5, .momentum = 2}, {.momentum = 3}}},
          Row{family_problem("heisenberg", {1.0}, spins(5, 2)),
              {{.sz = 1.0, .momentum = 1}, {.sz = 0.0, .inversion = -1}}},
          Row{random_problem({open_chain(7), Keeps::sz, true, false}, generator, 0.1),
              {{.reflection = -1}, {.sz = 0.5, .reflection = 1}, {.sz = 2.5}}}}) {
        for (const Labels& labels : sectors) {
            INFO(to_string(problem.chain) << ": " << sector::to_string(labels));
            const Options options = sector_option(4, labels);
            const Answer a = answer(sector_route(), problem, query(QuantityId::levels, options));
            const Answer b = answer(dense_route(), problem, query(QuantityId::levels, options));
            INFO(reason_of(a) << " | " << reason_of(b));
            const auto* left = std::get_if<Reference>(&a);
            const auto* right = std::get_if<Reference>(&b);
            if (right == nullptr) {  // fewer levels than asked for
                CHECK(left == nullptr);
                continue;
            }
            REQUIRE(left != nullptr);
            check_same(*left, *right);
        }
    }
}

TEST_CASE("multiplets: with rotation symmetry the levels of Sz = m + 1 are among those of Sz = m") {
    constexpr std::uint64_t seed = 73;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    for (const Chain& chain :
         {open_chain(8), ring(7), spins(5, 2), spins(4, 3, BoundaryKind::open)}) {
        // sum_{i<j} J_ij S_i.S_j
        std::vector<PlacedTerm> terms;
        const int two_s = chain.two_s;
        for (int i = 0; i < chain.length(); ++i) {
            for (int j = i + 1; j < chain.length(); ++j) {
                const double coupling = draw(generator);
                terms.push_back(
                    {.factors = {SiteMatrix::raising(two_s), SiteMatrix::lowering(two_s)},
                     .offsets = {i, j},
                     .coupling = {coupling / 2},
                     .fixed = true,
                     .add_conjugate = true});
                terms.push_back({.factors = {SiteMatrix::sz(two_s), SiteMatrix::sz(two_s)},
                                 .offsets = {i, j},
                                 .coupling = {coupling},
                                 .fixed = true});
            }
        }
        const Result<TermList> list = build_terms(chain, terms, Coincident::refuse, 1);
        const Problem problem{chain, std::make_shared<const TermList>(list.value()), 0.0};
        const Reference spectrum = ask(sector_route(), problem, QuantityId::spectrum);
        // Every level has 2S+1 copies with Sz = -S ... S: from the top down each Sz shows again all
        // levels of Sz + 1, and Sz and -Sz the same.
        const double most = chain.length() * chain.spin();
        std::vector<double> inside = levels_with(spectrum, most);
        REQUIRE(inside.size() == 1);
        for (double sz = most - 1; sz >= 0; --sz) {
            std::vector<double> levels = levels_with(spectrum, sz);
            const std::vector<double> opposite = levels_with(spectrum, -sz);
            REQUIRE(opposite.size() == levels.size());
            for (std::size_t i = 0; i < levels.size(); ++i) {
                CHECK_NEAR(levels[i], opposite[i], bound(1e-12));
            }
            std::size_t at = 0;
            for (const double level : inside) {
                while (at < levels.size() && levels[at] < level - 1e-11) {
                    ++at;
                }
                REQUIRE(at < levels.size());
                CHECK_NEAR(levels[at], level, bound(1e-11));
                ++at;
            }
            inside = std::move(levels);
        }
    }
}

TEST_CASE("XX rings: the four lowest levels of Sz = 0 are E0 and three copies of E1") {
    // E0 = -1/sin(pi/L). E1 is fourfold: from the free fermions' sums over occupied momenta (Lieb,
    // Schultz, Mattis, Ann. Phys. (NY) 16, 407 (1961)) a fermion goes from an outermost occupied
    // momentum to an innermost free one: E1 = E0 + 2 sin(pi/L).
    for (const int length : {16, 18, 20, 22, 24}) {
        const double ground = -1 / std::sin(pi / length);
        const double first = ground + 2 * std::sin(pi / length);
        const Reference found = ask(sector_route(),
                                    family_problem("xx", {1.0}, ring(length)),
                                    QuantityId::levels,
                                    sector_option(4, {.sz = 0.0}));
        const double expected[] = {ground, first, first, first};
        for (std::size_t i = 0; i < 4; ++i) {
            CHECK_NEAR(found.value.real_at(i), expected[i], bound(found.bound[i] + 1e-14));
            CHECK(found.bound[i] < 1e-11);
        }
    }
    CHECK_NEAR(-1 / std::sin(pi / 16) + 2 * std::sin(pi / 16), -4.7356502514508, published(13));
    CHECK_NEAR(-1 / std::sin(pi / 20) + 2 * std::sin(pi / 20), -6.0795842914192, published(13));
}

TEST_CASE("momentum labels count the levels") {
    const Reference spectrum =
        ask(sector_route(), family_problem("xxz", {1.0, 0.6}, ring(8), 0.2), QuantityId::spectrum);
    std::map<std::pair<double, int>, int> levels;
    for (const Labels& labels : spectrum.labels) {
        ++levels[{labels.sz.value(), labels.momentum.value()}];
    }
    CHECK(levels[{0.0, 0}] == 10);  // sums of Ramanujan, see test_groups.cpp
    CHECK(levels[{0.0, 1}] == 8);
    CHECK(levels[{0.0, -2}] == 9);
    CHECK(levels[{0.0, 4}] == 10);
}

TEST_CASE("Heisenberg ring: moments Tr H^k / 2^L for k = 1 to 4") {
    // L = 8: 0, 3L/16, -3L/32 (elementary) and 5.8125 (recomputed from a full spectrum).
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

TEST_CASE("levels that cancel to zero keep an honest bound") {
    // The levels of the XX ring of four are 0, +-1, +-sqrt2 (free fermions); zeros are sums of hops
    // that cancel.
    const Reference four =
        ask(sector_route(), family_problem("xx", {1.0}, ring(4)), QuantityId::spectrum);
    for (std::size_t i = 0; i < 16; ++i) {
        const double x = std::abs(four.value.real_at(i));
        const double exact = x < 0.5 ? 0.0 : x < 1.2 ? 1.0 : std::sqrt(2.0);
        CHECK_NEAR(x, exact, bound(four.bound[i]));
    }
    const Reference none =
        ask(sector_route(), family_problem("xx", {0.0}, ring(6)), QuantityId::spectrum);
    for (std::size_t i = 0; i < 64; ++i) {
        CHECK(none.value.real_at(i) == 0.0);
    }
}
