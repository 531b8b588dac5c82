#include <random>

#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "chainmark/sector/evaluator.hpp"
#include "chainmark/sector/route.hpp"
#include "compare_routes.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

void check(const Problem& problem, QuantityId id) {
    compare_routes(sector_route(), dense_route(), {problem}, {query(id)});
}

Options along(Axes axes, std::vector<int> distance, bool connected = false) {
    Options options;
    options.axes = axes;
    options.distance = std::move(distance);
    options.connected = connected;
    return options;
}

/// Every average of the ground space.
void check_averages(const Problem& problem) {
    std::vector<Query> queries = {query(QuantityId::magnetization)};
    for (const Axis axis : {Axis::x, Axis::y, Axis::z}) {
        Options options;
        options.axis = axis;
        queries.push_back(query(QuantityId::local_magnetization, options));
        options.distance = {1, 2};
        if (problem.chain.two_s != 3) {
            queries.push_back(query(QuantityId::string_order, options));
        }
    }
    for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz, Axes::plus_minus, Axes::dot}) {
        for (const bool connected : {false, true}) {
            queries.push_back(query(QuantityId::spin_correlation, along(axes, {1, 3}, connected)));
            Options pairs;
            pairs.axes = axes;
            pairs.connected = connected;
            pairs.pairs = {{0, 2}, {3, 1}, {2, 2}};
            queries.push_back(query(QuantityId::spin_correlation, pairs));
        }
        queries.push_back(query(QuantityId::structure_factor, along(axes, {})));
    }
    compare_routes(sector_route(), dense_route(), {problem}, queries);
}

}  // namespace

TEST_CASE("averages of random chains: sector against dense") {
    std::mt19937_64 generator(71);
    for_varied_chains(7, [&](const Chain& chain, Keeps keeps, bool uniform) {
        check_averages(random_problem({chain, keeps, uniform, chain.two_s == 2}, generator, 0.1));
    });
}

TEST_CASE("averages over degenerate ground spaces, with their ranges") {
    // Doublets of odd rings, ferromagnetic multiplets, the two dimer states, a free spin at an end.
    check_averages(family_problem("heisenberg", {1.0}, ring(5)));
    check_averages(family_problem("heisenberg", {-1.0}, ring(6)));
    check_averages(family_problem("heisenberg", {-1.0}, open_chain(5)));
    check_averages(family_problem("j1j2", {1.0, 0.5}, ring(8)));
    check_averages(family_problem("xx", {1.0}, ring(6, pi)));
    check_averages(family_problem("tfim", {1.0}, ring(6)));
    Chain chain = ring(5);
    chain.two_s = 2;
    check_averages(family_problem("heisenberg", {-1.0}, chain));
}

TEST_CASE("a large space of degenerate states has no range, but an average") {
    const Problem free = family_problem("heisenberg", {0.0}, open_chain(7));  // 128 states
    const Reference xx =
        ask(sector_route(), free, QuantityId::spin_correlation, along(Axes::xx, {1}));
    CHECK(!xx.range);
    CHECK(xx.degeneracy == 128);
    CHECK_NEAR(xx.value.real_at(0), 0.0, bound(xx.bound[0]));
}

TEST_CASE("symmetric sectors and expanded vectors give the same averages") {
    std::mt19937_64 generator(5);
    std::vector<Problem> problems = {
        family_problem("heisenberg", {1.0}, ring(10)),
        family_problem("heisenberg", {1.0}, ring(9)),
        family_problem("xxz", {1.0, 0.5}, ring(10, 0.3)),
        family_problem("xxz", {1.0, 0.5}, ring(8, pi), 0.3),
        family_problem("tfim", {1.0}, ring(9), 0.7),
        family_problem("j1j2", {1.0, 0.5}, ring(8)),
        random_problem({ring(8), Keeps::nothing, true, false}, generator, 0.2),
        random_problem({ring(8), Keeps::sz, true, true}, generator, 0.2),
        random_problem({open_chain(9), Keeps::parity, false, true}, generator, 0.2),
    };
    Chain spin_one = ring(8);
    spin_one.two_s = 2;
    problems.push_back(family_problem("heisenberg", {1.0}, spin_one));
    for (const Problem& problem : problems) {
        CAPTURE(to_string(problem.chain));
        std::vector<Query> queries;
        for (const Axes axes : {Axes::xx, Axes::zz, Axes::plus_minus}) {
            queries.push_back(query(QuantityId::spin_correlation, along(axes, {1, 2, 3})));
            queries.push_back(query(QuantityId::spin_correlation, along(axes, {2}, true)));
        }
        Options x;
        x.axis = Axis::x;
        queries.push_back(query(QuantityId::local_magnetization, x));
        const Batch batch{{problem}, queries};
        sector::Evaluator expanded(batch, context());
        sector::Evaluator symmetric(batch, context(), 1.0);
        for (const Query& question : queries) {
            const Answer a = expanded(0, question);
            const Answer b = symmetric(0, question);
            REQUIRE(std::holds_alternative<Reference>(a));
            REQUIRE(std::holds_alternative<Reference>(b));
            compare_references(std::get<Reference>(a), std::get<Reference>(b));
        }
    }
}

TEST_CASE("a singlet's correlations add up to nothing, and its spins stand nowhere") {
    // exact: sum_r <S_0.S_r> = <S_0.S_tot> = 0 in a state of total spin 0.
    for (const int two_s : {1, 2, 3}) {
        Chain chain = ring(two_s == 1 ? 14 : 8);
        chain.two_s = two_s;
        const Problem problem = family_problem("heisenberg", {1.0}, chain);
        std::vector<int> distances;
        for (int r = 0; r < chain.length(); ++r) {
            distances.push_back(r);
        }
        const Reference dot =
            ask(sector_route(), problem, QuantityId::spin_correlation, along(Axes::dot, distances));
        const Reference zz =
            ask(sector_route(), problem, QuantityId::spin_correlation, along(Axes::zz, distances));
        double sum = 0.0;
        double bounds = 0.0;
        for (std::size_t r = 0; r < distances.size(); ++r) {
            sum += dot.value.real_at(r);
            bounds += dot.bound[r];
            CHECK_NEAR(dot.value.real_at(r),
                       3 * zz.value.real_at(r),
                       bound(dot.bound[r] + 3 * zz.bound[r]));
        }
        CHECK_NEAR(sum, 0.0, bound(bounds));
        CHECK_NEAR(dot.value.real_at(0), chain.spin() * (chain.spin() + 1), rounding(4, 8));
        Options z;
        const Reference local = ask(sector_route(), problem, QuantityId::local_magnetization, z);
        CHECK(local.basis == Basis::exact);
        for (int site = 0; site < chain.length(); ++site) {
            CHECK(local.value.real_at(static_cast<std::size_t>(site)) == 0.0);
        }
        // exact: S(q = 0) = <S_tot . S_tot> / L = 0, and the mean over q is S(S+1).
        const Reference factor =
            ask(sector_route(), problem, QuantityId::structure_factor, along(Axes::dot, {}));
        CHECK_NEAR(factor.value.real_at(0), 0.0, bound(factor.bound[0]));
        double mean = 0.0;
        for (int n = 0; n < chain.length(); ++n) {
            mean += factor.value.real_at(static_cast<std::size_t>(n)) / chain.length();
        }
        CHECK_NEAR(mean, chain.spin() * (chain.spin() + 1), bound(factor.bound[1]));
    }
}

TEST_CASE("AKLT ring: correlations and string order by the transfer matrix") {
    // The ground state of J [cos t S.S + sin t (S.S)^2], tan t = 1/3, is the valence-bond solid of
    // I. Affleck, T. Kennedy, E. H. Lieb and H. Tasaki, Phys. Rev. Lett. 59, 799 (1987). exact, by
    // hand: the transfer matrix of its matrix product has eigenvalues 1 and -1/3 (three times), so
    // with x = -1/3 and Z = 1 + 3 x^L
    //   <Sz_0 Sz_r> = (4/9) (x^r + x^(L-r) + 2 x^L / x^... ) ... see below.
    for (const int length : {6, 9, 10}) {
        Chain chain = ring(length);
        chain.two_s = 2;
        const Problem problem = family_problem("blbq", {1.0, std::atan(1.0 / 3.0)}, chain);
        // Matrices A^m of the state: A^+ = sqrt(2/3) s+, A^0 = -sqrt(1/3) sz, A^- = -sqrt(2/3) s-,
        // s the Pauli matrices with s+ = |up><down|.
        using Matrix = Eigen::Matrix4d;
        const double a = std::sqrt(2.0 / 3.0);
        Eigen::Matrix2d plus;
        Eigen::Matrix2d zero;
        Eigen::Matrix2d minus;
        plus << 0, a, 0, 0;
        zero << -std::sqrt(1.0 / 3.0), 0, 0, std::sqrt(1.0 / 3.0);
        minus << 0, 0, -a, 0;
        const auto squared = [](const Eigen::Matrix2d& m) {
            Matrix result;
            for (int i = 0; i < 2; ++i) {
                for (int j = 0; j < 2; ++j) {
                    result.block<2, 2>(2 * i, 2 * j) = m(i, j) * m;
                }
            }
            return result;
        };
        const Matrix transfer = squared(plus) + squared(zero) + squared(minus);
        const Matrix sz = squared(plus) - squared(minus);
        const Matrix sign = squared(zero) - squared(plus) - squared(minus);
        const auto power = [](const Matrix& m, int n) {
            Matrix result = Matrix::Identity();
            for (int i = 0; i < n; ++i) {
                result = result * m;
            }
            return result;
        };
        const double norm = power(transfer, length).trace();
        const double x = std::pow(-1.0 / 3.0, length);
        CHECK_NEAR(norm, 1 + 3 * x, rounding(1, 40));
        Options options = along(Axes::zz, {1, 2, 3});
        const Reference zz = ask(sector_route(), problem, QuantityId::spin_correlation, options);
        const Reference string = ask(sector_route(), problem, QuantityId::string_order, options);
        for (int r = 1; r <= 3; ++r) {
            const auto at = static_cast<std::size_t>(r - 1);
            const Matrix rest = power(transfer, length - r - 1);
            const double expected = (sz * power(transfer, r - 1) * sz * rest).trace() / norm;
            CHECK_NEAR(zz.value.real_at(at), expected, bound(zz.bound[at] + 1e-15));
            const double ordered = (sz * power(sign, r - 1) * sz * rest).trace() / norm;
            CHECK_NEAR(string.value.real_at(at), ordered, bound(string.bound[at] + 1e-15));
            CHECK(zz.bound[at] < useful);
        }
    }
}

TEST_CASE("Majumdar-Ghosh: the dimer states' averages") {
    // exact: at J2 = J/2 the two dimer coverings span the ground space of the ring (C. K. Majumdar
    // and D. K. Ghosh, J. Math. Phys. 10, 1388 (1969)); an open chain of even length has one, with
    // <S_j.S_{j+1}> = -3/4 on bonds 0-1, 2-3, ... and 0 elsewhere.
    const Problem problem = family_problem("j1j2", {1.0, 0.5}, open_chain(10));
    Options options;
    options.axes = Axes::dot;
    options.pairs = {{0, 1}, {1, 2}, {2, 3}, {0, 2}, {0, 9}};
    const Reference dot = ask(sector_route(), problem, QuantityId::spin_correlation, options);
    const double expected[] = {-0.75, 0.0, -0.75, 0.0, 0.0};
    CHECK(dot.degeneracy == 1);
    for (std::size_t i = 0; i < 5; ++i) {
        CHECK_NEAR(dot.value.real_at(i), expected[i], bound(dot.bound[i]));
        CHECK(dot.bound[i] < useful);
    }
}

TEST_CASE("magnetization and susceptibility without a temperature") {
    std::mt19937_64 generator(3);
    for (const int two_s : {1, 2}) {
        for (const double twist : {-1.0, 0.0, pi}) {
            Chain chain = twist < 0 ? open_chain(6) : ring(6, twist);
            chain.two_s = two_s;
            for (const bool uniform : {true, false}) {
                for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
                    CAPTURE(two_s);
                    CAPTURE(twist);
                    check(random_problem({chain, keeps, uniform, two_s == 2}, generator, 0.1),
                          QuantityId::susceptibility);
                }
            }
        }
    }
    check(family_problem("tfim", {1.0}, ring(8), 0.5), QuantityId::susceptibility);
    check(family_problem("tfim", {1.0}, ring(8), 0.0), QuantityId::susceptibility);  // two states
    check(family_problem("tfim", {1.0}, open_chain(8), 0.4), QuantityId::susceptibility);
    // Fields at which conjugate gradients come to the rounding floor without meeting their target.
    for (const double field : {1.0, 1.1, 2.0}) {
        check(family_problem("tfim", {1.0}, open_chain(8), field), QuantityId::susceptibility);
    }
    check(family_problem("xy", {1.0, 0.5}, ring(8), 0.0), QuantityId::susceptibility);
    check(family_problem("xx", {1.0}, ring(6), 1.0), QuantityId::susceptibility);  // a jump
}
