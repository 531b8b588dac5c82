#include <cmath>

#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "dense/spins.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

/// Both within their bounds.
void check_equal(const Reference& a, std::size_t i, const Reference& b, std::size_t j) {
    CHECK(std::abs(a.value.data[i] - b.value.data[j]) <= a.bound[i] + b.bound[j]);
    CHECK(a.bound[i] < 1e-10);
}

}  // namespace

TEST_CASE("sum rules of correlations in random chains of several spins") {
    for (const int two_s : {1, 2, 3}) {
        for (const bool warm : {false, true}) {
            CAPTURE(two_s);
            CAPTURE(warm);
            std::mt19937_64 generator(static_cast<unsigned>(20 + two_s));
            const RandomChain wanted{.chain = with_spin(open_chain(two_s == 1 ? 6 : 4), two_s),
                                     .keeps = Keeps::nothing,
                                     .complex = true};
            Problem problem = random_problem(wanted, generator, 0.2);
            if (warm) {
                problem.temperature = 0.6;
            }
            const auto correlation = [&](Axes axes) {
                return ask(dense_route(),
                           problem,
                           QuantityId::spin_correlation,
                           {.axes = axes, .distance = {0}, .pairs = {{0, 2}, {2, 0}, {3, 3}}});
            };
            const Reference xx = correlation(Axes::xx);
            const Reference yy = correlation(Axes::yy);
            const Reference zz = correlation(Axes::zz);
            const Reference dot = correlation(Axes::dot);
            const Reference ladder = correlation(Axes::plus_minus);
            const double s = two_s / 2.0;
            for (std::size_t e = 0; e < 4; ++e) {
                CHECK_NEAR(xx.value.real_at(e) + yy.value.real_at(e) + zz.value.real_at(e),
                           dot.value.real_at(e),
                           bound(xx.bound[e] + yy.bound[e] + zz.bound[e] + dot.bound[e]));
            }
            // elements: (0, 2), (2, 0), (3, 3), distance 0
            CHECK_NEAR(dot.value.real_at(2), s * (s + 1), bound(dot.bound[2]));
            CHECK_NEAR(dot.value.real_at(3), s * (s + 1), bound(dot.bound[3]));
            // S+_i S-_j = SxSx + SySy + i (SySx - SxSy), and swapping the sites conjugates it
            CHECK_NEAR(ladder.value.real_at(0),
                       xx.value.real_at(0) + yy.value.real_at(0),
                       bound(ladder.bound[0] + xx.bound[0] + yy.bound[0]));
            CHECK(std::abs(ladder.value.data[0] - std::conj(ladder.value.data[1])) <=
                  ladder.bound[0] + ladder.bound[1]);
            CHECK(std::abs(ladder.value.data[0].imag()) > 1e-6);
        }
    }
}

TEST_CASE("the mean of S(q) over q is the correlation at distance 0") {
    for (const int two_s : {1, 2, 3}) {
        std::mt19937_64 generator(static_cast<unsigned>(30 + two_s));
        const RandomChain wanted{.chain = with_spin(open_chain(two_s == 1 ? 6 : 4), two_s),
                                 .keeps = Keeps::nothing,
                                 .complex = true};
        const Problem problem = random_problem(wanted, generator, 0.2);
        for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz, Axes::plus_minus, Axes::dot}) {
            for (const bool connected : {false, true}) {
                CAPTURE(two_s);
                CAPTURE(to_string(axes));
                const Reference factor = ask(dense_route(),
                                             problem,
                                             QuantityId::structure_factor,
                                             {.axes = axes, .connected = connected});
                const Reference local =
                    ask(dense_route(),
                        problem,
                        QuantityId::spin_correlation,
                        {.axes = axes, .distance = {0}, .connected = connected});
                double mean = 0.0;
                double error = local.bound[0];
                for (std::size_t n = 0; n < factor.value.data.size(); ++n) {
                    mean += factor.value.real_at(n) / problem.chain.length();
                    error += factor.bound[n];
                    CHECK(factor.value.real_at(n) >= -factor.bound[n]);
                    CHECK(std::abs(factor.value.data[n].imag()) <= factor.bound[n]);
                }
                CHECK_NEAR(mean, local.value.real_at(0), bound(error));
                CHECK(error < 1e-10);
            }
        }
    }
}

TEST_CASE("pairs around a twisted ring are translates of the first") {
    std::mt19937_64 generator(4);
    const RandomChain wanted{.chain = ring(6, 0.8), .uniform = true, .complex = true};
    Problem problem = random_problem(wanted, generator, 0.4);
    problem.temperature = 0.5;  // translation invariant whatever the ground space
    for (const Axes axes : {Axes::xx, Axes::zz, Axes::plus_minus, Axes::dot}) {
        for (const bool connected : {false, true}) {
            const Reference found = ask(dense_route(),
                                        problem,
                                        QuantityId::spin_correlation,
                                        {.axes = axes,
                                         .distance = {1, 2},
                                         .pairs = {{0, 1}, {0, 2}},
                                         .connected = connected});
            check_equal(found, 0, found, 2);
            check_equal(found, 1, found, 3);
        }
    }
}

TEST_CASE("one spectrum serves several temperatures and fields of a batch") {
    const Problem base = family_problem("xy", {1.0, 0.5}, ring(5), 0.3);
    std::vector<Problem> problems;
    for (const double t : {0.3, 1.0, 4.0}) {
        problems.push_back(base);
        problems.back().temperature = t;
    }
    const std::vector<QuantityId> ids = {
        QuantityId::energy, QuantityId::susceptibility, QuantityId::magnetization};
    std::vector<Query> queries;
    for (const QuantityId id : ids) {
        queries.push_back(query(id));
    }
    const Answers answers = dense_route().evaluate({problems, queries}, context());
    for (std::size_t p = 0; p < problems.size(); ++p) {
        for (std::size_t q = 0; q < ids.size(); ++q) {
            const auto& together = std::get<Reference>(answers[p][q]);
            check_equal(together, 0, ask(dense_route(), problems[p], ids[q]), 0);
        }
    }
}
