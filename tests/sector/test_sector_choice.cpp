#include <random>

#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "chainmark/sector/route.hpp"
#include "compare_routes.hpp"
#include "support/ask.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Query levels(int count, const Labels& labels) {
    Options options;
    options.count = count;
    options.sector = labels;
    return query(QuantityId::levels, options);
}

Query gap(const Labels& labels) {
    Options options;
    options.sector = labels;
    return query(QuantityId::gap, options);
}

}  // namespace

TEST_CASE("levels of the sectors that are asked for: sector against dense") {
    // Reflection takes k to -k and inversion Sz to -Sz: such sectors share out their combinations.
    const std::vector<Query> questions = {
        levels(5, {.reflection = 1}),
        levels(5, {.reflection = -1}),
        levels(4, {.inversion = 1}),
        levels(4, {.inversion = -1}),
        levels(3, {.reflection = -1, .inversion = 1}),
        levels(3, {.parity = 1}),
        levels(3, {.parity = -1}),
        levels(3, {.momentum = 1}),
        levels(3, {.momentum = 5}),
        levels(2, {.momentum = 3, .reflection = -1}),
        levels(2, {.sz = 1.0, .momentum = -2}),
        levels(1, {.momentum = 1, .reflection = 1}),  // do not commute
        levels(1, {.sz = 1.0, .inversion = 1}),       // do not commute
        levels(1, {.sz = 0.5}),                       // there is none
        levels(2, {.sz = 3.0}),                       // there is one
        levels(1, {.sz = 3.0}),
        gap({.reflection = -1}),
        gap({.sz = 2.0}),
        gap({.inversion = -1}),
    };
    compare_routes(
        sector_route(), dense_route(), {family_problem("xxz", {1.0, 0.7}, ring(6))}, questions);
    compare_routes(sector_route(),
                   dense_route(),
                   {family_problem("xxz", {1.0, 0.7}, ring(6), 0.3)},
                   {levels(4, {.sz = 0.0, .inversion = 1}),
                    levels(4, {.reflection = 1}),
                    levels(4, {.inversion = 1})});  // broken by the field
    compare_routes(sector_route(),
                   dense_route(),
                   {family_problem("tfim", {1.0}, ring(6), 0.3)},
                   {levels(4, {.parity = -1}),
                    levels(4, {.parity = 1, .reflection = 1}),
                    levels(4, {.sz = 1.0}),  // not conserved
                    gap({.parity = -1})});
}

TEST_CASE("more levels than there are") {
    const Problem problem = family_problem("heisenberg", {1.0}, open_chain(3));
    Options options;
    options.count = 8;
    CHECK(ask(sector_route(), problem, QuantityId::levels, options).value.data.size() == 8);
    options.count = 9;
    CHECK(std::holds_alternative<NotCovered>(
        answer(sector_route(), problem, query(QuantityId::levels, options))));
}
