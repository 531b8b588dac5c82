#include "chainmark/dense/jumps.hpp"

#include <algorithm>
#include <cmath>
#include <optional>

#include "chainmark/base/numerics.hpp"

namespace chainmark::dense {
namespace {

/// The jump between a and b: nothing lies below their chord, and no wider chord contains it.
std::optional<Jump> crossing(const SzMinimum& a,
                             const SzMinimum& b,
                             const std::vector<SzMinimum>& lowest) {
    const double field = (b.energy - a.energy) / (b.sz - a.sz);
    for (const SzMinimum& other : lowest) {
        const double height = (other.energy - a.energy) - field * (other.sz - a.sz);
        const double noise = 2 * (a.bound + b.bound + other.bound);
        const bool outside = other.sz < a.sz || other.sz > b.sz;
        if (height < -noise || (outside && height <= noise)) {
            return std::nullopt;
        }
    }
    return Jump{field, a.bound + b.bound, a.sz, b.sz};
}

double energy_at(const std::vector<SzMinimum>& lowest, double sz) {
    const auto at = std::find_if(
        lowest.begin(), lowest.end(), [&](const SzMinimum& level) { return level.sz == sz; });
    return at->energy;
}

}  // namespace

std::vector<Jump> find_jumps(const std::vector<SzMinimum>& lowest, double window) {
    std::vector<Jump> found;
    for (std::size_t i = 0; i < lowest.size(); ++i) {
        for (std::size_t j = i + 1; j < lowest.size(); ++j) {
            if (const auto jump = crossing(lowest[i], lowest[j], lowest)) {
                found.push_back(*jump);
            }
        }
    }
    std::sort(
        found.begin(), found.end(), [](const Jump& a, const Jump& b) { return a.field < b.field; });
    std::vector<Jump> jumps;
    double last = 0.0;
    for (const Jump& jump : found) {
        const bool same = !jumps.empty() && jump.field - last <= window;
        last = jump.field;
        if (!same) {
            jumps.push_back(jump);
            continue;
        }
        jumps.back().below = std::min(jumps.back().below, jump.below);
        jumps.back().above = std::max(jumps.back().above, jump.above);
        jumps.back().bound = std::max(jumps.back().bound, jump.bound);
    }
    for (Jump& jump : jumps) {
        const double step = jump.above - jump.below;
        jump.field = (energy_at(lowest, jump.above) - energy_at(lowest, jump.below)) / step;
        jump.bound = jump.bound / step + 2 * epsilon * std::abs(jump.field);
    }
    return jumps;
}

}  // namespace chainmark::dense
