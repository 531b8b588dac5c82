#pragma once

#include <functional>
#include <vector>

#include "chainmark/base/big_vector.hpp"
#include "chainmark/base/context.hpp"
#include "chainmark/sector/linear_operator.hpp"

namespace chainmark::sector {

/// An approximate eigenvector with what was measured on it.
template <class Scalar>
struct EigenPair {
    double value = 0.0;     ///< Rayleigh quotient
    double residual = 0.0;  ///< ||H v - value v||, with an allowance for its rounding
    double noise = 0.0;     ///< that allowance, and the rounding of `value`
    double next = 0.0;      ///< no other level was seen below this; -infinity: none was looked for
    BigVector<Scalar> vector;  ///< unit norm in the operator's metric
};

enum class Aim {
    vector,  ///< residual to a few roundings of ||H||
    value,   ///< only until residual^2 / gap is: half the steps
};

/// Writes the amplitudes of a start vector; empty: a random vector, fixed by the number of levels
/// found before.
template <class Scalar>
using StartFiller = std::function<void(Scalar* x)>;

/// The lowest eigenpair of H outside the span of `found` (orthonormal eigenvectors) by the Lanczos
/// recurrence with two vectors in memory, on
///   H + sum_i (c - theta_i) v_i v_i^T,   c an upper bound of the spectrum,
/// where every found vector is moved to the top. One vector finds one copy of a degenerate level;
/// asking again with that copy moved away finds the next.
///
/// The eigenvector is the sum of what a run of the recurrence has kept (KeptVectors); a run that
/// does not fit there is repeated for the sum. Without reorthogonalization the lowest pair still
/// converges to rounding (C. C. Paige, J. Inst. Math. Appl. 18, 341 (1976)); the residual is
/// measured with H itself, and the search starts anew from the vector where it is too large.
///
/// Throws std::runtime_error if the iteration does not converge, Interrupted on a stop request.
template <class Scalar>
EigenPair<Scalar> lowest_outside(const LinearOperator<Scalar>& op,
                                 const std::vector<EigenPair<Scalar>>& found,
                                 Aim aim,
                                 const StartFiller<Scalar>& start,
                                 const Context& context);

/// Bytes that `lowest_outside` needs beside the operator and `found`, for `dim` amplitudes.
template <class Scalar>
double lanczos_bytes(double dim) {
    return 3 * dim * sizeof(Scalar);
}

extern template EigenPair<double> lowest_outside(const LinearOperator<double>&,
                                                 const std::vector<EigenPair<double>>&,
                                                 Aim,
                                                 const StartFiller<double>&,
                                                 const Context&);
extern template EigenPair<std::complex<double>> lowest_outside(
    const LinearOperator<std::complex<double>>&,
    const std::vector<EigenPair<std::complex<double>>>&,
    Aim,
    const StartFiller<std::complex<double>>&,
    const Context&);

}  // namespace chainmark::sector
