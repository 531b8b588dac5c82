#include <algorithm>
#include <optional>
#include <set>
#include <utility>

#include "fermion/support.hpp"

// Averages over ground spaces, degenerate ones above all, against an explicit matrix.

namespace chainmark::test {
namespace {

namespace em = explicit_matrix;

/// Expectation values of an explicit ground space are good to its rounding over its gap.
Allowed angle(const Reference& reference, std::size_t element, double rounding, double gap) {
    return bound(reference.bound[element] + 4 * rounding / gap);
}

struct Expected {
    em::Spectrum spectrum;
    int dimension;
    double gap;  ///< 0 where every level is a ground level
    double rounding;
};

Expected expect(const Model& model, double window) {
    Expected e{.spectrum = em::diagonalize(em::hamiltonian(model)),
               .dimension = 0,
               .gap = 0,
               .rounding = 0};
    e.dimension = em::degeneracy(e.spectrum, window);
    e.rounding = e.spectrum.error;
    if (e.dimension < e.spectrum.energies.size()) {
        e.gap = e.spectrum.energies(e.dimension) - e.spectrum.energies(0);
    }
    return e;
}

/// Where every ground state has an up count of its own, operators that keep it are diagonal between
/// them: smallest and largest average of a diagonal operator. Nothing elsewhere.
template <class Diagonal>
std::optional<std::pair<double, double>> range_of(const Expected& e,
                                                  int sites,
                                                  Diagonal&& diagonal) {
    std::set<int> counts;
    std::pair<double, double> range = {1e300, -1e300};
    for (int n = 0; n < e.dimension; ++n) {
        const em::Spectrum single{e.spectrum.energies.segment(n, 1), e.spectrum.states.col(n)};
        const auto mean = [&](auto&& f) { return em::average(single, 1, f); };
        counts.insert(static_cast<int>(std::lround(
            mean([&](int state) { return em::total_sz(state, sites) + sites / 2.0; }))));
        range.first = std::min(range.first, mean(diagonal));
        range.second = std::max(range.second, mean(diagonal));
    }
    return static_cast<int>(counts.size()) == e.dimension ? std::optional(range) : std::nullopt;
}

void check_range(const Reference& found,
                 int element,
                 const std::optional<std::pair<double, double>>& expected,
                 Allowed allowed) {
    REQUIRE(found.range.has_value() == expected.has_value());
    if (expected) {
        CHECK_NEAR(found.range->at(at(element)).first, expected->first, allowed);
        CHECK_NEAR(found.range->at(at(element)).second, expected->second, allowed);
    }
}

void check_sz(const Model& model, const Problem& problem, const Expected& e) {
    const int sites = model.chain.length();
    const Reference local = fermion(problem, QuantityId::local_magnetization);
    for (int j = 0; j < sites; ++j) {
        const double expected =
            em::average(e.spectrum, e.dimension, [&](int state) { return em::sz(state, j); });
        CHECK_NEAR(local.value.real_at(at(j)),
                   expected,
                   angle(local, at(j), e.rounding, e.gap > 0 ? e.gap : 1.0));
    }
    CHECK(local.degeneracy == e.dimension);
    for (int j = 0; j < sites; ++j) {
        check_range(local,
                    j,
                    range_of(e, sites, [&](int state) { return em::sz(state, j); }),
                    angle(local, at(j), e.rounding, e.gap > 0 ? e.gap : 1.0));
    }
    const Reference m = fermion(problem, QuantityId::magnetization);
    const auto per_site = [&](int state) { return em::total_sz(state, sites) / sites; };
    CHECK_NEAR(value(m),
               em::average(e.spectrum, e.dimension, per_site),
               angle(m, 0, e.rounding + epsilon, e.gap > 0 ? e.gap : 1.0));
    CHECK(m.range.has_value());
}

void check_szsz(const Model& model, const Problem& problem, const Expected& e, bool connected) {
    const int sites = model.chain.length();
    Options options;
    options.connected = connected;
    for (int r = 0; r < sites; ++r) {
        options.distance.push_back(r);
    }
    const Reference found = fermion(problem, QuantityId::spin_correlation, options);
    const auto average = [&](auto&& f) { return em::average(e.spectrum, e.dimension, f); };
    for (int r = 0; r < sites; ++r) {
        const int pairs = model.chain.is_ring() ? sites : sites - r;
        double mean = 0.0;
        for (int i = 0; i < pairs; ++i) {
            const int j = (i + r) % sites;
            mean += average([&](int state) { return em::sz(state, i) * em::sz(state, j); }) / pairs;
            if (connected) {
                mean -= average([&](int state) { return em::sz(state, i); }) *
                        average([&](int state) { return em::sz(state, j); }) / pairs;
            }
        }
        CHECK_NEAR(found.value.real_at(at(r)),
                   mean,
                   angle(found, at(r), e.rounding, e.gap > 0 ? e.gap : 1.0));
        const auto product = [&](int state) {
            double sum = 0.0;
            for (int i = 0; i < pairs; ++i) {
                sum += em::sz(state, i) * em::sz(state, (i + r) % sites) / pairs;
            }
            return sum;
        };
        check_range(found,
                    r,
                    connected ? std::nullopt : range_of(e, sites, product),
                    angle(found, at(r), e.rounding, e.gap > 0 ? e.gap : 1.0));
    }
}

void check_ground_space(const Model& model) {
    const Problem problem = problem_of(model);
    const Expected e = expect(model, ground_window(problem));
    const Reference energy = fermion(problem, QuantityId::ground_energy);
    CHECK_NEAR(value(energy), e.spectrum.energies(0), bound(energy.bound[0] + e.rounding));
    CHECK(energy.degeneracy == e.dimension);
    const Reference gap = fermion(problem, QuantityId::gap);
    if (e.gap > 0) {
        CHECK_NEAR(value(gap), e.gap, bound(gap.bound[0] + 2 * e.rounding));
    } else {
        CHECK(gap.value.special_at(0) == Special::undefined);
    }
    check_sz(model, problem, e);
    check_szsz(model, problem, e, false);
    check_szsz(model, problem, e, true);
}

TEST_CASE("uniform rings: unique and degenerate ground spaces") {
    for (const int sites : {3, 4, 5, 6, 7, 8}) {
        for (const double coupling : {1.0, -1.0}) {
            for (const double field : {0.0, 0.2, -0.55, 1.5}) {
                check_ground_space(xx_model(ring(sites), coupling, field));
            }
        }
        check_ground_space(xx_model(ring(sites, 0.7), 1.0, 0.1));
        check_ground_space(xx_model(ring(sites, pi), 1.0));
    }
}

TEST_CASE("at a jump the ground space holds several up counts") {
    const Model model = xx_model(ring(6), 1.0, 1.0);  // the last jump of an even ring, h = |J|
    check_ground_space(model);
    const Problem problem = problem_of(model);
    CHECK(fermion(problem, QuantityId::ground_energy).degeneracy == 2);
    const Reference m = fermion(problem, QuantityId::magnetization);
    REQUIRE(m.range.has_value());
    CHECK(m.range->front().first == 2.0 / 6);
    CHECK(m.range->front().second == 3.0 / 6);
    CHECK(fermion(problem, QuantityId::susceptibility).value.special_at(0) == Special::jump);
    const Reference between =
        fermion(problem_of(xx_model(ring(6), 1.0, 0.9)), QuantityId::susceptibility);
    CHECK(value(between) == 0.0);
    CHECK(between.bound[0] == 0.0);
}

TEST_CASE("open and random chains") {
    for (const int sites : {1, 2, 3, 5, 8}) {
        check_ground_space(xx_model(open_chain(sites), 1.0));  // odd: a zero mode, twofold
        check_ground_space(xx_model(open_chain(sites), -1.0, 0.3));
    }
    for (unsigned seed = 1; seed <= 5; ++seed) {
        check_ground_space(random_model(ring(6, 0.2), seed, true));
        check_ground_space(random_model(open_chain(7), seed, false));
    }
}

TEST_CASE("equal levels of a chain without translation symmetry") {
    // Two open chains of three sites, not coupled: a zero mode each, four ground states.
    Model model = xx_model(open_chain(6), 1.0);
    model.hop[2] = 0.0;
    check_ground_space(model);
    CHECK(fermion(problem_of(model), QuantityId::ground_energy).degeneracy == 4);
}

TEST_CASE("no couplings, no field: every state is a ground state") {
    check_ground_space(xx_model(ring(5), 0.0));
    check_ground_space(xx_model(open_chain(4), 0.0));
    CHECK(fermion(xx_problem(ring(16), 0.0), QuantityId::ground_energy).degeneracy == 65536);
    const Problem larger = xx_problem(ring(17), 0.0);
    CHECK(
        std::holds_alternative<Undecided>(ask(fermion_route(), larger, QuantityId::magnetization)));
    CHECK_FALSE(fermion(larger, QuantityId::ground_energy).degeneracy.has_value());
}

TEST_CASE("pairs, coinciding sites and transverse axes") {
    const Problem problem = xx_problem(ring(6), 1.0, 0.2);
    Options options;
    options.pairs = {{0, 0}, {4, 1}, {1, 4}};
    const Reference pairs = fermion(problem, QuantityId::spin_correlation, options);
    CHECK(pairs.value.real_at(0) == 0.25);
    CHECK_NEAR(pairs.value.real_at(1), pairs.value.real_at(2), bound(2 * pairs.bound[1]));
    for (const Axis axis : {Axis::x, Axis::y}) {
        Options along;
        along.axis = axis;
        const Reference unique = fermion(problem, QuantityId::local_magnetization, along);
        CHECK(unique.value.data == std::vector<Complex>(6));
        CHECK(unique.bound == std::vector<double>(6));
        CHECK(unique.range == Range(6, {0.0, 0.0}));
        const Reference several =
            fermion(xx_problem(ring(7), 1.0), QuantityId::local_magnetization, along);
        CHECK(several.value.data == std::vector<Complex>(7));
        CHECK_FALSE(several.range.has_value());
    }
}

TEST_CASE("a level at the edge of the window leaves the ground space open") {
    // The first gap of an open chain of two sites in a field h is |J/2| - |h|, here just the
    // window.
    const double window = 1e-10;
    const Problem problem = xx_problem(open_chain(2), 1.0, 0.5 - window);
    CHECK(std::holds_alternative<Undecided>(ask(fermion_route(), problem, QuantityId::gap)));
    CHECK(std::holds_alternative<Undecided>(
        ask(fermion_route(), problem, QuantityId::magnetization)));
    const Reference energy = fermion(problem, QuantityId::ground_energy);
    CHECK_FALSE(energy.degeneracy.has_value());
    CHECK_NEAR(value(energy), -0.5, bound(energy.bound[0]));
}

TEST_CASE("a batch of fields gives what single fields give") {
    Batch batch;
    for (const double field : {-1.2, -0.3, 0.0, 0.45, 2.0}) {
        batch.problems.push_back(xx_problem(ring(9), 1.0, field));
    }
    batch.queries = {query(QuantityId::ground_energy), query(QuantityId::magnetization)};
    const Answers answers = fermion_route().evaluate(batch, Context{});
    REQUIRE(answers.size() == batch.problems.size());
    for (std::size_t p = 0; p < batch.problems.size(); ++p) {
        for (std::size_t q = 0; q < 2; ++q) {
            const auto& together = std::get<Reference>(answers[p][q]);
            const Reference alone = fermion(batch.problems[p], batch.queries[q].spec->id);
            CHECK(together.value.data == alone.value.data);
            CHECK(together.route == RouteId::fermion);
            CHECK(together.seconds >= 0.0);
        }
    }
}

std::vector<double> modes(const Problem& problem, Parity parity) {
    Options options;
    options.parity = parity;
    const Reference reference = fermion(problem, QuantityId::mode_energies, options);
    std::vector<double> energies;
    for (const Complex& energy : reference.value.data) {
        energies.push_back(energy.real());
    }
    CHECK(std::is_sorted(energies.begin(), energies.end()));
    return energies;
}

void check_modes(const std::vector<double>& found, std::vector<double> expected) {
    std::sort(expected.begin(), expected.end());
    REQUIRE(found.size() == expected.size());
    for (std::size_t i = 0; i < found.size(); ++i) {
        CHECK_NEAR(found[i], expected[i], rounding(1.0, 8));
    }
}

TEST_CASE("mode energies: J cos k - h on the grid of the parity asked for") {
    const int sites = 6;
    const double field = 0.25;
    const Problem problem = xx_problem(ring(sites), 1.0, field);
    std::vector<double> even;
    std::vector<double> odd;
    for (int m = 0; m < sites; ++m) {
        even.push_back(std::cos(2 * pi * (m + 0.5) / sites) - field);
        odd.push_back(std::cos(2 * pi * m / sites) - field);
    }
    check_modes(modes(problem, Parity::even), even);
    check_modes(modes(problem, Parity::odd), odd);
    check_modes(modes(problem, Parity::ground_state), odd);  // three up spins
    std::vector<double> open;
    for (int m = 1; m <= sites; ++m) {
        open.push_back(std::cos(pi * m / (sites + 1)) - field);
    }
    for (const Parity parity : {Parity::even, Parity::odd, Parity::ground_state}) {
        check_modes(modes(xx_problem(open_chain(sites), 1.0, field), parity), open);
    }
    // An odd ring at h = 0 has ground states of both parities.
    const Answer unclear =
        ask(fermion_route(), xx_problem(ring(7), 1.0), QuantityId::mode_energies);
    REQUIRE(std::holds_alternative<Undecided>(unclear));
    CHECK(std::get<Undecided>(unclear).reason.find("give parity") != std::string::npos);
}

}  // namespace
}  // namespace chainmark::test
