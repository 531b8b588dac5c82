#include <algorithm>
#include <cmath>
#include <string>

#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "dense/spins.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

/// The same Hamiltonian with the sites in reverse order: other matrices, other roundings.
Problem mirrored(const Problem& problem) {
    Problem result = problem;
    TermList list = *problem.terms;
    for (Term& term : list.terms) {
        for (SiteFactor& factor : term.string) {
            factor.site = problem.chain.length() - 1 - factor.site;
        }
        std::reverse(term.string.begin(), term.string.end());
    }
    std::reverse(list.terms.begin(), list.terms.end());
    result.terms = std::make_shared<const TermList>(std::move(list));
    return result;
}

std::vector<Query> ground_queries(const Problem& problem) {
    std::vector<Query> queries;
    for (const QuantityId id : {QuantityId::ground_energy,
                                QuantityId::gap,
                                QuantityId::spectrum,
                                QuantityId::magnetization,
                                QuantityId::susceptibility}) {
        queries.push_back(query(id));
    }
    for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz, Axes::dot}) {
        for (const bool connected : {false, true}) {
            queries.push_back(query(QuantityId::spin_correlation,
                                    {.axes = axes, .distance = {0, 1, 2}, .connected = connected}));
            queries.push_back(
                query(QuantityId::structure_factor, {.axes = axes, .connected = connected}));
        }
    }
    for (const int order : {1, 2, 4}) {
        std::vector<int> half;
        for (int site = 0; site < problem.chain.length() / 2; ++site) {
            half.push_back(site);
        }
        queries.push_back(query(QuantityId::entanglement_entropy, {.block = half, .order = order}));
    }
    return queries;
}

std::vector<Query> thermal_queries() {
    std::vector<Query> queries;
    for (const QuantityId id : {QuantityId::free_energy,
                                QuantityId::energy,
                                QuantityId::entropy,
                                QuantityId::specific_heat,
                                QuantityId::magnetization,
                                QuantityId::susceptibility}) {
        queries.push_back(query(id));
    }
    for (const Axes axes : {Axes::xx, Axes::zz, Axes::dot}) {
        queries.push_back(query(QuantityId::spin_correlation,
                                {.axes = axes, .distance = {1, 2}, .connected = true}));
    }
    return queries;
}

/// The two answers to every query agree within their bounds; `worst` becomes the largest ratio of a
/// difference and its bounds.
void compare(const Problem& problem, const std::vector<Query>& queries, double& worst) {
    const Answers here = dense_route().evaluate({{problem}, queries}, context());
    std::vector<Query> turned = queries;
    for (Query& question : turned) {
        for (int& site : question.options.block) {
            site = problem.chain.length() - 1 - site;
        }
        std::sort(question.options.block.begin(), question.options.block.end());
    }
    const Answers there = dense_route().evaluate({{mirrored(problem)}, turned}, context());
    for (std::size_t q = 0; q < queries.size(); ++q) {
        CAPTURE(queries[q].label);
        REQUIRE(here[0][q].index() == there[0][q].index());
        if (!std::holds_alternative<Reference>(here[0][q])) {
            continue;  // an entropy of a degenerate space
        }
        const auto& a = std::get<Reference>(here[0][q]);
        const auto& b = std::get<Reference>(there[0][q]);
        for (std::size_t i = 0; i < a.value.data.size(); ++i) {
            CAPTURE(i);
            const double difference = std::abs(a.value.data[i] - b.value.data[i]);
            CHECK_NEAR(difference, 0.0, bound(a.bound[i] + b.bound[i]));
            // weights exp(-E/T) magnify what is uncertain in E by 1/T
            const double sensitivity = problem.temperature ? 1 + 1 / *problem.temperature : 1.0;
            CHECK(a.bound[i] < 1e-10 * sensitivity * (1 + std::abs(a.value.data[i])));
            worst = std::max(worst, difference / std::max(a.bound[i] + b.bound[i], 1e-300));
        }
    }
}

}  // namespace

TEST_CASE("a chain and its mirror image have the same numbers, within bounds that are not idle") {
    double worst_cold = 0.0;
    double worst_warm = 0.0;
    for (const int two_s : {1, 2, 3}) {
        for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
            for (const bool complex : {false, true}) {
                CAPTURE(two_s);
                CAPTURE(complex);
                std::mt19937_64 generator(static_cast<unsigned>(100 * two_s));
                const RandomChain wanted{.chain = with_spin(open_chain(two_s == 1 ? 7 : 4), two_s),
                                         .keeps = keeps,
                                         .complex = complex};
                Problem problem = random_problem(wanted, generator, 0.15);
                compare(problem, ground_queries(problem), worst_cold);
                for (const double t : {0.02, 0.5, 20.0, 1e6}) {
                    CAPTURE(t);
                    problem.temperature = t;
                    compare(problem, thermal_queries(), worst_warm);
                }
            }
        }
    }
    MESSAGE("largest difference in units of the bounds: " << worst_cold << ", with a temperature "
                                                          << worst_warm);
    CHECK(worst_cold > 1e-4);
    CHECK(worst_warm > 1e-4);
}
