#include "chainmark/fermion/jumps.hpp"

#include <cmath>

#include <fmt/format.h>

namespace chainmark::fermion {
namespace {

struct Vertex {
    int particles;
    Real energy;
};

Real slope(const Vertex& from, const Vertex& to) {
    return (to.energy - from.energy) / static_cast<Real>(to.particles - from.particles);
}

/// Vertices of the lower convex hull of E(N), N ascending (monotone chain).
std::vector<Vertex> lower_hull(const Solution& solution) {
    std::vector<Vertex> hull;
    for (int n = 0; n <= solution.form.length(); ++n) {
        const UpCount up_count = n % 2 == 0 ? UpCount::even : UpCount::odd;
        const ModeSet& modes = solution.of(up_count);
        const Vertex next{n,
                          solution.form.constant_of(up_count) - modes.trace / 2 +
                              modes.lowest[static_cast<std::size_t>(n)]};
        while (hull.size() >= 2 &&
               slope(hull[hull.size() - 2], hull.back()) >= slope(hull.back(), next)) {
            hull.pop_back();
        }
        hull.push_back(next);
    }
    return hull;
}

}  // namespace

tl::expected<Jumps, std::string> find_jumps(const Solution& solution,
                                            double window,
                                            const Context& context) {
    const std::vector<Vertex> hull = lower_hull(solution);
    const Real error = 2 * solution.sum_error(0.0L);
    Jumps jumps{.field = {}, .error = {}, .particles = {0}};
    std::size_t from = 0;
    while (from + 1 < hull.size()) {
        if (from % 4096 == 0) {
            poll(context);
        }
        std::size_t to = from + 1;
        for (; to + 1 < hull.size(); ++to) {
            const Real before = slope(hull[to - 1], hull[to]);
            const Real apart = slope(hull[to], hull[to + 1]) - before;
            if (apart - error > window) {
                break;
            }
            if (!(apart + error <= window)) {
                return tl::unexpected(
                    fmt::format("two jumps near h = {:.12g} lie within the ground window of each "
                                "other, or not, within their errors",
                                static_cast<double>(before)));
            }
        }
        const Real step = static_cast<Real>(hull[to].particles - hull[from].particles);
        jumps.field.push_back(slope(hull[from], hull[to]));
        jumps.error.push_back(error / step + real_epsilon * std::abs(jumps.field.back()));
        jumps.particles.push_back(hull[to].particles);
        from = to;
    }
    return jumps;
}

}  // namespace chainmark::fermion
