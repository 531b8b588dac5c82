#include "fermion/support.hpp"

// The infinite XX chain.
//   [K]   S. Katsura, Phys. Rev. 127, 1508 (1962).
//   [LSM] E. Lieb, T. Schultz, D. Mattis, Ann. Phys. (NY) 16, 407 (1961).

namespace chainmark::test {
namespace {

using Wide = long double;
constexpr Wide wide_pi = std::numbers::pi_v<Wide>;

Problem infinite(double coupling, double field, const Chain& beside = ring(8)) {
    Chain chain = beside;
    chain.sites.reset();
    return xx_problem(chain, coupling, field);
}

Reference limit(const Problem& problem, QuantityId id, const Options& options = {}) {
    return get(limit_route(), problem, id, options);
}

TEST_CASE("energy, magnetization and susceptibility [K, LSM, formula]") {
    const Reference energy = limit(infinite(1.0, 0.0), QuantityId::ground_energy_per_site);
    CHECK_NEAR(value(energy), -0.318309886183791, published(15));
    CHECK(energy.route == RouteId::limit);
    const auto m = [](double h) { return limit(infinite(1.0, h), QuantityId::magnetization); };
    CHECK_NEAR(value(m(0.25)), 0.080430623255166, published(15));
    CHECK_NEAR(value(m(0.5)), 0.166666666666667, published(15));
    CHECK_NEAR(value(m(-0.5)), -0.166666666666667, published(15));
    const Reference chi = limit(infinite(1.0, 0.0), QuantityId::susceptibility);
    CHECK_NEAR(value(chi), 0.318309886183791, published(15));
}

TEST_CASE("zz correlations at h = 0: -1/(pi r)^2 for odd r, exactly 0 for even r [LSM, formula]") {
    Options options;
    options.distance = {1, 2, 5, 7, 1000, 1001};
    const Reference found = limit(infinite(1.0, 0.0), QuantityId::spin_correlation, options);
    CHECK_NEAR(found.value.real_at(0), -0.101321183642338, published(15));
    CHECK(found.value.real_at(1) == 0.0);
    CHECK_NEAR(found.value.real_at(2), -0.004052847345694, published(15));
    CHECK_NEAR(found.value.real_at(3), -0.002067779258007, published(15));
    CHECK(found.value.real_at(4) == 0.0);
    CHECK_NEAR(found.value.real_at(5), -1 / (pi * pi * 1001 * 1001), bound(found.bound[5]));
}

/// Midpoint rule for (1/2 pi) int f(k) dk over the occupied part of the band, independent of the
/// closed forms; the band edge is the only place where it is not smooth, so it converges as 1/n^2
/// when the occupied interval is cut exactly.
template <class Function>
double over_occupied(double coupling, double field, Function&& f) {
    constexpr int points = 20000;
    const double edge = std::acos(std::clamp(field / coupling, -1.0, 1.0));
    const double from = coupling > 0 ? edge : 0.0;  // J cos k < h
    const double to = coupling > 0 ? pi : edge;
    double sum = 0.0;
    for (int i = 0; i < points; ++i) {
        sum += f(from + (to - from) * (i + 0.5) / points);
    }
    return sum * (to - from) / points / pi;
}

TEST_CASE("the closed forms are integrals over the occupied band") {
    const Allowed midpoint{2e-8, "midpoint rule"};
    for (const double coupling : {1.0, -1.7}) {
        for (const double field : {-2.5, -1.0, -0.6, 0.0, 0.3, 0.99, 4.0}) {
            const Problem problem = infinite(coupling, field);
            const auto one = [](double) { return 1.0; };
            const auto band = [&](double k) { return coupling * std::cos(k) - field; };
            CHECK_NEAR(value(limit(problem, QuantityId::magnetization)),
                       over_occupied(coupling, field, one) - 0.5,
                       midpoint);
            CHECK_NEAR(value(limit(problem, QuantityId::ground_energy_per_site)),
                       over_occupied(coupling, field, band) + field / 2,
                       midpoint);
            Options options;
            options.pairs = {{0, 3}, {3, 0}, {2, 2}};
            const Reference zz = limit(problem, QuantityId::spin_correlation, options);
            const double n = over_occupied(coupling, field, one);
            const double g =
                over_occupied(coupling, field, [](double k) { return std::cos(3 * k); });
            CHECK_NEAR(zz.value.real_at(0), (n - 0.5) * (n - 0.5) - g * g, midpoint);
            CHECK(zz.value.data[0] == zz.value.data[1]);
            CHECK(zz.value.real_at(2) == 0.25);
            options.connected = true;
            const Reference connected = limit(problem, QuantityId::spin_correlation, options);
            CHECK_NEAR(connected.value.real_at(0), -g * g, midpoint);
            CHECK_NEAR(connected.value.real_at(2), 0.25 - (n - 0.5) * (n - 0.5), midpoint);
        }
    }
}

TEST_CASE("the susceptibility is the slope of the magnetization") {
    for (const double field : {-0.7, 0.0, 0.3, 0.95}) {
        const double step = 1e-5;
        const auto m = [&](double h) {
            return value(limit(infinite(1.3, h), QuantityId::magnetization));
        };
        CHECK_NEAR(value(limit(infinite(1.3, field), QuantityId::susceptibility)),
                   (m(field + step) - m(field - step)) / (2 * step),
                   allow(1e-9, "second difference"));
    }
}

TEST_CASE("bounds hold and are close, also next to saturation") {
    std::mt19937_64 generator(3);
    std::uniform_real_distribution<double> uniform(-2.0, 2.0);
    double worst = 0.0;
    for (int sample = 0; sample < 2000; ++sample) {
        const double coupling = uniform(generator);
        const double size = std::abs(coupling);
        const double field =
            sample % 2 == 0 ? uniform(generator) : size * (1 - std::exp2(-1 - sample % 50));
        if (std::abs(field) >= size) {
            continue;
        }
        const Problem problem = infinite(coupling, field);
        const Wide j = size;
        const Wide h = field;
        const Wide root = std::sqrt((j - h) * (j + h));
        const Wide angle = 2 * std::atan2(h, j + root);  // arcsin(h/j) by the half angle
        const auto check = [&](QuantityId id, Wide expected) {
            const Reference found = limit(problem, id);
            const double error = static_cast<double>(std::abs(value(found) - expected));
            CHECK(error <= found.bound[0]);
            worst = std::max(worst, error / found.bound[0]);
        };
        check(QuantityId::magnetization, angle / wide_pi);
        check(QuantityId::ground_energy_per_site, -(root + h * angle) / wide_pi);
        check(QuantityId::susceptibility, 1 / (wide_pi * root));
    }
    CHECK(worst > 0.1);
}

std::string phase_of(double coupling, double field) {
    const Reference reference = limit(infinite(coupling, field), QuantityId::phase);
    return reference.value.kind == Kind::text ? reference.value.text
                                              : to_string(reference.value.special_at(0));
}

TEST_CASE("phases, gaps and Fermi momenta") {
    CHECK(phase_of(1.0, 0.3) == "critical");
    CHECK(phase_of(-1.0, -0.3) == "critical");
    CHECK(phase_of(1.0, 1.0) == "saturation_point");
    CHECK(phase_of(-1.0, 1.0) == "saturation_point");
    CHECK(phase_of(1.0, 1.5) == "saturated_up");
    CHECK(phase_of(1.0, -1.5) == "saturated_down");
    CHECK(phase_of(0.0, 0.1) == "saturated_up");
    CHECK(phase_of(0.0, -0.1) == "saturated_down");
    CHECK(phase_of(0.0, 0.0) == "undefined");
    CHECK(value(limit(infinite(1.0, 0.5), QuantityId::gap)) == 0.0);
    CHECK(value(limit(infinite(-1.0, -1.75), QuantityId::gap)) == 0.75);
    CHECK(value(limit(infinite(0.0, -0.5), QuantityId::gap)) == 0.5);
    const auto fermi = [](double j, double h) {
        return limit(infinite(j, h), QuantityId::fermi_momentum);
    };
    CHECK_NEAR(value(fermi(1.0, 0.5)), pi / 3, rounding(1.0, 8));
    CHECK_NEAR(value(fermi(-1.0, 0.5)), 2 * pi / 3, rounding(1.0, 8));
    CHECK(value(fermi(1.0, 1.0)) == 0.0);
    CHECK_NEAR(value(fermi(1.0, -1.0)), pi, rounding(1.0, 4));
    CHECK(fermi(1.0, 1.1).value.special_at(0) == Special::undefined);
    CHECK(fermi(0.0, 0.0).value.special_at(0) == Special::undefined);
}

TEST_CASE("statuses at special points") {
    const auto chi = [](double j, double h) {
        return limit(infinite(j, h), QuantityId::susceptibility).value.special_at(0);
    };
    CHECK(chi(1.0, 1.0) == Special::infinite);
    CHECK(chi(-1.0, -1.0) == Special::infinite);
    CHECK(chi(1.0, 1.2) == Special::none);
    CHECK(chi(0.0, 0.0) == Special::jump);
    CHECK(chi(0.0, 1.0) == Special::none);
    CHECK(value(limit(infinite(1.0, 1.0), QuantityId::magnetization)) == 0.5);
    CHECK(value(limit(infinite(0.0, -1.0), QuantityId::magnetization)) == -0.5);
    const Reference free = limit(infinite(0.0, 0.0), QuantityId::magnetization);
    CHECK(value(free) == 0.0);
    CHECK(free.range == Range{{-0.5, 0.5}});
    Options options;
    options.distance = {0, 1};
    const Reference zz = limit(infinite(0.0, 0.0), QuantityId::spin_correlation, options);
    CHECK(zz.value.real_at(0) == 0.25);
    CHECK(zz.value.real_at(1) == 0.0);
    const Reference up = limit(infinite(0.0, 2.0), QuantityId::spin_correlation, options);
    CHECK_NEAR(up.value.real_at(1), 0.25, bound(up.bound[1]));
    CHECK(value(limit(infinite(0.0, 2.0), QuantityId::ground_energy_per_site)) == -1.0);
}

TEST_CASE("how finite chains approach") {
    using Law = Approach::Law;
    const auto law = [](const Problem& problem, QuantityId id) {
        return limit(problem, id).approach;
    };
    const auto is = [](const std::optional<Approach>& approach, Law expected, double exponent) {
        return approach && approach->law == expected && approach->exponent == exponent;
    };
    const QuantityId energy = QuantityId::ground_energy_per_site;
    const QuantityId m = QuantityId::magnetization;
    CHECK(is(law(infinite(1.0, 0.0), energy), Law::power, 2.0));
    CHECK(is(law(infinite(1.0, 0.0), QuantityId::gap), Law::power, 1.0));
    CHECK_FALSE(law(infinite(1.0, 0.0), m).has_value());
    CHECK(is(law(infinite(1.0, 0.4), energy), Law::envelope, 2.0));
    CHECK(is(law(infinite(1.0, 0.4), m), Law::envelope, 1.0));
    CHECK(is(law(infinite(1.0, 0.0, open_chain(8)), energy), Law::power, 1.0));
    CHECK(is(law(infinite(1.0, 0.4, open_chain(8)), energy), Law::envelope, 1.0));
    CHECK(is(law(infinite(1.0, 0.4, open_chain(8)), m), Law::envelope, 1.0));
    CHECK_FALSE(law(infinite(1.0, 1.4), energy).has_value());
    CHECK_FALSE(law(infinite(1.0, 0.0, ring(8, 0.3)), energy).has_value());
    CHECK_FALSE(law(infinite(1.0, 0.0), QuantityId::susceptibility).has_value());
}

TEST_CASE("the approach laws are those of finite chains") {
    const auto distance = [](const Chain& chain, double field, QuantityId id) {
        return std::abs(value(fermion(xx_problem(chain, 1.0, field), id)) -
                        value(limit(infinite(1.0, field, chain), id)));
    };
    const QuantityId energy = QuantityId::ground_energy_per_site;
    const auto local_exponent = [&](auto&& make, int sites, QuantityId id) {
        return std::log2(distance(make(sites), 0.0, id) / distance(make(2 * sites), 0.0, id));
    };
    const auto plain_ring = [](int sites) { return ring(sites); };
    const Allowed slope{0.02, "next order"};
    CHECK_NEAR(local_exponent(plain_ring, 500, energy), 2.0, slope);
    CHECK_NEAR(local_exponent(plain_ring, 500, QuantityId::gap), 1.0, slope);
    CHECK_NEAR(local_exponent(open_chain, 500, energy), 1.0, slope);
    for (int sites = 100; sites < 160; ++sites) {
        // With the velocity v = sqrt(J^2 - h^2) the ring's energies are off by pi v/L^2 times -1/6,
        // up to 1/8 for a filling off by half a spin, and 1/2 on odd rings, whose sea cannot be
        // centred on k = pi (the quadratic energies of moving its two edges): below 11/24.
        const double velocity = std::sqrt(1.0 - 0.4 * 0.4);
        const double amplitude = distance(ring(sites), 0.4, energy) * sites * sites;
        CHECK(amplitude < 1.01 * pi * velocity * 11 / 24);
        CHECK(distance(ring(sites), 0.4, QuantityId::magnetization) < 1.0 / sites);
        CHECK(distance(open_chain(sites), 0.4, energy) < 1.0 / sites);
        CHECK(distance(open_chain(sites), 0.4, QuantityId::magnetization) < 1.0 / sites);
    }
}

std::string refusal(const Problem& problem, QuantityId id) {
    const Batch batch{.problems = {problem}, .queries = {query(id)}};
    return limit_route().plan(batch).refusal.front();
}

TEST_CASE("what the route does not cover") {
    CHECK(refusal(xx_problem(ring(6), 1.0), QuantityId::gap).find("infinite") != std::string::npos);
    CHECK(refusal(infinite(1.0, 0.0), QuantityId::ground_energy).find("ground_energy_per_site") !=
          std::string::npos);
    CHECK(!refusal(infinite(1.0, 0.0), QuantityId::levels).empty());
    const Family* heisenberg = find_family("heisenberg");
    Chain chain = ring(6);
    chain.sites.reset();
    const std::vector<double> values = {1.0};
    const Problem problem{
        .chain = chain,
        .terms = std::make_shared<TermList>(
            build_terms(chain, heisenberg->terms(values, chain), Coincident::refuse, 1).value()),
        .field = 0.0};
    CHECK(refusal(problem, QuantityId::gap).find("Sz_0 Sz_1") != std::string::npos);
}

TEST_CASE("a field and a constant among the terms count") {
    Problem problem = infinite(1.0, 0.2);
    TermList list = *problem.terms;
    list.terms.insert(list.terms.begin(), Term{{{0, SiteOperator::z}}, -0.3});
    list.constant = 2.0;
    problem.terms = std::make_shared<TermList>(list);
    CHECK_NEAR(value(limit(problem, QuantityId::magnetization)), 1.0 / 6, rounding(1.0, 4));
    const Reference plain = limit(infinite(1.0, 0.5), QuantityId::ground_energy_per_site);
    CHECK_NEAR(value(limit(problem, QuantityId::ground_energy_per_site)),
               value(plain) + 2.0,
               rounding(2.0, 4));
}

}  // namespace
}  // namespace chainmark::test
