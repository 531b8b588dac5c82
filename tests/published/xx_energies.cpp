#include <cmath>
#include <map>

#include "published/by_routes.hpp"
#include "published/free_fermions.hpp"

// XX rings and chains at h = 0: H = J sum (Sx Sx + Sy Sy), spin operators, J = 1 unless said.
//   [LSM]  E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
//   [P]    P. Pincus, Solid State Commun. 9, 1971 (1971).
//   [BCN]  H. W. J. Bloete, J. L. Cardy, M. P. Nightingale, Phys. Rev. Lett. 56, 742 (1986).
// "published formula": the source has the formula, or the sum of which it is the closed form; the
// decimals were recomputed from it and by diagonalizing a matrix built elsewhere.

using namespace chainmark;
using namespace chainmark::test;

namespace {

struct Printed {
    int sites;
    double energy;
};

/// The complete elliptic integral of the second kind of the parameter m; the library's version in
/// double loses two digits.
double elliptic(double m) {
    return static_cast<double>(std::comp_ellint_2(std::sqrt(static_cast<long double>(m))));
}

}  // namespace

TEST_CASE("even XX rings: E0 = -|J|/sin(pi/L), unique, for both signs [LSM, published formula]") {
    const std::vector<Printed> rows = {{4, -1.414213562373},
                                       {6, -2.0},
                                       {8, -2.613125929753},
                                       {10, -3.236067977500},
                                       {12, -3.863703305156},
                                       {14, -4.493959207435},
                                       {16, -5.125830895483}};
    for (const Printed& row : rows) {
        for (const double j : {1.0, -1.0, 2.5}) {
            if (row.sites >= 12 && j != 1.0) {
                continue;  // the large sectors once
            }
            const double energy = -std::abs(j) / std::sin(pi / row.sites);
            CHECK_NEAR(energy / std::abs(j), row.energy, published(12));
            check_ground(
                all_routes(row.sites), family_problem("xx", {j}, ring(row.sites)), energy, 1);
        }
    }
}

TEST_CASE("odd XX rings know the sign of J [LSM, published formula]") {
    // J > 0: -cos(pi/L)/(2 sin(pi/2L)), fourfold (Sz = +-1/2, two momenta each);
    // J < 0: -1/(2 sin(pi/2L)), twofold (Sz = +-1/2).
    const std::vector<Printed> rows = {
        {7, -2.024458669761}, {11, -3.371022253393}, {13, -4.027578225024}, {15, -4.678857653485}};
    for (const Printed& row : rows) {
        const double energy = -std::cos(pi / row.sites) / (2 * std::sin(pi / (2 * row.sites)));
        CHECK_NEAR(energy, row.energy, published(12));
        const auto routes =  // the largest sectors are left to other cases
            row.sites <= 13 ? all_routes(row.sites) : std::vector<Route>{fermion_route()};
        check_ground(routes, family_problem("xx", {1.0}, ring(row.sites)), energy, 4);
    }
    const std::vector<Printed> negative = {
        {5, -1.618033988750}, {7, -2.246979603717}, {9, -2.879385241572}, {11, -3.513337091666}};
    for (const Printed& row : negative) {
        const double energy = -1 / (2 * std::sin(pi / (2 * row.sites)));
        CHECK_NEAR(energy, row.energy, published(12));
        check_ground(
            all_routes(row.sites), family_problem("xx", {-1.0}, ring(row.sites)), energy, 2);
    }
}

TEST_CASE("open XX chains, both signs [LSM free ends, published formula]") {
    // 1/2 - 1/(2 sin a) for even L, 1/2 - cot(a)/2 for odd L, a = pi/(2L+2). Odd chains have a mode
    // at zero and a twofold ground space.
    const std::vector<Printed> rows = {{2, -0.5},
                                       {3, -0.707106781187},
                                       {4, -1.118033988750},
                                       {5, -1.366025403784},
                                       {6, -1.746979603717},
                                       {7, -2.013669746063},
                                       {8, -2.379385241572},
                                       {12, -3.648114905279},
                                       {16, -4.918975723730}};
    for (const Printed& row : rows) {
        const double a = pi / (2 * (row.sites + 1));
        const bool even = row.sites % 2 == 0;
        const double energy = 0.5 - (even ? 1.0 : std::cos(a)) / (2 * std::sin(a));
        CHECK_NEAR(energy, row.energy, published(12));
        for (const double j : row.sites < 12 ? std::vector{1.0, -1.0} : std::vector{1.0}) {
            check_ground(all_routes(row.sites),
                         family_problem("xx", {j}, open_chain(row.sites)),
                         energy,
                         even ? 1 : 2);
        }
    }
}

TEST_CASE("each parity of the up count has its own momenta [LSM, published formula]") {
    struct Row {
        int sites;
        double even, odd;
    };
    const std::vector<Row> rows = {{6, -1.73205080756888, -2.0},
                                   {7, -2.02445866976115, -2.02445866976115},
                                   {8, -2.61312592975275, -2.41421356237309},
                                   {10, -3.07768353717525, -3.23606797749979},
                                   {11, -3.37102225339285, -3.37102225339285},
                                   {12, -3.86370330515627, -3.73205080756888},
                                   {16, -5.12583089548301, -5.02733949212585}};
    for (const Row& row : rows) {
        const XyRing xx = {row.sites, 1.0, 0.0, 0.0};
        CHECK_NEAR(lowest_level(xx, UpCount::even), row.even, published(13));
        CHECK_NEAR(lowest_level(xx, UpCount::odd), row.odd, published(13));
        std::vector<Route> routes = {fermion_route()};  // dense knows no labels
        if (row.sites <= 12) {
            routes.push_back(sector_route());
        }
        for (const Route& route : routes) {
            INFO("route " << to_string(route.id) << ", L = " << row.sites);
            const Reference found = ask(
                route, family_problem("xx", {1.0}, ring(row.sites)), QuantityId::levels, count(4));
            std::map<int, double> lowest;  // by the up count's remainder mod 2
            for (std::size_t i = 0; i < found.labels.size(); ++i) {
                const double ups = found.labels[i].sz.value() + row.sites / 2.0;
                lowest.emplace(static_cast<int>(std::lround(ups)) % 2, found.value.real_at(i));
            }
            REQUIRE(lowest.size() == 2);
            CHECK_NEAR(lowest[0], row.even, published(13));
            CHECK_NEAR(lowest[1], row.odd, published(13));
        }
    }
}

TEST_CASE("one momentum grid for every up count is wrong, and no route does that") {
    // common mistake, no source: filling k = 2 pi n/L or k = (2n+1) pi/L whatever the up count.
    const auto one_grid = [](int sites, int twice_shift) {
        double sum = 0.0;
        for (int n = 0; n < sites; ++n) {
            sum += std::min(0.0, std::cos(pi * (2 * n + twice_shift) / sites));
        }
        return sum;
    };
    CHECK_NEAR(one_grid(4, 0), -1.0, rounding(1.0, 8));
    CHECK_NEAR(one_grid(6, 1), -std::sqrt(3.0), rounding(1.0, 8));
    for (const Route& route : all_routes(6)) {
        for (const auto& [sites, wrong] : {std::pair{4, one_grid(4, 0)}, {6, one_grid(6, 1)}}) {
            const Reference found =
                ask(route, family_problem("xx", {1.0}, ring(sites)), QuantityId::ground_energy);
            CHECK(found.value.real_at(0) < wrong - 0.2);
        }
    }
}

TEST_CASE("whole spectra of XX rings from occupations of the two grids [LSM, recomputed]") {
    for (const int sites : {3, 4, 5, 6, 7, 8}) {
        for (const double j : {1.0, -0.7}) {
            check_by(all_routes(sites),
                     family_problem("xx", {j}, ring(sites), 0.3),
                     QuantityId::spectrum,
                     all_levels({sites, j, 0.0, 0.3}));
        }
    }
}

TEST_CASE("dimerized rings, even L [P, the finite-ring sum of its infinite integral]") {
    // Two sites a cell: at half filling E0 = -sum_k sqrt(cos(k/2)^2 + delta^2 sin(k/2)^2) over the
    // L/2 momenta k of the cells, 2 pi (n + 1/2)/(L/2) for even L/2 and 2 pi n/(L/2) for odd L/2.
    for (const int sites : {4, 6, 8, 10, 14}) {
        for (const double delta : sites < 14 ? std::vector{0.2, 0.5, -0.3} : std::vector{0.5}) {
            const int cells = sites / 2;
            double energy = 0.0;
            for (int n = 0; n < cells; ++n) {
                const double half = pi * (n + (cells % 2 == 0 ? 0.5 : 0.0)) / cells;
                energy -= std::hypot(std::cos(half), delta * std::sin(half));
            }
            check_ground(all_routes(sites),
                         family_problem("dimer_xx", {1.0, delta}, ring(sites)),
                         energy,
                         1);
        }
    }
}

TEST_CASE("long dimerized rings approach -E(1 - delta^2)/pi per site [P, published formula]") {
    // E is the complete elliptic integral of the parameter m = 1 - delta^2. The sum over
    // equidistant momenta converges exponentially.
    const int sites = 200;
    for (const auto& [delta, per_site] :
         {std::pair{0.2, -0.33438524430723892806}, {0.5, -0.38549110629751000911}}) {
        CHECK_NEAR(elliptic(1 - delta * delta) / -pi, per_site, published(14));
        check_by({fermion_route()},
                 family_problem("dimer_xx", {1.0, delta}, ring(sites)),
                 QuantityId::ground_energy,
                 {sites * per_site});
    }
}

TEST_CASE("finite-size amplitudes: c = 1, v = 1 [BCN, published formula]") {
    // Rings: E0/L = -1/pi - pi c v/(6 L^2) - 7 pi^3/(360 L^4) - ..., from -1/(L sin(pi/L)).
    const int sites = 1000;
    const double length = sites;
    const double closed =
        ask(fermion_route(), family_problem("xx", {1.0}, ring(sites)), QuantityId::ground_energy)
            .value.real_at(0);
    CHECK_NEAR((closed / length + 1 / pi) * length * length,
               -pi / 6,
               (Allowed{7 * pi * pi * pi / 360 / (length * length) + 1e-9, "next order"}));
    // Free ends: E0 = -L/pi + (1/2 - 1/pi) - pi c v/(24 L) + pi/(24 L^2) - ..., from the closed
    // form with 1/(L+1) expanded in 1/L.
    const double open = ask(fermion_route(),
                            family_problem("xx", {1.0}, open_chain(sites)),
                            QuantityId::ground_energy)
                            .value.real_at(0);
    CHECK_NEAR((open + length / pi - 0.181690113816209) * length,
               -0.1308996939,
               (Allowed{1.1 * pi / 24 / length, "next order"}));
}

TEST_CASE("the infinite chain: -1/pi per site [LSM, published formula]") {
    const Chain infinite = {std::nullopt, BoundaryKind::ring, 0.0};
    check_by({limit_route()},
             family_problem("xx", {1.0}, infinite),
             QuantityId::ground_energy_per_site,
             {-0.31830988618379067});
}
