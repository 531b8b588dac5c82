#include <array>
#include <cmath>
#include <functional>

#include <doctest/doctest.h>

#include "chainmark/dense/route.hpp"
#include "dense/spins.hpp"
#include "support/ask.hpp"
#include "support/near.hpp"

using namespace chainmark;
using namespace chainmark::test;

namespace {

Reference at(Problem problem, double temperature, QuantityId id, Options options = {}) {
    problem.temperature = temperature;
    return ask(dense_route(), problem, id, std::move(options));
}

/// Within the bound, which is not far above the rounding of numbers of this scale.
void check_bound(const Reference& found, double expected, double scale) {
    CHECK_NEAR(found.value.real_at(0), expected, bound(found.bound[0]));
    CHECK(found.bound[0] < 1e-12 * scale);
}

/// f' at x by central differences with three steps, two extrapolations: error O(step^6).
double derivative(const std::function<double(double)>& f, double x, double step) {
    std::array<double, 3> slope{};
    for (std::size_t i = 0; i < 3; ++i) {
        const double h = step / std::pow(2.0, i);
        slope[i] = (f(x + h) - f(x - h)) / (2 * h);
    }
    const double first = (4 * slope[1] - slope[0]) / 3;
    const double second = (4 * slope[2] - slope[1]) / 3;
    return (16 * second - first) / 15;
}

}  // namespace

TEST_CASE("free spins in a field along z and a tilted one at any temperature") {
    for (const int two_s : {1, 2, 3}) {
        for (const double t : {1e-2, 0.1, 0.7, 3.0, 1e5}) {
            for (const double hx : {0.0, 0.6}) {
                CAPTURE(two_s);
                CAPTURE(t);
                CAPTURE(hx);
                const double hz = 0.8;
                const int length = 3;
                const double h = std::hypot(hx, hz);
                const FreeSpin spin(two_s, h, t);
                const Problem problem = free_spins(length, two_s, hx, hz);
                const auto number = [](long double x) { return static_cast<double>(x); };
                check_bound(at(problem, t, QuantityId::free_energy_per_site),
                            number(-t * spin.log_sum),
                            1 + t);
                check_bound(
                    at(problem, t, QuantityId::energy), number(-length * h * spin.mean), 1 + 1 / t);
                check_bound(
                    at(problem, t, QuantityId::entropy), number(length * spin.entropy), 1 + 1 / t);
                check_bound(at(problem, t, QuantityId::specific_heat),
                            number(length * spin.variance * (h / t) * (h / t)),
                            1 + 1 / t);
                check_bound(at(problem, t, QuantityId::magnetization),
                            number(spin.mean * hz / h),
                            1 + 1 / t);
                const double along = hz / h;
                const double across = hx / h;
                check_bound(
                    at(problem, t, QuantityId::susceptibility),
                    number(spin.variance / t * along * along + spin.mean / h * across * across),
                    10 * (1 + 1 / (t * t)));
                const Reference xz = at(problem,
                                        t,
                                        QuantityId::spin_correlation,
                                        {.axes = Axes::dot, .distance = {1, 0}});
                check_bound(xz, number(spin.mean * spin.mean), 1 + 1 / t);
                CHECK_NEAR(
                    xz.value.real_at(1), two_s / 2.0 * (two_s / 2.0 + 1), bound(xz.bound[1]));
                check_bound(at(problem,
                               t,
                               QuantityId::spin_correlation,
                               {.axes = Axes::plus_minus, .pairs = {{0, 2}}, .connected = true}),
                            0.0,
                            1 + 1 / t);
            }
        }
    }
}

TEST_CASE("two spins 1/2 coupled by J S.S: susceptibility and correlation") {
    // levels -3/4 (once) and 1/4 (three times); chi per site = (1/(2T)) 2 w / (1 + 3 w), w =
    // e^(-1/T)
    const Problem problem = family_problem("heisenberg", {1.0}, open_chain(2));
    for (const double t : {0.2, 1.0, 50.0}) {
        const double w = std::exp(-1 / t);
        check_bound(
            at(problem, t, QuantityId::susceptibility), w / (t * (1 + 3 * w)), 1 + 1 / (t * t));
        const Options options{.axes = Axes::xx, .distance = {1}};
        check_bound(at(problem, t, QuantityId::spin_correlation, options),
                    (w - 1) / (4 * (1 + 3 * w)),
                    1 + 1 / t);
    }
}

TEST_CASE("temperatures at the ends of the range of a double") {
    std::mt19937_64 generator(11);
    const RandomChain wanted{.chain = with_spin(open_chain(4), 2), .keeps = Keeps::nothing};
    const Problem random = random_problem(wanted, generator, 0.3);
    const double levels = 81.0;
    const double hot = 1e300;
    CHECK_NEAR(at(random, hot, QuantityId::entropy).value.real_at(0),
               std::log(levels),
               rounding(std::log(levels), 4));
    const Reference free = at(random, hot, QuantityId::free_energy);
    CHECK_NEAR(free.value.real_at(0) / hot, -std::log(levels), bound(free.bound[0] / hot));
    CHECK(at(random, hot, QuantityId::specific_heat).value.real_at(0) == 0.0);
    const Reference spectrum = ask(dense_route(), random, QuantityId::spectrum);
    long double trace = 0.0L;
    for (const auto& level : spectrum.value.data) {
        trace += level.real();
    }
    check_bound(at(random, hot, QuantityId::energy), static_cast<double>(trace / levels), 100.0);

    const double cold = 1e-300;
    const double lowest = spectrum.value.real_at(0);
    check_bound(at(random, cold, QuantityId::energy), lowest, 100.0);
    check_bound(at(random, cold, QuantityId::free_energy), lowest, 100.0);
    check_bound(at(random, cold, QuantityId::entropy), 0.0, 1.0);
    check_bound(at(random, cold, QuantityId::specific_heat), 0.0, 1.0);
    const Reference frozen = at(random, cold, QuantityId::susceptibility);
    const Reference ground = ask(dense_route(), random, QuantityId::susceptibility);
    CHECK_NEAR(
        frozen.value.real_at(0), ground.value.real_at(0), bound(frozen.bound[0] + ground.bound[0]));
    const Reference mean = at(random, cold, QuantityId::magnetization);
    const Reference limit = ask(dense_route(), random, QuantityId::magnetization);
    CHECK_NEAR(
        mean.value.real_at(0), limit.value.real_at(0), bound(mean.bound[0] + limit.bound[0]));

    // four lowest levels that are equal up to rounding: F and E are known, S is not
    Problem degenerate = family_problem("heisenberg", {1.0}, ring(3));
    check_bound(at(degenerate, cold, QuantityId::free_energy), -0.75, 1.0);
    check_bound(at(degenerate, cold, QuantityId::energy), -0.75, 1.0);
    degenerate.temperature = cold;
    CHECK(std::holds_alternative<Undecided>(
        answer(dense_route(), degenerate, query(QuantityId::entropy))));
    check_bound(at(degenerate, 1e-4, QuantityId::entropy), std::log(4.0), 1.0);
}

TEST_CASE("thermal quantities are derivatives of the free energy") {
    for (const unsigned seed : {1U, 2U, 3U}) {
        for (const int two_s : {1, 2}) {
            CAPTURE(seed);
            CAPTURE(two_s);
            std::mt19937_64 generator(seed);
            const RandomChain wanted{.chain = with_spin(ring(two_s == 1 ? 6 : 5), two_s),
                                     .keeps = seed == 1 ? Keeps::sz : Keeps::nothing,
                                     .complex = seed == 3};
            const double h = 0.37;
            const double t = 0.8;
            const Problem problem = random_problem(wanted, generator, h);
            const auto value = [&](QuantityId id, double field, double temperature) {
                Problem moved = problem;
                moved.field = field;
                return at(moved, temperature, id).value.real_at(0);
            };
            const double length = problem.chain.length();
            const auto check = [&](QuantityId id, double expected) {
                const Allowed truncation{1e-9 * length, "extrapolated differences"};
                CHECK_NEAR(value(id, h, t), expected, truncation);
            };
            const auto free = [&](double temperature) {
                return value(QuantityId::free_energy, h, temperature);
            };
            check(QuantityId::entropy, -derivative(free, t, 0.04));
            check(QuantityId::energy, free(t) + t * value(QuantityId::entropy, h, t));
            const auto energy = [&](double temperature) {
                return value(QuantityId::energy, h, temperature);
            };
            check(QuantityId::specific_heat, derivative(energy, t, 0.04));
            const auto in_field = [&](double field) {
                return value(QuantityId::free_energy_per_site, field, t);
            };
            check(QuantityId::magnetization, -derivative(in_field, h, 0.04));
            const auto magnetization = [&](double field) {
                return value(QuantityId::magnetization, field, t);
            };
            check(QuantityId::susceptibility, derivative(magnetization, h, 0.04));
        }
    }
}

TEST_CASE("entropy, energy and specific heat agree with sums in extended precision") {
    std::mt19937_64 generator(5);
    const RandomChain wanted{.chain = ring(6), .keeps = Keeps::parity, .complex = true};
    const Problem problem = random_problem(wanted, generator, 0.2);
    const Reference spectrum = ask(dense_route(), problem, QuantityId::spectrum);
    for (const double t : {0.05, 0.4, 2.0, 1e8}) {
        CAPTURE(t);
        long double z = 0.0L;
        long double first = 0.0L;
        for (const auto& level : spectrum.value.data) {
            const long double x = (level.real() - spectrum.value.real_at(0)) / t;
            z += std::exp(-x);
            first += x * std::exp(-x);
        }
        long double second = 0.0L;
        for (const auto& level : spectrum.value.data) {
            const long double x = (level.real() - spectrum.value.real_at(0)) / t - first / z;
            second += x * x * std::exp(-x - first / z) / z;
        }
        const auto expected = static_cast<double>(second);
        const Reference heat = at(problem, t, QuantityId::specific_heat);
        CHECK_NEAR(heat.value.real_at(0), expected, rounding(expected, 50));
        CHECK(heat.bound[0] < 1e-12 * (1 + expected) * (1 + 1 / t));
        CHECK(heat.bound[0] > 0.0);
        const auto entropy = static_cast<double>(std::log(z) + first / z);
        CHECK_NEAR(
            at(problem, t, QuantityId::entropy).value.real_at(0), entropy, rounding(entropy, 50));
    }
}
