#include <cmath>
#include <numbers>

#include "chainmark/fermion/routes.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"
#include "support/random_lists.hpp"

// Correlations, entropies and temperatures against the literature.
//
//   [LSM] E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961)
//   [K]   S. Katsura, Phys. Rev. 127, 1508 (1962)
//   [M]   B. M. McCoy, Phys. Rev. 173, 531 (1968)
//   [Pf]  P. Pfeuty, Ann. Phys. (NY) 57, 79 (1970)
//   [BM]  E. Barouch, B. M. McCoy, Phys. Rev. A 3, 786 (1971)
//   [KTM] J. Kurmann, H. Thomas, G. Mueller, Physica A 112, 235 (1982)
//   [VLRK] G. Vidal, J. I. Latorre, E. Rico, A. Kitaev, PRL 90, 227902 (2003)
//   [JK]  B.-Q. Jin, V. E. Korepin, J. Stat. Phys. 116, 79 (2004)
//   [IJ]  F. Igloi, R. Juhasz, EPL 81, 57003 (2008)
// "formula": the work states the formula, the decimals are its evaluation.

namespace chainmark::test {
namespace {

constexpr double large = 1e5;  ///< sites of a ring that stands for the infinite one
constexpr int large_sites = 100'000;

Chain ring(int sites) {
    return {.sites = sites, .boundary = BoundaryKind::ring};
}

Problem xx(int sites) {
    return family_problem("xx", {1.0}, ring(sites), 0.0);
}

/// H = -sum sx sx - h sum sz in Pauli matrices.
Problem pauli_ising(int sites, double field) {
    return family_problem("tfim", {-4.0}, ring(sites), 2 * field);
}

Reference correlation(const Problem& problem,
                      Axes axes,
                      const std::vector<int>& distances,
                      bool connected = false) {
    Options options;
    options.axes = axes;
    options.distance = distances;
    options.connected = connected;
    return ask(fermion_route(), problem, QuantityId::spin_correlation, options);
}

double block_entropy(const Problem& problem, int sites, int order = 1) {
    Options options;
    for (int site = 0; site < sites; ++site) {
        options.block.push_back(site);
    }
    options.order = order;
    return ask(fermion_route(), problem, QuantityId::entanglement_entropy, options)
        .value.real_at(0);
}

double at_temperature(Problem problem, double temperature, QuantityId id) {
    problem.temperature = temperature;
    return ask(fermion_route(), problem, id).value.real_at(0);
}

/// The ring of L sites has the infinite one's values up to (pi r/L)^2.
Allowed finite_ring(double r, double scale) {
    return {scale * std::pow(pi * r / large, 2), "finite ring, (pi r/L)^2"};
}

TEST_CASE("XX: <Sx Sx> of the infinite ring, rationals over powers of pi [LSM, formula]") {
    // -1/2/pi, 1/pi^2, -8/3/pi^3, 64/9/pi^4, -8192/405/pi^5, 1048576/18225/pi^6, ...
    const std::vector<double> expected = {-0.1591549430918953357689,
                                          0.1013211836423377714439,
                                          -0.08600409182186530449179,
                                          0.0730025404777552724562,
                                          -0.06609757966393415751054,
                                          0.05984572603690927940876,
                                          -0.05573335403781825301338,
                                          0.05190356869242540140565};
    const Reference found = correlation(xx(large_sites), Axes::xx, {1, 2, 3, 4, 5, 6, 7, 8});
    for (std::size_t r = 0; r < expected.size(); ++r) {
        CHECK_NEAR(found.value.real_at(r),
                   expected[r],
                   finite_ring(static_cast<double>(r) + 1, std::abs(expected[r])));
        CHECK(found.bound[r] < 1e-14);
    }
}

TEST_CASE("XX: <Sx Sx> of finite rings [LSM, formula]") {
    const Reference eight = correlation(xx(8), Axes::xx, {1, 2, 3});
    CHECK_NEAR(eight.value.real_at(0), -0.16332037060955, published(14));
    CHECK_NEAR(eight.value.real_at(1), 0.10669417382416, published(14));
    CHECK_NEAR(eight.value.real_at(2), -0.098572563434342, published(15));
    const Reference twelve = correlation(xx(12), Axes::yy, {2, 3, 4});
    CHECK_NEAR(twelve.value.real_at(0), 0.10366807798802, published(14));
    CHECK_NEAR(twelve.value.real_at(1), -0.091191916239557, published(15));
    CHECK_NEAR(twelve.value.real_at(2), 0.080217225483847, published(15));
}

TEST_CASE("XX: <Sx_0 Sx_r> -> (-1)^r 0.147088... / sqrt(r) [M, published]") {
    // 0.14708816604941945 = exp(1/2) 2^(-4/3) A^-6, A the Glaisher-Kinkelin constant; what is left
    // out falls as 1/r^2
    const std::vector<int> distances = {60, 61, 200, 201};
    const Reference found = correlation(xx(large_sites), Axes::xx, distances);
    for (std::size_t e = 0; e < distances.size(); ++e) {
        const double r = distances[e];
        const double sign = distances[e] % 2 == 0 ? 1.0 : -1.0;
        CHECK_NEAR(sign * found.value.real_at(e) * std::sqrt(r),
                   0.14708816604941945302,
                   (Allowed{0.05 / (r * r) + std::pow(pi * r / large, 2), "next order, 1/r^2"}));
        CHECK(found.bound[e] < 1e-12);
    }
}

TEST_CASE("XX: entropies of blocks [VLRK, JK, formula]") {
    const Problem problem = xx(large_sites);
    CHECK_NEAR(block_entropy(problem, 1), 0.6931471805599, published(13));
    CHECK_NEAR(block_entropy(problem, 3), 1.0892457664920, finite_ring(3, 1.0));
    CHECK_NEAR(block_entropy(problem, 4), 1.1868170225523, finite_ring(4, 1.0));
    CHECK_NEAR(block_entropy(problem, 8), 1.4189424600239, finite_ring(8, 1.0));
    CHECK_NEAR(block_entropy(problem, 100), 2.2611220298979, finite_ring(100, 1.0));
    CHECK_NEAR(block_entropy(xx(10), 5), 1.115895506599, published(12));
    CHECK_NEAR(block_entropy(xx(12), 6), 1.175475821530, published(12));
}

TEST_CASE("XX: S_l = ln(2l)/3 + 0.4950179..., and a ring's chord in its place [JK, published]") {
    // Upsilon_1 = 0.4950179... as quoted by the works that use it
    const double sites = 2002;
    for (const int l : {100, 500, 1001}) {
        const double chord = sites / pi * std::sin(pi * l / sites);
        CHECK_NEAR(block_entropy(xx(2002), l),
                   std::log(2 * chord) / 3 + 0.4950179,
                   (Allowed{1e-7 + 0.1 / (chord * chord), "Upsilon_1 to 7 digits, and 1/l^2"}));
    }
}

TEST_CASE("critical Ising: S_l = ln(l)/6 + 0.478558..., a ring's chord in its place [IJ]") {
    const double sites = 1000;
    for (const int l : {100, 300, 500}) {
        const double chord = sites / pi * std::sin(pi * l / sites);
        CHECK_NEAR(block_entropy(pauli_ising(1000, 1.0), l),
                   std::log(chord) / 6 + 0.478558014254,
                   (Allowed{0.1 / (chord * chord), "next order, 1/l^2"}));
    }
}

TEST_CASE("critical Ising rings in closed form [Pf, formula]") {
    const Problem ten = pauli_ising(10, 1.0);
    const Reference along_x = correlation(ten, Axes::xx, {2, 3, 4});
    CHECK_NEAR(4 * along_x.value.real_at(0), 0.54944046274422, published(13));
    CHECK_NEAR(4 * along_x.value.real_at(1), 0.50825226581560, published(13));
    CHECK_NEAR(4 * along_x.value.real_at(2), 0.48841321993765, published(13));
    CHECK_NEAR(2 * ask(fermion_route(), ten, QuantityId::magnetization).value.real_at(0),
               0.6392453221499662,
               published(15));
}

TEST_CASE("critical Ising: <sx sx> and connected <sz sz> of the infinite ring [Pf, formula]") {
    const int sites = 20000;
    const auto near_infinite = [&](double r, double value) {
        return Allowed{std::abs(value) * std::pow(pi * r / sites, 2), "finite ring, (pi r/L)^2"};
    };
    const std::vector<double> along_x = {0.6366197723675813430755,
                                         0.5403796460924681143674,
                                         0.4892677223643892877755,
                                         0.4556470945476351938752,
                                         0.431072253099720416067,
                                         0.4119422521102034709837};
    const Problem problem = pauli_ising(sites, 1.0);
    const Reference found = correlation(problem, Axes::xx, {1, 2, 3, 4, 5, 6});
    for (std::size_t e = 0; e < along_x.size(); ++e) {
        CHECK_NEAR(4 * found.value.real_at(e),
                   along_x[e],
                   near_infinite(static_cast<double>(e) + 1, along_x[e]));
    }
    const Reference connected = correlation(problem, Axes::zz, {1, 2, 3}, true);
    for (int r = 1; r <= 3; ++r) {
        const double expected = 4 / (pi * pi * (4.0 * r * r - 1));
        CHECK_NEAR(4 * connected.value.real_at(static_cast<std::size_t>(r - 1)),
                   expected,
                   near_infinite(2.0 * r, 1.0));
    }
}

TEST_CASE("ordered phases: <Sx Sx> far apart is the square of the order parameter [Pf, BM]") {
    // [Pf] <sx> = (1 - h^2)^(1/8); corrections fall exponentially with the distance
    const std::vector<std::pair<double, double>> ising = {{0.3, 0.98828038112143148196},
                                                          {0.5, 0.96467862996030942395}};
    for (const auto& [field, order] : ising) {
        const Reference found = correlation(pauli_ising(120, field), Axes::xx, {60});
        CHECK_NEAR(4 * found.value.real_at(0), order * order, rounding(1, 1000));
    }
    // [BM] [g^2 (1-h^2)]^(1/4) / (2 (1+g)), staggered for J > 0
    for (const auto& [g, h] : {std::pair(0.5, 0.0), std::pair(0.5, 0.5), std::pair(0.7, 0.4)}) {
        const Problem problem = family_problem("xy", {1.0, g}, ring(120), h);
        const Reference found = correlation(problem, Axes::xx, {59, 60});
        const double order = std::pow(g * g * (1 - h * h), 0.25) / (2 * (1 + g));
        CHECK_NEAR(found.value.real_at(0), -order, rounding(1, 1000));
        CHECK_NEAR(found.value.real_at(1), order, rounding(1, 1000));
    }
}

TEST_CASE("factorizing field: the same correlation at all distances [KTM, formula]") {
    const double g = 0.5;
    const Problem problem = family_problem("xy", {1.0, g}, ring(100), std::sqrt(1 - g * g));
    const Reference found = correlation(problem, Axes::xx, {1, 2, 17, 50});
    CHECK(found.degeneracy == 2);
    for (std::size_t e = 0; e < 4; ++e) {
        const double sign = e == 0 || e == 2 ? -1.0 : 1.0;
        CHECK_NEAR(sign * found.value.real_at(e), g / (2 * (1 + g)), rounding(1, 1000));
    }
    CHECK_NEAR(ask(fermion_route(), problem, QuantityId::magnetization).value.real_at(0),
               std::sqrt((1 - g) / (1 + g)) / 2,
               rounding(1, 1000));
}

TEST_CASE("XX rings: ln Z from four traces [K, formula], and not from one grid of momenta") {
    const auto log_z = [](int sites, double temperature) {
        return -at_temperature(xx(sites), temperature, QuantityId::free_energy) / temperature;
    };
    CHECK_NEAR(log_z(8, 0.5), 7.34175920641410, published(13));
    CHECK_NEAR(log_z(8, 1.0), 6.03038892919395, published(13));
    CHECK_NEAR(log_z(10, 0.5), 9.17455752621770, published(13));
    for (const int half_steps : {0, 1}) {  // all occupations of one grid
        double one_grid = 0.0;
        for (int m = 0; m < 8; ++m) {
            one_grid += std::log(2 * std::cosh(std::cos(pi * (2 * m + half_steps) / 8) / 1.0));
        }
        CHECK(std::abs(one_grid - 7.34175920641410) > 1e-4);
    }
}

TEST_CASE("XX: free energy, susceptibility and the peak of the specific heat [K, formula]") {
    const int sites = 1000;  // corrections fall exponentially with L T
    CHECK_NEAR(at_temperature(xx(sites), 0.1, QuantityId::free_energy_per_site),
               -0.323614124314495223,
               rounding(1, 10));
    CHECK_NEAR(at_temperature(xx(sites), 0.5, QuantityId::free_energy_per_site),
               -0.458704490325924573,
               rounding(1, 10));
    CHECK_NEAR(at_temperature(xx(sites), 1.0, QuantityId::free_energy_per_site),
               -0.753795844896416683,
               rounding(1, 10));
    CHECK_NEAR(at_temperature(xx(sites), 2.0, QuantityId::free_energy_per_site),
               -1.41730355605068315,
               rounding(1, 10));
    CHECK_NEAR(at_temperature(xx(sites), 1.0, QuantityId::susceptibility),
               0.2222423758112006,
               rounding(1, 10));
    CHECK_NEAR(at_temperature(xx(sites), 0.316143438443331, QuantityId::specific_heat_per_site),
               0.326006871309995,
               rounding(1, 10));
}

}  // namespace
}  // namespace chainmark::test
