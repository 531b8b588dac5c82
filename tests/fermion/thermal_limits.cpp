#include <cmath>
#include <numbers>

#include "chainmark/fermion/routes.hpp"
#include "fermion/quadratic_lists.hpp"
#include "sector/compare_routes.hpp"

// Temperatures far below the lowest gap and far above the band, on chains beyond full matrices.

namespace chainmark::test {
namespace {

Chain ring(int sites) {
    return {.sites = sites, .boundary = BoundaryKind::ring};
}

std::vector<Query> correlations(int length) {
    std::vector<Query> queries = {query(QuantityId::magnetization)};
    for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz, Axes::plus_minus}) {
        Options options;
        options.axes = axes;
        options.distance = {1, 2, 5, length / 2};
        queries.push_back(query(QuantityId::spin_correlation, options));
    }
    return queries;
}

TEST_CASE("T -> 0: the averages over the ground space, also of frustrated rings") {
    std::mt19937_64 generator(8);
    for (const Problem& cold : {family_problem("tfim", {1.0}, ring(41), 0.3),
                                family_problem("tfim", {1.0}, ring(40), 0.7),
                                family_problem("xy", {1.0, 0.4}, ring(31), 0.2),
                                family_problem("xx", {1.0}, ring(27), 0.0),
                                family_problem("xx", {-1.0}, ring(30), 0.3),
                                quadratic_problem({.chain = ring(16)}, generator, 0.1)}) {
        INFO(to_string(cold.chain));
        Problem warm = cold;
        warm.temperature = 1e-6;
        for (const Query& question : correlations(cold.chain.length())) {
            INFO(to_string(question.options.axes));
            const Reference ground =
                ask(fermion_route(), cold, question.spec->id, question.options);
            const Reference thermal =
                ask(fermion_route(), warm, question.spec->id, question.options);
            compare_references(thermal, ground, 1e-6);  // errors of levels count over T here
        }
        const Reference energy = ask(fermion_route(), warm, QuantityId::energy);
        const Reference entropy = ask(fermion_route(), warm, QuantityId::entropy);
        const Reference lowest = ask(fermion_route(), cold, QuantityId::ground_energy);
        REQUIRE(lowest.degeneracy.has_value());
        CHECK_NEAR(energy.value.real_at(0),
                   lowest.value.real_at(0),
                   bound(energy.bound[0] + lowest.bound[0]));
        CHECK_NEAR(entropy.value.real_at(0),
                   std::log(static_cast<double>(*lowest.degeneracy)),
                   bound(entropy.bound[0] + 1e-15));
    }
}

TEST_CASE("T -> infinity: all states alike, and the first correction") {
    // <Sx_i Sx_{i+1}> = -J/(16 T), <Sz> = h/(4 T) + O(1/T^2)
    const double temperature = 1e6;
    const int sites = 60;
    for (const bool is_ring : {true, false}) {
        Problem hot = family_problem(
            "tfim",
            {1.0},
            {.sites = sites, .boundary = is_ring ? BoundaryKind::ring : BoundaryKind::open},
            0.3);
        hot.temperature = temperature;
        Options near;
        near.axes = Axes::xx;
        near.distance = {1};
        const Allowed second{1 / (temperature * temperature), "next order, 1/T^2"};
        CHECK_NEAR(ask(fermion_route(), hot, QuantityId::entropy_per_site).value.real_at(0),
                   std::numbers::ln2,
                   second);
        CHECK_NEAR(ask(fermion_route(), hot, QuantityId::magnetization).value.real_at(0),
                   0.3 / (4 * temperature),
                   second);
        CHECK_NEAR(ask(fermion_route(), hot, QuantityId::susceptibility).value.real_at(0),
                   1 / (4 * temperature),
                   second);
        CHECK_NEAR(ask(fermion_route(), hot, QuantityId::spin_correlation, near).value.real_at(0),
                   -1 / (16 * temperature),
                   second);
    }
}

}  // namespace
}  // namespace chainmark::test
