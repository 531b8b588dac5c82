#include <cmath>

#include "published/bethe.hpp"
#include "published/by_routes.hpp"

// Heisenberg and XXZ rings, short open chains, the Majumdar-Ghosh chain. Spin operators, J = 1.
//   [B]   H. Bethe, Z. Phys. 71, 205 (1931).         [O]  R. Orbach, Phys. Rev. 112, 309 (1958).
//   [YY]  C. N. Yang, C. P. Yang, Phys. Rev. 150, 321 and 327 (1966).
//   [BF]  J. C. Bonner, M. E. Fisher, Phys. Rev. 135, A640 (1964).
//   [M]   W. Marshall, Proc. R. Soc. A 232, 48 (1955).
//   [S]   Yu. G. Stroganov, J. Phys. A 34, L179 (2001); A. V. Razumov, Yu. G. Stroganov, J. Phys. A
//         34, 3185 (2001).
//   [ABB] F. C. Alcaraz, M. N. Barber, M. T. Batchelor, Ann. Phys. (NY) 182, 280 (1988).
//   [MG]  C. K. Majumdar, D. K. Ghosh, J. Math. Phys. 10, 1388 and 1399 (1969).
// Decimals from the Bethe equations are recomputed (bethe.hpp), not copied from a paper.

using namespace chainmark;
using namespace chainmark::test;

namespace {

Problem heisenberg(const Chain& chain) {
    return family_problem("heisenberg", {1.0}, chain);
}

/// j1j2 on a ring of four, where the two placements across the ring meet.
Problem ring_of_four(Coincident coincident) {
    const std::vector<double> values = {1.0, 0.5};
    const auto terms = find_family("j1j2")->terms(values, ring(4));
    return {ring(4),
            std::make_shared<const TermList>(build_terms(ring(4), terms, coincident, 1).value()),
            0.0};
}

}  // namespace

TEST_CASE("small Heisenberg rings and chains in closed form [exact]") {
    // Ring of 3: H = (S_tot^2 - 9/4)/2, so -3/4 at S_tot = 1/2, twice.
    check_ground(matrix_routes(3), heisenberg(ring(3)), -0.75, 4);
    // Ring of 4: with sublattices A and B, H = (S_tot^2 - S_A^2 - S_B^2)/2: 0 - 2 = -2.
    check_ground(matrix_routes(4), heisenberg(ring(4)), -2.0, 1);
    // Ring of 6: the two-dimensional block of the ground state has the levels -1 -+ sqrt(13)/2.
    check_ground(matrix_routes(6), heisenberg(ring(6)), -1 - std::sqrt(13.0) / 2, 1);
    // Chains of 2, 3, 4; for 3 by H = (S_tot^2 - S_02^2 - 3/4)/2, for 4 by the 2 x 2 singlet block.
    check_ground(matrix_routes(2), heisenberg(open_chain(2)), -0.75, 1);
    check_ground(matrix_routes(3), heisenberg(open_chain(3)), -1.0, 2);
    check_ground(matrix_routes(4), heisenberg(open_chain(4)), -(3 + 2 * std::sqrt(3.0)) / 4, 1);
}

TEST_CASE("even Heisenberg rings: E0 and the triplet gap from the Bethe equations [B, BF]") {
    struct Row {
        int sites;
        double energy, gap;
    };
    for (const auto& [sites, energy, gap] : {Row{4, -2.0, 1.0},
                                             Row{6, -2.802775637732, 0.684741648982},
                                             Row{8, -3.651093408937, 0.522674345093},
                                             Row{10, -4.515446354492, 0.423239007753},
                                             Row{12, -5.387390917445, 0.355847513703},
                                             Row{14, -6.263549533547, 0.307105709568},
                                             Row{16, -7.142296360617, 0.270189682250}}) {
        const double ground = bethe_lowest(sites, sites / 2, 1.0);
        const double triplet = bethe_lowest(sites, sites / 2 - 1, 1.0);
        CHECK_NEAR(ground, energy, published(12));
        CHECK_NEAR(triplet - ground, gap, published(12));
        const Problem problem = heisenberg(ring(sites));
        check_ground(matrix_routes(sites), problem, ground, 1);
        if (sites <= 10) {
            check_by(matrix_routes(sites), problem, QuantityId::gap, {triplet - ground});
            check_by(matrix_routes(sites),
                     problem,
                     QuantityId::levels,
                     {ground, triplet, triplet, triplet},
                     count(4));
        }
    }
}

TEST_CASE("odd Heisenberg rings: fourfold ground spaces [BF; Bethe numbers shifted by 1/2]") {
    for (const auto& [sites, energy] : {std::pair{3, -0.75},
                                        {5, -1.868033988750},
                                        {7, -2.855179256847},
                                        {9, -3.797299783937},
                                        {11, -4.718936362524}}) {
        const double ground = bethe_lowest(sites, (sites - 1) / 2, 1.0);
        CHECK_NEAR(ground, energy, published(12));
        check_ground(matrix_routes(sites), heisenberg(ring(sites)), ground, 4);
    }
}

TEST_CASE("momentum of the ground state: 0 for L = 4m, pi for L = 4m + 2 [M]") {
    for (const int sites : {4, 6, 8, 10}) {
        const Reference found = ask(sector_route(), heisenberg(ring(sites)), QuantityId::spectrum);
        REQUIRE(found.labels.front().momentum.has_value());
        CHECK(found.labels.front().momentum == (sites % 4 == 0 ? 0 : sites / 2));
        CHECK(found.labels.front().sz == 0.0);
    }
}

TEST_CASE("Heisenberg rings: <Sz_0 Sz_1> = E0/(3 L) [exact]; all pairs on the ring of four") {
    for (const int sites : {6, 7, 8, 10}) {
        check_by(matrix_routes(sites),
                 heisenberg(ring(sites)),
                 QuantityId::spin_correlation,
                 {bethe_lowest(sites, sites / 2, 1.0) / (3 * sites)},
                 distances({1}));
    }
    // sublattice spins 1: S_0.S_2 = 1/4; S_0.S_1 = -2/4.
    check_by(matrix_routes(4),
             heisenberg(ring(4)),
             QuantityId::spin_correlation,
             {-1.0 / 6, 1.0 / 12, -1.0 / 6},
             distances({1, 2, 3}));
}

TEST_CASE("the last jump of antiferromagnetic even rings is 2 J [exact]") {
    // One reversed spin costs J (1 + 1) - h against the saturated state.
    for (const int sites : {4, 6, 8, 10}) {
        for (const Route& route : matrix_routes(sites)) {
            const Reference found = ask(route, heisenberg(ring(sites)), QuantityId::jump_fields);
            CHECK_NEAR(found.value.real_at(found.value.data.size() - 1),
                       2.0,
                       formula(found.bound.back(), 2.0));
        }
    }
}

TEST_CASE("XXZ rings at h = 0 from the Bethe equations [O, YY]") {
    struct Row {
        double delta;
        int sites;
        double energy;
    };
    for (const auto& [delta, sites, energy] : {Row{-0.5, 6, -1.7047579830780},
                                               Row{-0.5, 10, -2.7794132463799},
                                               Row{0.5, 6, -2.3680339887499},
                                               Row{0.5, 8, -3.0869943551374},
                                               Row{0.5, 10, -3.8190327805164},
                                               Row{0.5, 12, -4.5572724408304},
                                               Row{2.0, 6, -3.8557725066360},
                                               Row{2.0, 8, -5.0394287039471}}) {
        const double ground = bethe_lowest(sites, sites / 2, delta);
        CHECK_NEAR(ground, energy, published(13));
        check_ground(
            matrix_routes(sites), family_problem("xxz", {1.0, delta}, ring(sites)), ground, 1);
    }
}

TEST_CASE("Delta = 1/2, odd rings: E0 = -3L/8, twofold [S, exact]") {
    // Sources: H = -sum (sx sx + sy sy - (1/2) sz sz) in Pauli matrices, E0 = -3L/2. Divided by 4
    // that is -sum (Sx Sx + Sy Sy - (1/2) Sz Sz): our xxz with J = -1, Delta = -1/2.
    for (const int sites : {3, 5, 7, 9, 11, 13}) {
        check_ground(matrix_routes(sites),
                     family_problem("xxz", {-1.0, -0.5}, ring(sites)),
                     -3.0 * sites / 8,
                     2);
    }
}

TEST_CASE("Delta = 1/2, even rings with the twist 2 pi/3: E0 = -3L/8 [ABB, exact]") {
    for (const int sites : {4, 6, 8, 10}) {
        for (const double twist : {2 * pi / 3, -2 * pi / 3}) {
            check_ground(matrix_routes(sites),
                         family_problem("xxz", {-1.0, -0.5}, ring(sites, twist)),
                         -3.0 * sites / 8,
                         1);
        }
    }
}

TEST_CASE("Majumdar-Ghosh: rings twofold, open chains single, E0 = -3L/8 [MG, exact]") {
    for (const int sites : {6, 8, 10, 14}) {
        check_ground(matrix_routes(sites),
                     family_problem("j1j2", {1.0, 0.5}, ring(sites)),
                     -3.0 * sites / 8,
                     2);
        if (sites <= 10) {
            check_ground(matrix_routes(sites),
                         family_problem("j1j2", {1.0, 0.5}, open_chain(sites)),
                         -3.0 * sites / 8,
                         1);
        }
    }
}

TEST_CASE(
    "Majumdar-Ghosh, open chain: neighbours within a dimer alone are correlated [MG, exact]") {
    // singlets on (0,1), (2,3), ...: <Sz Sz> = -1/4 inside, 0 between.
    Options options;
    options.pairs = {{0, 1}, {1, 2}, {2, 3}, {0, 3}, {4, 5}};
    check_by(matrix_routes(8),
             family_problem("j1j2", {1.0, 0.5}, open_chain(8)),
             QuantityId::spin_correlation,
             {-0.25, 0.0, -0.25, 0.0, -0.25},
             options);
}

TEST_CASE("ring of four with J2: both diagonals twice -3/2 twofold, once -7/4 single [exact]") {
    // H = J (S_tot^2 - S_A^2 - S_B^2)/2 + c J2 (S_A^2 + S_B^2 - 3)/2, c placements a diagonal.
    check_ground(matrix_routes(4), ring_of_four(Coincident::add), -1.5, 2);
    check_ground(matrix_routes(4), ring_of_four(Coincident::once), -1.75, 1);
}
