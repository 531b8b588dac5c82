#include <cmath>

#include "published/by_routes.hpp"

// Infinite XX, XY, Ising and alternating XX chains by route `limit`.
//   [LSM]  E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
//   [Ka]   S. Katsura, Phys. Rev. 127, 1508 (1962).
//   [Mc]   B. M. McCoy, Phys. Rev. 173, 531 (1968).
//   [Pf]   P. Pfeuty, Ann. Phys. (NY) 57, 79 (1970).
//   [BM]   E. Barouch, B. M. McCoy, Phys. Rev. A 3, 786 (1971).
//   [Pi]   P. Pincus, Solid State Commun. 9, 1971 (1971).
//   [KTM]  J. Kurmann, H. Thomas, G. Mueller, Physica A 112, 235 (1982).
// Published formulas, whose decimals were evaluated outside the project, except where a row says
// `printed`. Pauli forms are H = -Jp sum sx sx - hp sum sz: our tfim with J = -4 Jp, h = 2 hp.

using namespace chainmark;
using namespace chainmark::test;

namespace {

Problem infinite(const char* name,
                 const std::vector<double>& values,
                 double field,
                 std::optional<double> temperature = {}) {
    Problem problem =
        family_problem(name, values, {.sites = {}, .boundary = BoundaryKind::ring}, field);
    problem.temperature = temperature;
    return problem;
}

Problem pauli_ising(double jp, double hp) {
    return infinite("tfim", {-4 * jp}, 2 * hp);
}

Reference limit(const Problem& problem, QuantityId id, const Options& options = {}) {
    return ask(limit_route(), problem, id, options);
}

double number(const Problem& problem, QuantityId id) {
    return limit(problem, id).value.real_at(0);
}

Options correlation(Axes axes, std::vector<int> distance, bool connected = false) {
    Options options = distances(std::move(distance));
    options.axes = axes;
    options.connected = connected;
    return options;
}

constexpr QuantityId energy_id = QuantityId::ground_energy_per_site;
constexpr QuantityId m_id = QuantityId::magnetization;
constexpr QuantityId spins_id = QuantityId::spin_correlation;

/// (pi/2)/E(m) with 1 - m = (b/a)^2, by the arithmetic-geometric mean: E/K = 1 - sum_n 2^{n-1}
/// c_n^2 for a = 1, K = pi/(2 agm). (C. F. Gauss; common practice, no source.)
double mean_ratio(double a, double b) {
    long double x = 1.0L;
    long double y = std::abs(static_cast<long double>(b) / a);
    long double lost = (1 - y * y) / 2;
    for (long double weight = 1.0L; std::abs(x - y) > 1e-18L; weight *= 2) {
        const long double half = (x - y) / 2;
        const long double next = (x + y) / 2;
        y = std::sqrt(x * y);
        x = next;
        lost += weight * half * half;
        if (y == 0.0L) {
            return pi / 2;  // m = 1: E = 1
        }
    }
    return static_cast<double>(x / (1 - lost));
}

/// What the finite distance or size leaves over.
Allowed allow_next_order(double size) {
    return {size, "next order"};
}

}  // namespace

TEST_CASE("infinite Ising chain: e0 = -(2/pi)(Jp + hp) E(m), m = 4 Jp hp/(Jp + hp)^2 [Pf]") {
    for (const auto& [hp, energy] : {std::pair{0.25, -1.015687012852752},
                                     {0.75, -1.146479754370767},
                                     {1.0, -1.273239544735163},
                                     {1.5, -1.671926221536195},
                                     {2.0, -2.127088819946730}}) {
        const double found = number(pauli_ising(1.0, hp), energy_id);
        CHECK_NEAR(found, energy, published(15));
        CHECK_NEAR(found, -(1 + hp) / mean_ratio(1 + hp, 1 - hp), rounding(2.0, 8));
    }
    CHECK_NEAR(number(infinite("tfim", {-1.0}, 0.5), energy_id), -0.318309886183791, published(15));
    CHECK_NEAR(2 * number(pauli_ising(1.0, 1.0), m_id), 0.636619772367581, published(15));
}

TEST_CASE("infinite Ising chain: gaps 2 |Jp - hp|, of two domain walls 4 |Jp - hp| [Pf]") {
    CHECK_NEAR(number(pauli_ising(1.0, 1.75), QuantityId::gap), 1.5, rounding(2.0, 8));
    CHECK_NEAR(number(pauli_ising(1.0, 0.75), QuantityId::gap), 1.0, rounding(2.0, 8));
}

TEST_CASE("critical Ising chain: <sx sx>_r, connected <sz sz>_r = 4/(pi^2 (4 r^2 - 1)) [Pf]") {
    // (2/pi)^r 2^{2r(r-1)} H(r)^4/H(2r), H(n) = prod_k k^{n-k}
    const std::vector<int> distance = {1, 2, 3, 4, 5, 6, 8};
    const std::vector<double> expected = {0.636619772367581,
                                          0.540379646092468,
                                          0.489267722364389,
                                          0.455647094547635,
                                          0.431072253099720,
                                          0.411942252110204,
                                          0.383427490615362};
    const Reference xx = limit(pauli_ising(1.0, 1.0), spins_id, correlation(Axes::xx, distance));
    for (std::size_t i = 0; i < expected.size(); ++i) {
        CHECK_NEAR(4 * xx.value.real_at(i), expected[i], published(14));
        CHECK(xx.bound[i] < 1e-15);
    }
    const Reference zz =
        limit(pauli_ising(1.0, 1.0), spins_id, correlation(Axes::zz, {1, 2, 3}, true));
    CHECK_NEAR(4 * zz.value.real_at(0), 0.135094911523117, published(15));
    CHECK_NEAR(4 * zz.value.real_at(1), 0.027018982304623, published(15));
    CHECK_NEAR(4 * zz.value.real_at(2), 0.011579563844839, published(15));
}

TEST_CASE("critical Ising chain: <sx sx>_r ~ A r^{-1/4}, A = 0.6450024485 [Pf; Mc, printed]") {
    const Reference xx = limit(pauli_ising(1.0, 1.0), spins_id, correlation(Axes::xx, {200, 400}));
    // next term -(1/64) r^{-2}: from the two distances in 1/r^2
    const double near = 4 * xx.value.real_at(0) * std::pow(200.0, 0.25);
    const double far = 4 * xx.value.real_at(1) * std::pow(400.0, 0.25);
    CHECK_NEAR(far + (far - near) / 3, 0.6450024485, allow_next_order(2e-10));
}

TEST_CASE("ordered Ising chain: <sx sx>_r -> (1 - (hp/Jp)^2)^{1/4} [Pf]") {
    for (const auto& [hp, order] :
         {std::pair{0.3, 0.988280381121431}, {0.5, 0.964678629960309}, {0.8, 0.880111736793393}}) {
        const Reference xx =
            limit(pauli_ising(1.0, hp), spins_id, correlation(Axes::xx, {80, 160}));
        CHECK_NEAR(4 * xx.value.real_at(1), order * order, allow_next_order(1e-13));
        CHECK(4 * xx.value.real_at(0) >= order * order - 1e-13);
    }
}

TEST_CASE("infinite XY chain: energies [LSM, BM, Ka]") {
    for (const auto& [gamma, energy] :
         {std::pair{0.25, -0.341324557360840}, {0.5, -0.385491106297510}, {1.0, -0.5}}) {
        CHECK_NEAR(number(infinite("xy", {1.0, gamma}, 0.0), energy_id), energy, published(15));
    }
    struct Row {
        double gamma, field, energy;
    };
    for (const auto& [gamma, field, energy] : {Row{0.5, 0.5, -0.421828357570011},
                                               Row{0.5, 1.0, -0.544055122551646},
                                               Row{0.3, 0.7, -0.425988961144107}}) {
        CHECK_NEAR(number(infinite("xy", {1.0, gamma}, field), energy_id), energy, published(15));
    }
}

TEST_CASE("ordered XY chain: |<Sx Sx>_r| -> (g^2 (1 - h^2))^{1/4}/(2 (1 + g)) [BM]") {
    struct Row {
        double gamma, field, order;
    };
    for (const auto& [gamma, field, order] : {Row{0.5, 0.0, 0.235702260395516},
                                              Row{0.5, 0.5, 0.219345668825415},
                                              Row{0.7, 0.4, 0.235580817481409}}) {
        const Problem problem = infinite("xy", {1.0, gamma}, field);
        const Reference xx = limit(problem, spins_id, correlation(Axes::xx, {120, 121}));
        CHECK_NEAR(xx.value.real_at(0), order, allow_next_order(1e-13));
        CHECK_NEAR(xx.value.real_at(1), -order, allow_next_order(1e-13));
        const Reference yy = limit(problem, spins_id, correlation(Axes::yy, {120}));
        CHECK_NEAR(yy.value.real_at(0), 0.0, allow_next_order(1e-13));
    }
}

TEST_CASE("factorizing field: |<Sx Sx>_r| = g/(2 (1 + g)) at every r, e0 = -1/2 [KTM]") {
    const Problem problem = infinite("xy", {1.0, 0.5}, std::sqrt(0.75));
    CHECK_NEAR(number(problem, energy_id), -0.5, rounding(1.0, 4));
    CHECK_NEAR(number(problem, m_id), 0.288675134594813, published(15));
    const Reference xx = limit(problem, spins_id, correlation(Axes::xx, {1, 2, 7, 30}));
    for (std::size_t i = 0; i < 4; ++i) {
        const double sign = i == 0 || i == 2 ? -1.0 : 1.0;
        CHECK_NEAR(xx.value.real_at(i), sign / 6, rounding(1.0, 16));
    }
}

TEST_CASE("infinite XX chain: <Sx Sx>_r are rational multiples of pi^{-r} [LSM, Mc]") {
    const std::vector<double> expected = {-0.159154943091895,
                                          0.101321183642338,
                                          -0.086004091821865,
                                          0.073002540477755,
                                          -0.066097579663934,
                                          0.059845726036909,
                                          -0.055733354037818,
                                          0.051903568692425};
    const Reference xx = limit(
        infinite("xx", {1.0}, 0.0), spins_id, correlation(Axes::xx, {1, 2, 3, 4, 5, 6, 7, 8}));
    for (std::size_t i = 0; i < expected.size(); ++i) {
        CHECK_NEAR(xx.value.real_at(i), expected[i], published(14));
    }
    // |<Sx Sx>_r| ~ 0.1470881 r^{-1/2} (printed as e^{1/2} 2^{-4/3} A^{-6})
    const Reference far =
        limit(infinite("xx", {-1.0}, 0.0), spins_id, correlation(Axes::xx, {400}));
    CHECK_NEAR(far.value.real_at(0) * 20.0, 0.14708816604942, allow_next_order(1e-6));
}

TEST_CASE("infinite XX chain at a temperature [Ka]") {
    for (const auto& [temperature, energy] : {std::pair{0.1, -0.323614124314495},
                                              {0.5, -0.458704490325925},
                                              {1.0, -0.753795844896417},
                                              {2.0, -1.417303556050683}}) {
        CHECK_NEAR(
            number(infinite("xx", {1.0}, 0.0, temperature), QuantityId::free_energy_per_site),
            energy,
            published(15));
    }
    CHECK_NEAR(number(infinite("xx", {1.0}, 0.0, 1.0), QuantityId::susceptibility),
               0.2222423758112006,
               published(15));
    // the specific heat has its maximum 0.326006871309995 at T = 0.316143438443331
    const auto heat = [](double t) {
        return number(infinite("xx", {1.0}, 0.0, t), QuantityId::specific_heat_per_site);
    };
    const double peak = 0.316143438443331;
    CHECK_NEAR(heat(peak), 0.326006871309995, published(15));
    CHECK(heat(peak * 1.001) < heat(peak));
    CHECK(heat(peak * 0.999) < heat(peak));
}

TEST_CASE("infinite alternating chain: e0 = -(1/pi) E(1 - delta^2), gap delta [Pi]") {
    for (const auto& [delta, energy] :
         {std::pair{0.2, -0.334385244307239}, {0.5, -0.385491106297510}}) {
        const Problem problem = infinite("dimer_xx", {1.0, delta}, 0.0);
        CHECK_NEAR(number(problem, energy_id), energy, published(15));
        CHECK_NEAR(number(problem, QuantityId::gap), delta, rounding(1.0, 4));
    }
}

namespace {

struct Chain1 {
    const char* family;
    std::vector<double> values;
    double field;
};

/// Every correlation at distances 0 ... 3 on a ring and on the infinite chain.
void check_correlations(const Chain1& row,
                        std::optional<double> temperature,
                        int sites,
                        double corrections) {
    Problem finite = family_problem(row.family, row.values, ring(sites), row.field);
    finite.temperature = temperature;
    const Problem whole = infinite(row.family, row.values, row.field, temperature);
    for (const Axes axes : {Axes::xx, Axes::yy, Axes::zz, Axes::plus_minus, Axes::dot}) {
        for (const bool connected : {false, true}) {
            const Options options = correlation(axes, {0, 1, 2, 3}, connected);
            const Reference expected = ask(sector_route(), finite, spins_id, options);
            const Reference found = limit(whole, spins_id, options);
            CHECK(found.value.complex == expected.value.complex);
            for (std::size_t i = 0; i < 4; ++i) {
                INFO(row.family << ", axes " << to_string(axes) << ", r = " << i);
                CHECK_NEAR(found.value.real_at(i),
                           expected.value.real_at(i),
                           allow_next_order(corrections));
            }
        }
    }
    // one pair inside a cell, one between cells
    Options options;
    options.axes = Axes::xx;
    options.pairs = {{0, 1}, {1, 2}, {4, 2}, {1, 4}};
    const Reference expected = ask(sector_route(), finite, spins_id, options);
    const Reference found = limit(whole, spins_id, options);
    for (std::size_t i = 0; i < 4; ++i) {
        CHECK_NEAR(
            found.value.real_at(i), expected.value.real_at(i), allow_next_order(corrections));
    }
}

const std::vector<Chain1> warm_chains = {{"xx", {1.0}, 0.7},
                                         {"xx", {-1.0}, -0.4},
                                         {"xy", {1.0, 0.6}, 0.5},
                                         {"xy", {-1.0, -0.6}, 1.3},
                                         {"tfim", {2.0}, 0.6},
                                         {"tfim", {-2.0}, -1.0},
                                         {"dimer_xx", {1.0, 0.4}, 0.5},
                                         {"dimer_xx", {-1.0, -0.4}, -0.9},
                                         {"dimer_xx", {1.0, 1.5}, 0.3}};

}  // namespace

TEST_CASE(
    "hot rings are as good as infinite: all routes' thermal averages [exact up to (J/4T)^L]") {
    const double temperature = 8.0;
    const int sites = 10;
    for (const Chain1& row : warm_chains) {
        INFO(row.family << " at h = " << row.field);
        Problem finite = family_problem(row.family, row.values, ring(sites), row.field);
        finite.temperature = temperature;
        const Problem whole = infinite(row.family, row.values, row.field, temperature);
        for (const QuantityId id : {QuantityId::free_energy_per_site,
                                    QuantityId::energy_per_site,
                                    QuantityId::entropy_per_site,
                                    QuantityId::specific_heat_per_site,
                                    QuantityId::magnetization,
                                    QuantityId::susceptibility}) {
            INFO(spec_of(id).name);
            CHECK_NEAR(number(whole, id),
                       ask(sector_route(), finite, id).value.real_at(0),
                       allow_next_order(1e-10));
        }
        // the other way round, over seven bonds, counts (1/16)^7
        check_correlations(row, temperature, sites, 3e-9);
    }
}

TEST_CASE("rings with a large gap are as good as infinite [exact up to exp(-L/length)]") {
    for (const Chain1& row : {Chain1{"tfim", {1.0}, 2.0},
                              Chain1{"xy", {1.0, 0.6}, -3.0},
                              Chain1{"xy", {-1.0, 0.3}, 4.0},
                              Chain1{"dimer_xx", {1.0, 0.9}, 0.3},
                              Chain1{"dimer_xx", {1.0, -0.9}, 0.0},
                              Chain1{"dimer_xx", {-1.0, 1.1}, -0.3}}) {
        INFO(row.family << " at h = " << row.field);
        const Problem finite = family_problem(row.family, row.values, ring(12), row.field);
        const Problem whole = infinite(row.family, row.values, row.field);
        for (const QuantityId id : {energy_id, m_id, QuantityId::susceptibility, QuantityId::gap}) {
            INFO(spec_of(id).name);
            // the gap's band has a width of its own: k = 0 or pi belongs to the odd class
            CHECK_NEAR(number(whole, id),
                       ask(sector_route(), finite, id).value.real_at(0),
                       allow_next_order(1e-5));
        }
        check_correlations(row, {}, 12, 1e-5);
    }
}

TEST_CASE("blocks of the infinite XX and Ising chains [VLRK; JK; IJ]") {
    // G. Vidal et al., Phys. Rev. Lett. 90, 227902 (2003); B.-Q. Jin, V. E. Korepin, J. Stat. Phys.
    // 116, 79 (2004); F. Igloi, R. Juhasz, Europhys. Lett. 81, 57003 (2008): decimals evaluated
    // outside the project.
    const auto entropy = [](const Problem& problem, int sites, int order = 1) {
        Options options;
        options.order = order;
        for (int j = 0; j < sites; ++j) {
            options.block.push_back(j);
        }
        return limit(problem, QuantityId::entanglement_entropy, options).value.real_at(0);
    };
    const Problem xx = infinite("xx", {1.0}, 0.0);
    CHECK_NEAR(entropy(xx, 1), 0.6931471805599, published(13));
    CHECK_NEAR(entropy(xx, 3), 1.0892457664920, published(13));
    CHECK_NEAR(entropy(xx, 4), 1.1868170225523, published(13));
    CHECK_NEAR(entropy(xx, 8), 1.4189424600239, published(13));
    CHECK_NEAR(entropy(xx, 100), 2.2611220298979, published(12));  // the source vouches for 12
    // an XX block of 2l sites holds two Ising ones of l
    const Problem ising = pauli_ising(-1.0, 1.0);
    for (const int sites : {1, 5, 40}) {
        for (const int order : {1, 2, 3}) {
            CHECK_NEAR(
                2 * entropy(ising, sites, order), entropy(xx, 2 * sites, order), rounding(2.0, 16));
        }
    }
    // S = (1/6) ln l + 0.478558014254
    CHECK_NEAR(entropy(ising, 200) - std::log(200.0) / 6, 0.478558014254, allow_next_order(1e-6));
    // with a large gap a ring of 12 is as good as infinite; odd and even first sites differ on
    // dimers
    for (const Chain1& row : {Chain1{"tfim", {-4.0}, 8.0},
                              Chain1{"dimer_xx", {1.0, 0.9}, 0.2},
                              Chain1{"dimer_xx", {1.0, -0.9}, 0.0}}) {
        Options options;
        options.block = {1, 2, 3};
        CHECK_NEAR(limit(infinite(row.family, row.values, row.field),
                         QuantityId::entanglement_entropy,
                         options)
                       .value.real_at(0),
                   ask(sector_route(),
                       family_problem(row.family, row.values, ring(12), row.field),
                       QuantityId::entanglement_entropy,
                       options)
                       .value.real_at(0),
                   allow_next_order(1e-5));
    }
    const Answer ordered =
        answer(limit_route(), pauli_ising(1.0, 0.5), query(QuantityId::entanglement_entropy, [] {
                   Options options;
                   options.block = {0, 1};
                   return options;
               }()));
    CHECK(std::holds_alternative<Undecided>(ordered));
}

TEST_CASE("string order: rings with a large gap are as good as infinite") {
    for (const Chain1& row : {Chain1{"tfim", {1.0}, 2.0},
                              Chain1{"xy", {-1.0, 0.3}, 4.0},
                              Chain1{"dimer_xx", {1.0, 0.9}, 0.3},
                              Chain1{"dimer_xx", {-1.0, -0.9}, 0.0}}) {
        for (const Axis axis : {Axis::x, Axis::y, Axis::z}) {
            Options options = distances({1, 2, 3, 4});
            options.axis = axis;
            const Reference expected =
                ask(sector_route(),
                    family_problem(row.family, row.values, ring(12), row.field),
                    QuantityId::string_order,
                    options);
            const Reference found = limit(
                infinite(row.family, row.values, row.field), QuantityId::string_order, options);
            for (std::size_t i = 0; i < 4; ++i) {
                INFO(row.family << ", axis " << to_string(axis) << ", r = " << i + 1);
                CHECK_NEAR(
                    found.value.real_at(i), expected.value.real_at(i), allow_next_order(1e-5));
            }
        }
    }
}
