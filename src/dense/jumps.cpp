#include "chainmark/dense/jumps.hpp"

#include <algorithm>
#include <cmath>
#include <optional>

#include "chainmark/base/numerics.hpp"

namespace chainmark::dense {
namespace {

/// The jump between a and b, if there is one and no wider one contains it.
std::optional<Jump> crossing(const SzMinimum& a,
                             const SzMinimum& b,
                             const std::vector<SzMinimum>& lowest,
                             double window) {
    const double field = (b.energy - a.energy) / (b.sz - a.sz);
    for (const SzMinimum& other : lowest) {
        const double height = (other.energy - a.energy) - field * (other.sz - a.sz);
        const bool outside = other.sz < a.sz || other.sz > b.sz;
        if (height < -window || (outside && height <= window)) {
            return std::nullopt;
        }
    }
    const double bound = (a.bound + b.bound) / (b.sz - a.sz) + 2 * epsilon * std::abs(field);
    return Jump{field, bound, a.sz, b.sz};
}

}  // namespace

std::vector<Jump> find_jumps(const std::vector<SzMinimum>& lowest, double window) {
    std::vector<Jump> jumps;
    for (std::size_t i = 0; i < lowest.size(); ++i) {
        for (std::size_t j = i + 1; j < lowest.size(); ++j) {
            if (const auto jump = crossing(lowest[i], lowest[j], lowest, window)) {
                jumps.push_back(*jump);
            }
        }
    }
    return jumps;
}

}  // namespace chainmark::dense
