#include "chainmark/sector/jumps.hpp"

#include <cmath>

#include "chainmark/base/numerics.hpp"

namespace chainmark::sector {

Staircase staircase(const std::vector<Solution::SzMinimum>& lowest, double window) {
    const auto slope = [](const auto& a, const auto& b) {
        return (b.energy - a.energy) / (b.sz - a.sz);
    };
    std::vector<Solution::SzMinimum> hull;
    for (const auto& point : lowest) {
        while (hull.size() >= 2 &&
               slope(hull[hull.size() - 2], hull.back()) >= slope(hull.back(), point)) {
            hull.pop_back();
        }
        hull.push_back(point);
    }
    Staircase result;
    result.sz.push_back(hull.front().sz);
    for (std::size_t from = 0; from + 1 < hull.size();) {
        std::size_t to = from + 1;
        while (to + 1 < hull.size() &&
               slope(hull[to], hull[to + 1]) - slope(hull[to - 1], hull[to]) <= window) {
            ++to;
        }
        const double step = hull[to].sz - hull[from].sz;
        const double field = slope(hull[from], hull[to]);
        result.fields.push_back(field);
        result.bounds.push_back((hull[to].bound + hull[from].bound) / step +
                                2 * epsilon * std::abs(field));
        result.sz.push_back(hull[to].sz);
        from = to;
    }
    return result;
}

}  // namespace chainmark::sector
