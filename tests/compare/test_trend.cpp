#include <cmath>

#include <doctest/doctest.h>

#include "chainmark/compare/trend.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

TEST_CASE("the exponent of an exact power law comes back") {
    std::vector<SizePoint> sizes;
    for (const int length : {32, 8, 16}) {
        sizes.push_back({length, -0.3 - 2.0 * std::pow(length, -1.5), 1e-15});
    }
    const auto trend = approach_trend(sizes, -0.3, 0.0, {Approach::Law::power, 1.5});
    REQUIRE(trend.has_value());
    CHECK_NEAR(trend->value, 1.5, rounding(100.0, 100));
    CHECK(trend->expected == 1.5);
    CHECK(trend->error < 1e-10);
}

TEST_CASE("even XX rings approach -1/pi as 1/L^2") {
    // e0(L) = -1/(L sin(pi/L)) = -1/pi - pi/(6 L^2) - ... (Lieb, Schultz, Mattis 1961)
    std::vector<SizePoint> sizes;
    for (int length = 8; length <= 64; length *= 2) {
        const double pi = 3.14159265358979323846;
        sizes.push_back({length, -1 / (length * std::sin(pi / length)), 1e-16});
    }
    const auto trend =
        approach_trend(sizes, -0.31830988618379067, 1e-16, {Approach::Law::power, 2});
    REQUIRE(trend.has_value());
    CHECK(std::abs(trend->value - 2.0) < trend->error);
    CHECK(trend->error < 0.05);
}

TEST_CASE("sizes that have converged to within their bounds do not enter an exponent") {
    std::vector<SizePoint> sizes = {{8, 1.0, 1e-3}, {10, 1.0, 1e-3}, {12, 1.0, 1e-3}};
    CHECK(!approach_trend(sizes, 1.0001, 0.0, {Approach::Law::power, 2.0}).has_value());
}

TEST_CASE("an envelope holds every size") {
    const std::vector<SizePoint> sizes = {{10, 0.5, 1e-12}, {20, 0.02, 1e-12}, {30, -0.1, 1e-12}};
    const auto trend = approach_trend(sizes, 0.0, 0.0, {Approach::Law::envelope, 1.0});
    REQUIRE(trend.has_value());
    CHECK_NEAR(trend->value, 5.0, rounding(5.0, 4));
    CHECK(!trend->expected.has_value());
}
