#include <cmath>
#include <map>
#include <numeric>

#include "published/by_routes.hpp"

// Counting, traces and symmetries that any correct spectrum obeys.

using namespace chainmark;
using namespace chainmark::test;

namespace {

std::vector<double> spectrum(const Route& route, const Problem& problem) {
    return levels_of(ask(route, problem, QuantityId::spectrum));
}

double moment(const std::vector<double>& levels, int power) {
    return std::accumulate(levels.begin(),
                           levels.end(),
                           0.0,
                           [&](double sum, double e) { return sum + std::pow(e, power); }) /
           static_cast<double>(levels.size());
}

/// Largest distance between the i-th levels.
double distance(const std::vector<double>& a, const std::vector<double>& b) {
    REQUIRE(a.size() == b.size());
    double largest = 0.0;
    for (std::size_t i = 0; i < a.size(); ++i) {
        largest = std::max(largest, std::abs(a[i] - b[i]));
    }
    return largest;
}

/// Rounding of spectra whose levels are of magnitude `scale`.
constexpr Allowed same_levels(double scale) {
    return {2.3e-16 * 256 * scale, "rounding of a spectrum"};
}

/// Number of levels of every momentum, of one total Sz or of all.
std::map<int, int> by_momentum(const Reference& spectrum, std::optional<double> sz = {}) {
    std::map<int, int> counts;
    for (const Labels& labels : spectrum.labels) {
        if (!sz || labels.sz == sz) {
            ++counts[labels.momentum.value()];
        }
    }
    return counts;
}

}  // namespace

TEST_CASE("levels of momentum 0 are counted by necklaces, of momentum 1 by Lyndon words") {
    // exact: OEIS A000031 (P. A. MacMahon 1892), OEIS A001037 (C. Moreau 1872), L = 3 ... 10.
    const std::vector<int> necklaces = {4, 6, 8, 14, 20, 36, 60, 108};
    const std::vector<int> lyndon = {2, 3, 6, 9, 18, 30, 56, 99};
    for (std::size_t i = 0; i < necklaces.size(); ++i) {
        const int sites = static_cast<int>(i) + 3;
        const auto counts = by_momentum(ask(
            sector_route(), family_problem("xxz", {1.0, 0.3}, ring(sites)), QuantityId::spectrum));
        CHECK(counts.at(0) == necklaces[i]);
        CHECK(counts.at(1) == lyndon[i]);
        CHECK(counts.at(-1) == lyndon[i]);
    }
}

TEST_CASE("sizes of the momentum sectors at Sz = 0, ring of twelve") {
    // exact: (1/L) sum_{d | gcd(L, N)} c_d(q) C(L/d, N/d), c_d Ramanujan's sum; C. Moreau, Nouv.
    // Ann. Math. 11, 309 (1872). q = 0 ... L/2.
    const std::vector<int> sizes = {80, 75, 78, 76, 78, 75, 80};
    const Reference found =
        ask(sector_route(), family_problem("heisenberg", {1.0}, ring(12)), QuantityId::spectrum);
    const auto counts = by_momentum(found, 0.0);
    for (int q = 0; q <= 6; ++q) {
        CHECK(counts.at(q) == sizes[static_cast<std::size_t>(q)]);
    }
}

TEST_CASE("multiplets: the levels at Sz = 1 are among those at Sz = 0; Catalan many are not") {
    // exact: an S.S Hamiltonian has C(L, L/2) - C(L, L/2 + 1) singlets, OEIS A000108: 14 for L = 8.
    for (const auto& [sites, singlets] : {std::pair{6, 5}, {8, 14}, {10, 42}}) {
        const Reference found = ask(
            sector_route(), family_problem("j1j2", {1.0, 0.3}, ring(sites)), QuantityId::spectrum);
        std::vector<double> left;
        std::vector<double> triplets;
        for (std::size_t i = 0; i < found.labels.size(); ++i) {
            if (found.labels[i].sz == 0.0) {
                left.push_back(found.value.real_at(i));
            } else if (found.labels[i].sz == 1.0) {
                triplets.push_back(found.value.real_at(i));
            }
        }
        int missing = 0;
        for (const double level : triplets) {
            const auto match = std::find_if(left.begin(), left.end(), [&](double e) {
                return std::abs(e - level) < same_levels(sites).size;
            });
            if (match == left.end()) {
                ++missing;
            } else {
                left.erase(match);
            }
        }
        CHECK(missing == 0);
        CHECK(left.size() == static_cast<std::size_t>(singlets));
    }
}

TEST_CASE("traces of the Heisenberg ring, Tr H^k/2^L for k = 1 ... 4") {
    // exact (elementary): 0, 3L/16, -3L/32; the triangle's third is 0, since three bonds closing a
    // loop add +9/32. The fourth is recomputed; L = 8 has 5.8125.
    const std::map<int, double> fourth = {
        {3, 0.31640625}, {4, 1.5}, {5, 2.05078125}, {6, 3.09375}, {8, 5.8125}};
    for (const auto& [sites, value] : fourth) {
        for (const Route& route : matrix_routes(sites)) {
            const auto levels = spectrum(route, family_problem("heisenberg", {1.0}, ring(sites)));
            CHECK_NEAR(moment(levels, 1), 0.0, rounding(sites, 64));
            CHECK_NEAR(moment(levels, 2), 3.0 * sites / 16, rounding(sites, 64));
            CHECK_NEAR(
                moment(levels, 3), sites == 3 ? 0.0 : -3.0 * sites / 32, rounding(sites, 64));
            CHECK_NEAR(moment(levels, 4), value, rounding(sites * sites, 64));
        }
    }
}

TEST_CASE("traces of XXZ, XX, Ising and XY rings in a field") {
    // exact (elementary): Tr H^2/2^L = L [(jx^2 + jy^2 + jz^2)/16 + h^2/4].
    const double h = 0.3;
    for (const int sites : {5, 6, 8}) {
        const auto check = [&](const char* family, std::vector<double> values, double squares) {
            const bool xx = std::string_view(family) == "xx";
            for (const Route& route : xx ? all_routes(sites) : matrix_routes(sites)) {
                const auto levels = spectrum(route, family_problem(family, values, ring(sites), h));
                CHECK_NEAR(moment(levels, 1), 0.0, rounding(sites, 64));
                CHECK_NEAR(
                    moment(levels, 2), sites * (squares / 16 + h * h / 4), rounding(sites, 64));
            }
        };
        check("xxz", {1.0, 0.7}, 2 + 0.49);
        check("xx", {1.0}, 2.0);
        check("tfim", {1.5}, 2.25);
        check("xy", {1.0, 0.4}, 1.96 + 0.36);
    }
}

TEST_CASE("h -> -h leaves the spectrum of every XX ring and chain unchanged") {
    // exact: rotation by pi about x. Also where the ground state has no Sz = 0.
    for (const int sites : {4, 5, 6, 7}) {
        for (const Chain& chain : {ring(sites), open_chain(sites)}) {
            for (const Route& route : all_routes(sites)) {
                const auto up = spectrum(route, family_problem("xx", {1.0}, chain, 0.37));
                const auto down = spectrum(route, family_problem("xx", {1.0}, chain, -0.37));
                CHECK_NEAR(distance(up, down), 0.0, same_levels(sites));
            }
        }
    }
}

TEST_CASE("J -> -J: unchanged on even rings and open chains, changed on odd rings") {
    // exact: rotation by pi about z on every second site, which an odd ring does not allow.
    for (const int sites : {4, 5, 6, 7}) {
        for (const Chain& chain : {ring(sites), open_chain(sites)}) {
            const bool frustrated = chain.is_ring() && sites % 2 == 1;
            for (const Route& route : all_routes(sites)) {
                const auto plus = spectrum(route, family_problem("xx", {1.0}, chain, 0.2));
                const auto minus = spectrum(route, family_problem("xx", {-1.0}, chain, 0.2));
                INFO("route " << to_string(route.id) << ", " << to_string(chain));
                if (frustrated) {
                    CHECK(distance(plus, minus) > 0.1);
                } else {
                    CHECK_NEAR(distance(plus, minus), 0.0, same_levels(sites));
                }
            }
        }
    }
}

TEST_CASE("an odd ring with the opposite sign of J is the antiperiodic ring") {
    // exact: the same rotation moves the sign to the wrap bond.
    for (const int sites : {5, 7}) {
        for (const Route& route : all_routes(sites)) {
            const auto minus = spectrum(route, family_problem("xx", {-1.0}, ring(sites), 0.2));
            const auto twisted = spectrum(route, family_problem("xx", {1.0}, ring(sites, pi), 0.2));
            CHECK_NEAR(distance(minus, twisted), 0.0, same_levels(sites));
        }
    }
}

TEST_CASE("a twist spread over all bonds or put on one: the same spectrum") {
    // exact: S+_j -> exp(i phi j/L) S+_j. The hops are then (1/2) exp(i phi/L) S+_j S-_{j+1} + h.c.
    const double phi = 0.9;
    for (const int sites : {5, 6}) {
        const std::vector<PlacedTerm> hops = {
            {.factors = {SiteMatrix::raising(), SiteMatrix::lowering()},
             .offsets = {0, 1},
             .coupling = {std::polar(0.5, phi / sites)},
             .add_conjugate = true}};
        const Result<TermList> list = build_terms(ring(sites), hops, Coincident::refuse, 1);
        const Problem spread = {ring(sites), std::make_shared<const TermList>(list.value()), 0.1};
        for (const Route& route : all_routes(sites)) {
            const auto one_bond =
                spectrum(route, family_problem("xx", {1.0}, ring(sites, phi), 0.1));
            CHECK_NEAR(distance(spectrum(route, spread), one_bond), 0.0, same_levels(sites));
            const auto plain = spectrum(route, family_problem("xx", {1.0}, ring(sites), 0.1));
            CHECK(distance(one_bond, plain) > 1e-3);
        }
    }
}

TEST_CASE("all sectors together: the spectrum by sectors is that of the full matrix") {
    // exact. The routes share the term list alone.
    for (const Problem& problem : {family_problem("tfim", {1.3}, ring(8), 0.4),
                                   family_problem("xxz", {1.0, 0.4}, ring(8, 0.6), 0.3),
                                   family_problem("j1j2", {1.0, 0.4}, ring(7), 0.2),
                                   family_problem("heisenberg", {-1.0}, open_chain(8)),
                                   family_problem("dimer_xx", {1.0, 0.3}, ring(7), 0.1)}) {
        check_by({sector_route()}, problem, QuantityId::spectrum, spectrum(dense_route(), problem));
    }
}

TEST_CASE("m -> -m under h -> -h, and m never falls with h") {
    // exact: convexity of E0(h); J. C. Bonner, M. E. Fisher (1964) plot these staircases.
    for (const char* family : {"xx", "heisenberg"}) {
        for (const int sites : {7, 8}) {
            double last = -0.5;
            for (const double h : {-2.3, -1.1, -0.45, -0.15, 0.15, 0.45, 1.1, 2.3}) {
                const auto m = [&](double field) {
                    return ask(sector_route(),
                               family_problem(family, {1.0}, ring(sites), field),
                               QuantityId::magnetization)
                        .value.real_at(0);
                };
                const double here = m(h);
                CHECK(here >= last - 1e-12);
                CHECK_NEAR(here, -m(-h), rounding(1.0, 16));
                last = here;
            }
            CHECK_NEAR(last, 0.5, rounding(1.0, 4));
        }
    }
}
