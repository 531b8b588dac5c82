#include <cmath>

#include "published/by_routes.hpp"
#include "published/free_fermions.hpp"

// XX rings and chains in a field: H = J sum (Sx Sx + Sy Sy) - h sum Sz, J = 1 unless said.
//   [LSM]  E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
//   [K]    S. Katsura, Phys. Rev. 127, 1508 (1962).

using namespace chainmark;
using namespace chainmark::test;

namespace {

const Chain infinite = {std::nullopt, BoundaryKind::ring, 0.0};

/// Jumps E_{N+1} - E_N of the lowest levels of N up spins; total Sz rises by one at each.
void check_jumps(const std::vector<Route>& routes,
                 const Problem& problem,
                 const std::vector<double>& fields) {
    for (const Route& route : routes) {
        const Reference found = check_by({route}, problem, QuantityId::jump_fields, fields);
        REQUIRE(found.value.total_sz.size() == fields.size() + 1);
        for (std::size_t i = 0; i <= fields.size(); ++i) {
            CHECK(found.value.total_sz[i] == static_cast<double>(i) - problem.chain.length() / 2.0);
        }
    }
}

std::vector<double> ring_jumps(int sites, double j) {
    std::vector<double> fields;
    for (int ups = 0; ups < sites; ++ups) {
        fields.push_back(xx_lowest(sites, j, ups + 1) - xx_lowest(sites, j, ups));
    }
    return fields;
}

}  // namespace

TEST_CASE("even rings: jumps at sin((2m+1) pi/2L)/cos(pi/2L) [LSM, published formula]") {
    // The decimals: m = 0 ... L/2 - 1, recomputed. The negative ones mirror them.
    const std::vector<std::vector<double>> rows = {
        {0.414213562373095, 1.0},
        {0.267949192431123, 0.732050807568877, 1.0},
        {0.198912367379658, 0.566454497350522, 0.847759065022574, 1.0},
        {0.158384440324536, 0.459649548425359, 0.715920956159588, 0.902113032590307, 1.0}};
    for (const std::vector<double>& row : rows) {
        const int sites = 2 * static_cast<int>(row.size());
        std::vector<double> fields;
        for (int m = -sites / 2; m < sites / 2; ++m) {
            fields.push_back(std::sin((2 * m + 1) * pi / (2 * sites)) / std::cos(pi / (2 * sites)));
        }
        for (std::size_t m = 0; m < row.size(); ++m) {
            CHECK_NEAR(fields[row.size() + m], row[m], published(14));
        }
        for (const double j : {1.0, -1.0}) {
            check_jumps(all_routes(sites), family_problem("xx", {j}, ring(sites)), fields);
        }
    }
}

TEST_CASE("odd rings: the last jump at J cos(pi/L) for J > 0, |J| for J < 0 [LSM, recomputed]") {
    for (const int sites : {5, 7, 9}) {
        for (const double j : {1.0, -1.0}) {
            const std::vector<double> fields = ring_jumps(sites, j);
            CHECK_NEAR(fields.back(), j > 0 ? std::cos(pi / sites) : 1.0, rounding(1.0, 4 * sites));
            check_jumps(all_routes(sites), family_problem("xx", {j}, ring(sites)), fields);
        }
    }
    CHECK_NEAR(ring_jumps(9, 1.0).back(), 0.93969262, published(8));
}

TEST_CASE("open chains: jumps at the levels J cos(pi m/(L+1)) [LSM, published formula]") {
    for (const int sites : {5, 8, 12}) {
        std::vector<double> fields;
        for (int m = sites; m >= 1; --m) {
            fields.push_back(std::cos(pi * m / (sites + 1)));
        }
        check_jumps(all_routes(sites), family_problem("xx", {1.0}, open_chain(sites)), fields);
    }
}

TEST_CASE("between jumps: energy, magnetization and zz correlations [LSM, K, published formula]") {
    // N up spins fill a symmetric shell: E = -sin(N x)/sin x - h (N - L/2), m = N/L - 1/2,
    // <Sz_0 Sz_r> = m^2 - [sin(N x r)/(L sin(x r))]^2, x = pi/L.
    struct Row {
        int sites;
        double field;
        int ups;
    };
    for (const auto& [sites, field, ups] : {Row{8, 0.0, 4},
                                            Row{8, 0.3, 5},
                                            Row{8, -0.7, 2},
                                            Row{8, 1.5, 8},
                                            Row{10, 0.5, 7},
                                            Row{14, 0.25, 8}}) {
        const Problem problem = family_problem("xx", {1.0}, ring(sites), field);
        const double x = pi / sites;
        const double m = ups / static_cast<double>(sites) - 0.5;
        const auto routes = all_routes(sites);
        if (sites <= 12) {  // the large sectors once
            check_ground(routes, problem, -std::sin(ups * x) / std::sin(x) - field * m * sites, 1);
            check_by(routes, problem, QuantityId::magnetization, {m});
        }
        std::vector<double> zz;
        for (const int r : {1, 2, 3}) {
            zz.push_back(m * m - std::pow(std::sin(ups * x * r) / (sites * std::sin(x * r)), 2));
        }
        check_by(routes, problem, QuantityId::spin_correlation, zz, distances({1, 2, 3}));
    }
}

TEST_CASE("zz correlations of the ring of twelve: -1/(L sin(pi r/L))^2 or 0 [LSM, formula]") {
    std::vector<double> zz;
    for (int r = 1; r <= 11; ++r) {
        zz.push_back(r % 2 == 0 ? 0.0 : -1 / std::pow(12 * std::sin(pi * r / 12), 2));
    }
    CHECK_NEAR(zz[0], -0.103668077988024, published(14));  // recomputed
    check_by(all_routes(12),
             family_problem("xx", {1.0}, ring(12)),
             QuantityId::spin_correlation,
             zz,
             distances({1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11}));
}

TEST_CASE("zz correlations of an open chain, site by site [LSM free ends, published formula]") {
    // Orbitals sqrt(2/(L+1)) sin(k i), k = pi m/(L+1), i = 1 ... L; the L/2 lowest are full, so
    // with C_ij = (2/(L+1)) sum_{m > L/2} sin(k i) sin(k j):  <Sz_i Sz_j> = -C_ij^2, i != j.
    const int sites = 8;
    Options options;
    options.pairs = {{0, 1}, {1, 2}, {0, 3}, {2, 5}, {0, 7}, {1, 3}};
    std::vector<double> zz;
    for (const auto& [i, j] : options.pairs) {
        double c = 0.0;
        for (int m = sites / 2 + 1; m <= sites; ++m) {
            const double k = pi * m / (sites + 1);
            c += 2.0 / (sites + 1) * std::sin(k * (i + 1)) * std::sin(k * (j + 1));
        }
        zz.push_back(-c * c);
    }
    const Problem problem = family_problem("xx", {1.0}, open_chain(sites));
    check_by(all_routes(sites), problem, QuantityId::spin_correlation, zz, options);
    check_by(all_routes(sites),
             problem,
             QuantityId::local_magnetization,
             std::vector<double>(sites, 0.0));
}

TEST_CASE("degenerate ground space of an odd ring: m averages to 0, the range is +-1/2L") {
    // exact: fourfold, Sz = +-1/2 twice each; Tr(P M)/4 = 0.
    for (const Route& route : all_routes(7)) {
        const Reference found = check_by(
            {route}, family_problem("xx", {1.0}, ring(7)), QuantityId::magnetization, {0.0});
        REQUIRE(found.range.has_value());
        CHECK_NEAR(found.range->front().first, -0.5 / 7, rounding(1.0, 64));
        CHECK_NEAR(found.range->front().second, 0.5 / 7, rounding(1.0, 64));
    }
}

TEST_CASE("the infinite chain in a field [K, published formula]") {
    // m = arcsin(h/J)/pi; e0 = -(1/pi) [sqrt(J^2 - h^2) + h arcsin(h/J)] (h > 0 adds to it);
    // chi = 1/(pi sqrt(J^2 - h^2)); k_F = arccos(h/J).
    for (const auto& [field, m] :
         {std::pair{0.25, 0.080430623255166243771}, {0.5, 0.16666666666666666667}}) {
        CHECK_NEAR(std::asin(field) / pi, m, published(15));
        const Problem problem = family_problem("xx", {1.0}, infinite, field);
        const double root = std::sqrt(1 - field * field);
        check_by({limit_route()}, problem, QuantityId::magnetization, {m});
        check_by({limit_route()},
                 problem,
                 QuantityId::ground_energy_per_site,
                 {-(root + field * std::asin(field)) / pi});
        check_by({limit_route()}, problem, QuantityId::susceptibility, {1 / (pi * root)});
        check_by({limit_route()}, problem, QuantityId::fermi_momentum, {std::acos(field)});
    }
    check_by({limit_route()},
             family_problem("xx", {1.0}, infinite),
             QuantityId::susceptibility,
             {0.31830988618379067154});
}

TEST_CASE("the infinite chain: zz = -1/(pi r)^2 for odd r, 0 for even r [LSM, formula]") {
    std::vector<double> zz;
    for (int r = 1; r <= 7; ++r) {
        zz.push_back(r % 2 == 0 ? 0.0 : -1 / (pi * pi * r * r));
    }
    CHECK_NEAR(zz[4], -0.0040528473456935108578, published(17));
    CHECK_NEAR(zz[6], -0.0020677792580068932948, published(17));
    check_by({limit_route()},
             family_problem("xx", {1.0}, infinite),
             QuantityId::spin_correlation,
             zz,
             distances({1, 2, 3, 4, 5, 6, 7}));
}

TEST_CASE("phases of the infinite chain [K]") {
    for (const auto& [field, phase] : {std::pair{0.5, "critical"},
                                       {1.0, "saturation_point"},
                                       {1.5, "saturated_up"},
                                       {-1.5, "saturated_down"}}) {
        const Reference found =
            ask(limit_route(), family_problem("xx", {1.0}, infinite, field), QuantityId::phase);
        CHECK(found.value.text == phase);
    }
}
