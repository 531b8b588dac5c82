#include <cmath>

#include <doctest/doctest.h>

#include "chainmark/compare/trend.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

constexpr double pi = 3.14159265358979323846;

using Law = Approach::Law;

Approach power(double exponent) {
    return {.law = Law::power, .exponent = exponent};
}

std::optional<Trend> first(const std::vector<SizePoint>& sizes,
                           double limit,
                           double bound,
                           const Approach& approach) {
    const std::vector<Trend> trends = approach_trends(sizes, limit, bound, approach);
    return trends.empty() ? std::nullopt : std::optional(trends.front());
}

/// Within its own error, which must be small for the number to mean something.
void check_trend(const Trend& trend, double expected, double widest) {
    INFO(trend.trend << " = " << trend.value << " +- " << trend.error);
    CHECK(std::abs(trend.value - expected) <= trend.error);
    CHECK(trend.error < widest);
}

}  // namespace

TEST_CASE("the exponent of an exact power law comes back") {
    std::vector<SizePoint> sizes;
    for (const int length : {32, 8, 16}) {
        sizes.push_back({length, -0.3 - 2.0 * std::pow(length, -1.5), 1e-15});
    }
    const auto trend = first(sizes, -0.3, 0.0, power(1.5));
    REQUIRE(trend.has_value());
    CHECK_NEAR(trend->value, 1.5, rounding(100.0, 100));
    CHECK(trend->expected == 1.5);
    CHECK(trend->error < 1e-10);
}

TEST_CASE("even XX rings: exponent 2 and central charge 1") {
    // e0(L) = -1/(L sin(pi/L)) = -1/pi - pi/(6 L^2) - ... (Lieb, Schultz, Mattis 1961), v = 1
    std::vector<SizePoint> sizes;
    for (int length = 8; length <= 64; length *= 2) {
        sizes.push_back({length, -1 / (length * std::sin(pi / length)), 1e-16});
    }
    Approach approach = power(2);
    approach.amplitude = {
        .name = "central_charge", .factor = -6 / pi, .power = 2, .surface = false, .expected = 1.0};
    const std::vector<Trend> trends = approach_trends(sizes, -1 / pi, 1e-16, approach);
    REQUIRE(trends.size() == 2);
    CHECK(trends[0].trend == "exponent");
    check_trend(trends[0], 2.0, 0.05);
    CHECK(trends[1].trend == "central_charge");
    CHECK(trends[1].expected == 1.0);
    check_trend(trends[1], 1.0, 1e-4);
}

TEST_CASE("even open XX chains: exponent 1, and central charge 1 beyond the surface energy") {
    // E0 = 1/2 - 1/(2 sin(pi/(2(L+1)))) (Lieb, Schultz, Mattis 1961)
    std::vector<SizePoint> sizes;
    for (const int length : {12, 16, 20, 24}) {
        const double energy = 0.5 - 0.5 / std::sin(pi / (2 * (length + 1)));
        sizes.push_back({length, energy / length, 1e-16});
    }
    Approach approach = power(1);
    approach.amplitude = {
        .name = "central_charge", .factor = -24 / pi, .power = 2, .surface = true, .expected = 1.0};
    const std::vector<Trend> trends = approach_trends(sizes, -1 / pi, 1e-16, approach);
    REQUIRE(trends.size() == 2);
    check_trend(trends[0], 1.0, 0.05);
    check_trend(trends[1], 1.0, 0.1);
}

TEST_CASE("critical Ising rings: the gap's velocity, the energy's central charge 1/2") {
    // Pauli form: gap 2 tan(pi/4L), E0 = -2/sin(pi/2L), v = 2, x = 1/8 (Pfeuty 1970)
    std::vector<SizePoint> gaps;
    std::vector<SizePoint> energies;
    for (const int length : {6, 8, 10, 12}) {
        gaps.push_back({length, 2 * std::tan(pi / (4 * length)), 1e-15});
        energies.push_back({length, -2 / (length * std::sin(pi / (2 * length))), 1e-15});
    }
    Approach of_gap = power(1);
    of_gap.amplitude = {.name = "velocity", .factor = 4 / pi, .power = 1, .expected = 2.0};
    const std::vector<Trend> velocity = approach_trends(gaps, 0.0, 0.0, of_gap);
    REQUIRE(velocity.size() == 2);
    check_trend(velocity[1], 2.0, 1e-4);
    Approach of_energy = power(2);
    of_energy.amplitude = {
        .name = "central_charge", .factor = -6 / (pi * 2), .power = 2, .expected = 0.5};
    const std::vector<Trend> charge = approach_trends(energies, -4 / pi, 1e-15, of_energy);
    REQUIRE(charge.size() == 2);
    check_trend(charge[1], 0.5, 1e-4);
}

TEST_CASE("bounds enter the error of an amplitude") {
    std::vector<SizePoint> sizes;
    for (const int length : {8, 10, 12}) {
        sizes.push_back({length, 3.0 / length, 1e-6});
    }
    Approach approach = power(1);
    approach.amplitude = {.name = "velocity", .factor = 1.0, .power = 1, .expected = 3.0};
    const std::vector<Trend> trends = approach_trends(sizes, 0.0, 0.0, approach);
    REQUIRE(trends.size() == 2);
    CHECK(trends[1].error > 12e-6);
    check_trend(trends[1], 3.0, 1e-3);
}

TEST_CASE("an exponential approach gives its length, whatever power goes with it") {
    for (const double exponent : {0.0, 0.5, 1.5}) {
        std::vector<SizePoint> sizes;
        for (const int length : {10, 12, 14, 16}) {
            sizes.push_back(
                {length, 0.2 + std::exp(-length / 3.0) * std::pow(length, -exponent), 1e-16});
        }
        const auto trend = first(sizes, 0.2, 0.0, {.law = Law::exponential, .decay_length = 3.0});
        REQUIRE(trend.has_value());
        CHECK(trend->trend == "decay_length");
        CHECK(trend->expected == 3.0);
        CHECK(std::abs(trend->value - 3.0) < std::max(trend->error, 1e-9));
        CHECK(trend->error < 1.0);
    }
}

TEST_CASE("odd sizes stay out where they follow another law") {
    std::vector<SizePoint> sizes;
    for (const int length : {9, 11, 13}) {
        sizes.push_back({length, 1.0 / length, 1e-16});
    }
    Approach approach = power(1);
    CHECK(approach_trends(sizes, 0.0, 0.0, approach).size() == 1);
    approach.amplitude = {.name = "velocity", .factor = 1.0, .power = 1, .expected = 1.0};
    CHECK(approach_trends(sizes, 0.0, 0.0, approach).size() == 1);
    approach.even_sizes_only = true;
    CHECK(approach_trends(sizes, 0.0, 0.0, approach).empty());
}

TEST_CASE("sizes that have converged to within their bounds do not enter an exponent") {
    std::vector<SizePoint> sizes = {{8, 1.0, 1e-3}, {10, 1.0, 1e-3}, {12, 1.0, 1e-3}};
    CHECK(!first(sizes, 1.0, 0.0, power(2)).has_value());
    sizes = {{8, 2.0, 1e-3}, {10, 1.5, 1e-3}};  // two sizes are too few
    CHECK(!first(sizes, 1.0, 0.0, power(2)).has_value());
}

TEST_CASE("an envelope is the largest scaled distance") {
    const std::vector<SizePoint> sizes = {{10, 1.5, 1e-12}, {20, 1.1, 1e-12}, {40, 1.1, 1e-12}};
    const auto trend = first(sizes, 1.0, 0.0, {.law = Law::envelope, .exponent = 1.0});
    REQUIRE(trend.has_value());
    CHECK(trend->trend == "envelope");
    CHECK_NEAR(trend->value, 5.0, rounding(5.0, 4));
    CHECK(!trend->expected.has_value());
}

TEST_CASE("saturation of the XX chain: m with exponent 1/2, its slope with -1/2") {
    // m = arcsin(h)/pi and chi = 1/(pi sqrt(1 - h^2)) (Katsura 1962)
    std::vector<CriticalPoint> m;
    std::vector<CriticalPoint> chi;
    for (const double h : {0.2, 0.9, 0.94, 0.96, 0.98, 0.99}) {
        m.push_back({1 - h, std::asin(h) / pi, 1e-16});
        chi.push_back({1 - h, 1 / (pi * std::sqrt(1 - h * h)), 1e-15});
    }
    const auto exponent =
        critical_trend(m, {.field = 1.0, .below = true, .at_point = 0.5, .exponent = 0.5});
    REQUIRE(exponent.has_value());
    CHECK(exponent->trend == "exponent");
    CHECK(exponent->group == "below 1");
    CHECK(exponent->expected == 0.5);
    check_trend(*exponent, 0.5, 0.01);
    const auto divergence = critical_trend(chi, {.field = 1.0, .below = true, .exponent = -0.5});
    REQUIRE(divergence.has_value());
    check_trend(*divergence, -0.5, 0.01);
    m.erase(m.begin() + 3, m.end());  // of those left one is too far away
    CHECK(!critical_trend(m, {.field = 1.0, .below = true, .at_point = 0.5, .exponent = 0.5}));
}
