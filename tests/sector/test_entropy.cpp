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

Options cut(std::vector<int> block, int order = 1, bool log2 = false) {
    Options options;
    options.block = std::move(block);
    options.order = order;
    options.log2 = log2;
    return options;
}

void check(const Problem& problem, const std::vector<Options>& cuts) {
    std::vector<Query> queries;
    for (const Options& options : cuts) {
        queries.push_back(query(QuantityId::entanglement_entropy, options));
    }
    // An entropy's bound is about t ln(1/t), t the trace distance; levels of random chains lie
    // close.
    constexpr double widest = 1e-8;
    compare_routes(sector_route(), dense_route(), {problem}, queries, widest);
}

}  // namespace

TEST_CASE("entropies of random chains: sector against dense") {
    std::mt19937_64 generator(9);
    for (const int two_s : {1, 2, 3}) {
        for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
            for (const bool uniform : {true, false}) {
                const int length = two_s == 1 ? 8 : two_s == 2 ? 5 : 4;
                Chain chain = uniform && two_s != 3 ? ring(length) : open_chain(length);
                chain.two_s = two_s;
                CAPTURE(two_s);
                CAPTURE(static_cast<int>(keeps));
                const Problem problem =
                    random_problem({chain, keeps, uniform, two_s == 2}, generator, 0.2);
                check(problem,
                      {cut({0}),
                       cut({0, 1, 2}),
                       cut({1, 2, 3}, 1, true),
                       cut({0, 2}, 2),
                       cut({0, 1, 3}, 3, true)});
            }
        }
    }
}

TEST_CASE("entropy of the lowest state of a sector") {
    const Problem problem = family_problem("xxz", {1.0, 0.5}, ring(8));
    for (const Labels& labels : {Labels{.sz = 1.0},
                                 Labels{.sz = 0.0},
                                 Labels{.sz = 1.0, .momentum = 1},
                                 Labels{.sz = 0.0, .momentum = 0, .inversion = -1},
                                 Labels{.momentum = 4, .reflection = -1},
                                 Labels{.sz = -2.0, .reflection = 1}}) {
        Options options = cut({0, 1, 2});
        options.sector = labels;
        check(problem, {options});
    }
    // Two states of equal energy: undecided without a sector, and decided with one.
    const Problem doublet = family_problem("heisenberg", {1.0}, ring(7));
    check(doublet, {cut({0, 1})});
    Options options = cut({0, 1});
    options.sector = Labels{.sz = 0.5};
    check(doublet, {options});
    options.sector = Labels{.sz = 0.5, .momentum = 2};
    check(doublet, {options});
}

TEST_CASE("entropies in closed form") {
    // exact: a dimer covering shares ln 2 across each cut dimer, every Renyi order alike.
    const Problem dimers = family_problem("j1j2", {1.0, 0.5}, open_chain(12));
    std::vector<Query> queries;
    for (const int order : {1, 2, 5}) {
        std::vector<int> block;
        for (int last = 0; last < 11; ++last) {
            block.push_back(last);
            queries.push_back(query(QuantityId::entanglement_entropy, cut(block, order, true)));
        }
    }
    const Answers answers = sector_route().evaluate({{dimers}, queries}, context());
    for (std::size_t q = 0; q < queries.size(); ++q) {
        REQUIRE(std::holds_alternative<Reference>(answers[0][q]));
        const auto& found = std::get<Reference>(answers[0][q]);
        const auto sites = static_cast<int>(queries[q].options.block.size());
        CHECK_NEAR(found.value.real_at(0), sites % 2, bound(found.bound[0]));
        CHECK(found.bound[0] < useful);
    }
    // exact: three alternating sites of the covering cut three dimers.
    const Reference three =
        ask(sector_route(), dimers, QuantityId::entanglement_entropy, cut({0, 2, 4}, 1, true));
    CHECK_NEAR(three.value.real_at(0), 3.0, bound(three.bound[0]));
}
