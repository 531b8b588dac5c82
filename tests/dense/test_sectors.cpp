#include <algorithm>
#include <cmath>

#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "chainmark/dense/sectors.hpp"
#include "dense/spins.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Eigen::VectorXd levels_of(const Problem& problem, const Labels& labels) {
    return dense::sector_spectrum(problem, labels, context()).energies;
}

std::string refusal_of(const Problem& problem, const Labels& labels) {
    return dense::sector_spectrum(problem, labels, context()).refusal;
}

/// The levels of all these sectors together are the spectrum.
void check_complete(const Problem& problem, const std::vector<Labels>& sectors) {
    std::vector<double> levels;
    for (const Labels& labels : sectors) {
        for (const double energy : levels_of(problem, labels)) {
            levels.push_back(energy);
        }
    }
    std::sort(levels.begin(), levels.end());
    const Reference spectrum = ask(dense_route(), problem, QuantityId::spectrum);
    REQUIRE(levels.size() == spectrum.value.data.size());
    for (std::size_t i = 0; i < levels.size(); ++i) {
        CHECK_NEAR(levels[i], spectrum.value.real_at(i), bound(2 * spectrum.bound[i]));
    }
}

std::vector<double> all_sz(const Chain& chain) {
    std::vector<double> values;
    for (int up = 0; up <= chain.length() * chain.two_s; ++up) {
        values.push_back(up - chain.length() * chain.spin());
    }
    return values;
}

}  // namespace

TEST_CASE("one magnon on a twisted ring has the momentum of its label") {
    // one spin up: E = J cos k, k = (2 pi n + twist)/L
    for (const double twist : {0.0, 0.7, pi}) {
        const Problem problem = family_problem("xx", {1.3}, ring(6, twist));
        for (int n = -2; n <= 3; ++n) {
            const Eigen::VectorXd levels = levels_of(problem, {.sz = -2.0, .momentum = n});
            REQUIRE(levels.size() == 1);
            CHECK_NEAR(levels[0], 1.3 * std::cos((2 * pi * n + twist) / 6), rounding(1.3, 40));
        }
    }
    // S = 1: H = J (Sx Sx + Sy Sy) moves the one magnon with 2 J cos k
    const Problem one = family_problem("xx", {1.0}, with_spin(ring(5, 0.4), 2));
    CHECK_NEAR(levels_of(one, {.sz = -4.0, .momentum = 2})[0],
               2 * std::cos((4 * pi + 0.4) / 5),
               rounding(2.0, 40));
}

TEST_CASE("the sectors of a random ring make up its spectrum") {
    for (const int two_s : {1, 2, 3}) {
        for (const double twist : {0.0, 0.9, pi}) {
            CAPTURE(two_s);
            CAPTURE(twist);
            std::mt19937_64 generator(static_cast<unsigned>(two_s));
            const Chain chain = with_spin(ring(two_s == 1 ? 6 : 5 - two_s / 3, twist), two_s);
            const RandomChain wanted{.chain = chain, .uniform = true, .complex = true};
            if (two_s == 3) {
                continue;  // four sites with next-nearest neighbours coincide
            }
            const Problem problem = random_problem(wanted, generator, 0.3);
            std::vector<Labels> sectors;
            for (const double sz : all_sz(chain)) {
                for (int n = 0; n < chain.length(); ++n) {
                    sectors.push_back({.sz = sz, .momentum = n});
                }
            }
            std::erase_if(sectors, [&](const Labels& labels) {
                return !refusal_of(problem, labels).empty();  // without a state
            });
            check_complete(problem, sectors);
        }
    }
}

TEST_CASE("parity sectors with momentum, also on an antiperiodic ring") {
    for (const double twist : {0.0, pi}) {
        std::mt19937_64 generator(8);
        const RandomChain wanted{.chain = ring(6, twist), .keeps = Keeps::parity, .uniform = true};
        const Problem problem = random_problem(wanted, generator, 0.3);
        std::vector<Labels> sectors;
        for (int n = 0; n < 6; ++n) {
            for (const int parity : {1, -1}) {
                sectors.push_back({.momentum = n, .parity = parity});
            }
        }
        check_complete(problem, sectors);
        check_complete(problem, {{.parity = 1}, {.parity = -1}});
    }
}

TEST_CASE("reflection and inversion at zero Sz and zero momentum") {
    for (const int two_s : {1, 2, 3}) {
        const Problem problem = family_problem("heisenberg", {1.0}, with_spin(ring(4), two_s));
        std::vector<Labels> sectors;
        for (const double sz : all_sz(problem.chain)) {
            for (const int sign : {1, -1}) {
                if (sz != 0.0) {
                    sectors.push_back({.sz = sz, .reflection = sign});
                    continue;
                }
                sectors.push_back({.sz = 0.0, .reflection = sign, .inversion = 1});
                sectors.push_back({.sz = 0.0, .reflection = sign, .inversion = -1});
            }
        }
        std::erase_if(sectors,
                      [&](const Labels& labels) { return !refusal_of(problem, labels).empty(); });
        check_complete(problem, sectors);
    }
    // two spins 1/2: the singlet is odd under both, by the states' exchange without further sign
    const Problem pair = family_problem("heisenberg", {1.0}, open_chain(2));
    const Eigen::VectorXd singlet = levels_of(pair, {.reflection = -1});
    REQUIRE(singlet.size() == 1);
    CHECK_NEAR(singlet[0], -0.75, rounding(1.0, 20));
    CHECK_NEAR(levels_of(pair, {.sz = 0.0, .inversion = -1})[0], -0.75, rounding(1.0, 20));
}

TEST_CASE("a dimerized ring: momentum counts cells of two sites") {
    const Problem problem = family_problem("dimer_xx", {1.0, 0.3}, ring(6));
    std::vector<Labels> sectors;
    for (int n = 0; n < 3; ++n) {
        sectors.push_back({.momentum = n});
    }
    check_complete(problem, sectors);
    const Eigen::VectorXd same = levels_of(problem, {.momentum = 4});
    CHECK_NEAR(
        (levels_of(problem, {.momentum = 1}) - same).cwiseAbs().maxCoeff(), 0.0, rounding(3.0, 60));
    // one magnon: E = +- (J/2) |1 + delta + (1 - delta) exp(2ik)| with k = 2 pi n / 6
    const Eigen::VectorXd magnon = levels_of(problem, {.sz = -2.0, .momentum = 1});
    REQUIRE(magnon.size() == 2);
    const double expected = 0.5 * std::abs(1.3 + 0.7 * std::polar(1.0, 2 * pi / 3));
    CHECK_NEAR(magnon[0], -expected, rounding(1.0, 40));
    CHECK_NEAR(magnon[1], expected, rounding(1.0, 40));
}

TEST_CASE("levels and gap of a sector through the route") {
    const Problem problem = family_problem("heisenberg", {1.0}, ring(4));
    // exact: E = (S(S+1) - SA(SA+1) - SB(SB+1))/2; the lowest triplet has E = -1, momentum pi
    const Options options{.count = 1, .sector = Labels{.sz = 1.0, .momentum = 2}};
    const Reference levels = ask(dense_route(), problem, QuantityId::levels, options);
    CHECK_NEAR(levels.value.real_at(0), -1.0, bound(levels.bound[0]));
    CHECK(levels.bound[0] < 1e-13);
    CHECK(levels.labels.front() == *options.sector);
    const Reference gap = ask(dense_route(), problem, QuantityId::gap, options);
    CHECK_NEAR(gap.value.real_at(0), 1.0, bound(gap.bound[0]));
    const Answer many =
        answer(dense_route(),
               problem,
               query(QuantityId::levels, {.count = 3, .sector = Labels{.sz = 1.0, .momentum = 2}}));
    CHECK(std::get<NotCovered>(many).reason == "the sector has 1 levels");
}

TEST_CASE("labels that mean nothing are refused with the reason") {
    const Problem tfim = family_problem("tfim", {1.0}, ring(6), 0.3);
    CHECK(refusal_of(tfim, {.sz = 0.0}) == "H does not conserve Sz");
    CHECK(refusal_of(tfim, {.inversion = 1}) == "H does not commute with inversion");
    const Problem xx = family_problem("xx", {1.0}, ring(6), 0.3);
    CHECK(refusal_of(xx, {.sz = 0.0, .inversion = 1}).empty());
    CHECK(refusal_of(xx, {.sz = 1.0, .inversion = 1}).find("inversion") == 0);
    CHECK(refusal_of(xx, {.momentum = 1, .reflection = 1}) ==
          "reflection +1 does not commute with momentum 1");
    CHECK(refusal_of(xx, {.momentum = 3, .reflection = 1}).empty());
    CHECK(refusal_of(xx, {.sz = 0.5}).find("no state") == 0);
    CHECK(refusal_of(family_problem("xx", {1.0}, open_chain(6)), {.momentum = 0}) ==
          "an open chain has no momentum");
    CHECK(refusal_of(family_problem("xx", {1.0}, ring(6, 0.3)), {.reflection = 1}) ==
          "H does not commute with reflection");
}
