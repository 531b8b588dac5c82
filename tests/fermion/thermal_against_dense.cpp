#include "chainmark/dense/route.hpp"
#include "chainmark/fermion/routes.hpp"
#include "chainmark/sector/route.hpp"
#include "fermion/quadratic_lists.hpp"
#include "sector/compare_routes.hpp"

// Temperatures against the complete spectrum of full matrices, from far below the lowest gap to far
// above the band.

namespace chainmark::test {
namespace {

constexpr std::uint64_t seed = 20261203;

std::vector<Query> questions(const Chain& chain) {
    std::vector<Query> queries;
    for (const QuantityId id : {QuantityId::free_energy,
                                QuantityId::energy,
                                QuantityId::energy_per_site,
                                QuantityId::entropy,
                                QuantityId::specific_heat,
                                QuantityId::magnetization,
                                QuantityId::susceptibility}) {
        queries.push_back(query(id));
    }
    for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz, Axes::plus_minus, Axes::dot}) {
        Options options;
        options.axes = axes;
        for (int r = 0; r < chain.length(); ++r) {
            options.distance.push_back(r);
        }
        queries.push_back(query(QuantityId::spin_correlation, options));
        options.connected = true;
        queries.push_back(query(QuantityId::spin_correlation, options));
    }
    return queries;
}

void compare(Problem problem) {
    INFO(to_string(problem.chain));
    std::vector<Problem> problems;
    for (const double temperature : {0.01, 0.05, 0.2, 1.0, 5.0, 100.0}) {
        problem.temperature = temperature;
        problems.push_back(problem);
    }
    compare_routes(fermion_route(), dense_route(), problems, questions(problem.chain));
}

TEST_CASE("thermal: random rings") {
    std::mt19937_64 generator(seed);
    MESSAGE("seed " << seed);
    for (const int sites : {3, 4, 5, 6}) {
        for (const bool pairs : {true, false}) {
            for (const bool complex : {false, true}) {
                for (const bool uniform : {false, true}) {
                    CAPTURE(pairs);
                    CAPTURE(complex);
                    CAPTURE(uniform);
                    compare(quadratic_problem({.chain = ring(sites),
                                               .pairs = pairs,
                                               .complex = complex,
                                               .uniform = uniform},
                                              generator,
                                              draw(generator)));
                }
            }
        }
    }
}

TEST_CASE("thermal: open chains, also with strings around the outside") {
    std::mt19937_64 generator(seed + 1);
    for (const int sites : {1, 2, 3, 5, 7}) {
        for (const bool pairs : {true, false}) {
            for (const bool wraps : {false, true}) {
                compare(quadratic_problem({.chain = open_chain(sites),
                                           .pairs = pairs,
                                           .complex = sites == 5,
                                           .wraps = wraps},
                                          generator,
                                          draw(generator)));
            }
        }
    }
}

TEST_CASE("thermal: families, modes without energy, wrong vacua, frustrated odd rings") {
    for (const int sites : {3, 4, 5, 6}) {
        for (const bool is_ring : {true, false}) {
            const Chain chain = is_ring ? ring(sites) : open_chain(sites);
            for (const double coupling : {1.0, -1.0}) {
                for (const double field : {0.0, 0.3, 0.5, -0.9}) {
                    CAPTURE(coupling);
                    CAPTURE(field);
                    compare(family_problem("tfim", {coupling}, chain, field));
                    compare(family_problem("xx", {coupling}, chain, field));
                }
                compare(family_problem("xy", {coupling, 0.6}, chain, 0.8));
                compare(family_problem("xx", {coupling}, chain, std::cos(pi / sites)));
            }
        }
    }
}

TEST_CASE("thermal: twisted and longer rings") {
    std::mt19937_64 generator(seed + 2);
    for (const double twist : {pi, 0.4}) {
        for (const bool uniform : {false, true}) {
            compare(quadratic_problem({.chain = ring(6, twist),
                                       .pairs = twist == pi,
                                       .complex = true,
                                       .uniform = uniform,
                                       .longest = 2},
                                      generator,
                                      0.2));
        }
    }
    compare(family_problem("tfim", {1.0}, ring(7), 0.3));
    compare(quadratic_problem({.chain = ring(8)}, generator, 0.1));
}

TEST_CASE("thermal: longer uniform rings against complete spectra by sectors, to 1e-11") {
    constexpr double widest = 1e-11;
    for (const Problem& chain : {family_problem("xx", {1.0}, ring(14), 0.3),
                                 family_problem("xx", {1.0}, ring(13), 0.0),
                                 family_problem("tfim", {1.0}, ring(11), 0.3),
                                 family_problem("tfim", {-1.0}, ring(12), 0.5)}) {
        INFO(to_string(chain.chain));
        std::vector<Problem> problems;
        for (const double temperature : {0.01, 0.1, 1.0, 100.0}) {
            problems.push_back(chain);
            problems.back().temperature = temperature;
        }
        std::vector<Query> queries;
        for (const QuantityId id : {QuantityId::free_energy,
                                    QuantityId::energy,
                                    QuantityId::entropy,
                                    QuantityId::specific_heat,
                                    QuantityId::magnetization}) {
            queries.push_back(query(id));
        }
        compare_routes(fermion_route(), sector_route(), problems, queries, widest);
    }
}

}  // namespace
}  // namespace chainmark::test
