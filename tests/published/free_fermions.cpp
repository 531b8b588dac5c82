#include "published/free_fermions.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <cstdint>
#include <numbers>

namespace chainmark::test {
namespace {

constexpr double pi = std::numbers::pi;

/// Adds the levels of one parity: all occupations whose number has that parity.
void add_levels(const XyRing& ring, UpCount parity, std::vector<double>& levels) {
    const std::vector<double> energies = modes(ring, parity);
    const std::uint32_t end = 1U << ring.sites;
    for (std::uint32_t occupied = 0; occupied < end; ++occupied) {
        if ((std::popcount(occupied) % 2 == 1) != (parity == UpCount::odd)) {
            continue;
        }
        double energy = 0.0;
        for (std::size_t k = 0; k < energies.size(); ++k) {
            energy += ((occupied >> k) & 1U) != 0 ? energies[k] / 2 : -energies[k] / 2;
        }
        levels.push_back(energy);
    }
}

}  // namespace

std::vector<double> modes(const XyRing& ring, UpCount parity) {
    std::vector<double> energies;
    for (int n = 0; n < ring.sites; ++n) {
        const int twice = parity == UpCount::even ? 2 * n + 1 : 2 * n;  // k = twice pi/L
        const double k = pi * twice / ring.sites;
        const double diagonal = ring.coupling_j * std::cos(k) - ring.field_h;
        const bool unpaired = twice % ring.sites == 0;
        energies.push_back(
            unpaired ? diagonal : std::hypot(diagonal, ring.gamma * ring.coupling_j * std::sin(k)));
    }
    return energies;
}

double lowest_level(const XyRing& ring, UpCount parity) {
    double energy = 0.0;
    int occupied = 0;
    double cheapest_change = INFINITY;
    for (const double mode : modes(ring, parity)) {
        energy -= std::abs(mode) / 2;
        occupied += mode < 0 ? 1 : 0;
        cheapest_change = std::min(cheapest_change, std::abs(mode));
    }
    const bool odd = occupied % 2 == 1;
    return odd == (parity == UpCount::odd) ? energy : energy + cheapest_change;
}

std::vector<double> all_levels(const XyRing& ring) {
    std::vector<double> levels;
    add_levels(ring, UpCount::even, levels);
    add_levels(ring, UpCount::odd, levels);
    std::sort(levels.begin(), levels.end());
    return levels;
}

double xx_lowest(int sites, double coupling_j, int ups) {
    const double x = pi / sites;
    if (coupling_j < 0 || sites % 2 == 0) {
        return -std::abs(coupling_j) * std::sin(ups * x) / std::sin(x);
    }
    if (ups == 0 || ups == sites) {
        return 0.0;
    }
    return -coupling_j * (std::sin((ups - 1) * x) / std::sin(x) + std::cos(ups * x));
}

}  // namespace chainmark::test
