#include "chainmark/fermion/enclosures.hpp"

#include "fermion/support.hpp"

// Certified digits against the published numbers, against the floating-point route, whose bounds
// must contain them, and against explicit matrices.
//   [LSM]  E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).
//   [Pf]   P. Pfeuty, Ann. Phys. (NY) 57, 79 (1970).
//   [LSM, Pf]: published formulas, their decimals evaluated outside the project.

namespace chainmark::test {
namespace {

constexpr QuantityId energy_id = QuantityId::ground_energy;
constexpr QuantityId m_id = QuantityId::magnetization;
constexpr QuantityId spins_id = QuantityId::spin_correlation;

Problem family_at(const char* name,
                  const std::vector<double>& values,
                  const Chain& chain,
                  double field) {
    const Family* family = find_family(name);
    return {.chain = chain,
            .terms = std::make_shared<TermList>(
                build_terms(chain, family->terms(values, chain), Coincident::refuse, family->cell)
                    .value()),
            .field = field};
}

std::optional<Reference> enclose(const Problem& problem,
                                 QuantityId id,
                                 int digits,
                                 const Options& options = {}) {
    Context context;
    context.digits = digits;
    return fermion::enclose(problem, query(id, options), context);
}

/// The decimals that `mid` shares with a longer text.
bool starts_like(const std::string& mid, const std::string& expected) {
    return mid.substr(0, expected.size()) == expected;
}

double radius(const Reference& reference) {
    return std::stod(reference.enclosure.at(0).radius);
}

TEST_CASE("XX rings: E0 = -1/sin(pi/L), -cos(pi/L)/(2 sin(pi/2L)), to 20 published digits [LSM]") {
    if (!fermion::can_enclose()) {
        return;
    }
    for (const auto& [sites, expected] : {std::pair{4, "-1.41421356237309504880"},
                                          {8, "-2.61312592975275305571"},
                                          {12, "-3.86370330515627314699"},
                                          {24, "-7.66129757554038866909"},
                                          {7, "-2.02445866976115265676"},
                                          {13, "-4.02757822502405445017"}}) {
        const auto found = enclose(xx_problem(ring(sites), 1.0), energy_id, 40);
        REQUIRE(found.has_value());
        INFO(found->enclosure[0].mid);
        CHECK(starts_like(found->enclosure[0].mid, expected));
        CHECK(radius(*found) < 1e-39);
        CHECK(found->basis == Basis::enclosure);
    }
}

TEST_CASE("open XX chains: E0 = 1/2 - 1/(2 sin(pi/(2(L+1)))), even L [LSM]") {
    if (!fermion::can_enclose()) {
        return;
    }
    for (const auto& [sites, expected] : {std::pair{4, "-1.11803398874989484820"},
                                          {8, "-2.37938524157181676810"},
                                          {20, "-6.19074499982737680823"}}) {
        const auto found = enclose(xx_problem(open_chain(sites), 1.0), energy_id, 30);
        REQUIRE(found.has_value());
        CHECK(starts_like(found->enclosure[0].mid, expected));
    }
}

TEST_CASE(
    "critical Ising rings: E0 = -2/sin(pi/2L), gap 2 tan(pi/4L), <sz> = 1/(L sin(pi/2L)) [Pf]") {
    if (!fermion::can_enclose()) {
        return;
    }
    const auto ising = [](int sites) { return family_at("tfim", {-4.0}, ring(sites), 2.0); };
    CHECK(starts_like(enclose(ising(8), energy_id, 30)->enclosure[0].mid, "-10.2516617909660247"));
    CHECK(starts_like(enclose(ising(12), energy_id, 30)->enclosure[0].mid, "-15.3225951510807773"));
    CHECK(starts_like(enclose(ising(8), QuantityId::gap, 30)->enclosure[0].mid,
                      "0.19698280671432850615"));
    CHECK_NEAR(2 * std::stod(enclose(ising(10), m_id, 30)->enclosure[0].mid),
               0.6392453221499662,
               published(15));
}

TEST_CASE("XY rings: the lowest level of either parity [LSM]") {
    if (!fermion::can_enclose()) {
        return;
    }
    const auto lowest = [](int sites, double gamma, double field) {
        return std::stod(enclose(family_at("xy", {1.0, gamma}, ring(sites), field), energy_id, 30)
                             ->enclosure[0]
                             .mid);
    };
    CHECK_NEAR(lowest(6, 0.5, 0.3), -2.39439674777901, published(13));   // even
    CHECK_NEAR(lowest(8, 0.5, 0.3), -3.18965767046006, published(13));   // odd
    CHECK_NEAR(lowest(10, 0.5, 0.3), -3.98482793381842, published(13));  // even
    CHECK_NEAR(lowest(8, 0.25, 0.6), -3.19118943316426, published(13));  // even
}

/// Distance of a bounded double from a decimal, in long double: digits beyond do not matter.
long double distance(double value, const Enclosure& enclosure) {
    return std::abs(static_cast<long double>(value) - std::stold(enclosure.mid));
}

/// The floating-point route's bound contains the enclosure.
void check_contained(const Problem& problem, QuantityId id, const Options& options, int& compared) {
    const Answer answer = ask(fermion_route(), problem, id, options);
    const auto certified = enclose(problem, id, 30, options);
    const auto* found = std::get_if<Reference>(&answer);
    if (found == nullptr || !certified) {
        return;
    }
    REQUIRE(found->value.data.size() == certified->enclosure.size());
    for (std::size_t i = 0; i < certified->enclosure.size(); ++i) {
        ++compared;
        const long double error = distance(found->value.real_at(i), certified->enclosure[i]);
        CHECK_MESSAGE(error <= found->bound[i] + std::stold(certified->enclosure[i].radius),
                      spec_of(id).name,
                      " on ",
                      to_string(problem.chain),
                      ", h = ",
                      problem.field,
                      ": ",
                      found->value.real_at(i),
                      " +- ",
                      found->bound[i],
                      ", enclosure ",
                      certified->enclosure[i].mid);
    }
}

TEST_CASE("bounds of doubles contain the certified numbers: a thousand random uniform chains") {
    if (!fermion::can_enclose()) {
        return;
    }
    std::mt19937_64 generator(11);
    std::uniform_real_distribution<double> uniform(-1.5, 1.5);
    std::uniform_int_distribution<int> any_length(3, 60);
    int compared = 0;
    for (int sample = 0; sample < 1000; ++sample) {
        const int sites = any_length(generator);
        const double coupling = uniform(generator);
        const double field = sample % 5 == 0 ? 0.0 : uniform(generator);
        const Chain chain = sample % 4 == 0   ? open_chain(sites)
                            : sample % 4 == 1 ? ring(sites, pi)
                                              : ring(sites);
        const Problem problem = sample % 4 == 0 || sample % 3 == 0
                                    ? xx_problem(chain, coupling, field)
                                    : family_at("xy", {coupling, uniform(generator)}, chain, field);
        Options options;
        options.distance = {1, sites / 2};
        options.pairs = {{0, sites - 1}};
        options.connected = sample % 2 == 0;
        check_contained(problem, energy_id, {}, compared);
        check_contained(problem, QuantityId::gap, {}, compared);
        check_contained(problem, m_id, {}, compared);
        check_contained(problem, spins_id, options, compared);
    }
    CHECK(compared > 1500);
}

TEST_CASE("long chains, up to 10^5 sites") {
    if (!fermion::can_enclose()) {
        return;
    }
    const int sites = 100000;
    const Problem xx = long_xx_problem(ring(sites), 1.0, 0.3);
    const auto energy = enclose(xx, energy_id, 30);
    REQUIRE(energy.has_value());
    CHECK(radius(*energy) < 1e-24);  // of 33274
    const Reference found = fermion(xx, energy_id);
    CHECK(distance(value(found), energy->enclosure[0]) <= found.bound[0]);
    Options options;
    options.distance = {1, 77, 50000};
    const auto zz = enclose(long_xx_problem(ring(sites), 1.0, 0.0), spins_id, 30, options);
    REQUIRE(zz.has_value());
    // -1/(L sin(pi r/L))^2 for odd r, 0 for even r [LSM]
    const double sine = sites * std::sin(pi * 77 / sites);
    CHECK_NEAR(std::stod(zz->enclosure[1].mid), -1 / (sine * sine), rounding(1e-4, 16));
    CHECK(std::abs(std::stod(zz->enclosure[2].mid)) <= 1e-28);
}

TEST_CASE("the context's digits reach the route; what is known of the ground space stays") {
    if (!fermion::can_enclose()) {
        return;
    }
    Context context;
    context.digits = 25;
    const Problem problem = xx_problem(ring(8), 1.0, 0.1);
    const Batch batch{.problems = {problem}, .queries = {query(energy_id), query(m_id)}};
    const Answers answers = fermion_route().evaluate(batch, context);
    const auto& energy = std::get<Reference>(answers[0][0]);
    CHECK(energy.basis == Basis::enclosure);
    CHECK(energy.enclosure.size() == 1);
    CHECK(energy.bound[0] < 3e-16);
    const auto& m = std::get<Reference>(answers[0][1]);
    CHECK(m.degeneracy == 1);
    CHECK(m.enclosure[0].mid == "0");
    CHECK(fermion(problem, energy_id).enclosure.empty());
}

TEST_CASE("what cannot be certified has no enclosure") {
    const Options none;
    CHECK(!enclose(problem_of(random_model(ring(6), 3, false)), energy_id, 30));  // not uniform
    CHECK(!enclose(xx_problem(ring(6, 0.3), 1.0), energy_id, 30));                // complex
    CHECK(!enclose(xx_problem(ring(5), 1.0), m_id, 30));  // fourfold ground space
    CHECK(!enclose(family_at("tfim", {1.0}, open_chain(6), 0.3), energy_id, 30));
    CHECK(!enclose(xx_problem(ring(6), 1.0), QuantityId::susceptibility, 30));
    Options xx;
    xx.axes = Axes::xx;
    xx.distance = {1};
    CHECK(!enclose(xx_problem(ring(6), 1.0), spins_id, 30, xx));
    // at a crossing of the parities the energy alone is certain
    const double jump = std::sqrt(2.0) - 1;  // tan(pi/8), L = 4
    CHECK(!enclose(xx_problem(ring(4), 1.0, jump), m_id, 30));
}

}  // namespace
}  // namespace chainmark::test
