#pragma once

#include <algorithm>
#include <cmath>
#include <vector>

#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "chainmark/fermion/routes.hpp"
#include "chainmark/sector/route.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

/// One expected value, several routes.
///
/// The kinds used in these files: `exact` follows in a line or two from the definition; `published
/// formula` stands in the cited work, its decimals are evaluated here; `recomputed` numbers come
/// from solving the cited work's equations. The citations are from memory, without equation
/// numbers: what vouches for the numbers is that each finite-size formula also agreed with matrices
/// built and diagonalized outside the project. Those of the infinite chain were only evaluated.
namespace chainmark::test {

/// Full diagonalization takes seconds beyond this.
constexpr int dense_sites = 8;

/// `sector`, and `dense` where it is quick.
inline std::vector<Route> matrix_routes(int sites) {
    std::vector<Route> routes = {sector_route()};
    if (sites <= dense_sites) {
        routes.push_back(dense_route());
    }
    return routes;
}

/// matrix_routes and `fermion`.
inline std::vector<Route> all_routes(int sites) {
    std::vector<Route> routes = matrix_routes(sites);
    routes.push_back(fermion_route());
    return routes;
}

/// A route's own bound and the rounding of the formula it is compared with. The bound itself must
/// be small: a route that knows nothing would pass any comparison.
inline Allowed formula(double reported, double expected) {
    CHECK(reported < 1e-10);
    return {reported + 2.3e-16 * 32 * std::max(1.0, std::abs(expected)),
            "reported bound and rounding of the formula"};
}

/// Checks every element by every route; returns the last reference, for its degeneracy and labels.
inline Reference check_by(const std::vector<Route>& routes,
                          const Problem& problem,
                          QuantityId id,
                          const std::vector<double>& expected,
                          const Options& options = {}) {
    Reference found;
    for (const Route& route : routes) {
        INFO("route " << to_string(route.id) << ", " << to_string(problem.chain) << ", "
                      << spec_of(id).name);
        found = ask(route, problem, id, options);
        REQUIRE(found.value.data.size() == expected.size());
        for (std::size_t i = 0; i < expected.size(); ++i) {
            CHECK_NEAR(found.value.real_at(i), expected[i], formula(found.bound[i], expected[i]));
        }
    }
    return found;
}

/// The ground-state energy and the dimension of the ground space, by every route.
inline void check_ground(const std::vector<Route>& routes,
                         const Problem& problem,
                         double energy,
                         int degeneracy) {
    for (const Route& route : routes) {
        const Reference found = check_by({route}, problem, QuantityId::ground_energy, {energy});
        INFO("route " << to_string(route.id) << ", " << to_string(problem.chain));
        // A route that skips sectors for the energy counts the ground space for the gap.
        CHECK((found.degeneracy ? found : ask(route, problem, QuantityId::gap)).degeneracy ==
              degeneracy);
    }
}

inline Options count(int levels) {
    Options options;
    options.count = levels;
    return options;
}

inline Options distances(std::vector<int> distance) {
    Options options;
    options.distance = std::move(distance);
    return options;
}

inline std::vector<double> levels_of(const Reference& reference) {
    std::vector<double> levels;
    for (std::size_t i = 0; i < reference.value.data.size(); ++i) {
        levels.push_back(reference.value.real_at(i));
    }
    return levels;
}

}  // namespace chainmark::test
