#pragma once

#include <functional>
#include <vector>

#include "chainmark/fermion/angles.hpp"
#include "chainmark/fermion/answers.hpp"

/// Integrals over momenta.
namespace chainmark::fermion {

/// A node of a quadrature rule on 0 ... pi. Half-angle functions are taken from the nearer end, so
/// that they keep their relative precision at both.
struct Node {
    Real k;
    Real sin_half;  ///< sin(k/2)
    Real cos_half;  ///< cos(k/2)
    Real weight;    ///< Kronrod's, 31 nodes a panel
    Real coarse;    ///< Gauss's, the 15 nodes among them; 0 at the others

    Real sin() const { return 2 * sin_half * cos_half; }
    Real cos() const { return (cos_half - sin_half) * (cos_half + sin_half); }
};

/// What is known of integrands before they are integrated.
struct Features {
    /// Points of 0 ... pi where they may be singular or vary fast.
    std::vector<Real> points;
    /// Distance from the real axis within which they are analytic around these points, beyond what
    /// happens at the points themselves: panels shrink by halves down to a quarter of it.
    Real width = 1.0L;
    /// Panels are no longer than this.
    Real longest_panel = 1.0L;
};

/// Panels between the points, shrinking towards each, so that on every panel the nearest
/// singularity is as far away as the panel is long; `refinement` halves them so many times.
std::vector<Node> momentum_mesh(const Features& features, int refinement);

/// Integral of f over 0 ... pi by the rules of Gauss and Kronrod on every panel (31 and 15 nodes).
/// The panels are halved until the two agree to rounding, three times at most; the error is their
/// difference plus `condition` roundings of the integral of |f|.
/// Source of the nodes: Boost.Math. Error estimate: A. S. Kronrod, Nodes and weights of quadrature
/// formulas (1965); an estimate, since it is no proof.
Bounded integrate(const Features& features,
                  const std::function<Real(const Node&)>& f,
                  Real condition = 1.0L);

}  // namespace chainmark::fermion
