#pragma once

#include <Eigen/Core>

#include "chainmark/base/context.hpp"
#include "chainmark/reference/quantity.hpp"
#include "chainmark/sector/halves_basis.hpp"

namespace chainmark::sector {

struct Entropy {
    double value = 0.0;
    double bound = 0.0;
};

/// Entropy of the reduced state rho of the sites `options.block` in the pure state psi (unit norm):
///   order 1: -Tr rho ln rho;   order n >= 2: ln(Tr rho^n) / (1 - n);   divided by ln 2 with log2.
/// psi as a matrix of the block's configurations and the others' is a direct sum over what the two
/// sides have of a conserved digit sum (or parity), and so is rho; the smaller side is used, whose
/// rho has the same spectrum.
///
/// Bound: `tilt`, the sine of the angle between psi and the exact state, is the trace distance of
/// the two pure states and no less than that of their reduced states.
///   Order 1: |dS| <= t ln(d - 1) + h(t), h the binary entropy, d the dimension of the smaller side
///   (K. M. R. Audenaert, J. Phys. A 40, 8127 (2007); quoted from memory).
///   Order n: with the ascending eigenvalues p, q of two states sum |p_i - q_i| <= 2 t, and
///   |p^n - q^n| <= n max(p, q)^(n-1) |p - q|; so |d ln Tr rho^n| follows from Tr rho^n >=
///   max(p)^n.
/// Throws std::runtime_error without the memory.
Entropy entanglement_entropy(const HalvesBasis& configurations,
                             const Eigen::VectorXcd& psi,
                             const Options& options,
                             double tilt,
                             const Context& context);

}  // namespace chainmark::sector
