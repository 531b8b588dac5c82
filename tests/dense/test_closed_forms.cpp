#include <cmath>
#include <complex>

#include <doctest/doctest.h>

#include "chainmark/dense/local_matrix.hpp"
#include "chainmark/dense/route.hpp"
#include "dense/spins.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

/// Ring of the model with J [S.S + (S.S)^2 / 3] and J = cos(theta), whose ground state is the
/// valence-bond state of I. Affleck, T. Kennedy, E. H. Lieb, H. Tasaki, Phys. Rev. Lett. 59, 799
/// (1987).
Problem valence_bond_ring(int length) {
    const double theta = std::atan(1.0 / 3.0);
    return family_problem("blbq", {1.0, theta}, with_spin(ring(length), 2));
}

void check_all(const Reference& found, const std::vector<double>& expected) {
    REQUIRE(found.value.data.size() == expected.size());
    for (std::size_t i = 0; i < expected.size(); ++i) {
        CAPTURE(i);
        CHECK_NEAR(found.value.real_at(i), expected[i], bound(found.bound[i]));
        CHECK(std::abs(found.value.data[i].imag()) <= found.bound[i]);
        CHECK(found.bound[i] < 1e-11);
    }
}

}  // namespace

TEST_CASE("spin matrices: commutators, S.S = S(S+1), and exp(i pi S) by its series") {
    using dense::LocalMatrix;
    const std::complex<double> i(0.0, 1.0);
    for (const int two_s : {1, 2, 3, 4, 5}) {
        const double s = two_s / 2.0;
        const LocalMatrix x = dense::spin_component(Axis::x, two_s);
        const LocalMatrix y = dense::spin_component(Axis::y, two_s);
        const LocalMatrix z = dense::spin_component(Axis::z, two_s);
        const LocalMatrix one = LocalMatrix::Identity(two_s + 1, two_s + 1);
        CHECK_NEAR((x * y - y * x - i * z).norm(), 0.0, rounding(s * s, 20));
        CHECK_NEAR((x * x + y * y + z * z - s * (s + 1) * one).norm(), 0.0, rounding(s * s, 20));
        if (two_s % 2 != 0) {
            continue;
        }
        for (const Axis axis : {Axis::x, Axis::y, Axis::z}) {
            LocalMatrix power = one;
            LocalMatrix sum = one;
            for (int n = 1; n < 60; ++n) {
                power = (power * dense::spin_component(axis, two_s) * (i * pi / double(n))).eval();
                sum += power;
            }
            CHECK_NEAR((sum - dense::string_factor(axis, two_s)).norm(),
                       0.0,
                       rounding(std::exp(pi * s), 50));
        }
    }
}

TEST_CASE("two spins S coupled by S.S: levels by total spin") {
    // E_J = [J(J+1) - 2 S(S+1)] / 2, (2J+1)-fold, J = 0 ... 2S
    for (const int two_s : {1, 2, 3, 5}) {
        const double s = two_s / 2.0;
        const Problem problem =
            family_problem("heisenberg", {1.0}, with_spin(open_chain(2), two_s));
        std::vector<double> expected;
        for (int j = 0; j <= two_s; ++j) {
            expected.insert(expected.end(),
                            static_cast<std::size_t>(2 * j + 1),
                            (j * (j + 1) - 2 * s * (s + 1)) / 2);
        }
        check_all(ask(dense_route(), problem, QuantityId::spectrum), expected);
        // the singlet is maximally entangled
        const Reference entropy =
            ask(dense_route(), problem, QuantityId::entanglement_entropy, {.block = {0}});
        check_all(entropy, {std::log(two_s + 1.0)});
        const Reference bits = ask(dense_route(),
                                   problem,
                                   QuantityId::entanglement_entropy,
                                   {.block = {1}, .order = 3, .log2 = true});
        check_all(bits, {std::log2(two_s + 1.0)});
        const double square = s * (s + 1);
        for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz}) {
            check_all(ask(dense_route(),
                          problem,
                          QuantityId::spin_correlation,
                          {.axes = axes, .pairs = {{0, 1}, {1, 1}}}),
                      {-square / 3, square / 3});
        }
        check_all(ask(dense_route(),
                      problem,
                      QuantityId::spin_correlation,
                      {.axes = Axes::dot, .distance = {0, 1}}),
                  {square, -square});
        const Reference ladder = ask(dense_route(),
                                     problem,
                                     QuantityId::spin_correlation,
                                     {.axes = Axes::plus_minus, .pairs = {{0, 1}}});
        check_all(ladder, {-2 * square / 3});
        CHECK(ladder.value.complex);
        // S(q) = (1/2) <|S_0 +- S_1|^2> of one component
        check_all(ask(dense_route(), problem, QuantityId::structure_factor), {0, 2 * square / 3});
    }
}

TEST_CASE("the S = 1 valence-bond ring: energy, correlations, string order in closed form") {
    // Derived with the 2x2 matrices sqrt(2/3) s+, -sqrt(1/3) sz, -sqrt(2/3) s-: the transfer matrix
    // has the eigenvalues 1 and three times -1/3; with Sz inserted it takes 1 to (2/3) sz and sz to
    // -(2/3) 1; with exp(i pi Sz) inserted 1 has -1/3 and sz has 1. With w = -1/3:
    //   <Sz_0 Sz_r> = -(4/9) (w^(r-1) + w^(L-r-1)) / (1 + 3 w^L)
    //   string      = -(4/9) (1 + w^(L-2)) / (1 + 3 w^L), for every r.
    const double w = -1.0 / 3.0;
    for (const int length : {4, 5, 6}) {
        CAPTURE(length);
        const Problem problem = valence_bond_ring(length);
        const double energy = -2.0 / 3.0 * length * std::cos(std::atan(1.0 / 3.0));
        check_all(ask(dense_route(), problem, QuantityId::ground_energy), {energy});
        const double norm = 1 + 3 * std::pow(w, length);
        std::vector<double> correlation;
        for (const int r : {1, 2}) {
            correlation.push_back(-4.0 / 9.0 * (std::pow(w, r - 1) + std::pow(w, length - r - 1)) /
                                  norm);
        }
        const double string = -4.0 / 9.0 * (1 + std::pow(w, length - 2)) / norm;
        for (const Axis axis : {Axis::x, Axis::y, Axis::z}) {
            check_all(ask(dense_route(),
                          problem,
                          QuantityId::string_order,
                          {.axis = axis, .distance = {1, 2, 3}, .pairs = {{0, 3}, {1, 3}}}),
                      std::vector<double>(5, string));
        }
        for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz}) {
            check_all(ask(dense_route(),
                          problem,
                          QuantityId::spin_correlation,
                          {.axes = axes, .distance = {1, 2}, .connected = true}),
                      correlation);
        }
    }
}

TEST_CASE("string order of S = 1/2 with 2 Sz between the ends") {
    // all spins up: (1/2)^2; a twist turns Sx carried around the ring by pi into -Sx
    const Problem up = family_problem("xx", {1.0}, ring(5), 5.0);
    check_all(ask(dense_route(), up, QuantityId::string_order, {.distance = {1, 3}}), {0.25, 0.25});
    const Problem x = free_spins(4, 1, 2.0, 0.0);
    check_all(ask(dense_route(), x, QuantityId::string_order, {.axis = Axis::x, .pairs = {{0, 2}}}),
              {0.25});
    Problem turned = x;
    turned.chain = ring(4, pi);
    // of the 4 strings over 3 sites 2 go around: with one end, or with one end and the middle
    check_all(
        ask(dense_route(), turned, QuantityId::string_order, {.axis = Axis::x, .distance = {2}}),
        {0.25 * (1 + 1 - 1 + 1) / 4});
}

TEST_CASE("a one-magnon state: entropy of any block, chosen by its sector") {
    // (1/sqrt L) sum_j exp(ikj) |j>: the block holds the flipped spin with probability l/L
    const Problem problem = family_problem("xx", {1.0}, ring(6));
    for (const auto& block : std::vector<std::vector<int>>{{0}, {0, 1}, {0, 3}, {1, 2, 4, 5}}) {
        const double p = static_cast<double>(block.size()) / 6.0;
        const double q = 1 - p;
        Options options{.sector = Labels{.sz = 2.0, .momentum = 1}, .block = block};
        check_all(ask(dense_route(), problem, QuantityId::entanglement_entropy, options),
                  {-p * std::log(p) - q * std::log(q)});
        options.order = 2;
        check_all(ask(dense_route(), problem, QuantityId::entanglement_entropy, options),
                  {-std::log(p * p + q * q)});
    }
    const Answer several = answer(dense_route(),
                                  family_problem("heisenberg", {1.0}, ring(3)),
                                  query(QuantityId::entanglement_entropy, {.block = {0}}));
    REQUIRE(std::holds_alternative<Undecided>(several));
    CHECK(std::get<Undecided>(several).reason.find("depends on the state") != std::string::npos);
}

TEST_CASE("susceptibility of the ground state by second-order perturbation theory") {
    // spins along (hx, 0, hz): m = S hz/h, so dm/dhz = S hx^2/h^3
    for (const int two_s : {1, 2, 3}) {
        const double size = std::hypot(0.6, 0.3);
        check_all(ask(dense_route(), free_spins(3, two_s, 0.6, 0.3), QuantityId::susceptibility),
                  {two_s / 2.0 * 0.36 / std::pow(size, 3)});
    }
    // Ising ring along x, J = -1, twofold: M flips one of three spins at the cost of |J|, so
    // E2 = -3 (1/2)^2 h'^2 and chi = (2/3) 3/4. The field does not split the two states.
    const Reference ising =
        ask(dense_route(), family_problem("tfim", {-1.0}, ring(3)), QuantityId::susceptibility);
    check_all(ising, {0.5});
    CHECK(ising.degeneracy == 2);
    // beside a pair coupled by Sx Sx a spin is free: the field splits the ground space
    const Chain chain = open_chain(3);
    const std::vector<PlacedTerm> pair = {{.factors = {SiteMatrix::sx(), SiteMatrix::sx()},
                                           .offsets = {0, 1},
                                           .coupling = {1.0},
                                           .fixed = true}};
    const auto list = build_terms(chain, pair, Coincident::refuse, 1);
    const Problem loose{chain, std::make_shared<const TermList>(list.value())};
    CHECK(ask(dense_route(), loose, QuantityId::susceptibility).value.special_at(0) ==
          Special::jump);
}

TEST_CASE("local magnetization of tilted spins along all axes") {
    const Problem problem = free_spins(2, 3, 0.8, 0.6);
    for (const auto& [axis, expected] :
         std::vector<std::pair<Axis, double>>{{Axis::x, 1.2}, {Axis::y, 0.0}, {Axis::z, 0.9}}) {
        check_all(ask(dense_route(), problem, QuantityId::local_magnetization, {.axis = axis}),
                  {expected, expected});
    }
}

TEST_CASE("sizes by dimension, and what is refused") {
    const auto refusal = [](const Chain& chain, QuantityId id) {
        return dense_route()
            .plan({{family_problem("heisenberg", {1.0}, chain)}, {query(id)}})
            .refusal[0];
    };
    CHECK(refusal(with_spin(ring(7), 2), QuantityId::gap).empty());
    CHECK(refusal(with_spin(ring(8), 2), QuantityId::gap) == "takes at most 7 sites of spin 1");
    CHECK(refusal(with_spin(ring(6), 3), QuantityId::gap).empty());
    CHECK(refusal(with_spin(ring(4), 3), QuantityId::string_order).find("whole spins") !=
          std::string::npos);
    CHECK(refusal(ring(4), QuantityId::energy) == "needs a temperature");
    Problem warm = family_problem("heisenberg", {1.0}, ring(4));
    warm.temperature = 1.0;
    CHECK(dense_route().plan({{warm}, {query(QuantityId::gap)}}).refusal[0].find("ground state") !=
          std::string::npos);
}
