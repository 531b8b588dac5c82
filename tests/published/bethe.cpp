#include "published/bethe.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <stdexcept>
#include <vector>

namespace chainmark::test {
namespace {

using Wide = long double;

Wide scattering(Wide p, Wide q, Wide delta) {
    const Wide half_sum = (p + q) / 2;
    const Wide half_difference = (p - q) / 2;
    return 2 * std::atan2(-delta * std::sin(half_difference),
                          std::cos(half_sum) + delta * std::cos(half_difference));
}

/// One damped step of p_j = (2 pi I_j - sum_l Theta)/L; returns the largest change.
Wide step(std::vector<Wide>& p, int sites, Wide delta) {
    const Wide shift = sites % 2 == 0 ? 0.0L : 0.5L;
    const std::vector<Wide> old = p;
    Wide change = 0;
    for (std::size_t j = 0; j < p.size(); ++j) {
        const Wide number = static_cast<Wide>(j) - (static_cast<Wide>(p.size()) - 1) / 2 + shift;
        Wide right = 2 * std::numbers::pi_v<Wide> * number;
        for (const Wide q : old) {
            right -= scattering(old[j], q, delta);
        }
        p[j] = (old[j] + right / sites) / 2;
        change = std::max(change, std::abs(p[j] - old[j]));
    }
    return change;
}

}  // namespace

double bethe_lowest(int sites, int downs, double delta) {
    std::vector<Wide> p(static_cast<std::size_t>(downs));
    constexpr int most_steps = 20'000;
    int steps = 0;
    while (step(p, sites, delta) > 1e-17L && steps < most_steps) {
        ++steps;
    }
    if (steps == most_steps) {
        throw std::runtime_error("the iteration of the Bethe equations does not converge");
    }
    Wide energy = sites * static_cast<Wide>(delta) / 4;
    for (const Wide momentum : p) {
        energy -= std::cos(momentum) + delta;
    }
    return static_cast<double>(energy);
}

}  // namespace chainmark::test
