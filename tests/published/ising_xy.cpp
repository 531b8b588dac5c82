#include <cmath>

#include "published/by_routes.hpp"
#include "published/free_fermions.hpp"

// The Ising chain in a transverse field and the XY chain.
// Sources use Pauli matrices, H = -Jp sum sx sx - hp sum sz, critical at hp = Jp. With s = 2 S that
// is our tfim with J = -4 Jp and h = 2 hp; energies are the same numbers, <sz> = 2 <Sz>.
//   [Pf]   P. Pfeuty, Ann. Phys. (NY) 57, 79 (1970).
//   [BG]   T. W. Burkhardt, I. Guim, J. Phys. A 18, L33 (1985).
//   [LSM]  E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
//   [KTM]  J. Kurmann, H. Thomas, G. Mueller, Physica A 112, 235 (1982).
// All are published formulas; decimals recomputed and checked against matrices built elsewhere.

using namespace chainmark;
using namespace chainmark::test;

namespace {

/// H = -Jp sum sx sx - hp sum sz in Pauli matrices.
Problem pauli_ising(const Chain& chain, double jp, double hp) {
    return family_problem("tfim", {-4 * jp}, chain, 2 * hp);
}

XyRing pauli_modes(int sites, double jp, double hp) {
    return {sites, -2 * jp, 1.0, 2 * hp};
}

/// Sz per site on the critical ring, and its connected correlation at distance r, in spin
/// operators.
double critical_sz(int sites) {
    return 0.5 / (sites * std::sin(pi / (2 * sites)));
}

double critical_zz(int sites, int r) {
    const double half = pi / (2 * sites);
    const double sines = std::sin((2 * r + 1) * half) * std::sin((2 * r - 1) * half);
    return 0.25 / (sites * sites * sines);
}

}  // namespace

TEST_CASE("critical Ising rings: E0 = -2/sin(pi/2L), gap 2 tan(pi/4L) [Pf]") {
    struct Row {
        int sites;
        double energy, gap;
    };
    for (const auto& [sites, energy, gap] : {Row{4, -5.226251859506, 0.397824734759},
                                             Row{6, -7.727406610313, 0.263304995175},
                                             Row{8, -10.251661790966, 0.196982806714},
                                             Row{10, -12.784906442999, 0.157403413649},
                                             Row{12, -15.322595151081, 0.131086925630}}) {
        const double angle = pi / (4 * sites);
        CHECK_NEAR(-2 / std::sin(2 * angle), energy, published(12));
        CHECK_NEAR(2 * std::tan(angle), gap, published(12));
        const Problem problem = pauli_ising(ring(sites), 1.0, 1.0);
        check_ground(all_routes(sites), problem, -2 / std::sin(2 * angle), 1);
        check_by(all_routes(sites), problem, QuantityId::gap, {2 * std::tan(angle)});
    }
    // the second excitation, two quasiparticles: 8 sin(pi/2L) above the ground state [Pf, BG]
    for (const int sites : {6, 8, 10}) {
        const double ground = -2 / std::sin(pi / (2 * sites));
        check_by(all_routes(sites),
                 pauli_ising(ring(sites), 1.0, 1.0),
                 QuantityId::levels,
                 {ground,
                  ground + 2 * std::tan(pi / (4 * sites)),
                  ground + 8 * std::sin(pi / (2 * sites))},
                 count(3));
    }
}

TEST_CASE("Ising ring of 14 sites, beyond complete blocks [Pf]") {
    const int sites = 14;
    const double ground = -2 / std::sin(pi / (2 * sites));
    check_ground({sector_route()}, pauli_ising(ring(sites), 1.0, 1.0), ground, 1);
}

TEST_CASE("critical Ising rings: magnetization and correlations along the field [Pf]") {
    // <sz> = 1/(L sin(pi/2L)); connected <sz sz> = 1/(L^2 sin((2r+1)pi/2L) sin((2r-1)pi/2L)), whose
    // limit is 4/(pi^2 (4 r^2 - 1)).
    CHECK_NEAR(2 * critical_sz(10), 0.6392453221499662, published(15));
    for (const int sites : {8, 10}) {
        const Problem problem = pauli_ising(ring(sites), 1.0, 1.0);
        const double m = critical_sz(sites);
        check_by(all_routes(sites), problem, QuantityId::magnetization, {m});
        Options options = distances({1, 2, 3});
        options.connected = true;
        check_by(all_routes(sites),
                 problem,
                 QuantityId::spin_correlation,
                 {critical_zz(sites, 1), critical_zz(sites, 2), critical_zz(sites, 3)},
                 options);
    }
}

TEST_CASE("critical open Ising chains: E0 = 1 - 1/sin(pi/(4L+2)) [BG]") {
    for (const auto& [sites, energy] : {std::pair{2, -2.236067977500},
                                        {4, -4.758770483144},
                                        {8, -9.837951447459},
                                        {10, -12.381489999655}}) {
        const double expected = 1 - 1 / std::sin(pi / (2 * (2 * sites + 1)));
        CHECK_NEAR(expected, energy, published(12));
        check_ground(all_routes(sites), pauli_ising(open_chain(sites), 1.0, 1.0), expected, 1);
    }
}

TEST_CASE("Ising rings on both sides of the transition [Pf]") {
    struct Row {
        int sites;
        double hp, energy;
    };
    for (const auto& [sites, hp, energy] : {Row{10, 0.5, -10.635604409348},
                                            Row{8, 2.0, -17.018164470281},
                                            Row{10, 2.0, -21.271208818696},
                                            Row{12, 1.5, -20.064624685045}}) {
        const XyRing modes = pauli_modes(sites, 1.0, hp);
        const double even = lowest_level(modes, UpCount::even);
        const double odd = lowest_level(modes, UpCount::odd);
        CHECK_NEAR(even, energy, published(12));
        const Problem problem = pauli_ising(ring(sites), 1.0, hp);
        check_by(all_routes(sites), problem, QuantityId::levels, {even, odd}, count(2));
        const Reference found = check_by(all_routes(sites), problem, QuantityId::gap, {odd - even});
        CHECK(found.degeneracy == 1);
    }
}

TEST_CASE("Ising and XY rings: whole spectra from the two parity sectors [Pf, LSM]") {
    for (const int sites : {3, 4, 5, 6, 7, 8}) {
        for (const double hp : {0.4, 1.0, 1.7, -0.8}) {
            check_by(all_routes(sites),
                     pauli_ising(ring(sites), 1.0, hp),
                     QuantityId::spectrum,
                     all_levels(pauli_modes(sites, 1.0, hp)));
        }
        for (const double j : {1.0, -1.0}) {
            check_by(all_routes(sites),
                     family_problem("xy", {j, 0.6}, ring(sites), 0.35),
                     QuantityId::spectrum,
                     all_levels({sites, j, 0.6, 0.35}));
        }
    }
}

TEST_CASE("XY rings: the lowest level of each parity [LSM]") {
    struct Row {
        int sites;
        double gamma, field, even, odd;
    };
    for (const auto& [sites, gamma, field, even, odd] :
         {Row{6, 0.5, 0.3, -2.39439674777901, -2.38663987064149},
          Row{8, 0.5, 0.3, -3.18487437496408, -3.18965767046006},
          Row{10, 0.5, 0.3, -3.98482793381842, -3.98335561205855},
          Row{8, 0.25, 0.6, -3.19118943316426, -3.17569917299280},
          Row{12, 0.5, 0.0, -4.62613503248884, -4.62565129326429}}) {
        const XyRing modes = {sites, 1.0, gamma, field};
        const double lowest_even = lowest_level(modes, UpCount::even);
        const double lowest_odd = lowest_level(modes, UpCount::odd);
        CHECK_NEAR(lowest_even, even, published(13));
        CHECK_NEAR(lowest_odd, odd, published(13));
        const bool even_first = lowest_even < lowest_odd;
        const Problem problem = family_problem("xy", {1.0, gamma}, ring(sites), field);
        const std::vector<double> expected = {std::min(lowest_even, lowest_odd),
                                              std::max(lowest_even, lowest_odd)};
        for (const Route& route : all_routes(sites)) {
            const Reference found =
                check_by({route}, problem, QuantityId::levels, expected, count(2));
            if (route.id == RouteId::sector) {  // dense knows no labels
                REQUIRE(found.labels.size() == 2);
                CHECK(found.labels[0].parity == (even_first ? 1 : -1));
                CHECK(found.labels[1].parity == (even_first ? -1 : 1));
            }
        }
    }
}

TEST_CASE("XY rings at the factorizing field: E0 = -|J| L/2, twofold [KTM, exact]") {
    // h^2 = J^2 (1 - gamma^2): even rings of either sign, odd rings for J < 0 alone.
    for (const double gamma : {0.5, 0.8}) {
        const double field = std::sqrt(1 - gamma * gamma);
        for (const int sites : {4, 6, 8, 10}) {
            for (const double j : {1.0, -1.0}) {
                check_ground(all_routes(sites),
                             family_problem("xy", {j, gamma}, ring(sites), field),
                             -sites / 2.0,
                             2);
            }
        }
        for (const int sites : {5, 7, 9}) {
            check_ground(all_routes(sites),
                         family_problem("xy", {-1.0, gamma}, ring(sites), field),
                         -sites / 2.0,
                         2);
            const Problem frustrated = family_problem("xy", {1.0, gamma}, ring(sites), field);
            const Reference found = ask(sector_route(), frustrated, QuantityId::ground_energy);
            CHECK(found.value.real_at(0) > -sites / 2.0 + 0.05);
        }
    }
}

TEST_CASE("factorizing field: the products (|a> +- |b>) of both parities average <Sz> [KTM]") {
    // The two product states |a>, |b> have <Sz> = cos(t)/2, cos(t)^2 = (1-g)/(1+g), at every site
    // and overlap cos(t)^L. In the even and odd combinations per site, with c = cos t,
    //   <Sz> = (c/2) (1 +- c^{L-2}) / (1 +- c^L);  P averages them.
    const double gamma = 0.5;
    const double c = std::sqrt((1 - gamma) / (1 + gamma));
    CHECK_NEAR(c / 2, 0.288675134594813, published(15));  // recomputed
    for (const int sites : {6, 8, 10}) {
        const auto combination = [&](double sign) {
            return c / 2 * (1 + sign * std::pow(c, sites - 2)) / (1 + sign * std::pow(c, sites));
        };
        check_by(all_routes(sites),
                 family_problem("xy", {1.0, gamma}, ring(sites), std::sqrt(1 - gamma * gamma)),
                 QuantityId::magnetization,
                 {(combination(1.0) + combination(-1.0)) / 2});
    }
}
