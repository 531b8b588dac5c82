#include "chainmark/fermion/parity_sums.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <random>
#include <vector>

#include <doctest/doctest.h>

#include "support/near.hpp"

// Sums over occupations of one parity against all 2^n of them, written out.

namespace chainmark::test {
namespace {

using fermion::ModeWeight;
using fermion::Moments;
using fermion::OccupiedModes;
using fermion::Real;

struct Written {
    Real log_sum = 0.0L;
    Moments energy;
    Moments sz;
};

/// Relative to the lowest state of this parity.
Written written_out(const std::vector<ModeWeight>& modes, bool odd, Real temperature) {
    std::vector<Real> energies;
    std::vector<Real> moments;
    for (unsigned set = 0; set < (1U << modes.size()); ++set) {
        if (std::popcount(set) % 2 != (odd ? 1 : 0)) {
            continue;
        }
        Real energy = 0.0L;
        Real sz = 0.0L;
        for (std::size_t k = 0; k < modes.size(); ++k) {
            if (((set >> k) & 1U) != 0) {
                energy += modes[k].cost;
                sz += modes[k].sz;
            }
        }
        energies.push_back(energy);
        moments.push_back(sz);
    }
    const Real lowest = *std::min_element(energies.begin(), energies.end());
    Real sum = 0.0L;
    Written result;
    for (std::size_t n = 0; n < energies.size(); ++n) {
        const Real weight = std::exp(-(energies[n] - lowest) / temperature);
        sum += weight;
        result.energy.mean += weight * (energies[n] - lowest);
        result.sz.mean += weight * moments[n];
    }
    result.log_sum = std::log(sum);
    result.energy.mean /= sum;
    result.sz.mean /= sum;
    for (std::size_t n = 0; n < energies.size(); ++n) {
        const Real weight = std::exp(-(energies[n] - lowest) / temperature) / sum;
        result.energy.variance +=
            weight * std::pow(energies[n] - lowest - result.energy.mean, 2.0L);
        result.sz.variance += weight * std::pow(moments[n] - result.sz.mean, 2.0L);
    }
    return result;
}

/// Equal to fourteen digits, also where both are tiny.
void check_equal(Real found, Real expected) {
    const Real scale = std::max(std::abs(expected), 1e-4000L);
    CHECK_NEAR(static_cast<double>((found - expected) / scale), 0.0, rounding(1, 50));
}

void check(const std::vector<ModeWeight>& modes, Real temperature) {
    const OccupiedModes occupied(modes, temperature);
    for (const bool odd : {false, true}) {
        const Written expected = written_out(modes, odd, temperature);
        // the logarithm of a number near 1
        CHECK_NEAR(static_cast<double>(occupied.log_sum(odd)),
                   static_cast<double>(expected.log_sum),
                   rounding(static_cast<double>(expected.log_sum) + 1e-3, 50));
        check_equal(occupied.energy(odd).mean, expected.energy.mean);
        check_equal(occupied.energy(odd).variance, expected.energy.variance);
        CHECK_NEAR(static_cast<double>(occupied.sz(odd).mean),
                   static_cast<double>(expected.sz.mean),
                   rounding(8, 10));
        check_equal(occupied.sz(odd).variance, expected.sz.variance);
    }
}

TEST_CASE("occupations of one parity at every temperature") {
    std::mt19937_64 generator(5);
    std::uniform_real_distribution<double> uniform(0.0, 1.0);
    for (const int count : {1, 2, 3, 7, 10}) {
        for (const double temperature : {0.02, 0.1, 1.0, 50.0}) {
            CAPTURE(count);
            CAPTURE(temperature);
            std::vector<ModeWeight> modes;
            for (int k = 0; k < count; ++k) {
                modes.push_back({0.05 + uniform(generator), uniform(generator) - 0.5});
            }
            check(modes, temperature);
            modes.front().cost = 0.0L;  // a mode that costs nothing
            check(modes, temperature);
        }
    }
}

TEST_CASE(
    "far below every gap the odd occupations are one mode each, with weights known to the "
    "last digit") {
    // exact: at T -> 0 odd sets are single modes, energies relative to the cheapest
    const std::vector<ModeWeight> modes = {{1.0L, 1.0L}, {1.0L, -1.0L}, {1.5L, 0.0L}};
    const OccupiedModes occupied(modes, 1e-5L);  // x = exp(-100000)
    check_equal(occupied.log_sum(true), std::log(2.0L));
    check_equal(occupied.sz(true).variance, 1.0L);
    CHECK(occupied.energy(true).mean == 0.0L);
    CHECK(occupied.log_sum(false) == 0.0L);
}

TEST_CASE("joining two sets") {
    const std::vector<ModeWeight> all = {{0.3L, 0}, {0.7L, 0}, {0.9L, 0}, {0.4L, 0}};
    const OccupiedModes occupied(all, 0.5L);
    fermion::ParitySums left;
    fermion::ParitySums right;
    for (int k = 0; k < 4; ++k) {
        fermion::ParitySums& own = k < 2 ? left : right;
        const Real y = occupied.weight_over_cheapest(all[static_cast<std::size_t>(k)].cost);
        own = fermion::joined(own, {0.0L, y}, occupied.square());
    }
    const fermion::ParitySums both = fermion::joined(left, right, occupied.square());
    check_equal(both.log_even, occupied.sums().log_even);
    check_equal(both.odd, occupied.sums().odd);
}

}  // namespace
}  // namespace chainmark::test
