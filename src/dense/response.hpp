#pragma once

#include <variant>

#include "chainmark/dense/ground.hpp"
#include "chainmark/dense/thermal.hpp"

namespace chainmark::dense {

/// A ground space that M = sum_j Sz_j splits: the magnetization jumps there.
struct Splits {};
/// Whether it does cannot be told from the rounding.
struct Unclear {};

/// -d2 E0/dh'2 at h' = 0 of H - h' M by second-order perturbation theory. If P M P = m P on the
/// ground space P of energy E0, E0(h') = E0 - m h' - kappa h'^2 with kappa the largest eigenvalue
/// of
///   K = sum_{n outside P} P M |n><n| M P / (E_n - E0),
/// and the result is 2 kappa. Bound: with |y> = sum_n |n> <n|M|0> / (E_n - E0) a change dH of H
/// moves K by <y|dH|y> + 2 Re <d0|M - m|y>, the ground state's own change |d0> having elements of
/// at most residual / (E_n - E0).
template <class Scalar>
std::variant<Estimate, Splits, Unclear> second_order(const Ground& ground,
                                                     const FullSpectrum<Scalar>& spectrum);

extern template std::variant<Estimate, Splits, Unclear> second_order(const Ground&,
                                                                     const FullSpectrum<double>&);
extern template std::variant<Estimate, Splits, Unclear> second_order(
    const Ground&, const FullSpectrum<std::complex<double>>&);

}  // namespace chainmark::dense
