#include "chainmark/fermion/quadrature.hpp"

#include <algorithm>
#include <cmath>

#include <boost/math/quadrature/gauss_kronrod.hpp>

namespace chainmark::fermion {
namespace {

using Kronrod = boost::math::quadrature::gauss_kronrod<Real, 31>;
using Gauss = boost::math::quadrature::gauss<Real, 15>;

/// A panel seen from one end of 0 ... pi: `near` and `far` are distances from there.
struct Panel {
    Real near;
    Real far;
    bool from_pi;
};

void add_node(std::vector<Node>& nodes, const Panel& panel, Real x, Real weight, Real coarse) {
    const Real half = (panel.far - panel.near) / 2;
    const Real distance = panel.near + half * (1 + x);
    const Real s = std::sin(distance / 2);
    const Real c = std::cos(distance / 2);
    nodes.push_back({.k = panel.from_pi ? real_pi - distance : distance,
                     .sin_half = panel.from_pi ? c : s,
                     .cos_half = panel.from_pi ? s : c,
                     .weight = half * weight,
                     .coarse = half * coarse});
}

/// The abscissas of both rules ascend from 0; those of Gauss are every second of Kronrod's.
void add_panel(std::vector<Node>& nodes, const Panel& panel) {
    const auto& abscissas = Kronrod::abscissa();
    const auto& weights = Kronrod::weights();
    const auto& coarse = Gauss::weights();
    for (std::size_t i = 0; i < abscissas.size(); ++i) {
        const Real gauss = i % 2 == 0 ? coarse[i / 2] : 0.0L;
        add_node(nodes, panel, abscissas[i], weights[i], gauss);
        if (i > 0) {
            add_node(nodes, panel, -abscissas[i], weights[i], gauss);
        }
    }
}

/// Cuts distances 0 ... length from a point: each panel as long as its distance from the point.
std::vector<Real> graded_cuts(Real length, Real width) {
    std::vector<Real> cuts = {length};
    while (cuts.back() > width / 4) {
        cuts.push_back(cuts.back() / 2);
    }
    cuts.push_back(0.0L);
    std::reverse(cuts.begin(), cuts.end());
    return cuts;
}

class Mesh {
public:
    Mesh(Real longest, int refinement) : longest_(longest), refinement_(refinement) {}

    /// The interval between two positions on 0 ... pi, in equal panels that are short enough.
    void add(Real from, Real to, bool from_pi) {
        const auto short_enough = static_cast<int>(std::ceil((to - from) / longest_));
        const int pieces = short_enough << refinement_;
        const Real step = (to - from) / static_cast<Real>(pieces);
        for (int i = 0; i < pieces; ++i) {
            const Real near = from + static_cast<Real>(i) * step;
            add_panel(nodes_, {near, i + 1 < pieces ? near + step : to, from_pi});
        }
    }

    std::vector<Node> take() { return std::move(nodes_); }

private:
    Real longest_;
    int refinement_;
    std::vector<Node> nodes_;
};

}  // namespace

std::vector<Node> momentum_mesh(const Features& features, int refinement) {
    std::vector<Real> points = features.points;
    points.push_back(0.0L);
    points.push_back(real_pi);
    std::sort(points.begin(), points.end());
    points.erase(std::unique(points.begin(), points.end()), points.end());
    const Real width = std::max(features.width, 0x1p-55L);
    Mesh mesh(features.longest_panel, refinement);
    for (std::size_t i = 0; i + 1 < points.size(); ++i) {
        const Real middle = (points[i + 1] - points[i]) / 2;
        const std::vector<Real> cuts = graded_cuts(middle, width);
        for (std::size_t c = 0; c + 1 < cuts.size(); ++c) {
            mesh.add(points[i] + cuts[c], points[i] + cuts[c + 1], false);
            const Real beyond = real_pi - points[i + 1];  // counted from pi
            mesh.add(beyond + cuts[c], beyond + cuts[c + 1], true);
        }
    }
    return mesh.take();
}

Bounded integrate(const Features& features,
                  const std::function<Real(const Node&)>& f,
                  Real condition) {
    constexpr int most_refinements = 3;
    constexpr Real operations = 16.0L;  // of the integrand and the weights
    for (int refinement = 0;; ++refinement) {
        CompensatedSum fine;
        CompensatedSum coarse;
        CompensatedSum size;
        for (const Node& node : momentum_mesh(features, refinement)) {
            const Real value = f(node);
            fine.add(node.weight * value);
            coarse.add(node.coarse * value);
            size.add(node.weight * std::abs(value));
        }
        const Real rounding = operations * condition * real_epsilon * size.value();
        const Real difference = std::abs(fine.value() - coarse.value());
        if (difference <= rounding || refinement == most_refinements) {
            return {fine.value(), difference + rounding};
        }
    }
}

}  // namespace chainmark::fermion
