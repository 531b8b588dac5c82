#pragma once

#include <complex>

#include <Eigen/Core>

#include "chainmark/operators/site_operator.hpp"
#include "chainmark/reference/quantity.hpp"

/// Operators of one spin S = two_s / 2 as (2S+1) x (2S+1) matrices in the basis of digits, 0 =
/// lowest m.
namespace chainmark::dense {

using LocalMatrix = Eigen::MatrixXcd;

/// Sx, Sy or Sz.
LocalMatrix spin_component(Axis axis, int two_s);

/// S+; S- is its adjoint.
LocalMatrix raising(int two_s);

/// One of the operators of a term list.
LocalMatrix local_matrix(SiteOperator op, int two_s);

/// The operator between the ends of a string: exp(i pi S_axis) for whole S,
///   exp(i pi Sz)|m> = (-1)^m |m>,  exp(i pi Sx)|m> = (-1)^S |-m>,  exp(i pi Sy)|m> = (-1)^(S+m)
///   |-m>,
/// and 2 S_axis for S = 1/2. Needs one of these spins.
LocalMatrix string_factor(Axis axis, int two_s);

/// The matrix carried once around a ring on which S+_{j+L} = phase S+_j: element (a, b), which
/// raises by a - b, takes phase^(a-b).
LocalMatrix carried_around(const LocalMatrix& matrix, std::complex<double> phase);

/// An upper bound of the largest singular value: sqrt(largest row sum * largest column sum), exact
/// where there is one element in a row.
double norm_bound(const LocalMatrix& matrix);

}  // namespace chainmark::dense
