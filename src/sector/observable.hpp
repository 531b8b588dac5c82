#pragma once

#include <vector>

#include "chainmark/operators/term_list.hpp"
#include "chainmark/reference/quantity.hpp"
#include "chainmark/reference/value.hpp"
#include "chainmark/sector/solution.hpp"

namespace chainmark::sector {

/// A Hermitian operator as a sum of strings.
using Observable = std::vector<Term>;

/// factor * S_site along an axis.
Observable local_spin(Axis axis, int site, double factor);

/// (1/L) sum_j Sz_j
Observable mean_sz(int length);

/// (1/n) sum over n pairs of Sz_i Sz_j; Sz_i^2 is 1/4.
Observable mean_zz(const std::vector<std::pair<int, int>>& pairs);

/// Averages of the observables over the ground space, Tr(P A)/dim, as an array, with the error
/// bounds and, where the space is small enough, the extreme eigenvalues of P A P as range.
///
/// Bound: the computed space is tilted from the exact one by at most residual/gap inside each
/// sector (Davis and Kahan, SIAM J. Numer. Anal. 7, 1 (1970)), and an expectation value moves by
/// at most 2 ||A|| times the tilt.
Reference ground_averages(const Solution& solution,
                          const GroundSpace& ground,
                          const std::vector<Observable>& observables);

}  // namespace chainmark::sector
