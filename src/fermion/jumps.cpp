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
        const ModeSet& modes = solution.of(n % 2 == 0 ? UpCount::even : UpCount::odd);
        const Vertex next{n, modes.lowest[static_cast<std::size_t>(n)]};
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
        const Real first = slope(hull[from], hull[from + 1]);
        std::size_t to = from + 1;
        for (; to + 1 < hull.size(); ++to) {
            const Vertex& next = hull[to + 1];
            const Real above = (slope(hull[from], next) - first) *
                               static_cast<Real>(next.particles - hull[from].particles);
            if (above - error > window) {
                break;
            }
            if (!(above + error <= window)) {
                return tl::unexpected(fmt::format(
                    "at h = {:.12g} the lowest level of total Sz {} meets the edge of the ground "
                    "space within its error",
                    static_cast<double>(first),
                    next.particles - solution.form.length() / 2.0));
            }
        }
        const Real step = static_cast<Real>(hull[to].particles - hull[from].particles);
        jumps.field.push_back(slope(hull[from], hull[to]));
        jumps.error.push_back(error / step + real_epsilon * std::abs(first));
        jumps.particles.push_back(hull[to].particles);
        from = to;
    }
    return jumps;
}

}  // namespace chainmark::fermion
