#include <chrono>
#include <cmath>
#include <random>

#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "chainmark/sector/route.hpp"
#include "compare_routes.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Options along(Axes axes, std::vector<int> distance, bool connected = false) {
    Options options;
    options.axes = axes;
    options.distance = std::move(distance);
    options.connected = connected;
    return options;
}

std::vector<Query> everything() {
    std::vector<Query> queries;
    for (const QuantityId id : {QuantityId::free_energy,
                                QuantityId::free_energy_per_site,
                                QuantityId::energy,
                                QuantityId::entropy,
                                QuantityId::specific_heat,
                                QuantityId::specific_heat_per_site,
                                QuantityId::magnetization,
                                QuantityId::susceptibility}) {
        queries.push_back(query(id));
    }
    for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz, Axes::plus_minus, Axes::dot}) {
        queries.push_back(query(QuantityId::spin_correlation, along(axes, {1, 2})));
        queries.push_back(query(QuantityId::spin_correlation, along(axes, {1}, true)));
        Options pairs;
        pairs.axes = axes;
        pairs.pairs = {{0, 2}, {3, 1}};
        queries.push_back(query(QuantityId::spin_correlation, pairs));
    }
    return queries;
}

void check(Problem problem, const std::vector<double>& temperatures) {
    std::vector<Problem> problems;
    for (const double t : temperatures) {
        problem.temperature = t;
        problems.push_back(problem);
    }
    compare_routes(sector_route(), dense_route(), problems, everything());
}

}  // namespace

TEST_CASE("thermal averages of random chains: sector against dense") {
    std::mt19937_64 generator(72);
    for_varied_chains(6, [&](const Chain& chain, Keeps keeps, bool uniform) {
        check(random_problem({chain, keeps, uniform, chain.two_s == 2}, generator, 0.1),
              {0.1, 0.5, 5.0});
    });
}

TEST_CASE("thermal averages where symmetries are many") {
    check(family_problem("heisenberg", {1.0}, ring(8)), {0.1, 1.0});
    check(family_problem("heisenberg", {1.0}, ring(7), 0.4), {0.1, 1.0});
    check(family_problem("xxz", {1.0, -0.3}, ring(8, pi), 0.3), {0.2, 2.0});
    check(family_problem("tfim", {1.0}, ring(8)), {0.1, 1.0});
    check(family_problem("tfim", {1.0}, ring(7), 0.5), {0.1, 1.0});
    check(family_problem("xy", {1.0, 0.4}, ring(8)), {0.1, 1.0});
    check(family_problem("tfim", {1.0}, open_chain(8)), {0.02, 1.0});
    Chain chain = ring(6);
    chain.two_s = 2;
    check(family_problem("heisenberg", {1.0}, chain), {0.1, 1.0});
}

TEST_CASE("free spins at a temperature") {
    // exact: F = -L T ln sum_m exp(h m/T), m = mean of m over these weights, T chi = variance.
    for (const int two_s : {1, 2, 3}) {
        Chain chain = open_chain(6);
        chain.two_s = two_s;
        Problem problem = family_problem("heisenberg", {0.0}, chain, 0.7);
        for (const double t : {0.05, 0.5, 20.0}) {
            problem.temperature = t;
            long double sum = 0;
            long double first = 0;
            long double second = 0;
            for (int digit = 0; digit <= two_s; ++digit) {
                const long double m = digit - two_s / 2.0L;
                const long double weight = std::exp(0.7L * (m - two_s / 2.0L) / t);
                sum += weight;
                first += m * weight;
                second += m * m * weight;
            }
            const auto mean = static_cast<double>(first / sum);
            const auto variance = static_cast<double>(second / sum - first * first / (sum * sum));
            const auto free = static_cast<double>(-0.7L * two_s / 2 - t * std::log(sum));
            const auto near = [&](QuantityId id, double expected) {
                const Reference found = ask(sector_route(), problem, id);
                // The closed form has a rounding of its own: differences of terms up to F/T.
                const double own = rounding(1 + 2 * two_s / t, 4).size;
                CHECK_NEAR(found.value.real_at(0), expected, bound(found.bound[0] + own));
                CHECK(found.bound[0] < useful);
            };
            near(QuantityId::free_energy_per_site, free);
            near(QuantityId::magnetization, mean);
            near(QuantityId::susceptibility, variance / t);
            near(QuantityId::energy_per_site, -0.7 * mean);
            near(QuantityId::specific_heat_per_site, 0.49 * variance / (t * t));
            near(QuantityId::entropy_per_site, (-0.7 * mean - free) / t);
        }
    }
}

TEST_CASE("a spin's response to a transverse field at a temperature") {
    // exact: one spin in a field b along x, H = -b sum Sx: M commutes with nothing, and the Kubo
    // susceptibility along z is <Sx>/b = tanh(b/2T)/(2b) a site.
    const Chain chain = open_chain(5);
    std::vector<PlacedTerm> terms = {
        {.factors = {SiteMatrix::sx(1)}, .offsets = {0}, .coupling = {-0.8}}};
    const TermList list = build_terms(chain, terms, Coincident::refuse, 1).value();
    Problem problem{chain, std::make_shared<const TermList>(list), 0.0};
    for (const double t : {0.03, 0.4, 10.0}) {
        problem.temperature = t;
        const Reference found = ask(sector_route(), problem, QuantityId::susceptibility);
        CHECK_NEAR(found.value.real_at(0), std::tanh(0.4 / t) / 1.6, bound(found.bound[0]));
        CHECK(found.bound[0] < useful);
    }
    problem.temperature.reset();
    const Reference cold = ask(sector_route(), problem, QuantityId::susceptibility);
    CHECK_NEAR(cold.value.real_at(0), 1 / 1.6, bound(cold.bound[0]));  // exact: 1/(2b)
}

TEST_CASE("fields and temperatures share one solution") {
    Batch batch{{}, {query(QuantityId::free_energy), query(QuantityId::magnetization)}};
    Problem problem = family_problem("heisenberg", {1.0}, ring(12));
    const auto time = [&](int points) {
        batch.problems.clear();
        for (int i = 0; i < points; ++i) {
            problem.temperature = 0.1 + 0.01 * i;
            batch.problems.push_back(problem);
        }
        const auto start = std::chrono::steady_clock::now();
        const Answers answers = sector_route().evaluate(batch, context());
        CHECK(std::holds_alternative<Reference>(answers.back().back()));
        return std::chrono::duration<double>(std::chrono::steady_clock::now() - start).count();
    };
    const double one = time(1);
    const double many = time(100);
    CHECK(many < 20 * one + 1.0);  // 100 solutions would take 100 times as long
}
