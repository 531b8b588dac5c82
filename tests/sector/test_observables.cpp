#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "chainmark/sector/route.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

void check_same(const Problem& problem, QuantityId id, const Options& options = {}) {
    const Reference a = ask(sector_route(), problem, id, options);
    const Reference b = ask(dense_route(), problem, id, options);
    REQUIRE(a.value.data.size() == b.value.data.size());
    CHECK(a.degeneracy == b.degeneracy);
    CHECK(a.value.total_sz == b.value.total_sz);
    for (std::size_t i = 0; i < a.value.data.size(); ++i) {
        REQUIRE(a.value.special_at(i) == b.value.special_at(i));
        CHECK_NEAR(a.value.real_at(i), b.value.real_at(i), bound(a.bound[i] + b.bound[i]));
        CHECK(a.bound[i] < 1e-10);
        if (a.range && b.range) {
            CHECK_NEAR(a.range->at(i).first, b.range->at(i).first, bound(1e-10));
            CHECK_NEAR(a.range->at(i).second, b.range->at(i).second, bound(1e-10));
        }
    }
    CHECK(a.range.has_value() == b.range.has_value());
}

void check_all(const Problem& problem, bool sz_conserved) {
    for (const QuantityId id : {QuantityId::ground_energy,
                                QuantityId::ground_energy_per_site,
                                QuantityId::gap,
                                QuantityId::magnetization}) {
        check_same(problem, id);
    }
    for (const Axis axis : {Axis::x, Axis::y, Axis::z}) {
        Options options;
        options.axis = axis;
        check_same(problem, QuantityId::local_magnetization, options);
    }
    for (const bool connected : {false, true}) {
        Options options;
        options.distance = {0, 1, 3};
        options.connected = connected;
        check_same(problem, QuantityId::spin_correlation, options);
        options.distance.clear();
        options.pairs = {{0, 2}, {4, 1}, {3, 3}};
        check_same(problem, QuantityId::spin_correlation, options);
    }
    Options ten;
    ten.count = 10;
    check_same(problem, QuantityId::levels, ten);
    if (sz_conserved) {
        check_same(problem, QuantityId::susceptibility);
        check_same(problem, QuantityId::jump_fields);
    }
}

}  // namespace

TEST_CASE("every quantity of random chains: sectors and full matrix agree within their bounds") {
    constexpr std::uint64_t seed = 99;
    INFO("seed " << seed);
    std::mt19937_64 generator(seed);
    for (const Keeps keeps : {Keeps::sz, Keeps::parity, Keeps::nothing}) {
        for (const bool complex : {false, true}) {
            check_all(random_problem({ring(7), keeps, false, complex}, generator, 0.2),
                      keeps == Keeps::sz);
            check_all(random_problem({open_chain(6), keeps, false, complex}, generator, -0.4),
                      keeps == Keeps::sz);
        }
    }
}

TEST_CASE("degenerate ground spaces: averages and ranges") {
    check_all(family_problem("xx", {1.0}, ring(7)), true);           // fourfold
    check_all(family_problem("heisenberg", {1.0}, ring(5)), true);   // fourfold
    check_all(family_problem("heisenberg", {-1.0}, ring(6)), true);  // sevenfold multiplet
    check_all(family_problem("xx", {1.0}, ring(8), 1.0), true);      // at the last jump
    check_all(family_problem("xx", {0.0}, ring(6)), true);           // everything
    check_all(family_problem("j1j2", {1.0, 0.5}, ring(8)), true);    // Majumdar-Ghosh, twofold
}

TEST_CASE("at a jump the magnetization's range covers both plateaus") {
    // XX ring, L = 8, h = |J|: the last jump, from Sz = 3 to 4 (Katsura 1962, see tests/published).
    const Reference found =
        ask(sector_route(), family_problem("xx", {1.0}, ring(8), 1.0), QuantityId::magnetization);
    CHECK(found.degeneracy == 2);
    CHECK_NEAR(found.value.real_at(0), 3.5 / 8, bound(found.bound[0]));
    CHECK_NEAR(found.range->at(0).first, 3.0 / 8, bound(1e-13));
    CHECK_NEAR(found.range->at(0).second, 4.0 / 8, bound(1e-13));
    const Reference chi =
        ask(sector_route(), family_problem("xx", {1.0}, ring(8), 1.0), QuantityId::susceptibility);
    CHECK(chi.value.special_at(0) == Special::jump);
}

TEST_CASE("a ferromagnet flips all at once") {
    // Heisenberg ring, J < 0: the multiplet S = L/2 is the ground space, so one jump at h = 0 takes
    // Sz from -L/2 to L/2 (elementary).
    const Reference found =
        ask(sector_route(), family_problem("heisenberg", {-1.0}, ring(6)), QuantityId::jump_fields);
    REQUIRE(found.value.data.size() == 1);
    CHECK_NEAR(found.value.real_at(0), 0.0, bound(found.bound[0]));
    CHECK(found.value.total_sz == std::vector<double>{-3.0, 3.0});
}

TEST_CASE("Krylov sectors: observables against exact values") {
    // XX ring, L = 14 > dense limit: <Sz_0 Sz_r> = -1/(L sin(pi r/L))^2 for odd r, 0 for even r
    // (Lieb, Schultz, Mattis, Ann. Phys. 16, 407 (1961), finite ring).
    Options options;
    options.distance = {1, 2, 3};
    const Reference found = ask(sector_route(),
                                family_problem("xx", {1.0}, ring(14)),
                                QuantityId::spin_correlation,
                                options);
    const auto exact = [](int r) { return -1 / std::pow(14 * std::sin(pi * r / 14), 2); };
    CHECK_NEAR(found.value.real_at(0), exact(1), bound(found.bound[0]));
    CHECK_NEAR(found.value.real_at(1), 0.0, bound(found.bound[1]));
    CHECK_NEAR(found.value.real_at(2), exact(3), bound(found.bound[2]));
    CHECK(found.bound[0] < 1e-10);
    CHECK(found.complete == Completeness::tested);
}
