#include "chainmark/dense/route.hpp"
#include "chainmark/fermion/routes.hpp"
#include "fermion/quadratic_lists.hpp"
#include "sector/compare_routes.hpp"

// Route fermion against full matrices, which know nothing of fermions: random quadratic lists of
// every kind, all levels and the averages of ground spaces.

namespace chainmark::test {
namespace {

constexpr std::uint64_t seed = 20261201;

std::vector<Query> questions(const Chain& chain) {
    Options distances;
    for (int r = 0; r < chain.length(); ++r) {
        distances.distance.push_back(r);
    }
    Options connected = distances;
    connected.connected = true;
    Options along_x;
    along_x.axis = Axis::x;
    return {query(QuantityId::spectrum),
            query(QuantityId::ground_energy),
            query(QuantityId::gap),
            query(QuantityId::magnetization),
            query(QuantityId::local_magnetization),
            query(QuantityId::local_magnetization, along_x),
            query(QuantityId::susceptibility),
            query(QuantityId::spin_correlation, distances),
            query(QuantityId::spin_correlation, connected)};
}

void compare(const Problem& problem) {
    INFO(to_string(problem.chain));
    compare_routes(fermion_route(), dense_route(), {problem}, questions(problem.chain));
}

template <class Use>
void for_kinds(const Chain& chain, Use&& use) {
    for (const bool pairs : {true, false}) {
        for (const bool complex : {false, true}) {
            for (const bool uniform : {false, true}) {
                for (const int longest : {1, 2, chain.length() - 1}) {
                    CAPTURE(pairs);
                    CAPTURE(complex);
                    CAPTURE(uniform);
                    CAPTURE(longest);
                    use(QuadraticKind{.chain = chain,
                                      .pairs = pairs,
                                      .complex = complex,
                                      .uniform = uniform,
                                      .longest = longest});
                }
            }
        }
    }
}

TEST_CASE("rings, periodic and antiperiodic: pairs, complex couplings, clusters of any range") {
    std::mt19937_64 generator(seed);
    MESSAGE("seed " << seed);
    for (const int sites : {3, 4, 5, 6, 7}) {
        for (const double twist : {0.0, pi}) {
            for_kinds(ring(sites, twist), [&](const QuadraticKind& kind) {
                compare(quadratic_problem(kind, generator, draw(generator)));
            });
        }
    }
}

TEST_CASE("rings with a twist: hops of any range") {
    std::mt19937_64 generator(seed + 1);
    for (const int sites : {3, 5, 6}) {
        for (const bool uniform : {false, true}) {
            for (const int longest : {1, 2, sites - 1}) {
                const QuadraticKind kind{.chain = ring(sites, 0.4),
                                         .pairs = false,
                                         .complex = true,
                                         .uniform = uniform,
                                         .longest = longest};
                compare(quadratic_problem(kind, generator, draw(generator)));
            }
        }
    }
}

TEST_CASE("open chains, with strings that go round the outside, too") {
    std::mt19937_64 generator(seed + 2);
    for (const int sites : {1, 2, 3, 4, 5, 6, 7}) {
        for_kinds(open_chain(sites), [&](QuadraticKind kind) {
            compare(quadratic_problem(kind, generator, draw(generator)));
            kind.wraps = true;
            compare(quadratic_problem(kind, generator, draw(generator)));
        });
    }
}

TEST_CASE("longer chains") {
    std::mt19937_64 generator(seed + 3);
    for (const bool complex : {false, true}) {
        compare(quadratic_problem({.chain = ring(9), .complex = complex, .longest = 3}, generator));
        compare(
            quadratic_problem({.chain = ring(8), .complex = complex, .uniform = true}, generator));
    }
    compare(quadratic_problem({.chain = open_chain(10), .longest = 2}, generator));
}

TEST_CASE("families: Ising and XY rings and open chains, both signs, on and off criticality") {
    for (const int sites : {3, 4, 5, 6, 7, 8}) {
        for (const bool is_ring : {true, false}) {
            const Chain chain = is_ring ? ring(sites) : open_chain(sites);
            for (const double coupling : {1.0, -1.0}) {
                for (const double field : {0.0, 0.2, 0.5, -0.9}) {
                    CAPTURE(coupling);
                    CAPTURE(field);
                    compare(family_problem("tfim", {coupling}, chain, field));
                    compare(family_problem("xy", {coupling, 0.6}, chain, field));
                }
                compare(family_problem("xy", {coupling, 0.6}, chain, 0.8));  // factorizing field
                compare(family_problem("dimer_xx", {coupling, 0.4}, chain, 0.1));
            }
        }
    }
}

TEST_CASE("sectors: the levels of a parity, an Sz, a momentum") {
    std::mt19937_64 generator(seed + 4);
    const auto ask_sector = [](const Problem& problem, const Labels& labels, int count) {
        Options levels;
        levels.sector = labels;
        levels.count = count;
        Options gap;
        gap.sector = labels;
        compare_routes(fermion_route(),
                       dense_route(),
                       {problem},
                       {query(QuantityId::levels, levels), query(QuantityId::gap, gap)});
    };
    for (const int sites : {5, 6, 7}) {
        for (const bool complex : {false, true}) {
            const Problem paired =
                quadratic_problem({.chain = ring(sites), .complex = complex}, generator, 0.1);
            const Problem hops = quadratic_problem(
                {.chain = ring(sites), .pairs = false, .complex = complex}, generator, 0.1);
            const Problem uniform = quadratic_problem(
                {.chain = ring(sites), .complex = complex, .uniform = true}, generator, 0.1);
            for (const int parity : {1, -1}) {
                ask_sector(paired, {.parity = parity}, 1 << (sites - 1));
                ask_sector(hops, {.parity = parity}, 1 << (sites - 1));
                ask_sector(uniform, {.momentum = 1, .parity = parity}, 2);
                ask_sector(uniform, {.momentum = 0, .parity = parity}, 2);
            }
            for (int ups = 0; ups <= sites; ++ups) {
                const auto states = static_cast<int>(binomial(sites, ups));
                ask_sector(hops, {.sz = ups - sites / 2.0}, states);
            }
            ask_sector(uniform, {.momentum = -1}, 3);
        }
    }
}

}  // namespace
}  // namespace chainmark::test
