#include "chainmark/dense/route.hpp"
#include "chainmark/fermion/routes.hpp"
#include "fermion/quadratic_lists.hpp"
#include "sector/compare_routes.hpp"

// Averages by Wick's theorem against full matrices: correlations of every kind, strings, structure
// factors, entropies, in single and in degenerate ground states.

namespace chainmark::test {
namespace {

constexpr std::uint64_t seed = 20261202;

std::vector<Query> correlations_of(const Chain& chain) {
    std::vector<Query> queries;
    const int sites = chain.length();
    for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz, Axes::plus_minus, Axes::dot}) {
        Options means;
        means.axes = axes;
        Options pairs = means;
        for (int r = 0; r < sites; ++r) {
            means.distance.push_back(r);
            pairs.pairs.emplace_back(r, (2 * r + 1) % sites);
        }
        pairs.connected = axes == Axes::dot || axes == Axes::plus_minus;
        Options factor;
        factor.axes = axes;
        factor.connected = axes == Axes::zz;
        queries.push_back(query(QuantityId::spin_correlation, means));
        queries.push_back(query(QuantityId::spin_correlation, pairs));
        queries.push_back(query(QuantityId::structure_factor, factor));
    }
    return queries;
}

/// Through the wrap bond of a ring with another twist than 0 and pi strings are not asked for.
std::vector<Query> strings_of(const Chain& chain) {
    std::vector<Query> queries;
    const int sites = chain.length();
    for (const Axis axis : {Axis::x, Axis::y, Axis::z}) {
        Options means;
        means.axis = axis;
        Options pairs = means;
        for (int r = 1; r < sites; ++r) {
            means.distance.push_back(r);
            pairs.pairs.emplace_back(0, r);
        }
        if (sites > 2) {
            pairs.pairs.emplace_back(1, sites - 1);
        }
        if (axis == Axis::z || chain.wrap_phase().imag() == 0.0) {
            queries.push_back(query(QuantityId::string_order, means));
        }
        queries.push_back(query(QuantityId::string_order, pairs));
    }
    return queries;
}

std::vector<Query> entropies_of(const Chain& chain) {
    std::vector<Query> queries;
    const int sites = chain.length();
    std::vector<std::vector<int>> blocks = {{0}, {sites - 1}};
    std::vector<int> first = {0};
    for (int l = 1; l + 1 < sites; ++l) {
        first.push_back(l);
        blocks.push_back(first);
    }
    if (sites > 3) {
        blocks.push_back({1, 2});
        blocks.push_back({0, sites - 1});
    }
    for (const std::vector<int>& block : blocks) {
        for (const int order : {1, 2, 3}) {
            Options options;
            options.block = block;
            options.order = order;
            options.log2 = order == 2;
            queries.push_back(query(QuantityId::entanglement_entropy, options));
        }
    }
    return queries;
}

std::vector<Query> questions(const Chain& chain) {
    std::vector<Query> queries = correlations_of(chain);
    if (chain.length() > 1) {
        for (const Query& own : strings_of(chain)) {
            queries.push_back(own);
        }
        for (const Query& own : entropies_of(chain)) {
            queries.push_back(own);
        }
    }
    return queries;
}

void compare(const Problem& problem) {
    INFO(to_string(problem.chain));
    compare_routes(fermion_route(), dense_route(), {problem}, questions(problem.chain));
}

TEST_CASE("averages on random rings: pairs, complex couplings, every range") {
    std::mt19937_64 generator(seed);
    MESSAGE("seed " << seed);
    for (const int sites : {3, 4, 5, 6}) {
        for (const double twist : {0.0, pi}) {
            for (const bool pairs : {true, false}) {
                for (const bool complex : {false, true}) {
                    for (const bool uniform : {false, true}) {
                        CAPTURE(pairs);
                        CAPTURE(complex);
                        CAPTURE(uniform);
                        compare(quadratic_problem({.chain = ring(sites, twist),
                                                   .pairs = pairs,
                                                   .complex = complex,
                                                   .uniform = uniform,
                                                   .longest = sites > 4 ? 2 : 1},
                                                  generator,
                                                  draw(generator)));
                    }
                }
            }
        }
    }
}

TEST_CASE("averages on twisted rings") {
    std::mt19937_64 generator(seed + 1);
    for (const int sites : {3, 6}) {
        for (const bool uniform : {false, true}) {
            compare(quadratic_problem({.chain = ring(sites, 0.4),
                                       .pairs = false,
                                       .complex = true,
                                       .uniform = uniform,
                                       .longest = 2},
                                      generator,
                                      draw(generator)));
        }
    }
}

TEST_CASE("averages on open chains") {
    std::mt19937_64 generator(seed + 2);
    for (const int sites : {1, 2, 3, 5, 7}) {
        for (const bool pairs : {true, false}) {
            for (const bool complex : {false, true}) {
                compare(quadratic_problem(
                    {.chain = open_chain(sites), .pairs = pairs, .complex = complex, .wraps = true},
                    generator,
                    draw(generator)));
            }
        }
    }
}

TEST_CASE("averages in degenerate ground spaces and on frustrated odd rings") {
    for (const int sites : {3, 4, 5, 6, 7}) {
        for (const bool is_ring : {true, false}) {
            const Chain chain = is_ring ? ring(sites) : open_chain(sites);
            for (const double coupling : {1.0, -1.0}) {
                for (const double field : {0.0, 0.2}) {
                    CAPTURE(coupling);
                    CAPTURE(field);
                    compare(family_problem("tfim", {coupling}, chain, field));
                    compare(family_problem("xx", {coupling}, chain, field));
                }
                compare(family_problem("xy", {coupling, 0.6}, chain, 0.0));
                compare(family_problem("xy", {coupling, 0.6}, chain, 0.8));  // factorizing field
                compare(family_problem("xx", {coupling}, chain, std::cos(pi / sites)));  // jumps
            }
        }
    }
}

TEST_CASE("averages of longer strings") {
    std::mt19937_64 generator(seed + 3);
    for (const bool complex : {false, true}) {
        compare(quadratic_problem({.chain = ring(9), .complex = complex, .longest = 3}, generator));
        compare(quadratic_problem(
            {.chain = ring(9), .pairs = false, .complex = complex, .uniform = true}, generator));
        compare(quadratic_problem({.chain = open_chain(9), .complex = complex}, generator));
    }
}

TEST_CASE("a block of separate intervals is refused, and why") {
    Options options;
    options.block = {0, 2, 4};
    const Answer found = answer(fermion_route(),
                                family_problem("tfim", {1.0}, ring(8), 0.3),
                                query(QuantityId::entanglement_entropy, options));
    REQUIRE(std::holds_alternative<NotCovered>(found));
    CHECK(std::get<NotCovered>(found).reason.find("consecutive") != std::string::npos);
}

}  // namespace
}  // namespace chainmark::test
