#pragma once

#include <complex>
#include <memory>

#include "chainmark/base/context.hpp"
#include "chainmark/sector/halves_basis.hpp"
#include "chainmark/sector/linear_operator.hpp"
#include "chainmark/sector/packed_string.hpp"

namespace chainmark::sector {

/// H between all configurations of a sector, nothing stored that grows with its dimension. Strings
/// are split into an upper and a lower half,
///   H = sum_u U_u (x) D_u,   U_u a string on the upper sites, D_u a small matrix on the lower
///   ones,
/// so that most of a product is additions of contiguous blocks and products with small matrices
/// that stay in the cache: faster than reading stored elements. Refers to the basis.
template <class Scalar>
std::unique_ptr<LinearOperator<Scalar>> make_by_halves(const HalvesBasis& basis,
                                                       const std::vector<Term>& terms,
                                                       const Context& context);

}  // namespace chainmark::sector
