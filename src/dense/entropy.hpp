#pragma once

#include <functional>

#include "chainmark/dense/thermal.hpp"
#include "chainmark/operators/chain.hpp"
#include "chainmark/reference/quantity.hpp"

namespace chainmark::dense {

/// How far a computed state may be from the exact one, |exact> = |psi> + |d>.
struct StateError {
    double tilt = 0.0;  ///< bounds the sine of the angle between them
    /// Bounds |<d|x>| to first order.
    std::function<double(const Eigen::VectorXcd& x)> overlap;
};

/// Entropy of the reduced state of the sites `options.block` in the pure state psi (normalized,
/// (2S+1)^L amplitudes, base-(2S+1) digits): with p_i the squared singular values of psi as a
/// matrix block x rest,
///   order 1: -sum p_i ln p_i;   order n >= 2: ln(sum p_i^n) / (1 - n),
/// in nats, or in bits with `options.log2`.
///
/// Bound: to first order 2 |<d|K|psi>| with K = -ln rho, or n rho^(n-1) / ((n-1) Tr rho^n), rho
/// being the reduced state. What is of second order in the tilt, and rounding, is a trace distance
/// t of reduced states. Of order 1 the entropies of two states of dimension d differ by at most
///   t ln(d-1) + h(t),   h(t) = -t ln t - (1-t) ln(1-t)
/// (K. M. R. Audenaert, J. Phys. A 40, 8127 (2007), quoted from memory). Of order n >= 2:
///   |d sum p_i^n| <= n max(p)^(n-1) sum |dp_i|,  sum |dp_i| <= 2 t,  sum p_i^n >= max(p)^n.
Estimate entanglement_entropy(const Eigen::VectorXcd& psi,
                              const Chain& chain,
                              const Options& options,
                              const StateError& error);

}  // namespace chainmark::dense
