#pragma once

#include <string>
#include <variant>

#include "chainmark/fermion/answers.hpp"
#include "chainmark/fermion/ground_space.hpp"

namespace chainmark::fermion {

/// The field splits the ground space: the magnetization jumps.
struct Splits {};

/// (1/L) dM/dh' at h' = 0 of H - h' M, M = sum_j Sz_j not conserved. Where P M P = m P on the
/// ground space of energy E0,
///   E0(h') = E0 - m h' - kappa h'^2,
///   kappa = largest eigenvalue of K = sum_{n outside P} P M |n><n| M P / (E_n - E0),
/// and the result is 2 kappa / L. In the modes of a class M is again quadratic, so that it takes an
/// eigenstate to states with two modes changed alone.
///
/// Bound. To first order in dH = H - H', also quadratic, with elements of norm at most d between a
/// state and those with two modes changed, |y> = sum |n><n|M|0>/(E_n - E0) and g the least
/// E_n - E0, kappa moves by <y|dH|y> + 2 Re <d0|M - m|y>, at most 2 d |y|^2 + 4 (d/g) |y|; the
/// bound is twice that.
///
/// std::string: why the answer is undecided.
std::variant<Bounded, Splits, std::string> zero_temperature_response(const Solution& solution,
                                                                     const Levels& levels,
                                                                     const GroundSpace& ground,
                                                                     const Context& context);

}  // namespace chainmark::fermion
