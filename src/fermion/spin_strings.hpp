#pragma once

#include <vector>

#include "chainmark/fermion/majorana.hpp"
#include "chainmark/operators/chain.hpp"

/// Correlations as sums of Pauli strings.
namespace chainmark::fermion {

/// <A_i B_j> of the operators of `axes`. Site j may lie past the end of a ring: there
/// S+_{j+L} = exp(-i twist) S+_j.
std::vector<PauliTerm> pair_terms(Axes axes, const Chain& chain, int i, int j);

/// Bound on the norm of A_i B_j.
double pair_norm(Axes axes);

/// Sa_i prod_{i<k<j} (2 Sa_k) Sa_j, i <= j < i + L. Past the end of a ring its twist must be 0 or
/// pi unless the axis is z.
PauliTerm order_string(Axis axis, const Chain& chain, int i, int j);

inline constexpr double order_string_norm = 0.25;

}  // namespace chainmark::fermion
