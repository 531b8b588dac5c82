#pragma once

#include <string>
#include <variant>

#include "chainmark/base/context.hpp"
#include "chainmark/sector/ground_averages.hpp"
#include "chainmark/sector/solution.hpp"

namespace chainmark::sector {

/// The field splits the ground space: the magnetization jumps.
struct Splits {};

struct Response {
    double value = 0.0;
    double bound = 0.0;
};

/// (1/L) dM/dh' at h' = 0 of H - h' M, M = sum_j Sz_j not conserved, by second-order perturbation
/// theory. Where P M P = m P on the ground space of energy E0,
///   E0(h') = E0 - m h' - kappa h'^2,
///   kappa = largest eigenvalue of P M Q (H - E0)^-1 Q M P,   Q = 1 - P,
/// and the result is 2 kappa / L. Q (H - E0) Q is positive, so the linear systems
/// (H - E0) y = Q M psi are solved by conjugate gradients over all configurations of the state's
/// parity.
///
/// Bound. With the residual r = Q M psi - (H - E0) y, <b|A^-1|b> = <y|b> + <y|r> + <r|A^-1|r>, and
/// the last is at most |r|^2 / gap. The computed psi are exact for H + dH where dH has elements
/// between P and Q alone, of norm at most the residual of psi; to first order that moves psi by
/// residual/gap and kappa by 2 Re <d psi|M - m|y>.
///
/// Throws std::runtime_error where the vectors do not fit into memory or conjugate gradients do
/// not converge. std::string: why the answer is undecided.
std::variant<Response, Splits, std::string> zero_temperature_response(const Problem& problem,
                                                                      Solution& solution,
                                                                      const GroundSpace& ground,
                                                                      const Context& context);

}  // namespace chainmark::sector
